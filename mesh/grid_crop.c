/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Everything moves towards the front of its own array, so nothing is allocated and
 * nothing can fail. */

#include "mesh/grid_crop.h"

#include <string.h>

#include "shared/mem.h"

/* First line at or behind x; lines hold the borders of the region exactly. */
static int line_at(const double *lines, int count, double x)
{
    int k = 0;
    while (k + 1 < count && lines[k] < x)
        k++;
    return k;
}

struct grid_window grid_drawn(const struct grid *grid)
{
    const struct plane *plane = grid->plane;
    struct grid_window w = {line_at(grid->a, grid->na, plane->low.a),
                            line_at(grid->b, grid->nb, plane->low.b), 0, 0};
    w.na = line_at(grid->a, grid->na, plane->high.a) - w.first_a + 1;
    w.nb = line_at(grid->b, grid->nb, plane->high.b) - w.first_b + 1;
    return w;
}

/* First item of row j of the window in an array of rows of na. */
static size_t row_start(int na, struct grid_window w, int j)
{
    return (size_t)(w.first_b + j) * (size_t)na + (size_t)w.first_a;
}

static void crop_doubles(double *values, int na, struct grid_window w)
{
    const size_t width = (size_t)w.na;
    for (int j = 0; j < w.nb; j++)
        memmove(values + (size_t)j * width, values + row_start(na, w, j),
                width * sizeof *values);
}

static void crop_ints(int *values, int na, struct grid_window w)
{
    const size_t width = (size_t)w.na;
    for (int j = 0; j < w.nb; j++)
        memmove(values + (size_t)j * width, values + row_start(na, w, j),
                width * sizeof *values);
}

static bool leg_is_kept(const struct cut *cut, int i, int j, struct grid_window w)
{
    if (i < 0 || j < 0 || i >= w.na || j >= w.nb)
        return false;
    return !(
        (cut->leg == LEG_WEST && i == 0) || (cut->leg == LEG_EAST && i == w.na - 1) ||
        (cut->leg == LEG_SOUTH && j == 0) || (cut->leg == LEG_NORTH && j == w.nb - 1));
}

static void crop_cuts(struct grid *grid, struct grid_window w)
{
    size_t kept = 0, next = 0;
    for (size_t k = 0; k < grid->cut_count; k++) {
        struct cut cut = grid->cuts[k];
        const int i = cut.node % grid->na - w.first_a;
        const int j = cut.node / grid->na - w.first_b;
        if (!leg_is_kept(&cut, i, j, w))
            continue;
        cut.node = j * w.na + i;
        grid->cuts[kept++] = cut;
    }
    grid->cut_count = kept;
    for (int j = 0; j <= w.nb; j++) {
        while (next < kept && grid->cuts[next].node < j * w.na)
            next++;
        grid->first_cut[j] = (int)next;
    }
}

void grid_crop(struct grid *grid, struct grid_window window)
{
    const struct grid_window cells = {window.first_a, window.first_b, window.na - 1,
                                      window.nb - 1};
    crop_cuts(grid, window);
    crop_ints(grid->owner, grid->na, window);
    if (grid->node_medium != NULL)
        crop_ints(grid->node_medium, grid->na, window);
    if (grid->medium != NULL)
        crop_ints(grid->medium, grid->na - 1, cells);
    if (grid->coefficient != NULL)
        crop_doubles(grid->coefficient, grid->na - 1, cells);
    mem_free(grid->faces);
    mem_free(grid->first_face);
    grid->faces = NULL;
    grid->first_face = NULL;
    grid->face_count = 0;
    memmove(grid->a, grid->a + window.first_a, (size_t)window.na * sizeof *grid->a);
    memmove(grid->b, grid->b + window.first_b, (size_t)window.nb * sizeof *grid->b);
    grid->na = window.na;
    grid->nb = window.nb;
    grid->free_count = 0;
    for (int n = 0; n < grid->na * grid->nb; n++)
        grid->free_count += grid->owner[n] == OWNER_FREE;
}

void grid_crop_nodes(const struct grid *grid, struct grid_window window, double *values)
{
    crop_doubles(values, grid->na, window);
}
