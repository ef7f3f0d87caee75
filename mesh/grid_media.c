/* SPDX-License-Identifier: GPL-3.0-or-later */

/* What fills the cells. Every cell is looked at in nine places that keep off its border,
 * so an interface that runs along a grid line leaves the cells on both sides pure.
 * Places inside conductors do not count. */

#include "mesh/grid_internal.h"

#include <math.h>

#include "mesh/medium.h"
#include "shared/mem.h"

enum { LOOKS = 3 }; /* per axis */
/* Where a cell is looked at, as fractions of its sides. */
static const double LOOK_AT[LOOKS] = {1e-6, 0.5, 1.0 - 1e-6};

static void fill_cell(struct grid *grid, int i, int j)
{
    const int cell = j * (grid->na - 1) + i;
    int medium = MEDIUM_CONDUCTOR, count = 0;
    double sum = 0.0;
    for (int k = 0; k < LOOKS * LOOKS; k++) {
        const double u = LOOK_AT[k % LOOKS], v = LOOK_AT[k / LOOKS];
        const struct vec2 at = {(1.0 - u) * grid->a[i] + u * grid->a[i + 1],
                                (1.0 - v) * grid->b[j] + v * grid->b[j + 1]};
        const int here = plane_medium_at(grid->plane, at);
        if (here == MEDIUM_CONDUCTOR)
            continue;
        sum += medium_coefficient(grid->plane, here);
        count++;
        if (medium == MEDIUM_CONDUCTOR)
            medium = here;
        else if (medium != here)
            medium = MEDIUM_MIXED;
    }
    grid->medium[cell] = medium;
    grid->coefficient[cell] = count > 0 ? sum / count : 1.0;
}

/* Medium of a node from the cells round it; a cell full of conductor says nothing. */
static int medium_of_node(const struct grid *grid, int i, int j)
{
    int medium = MEDIUM_CONDUCTOR;
    for (int c = 0; c < 4; c++) {
        const int ci = i - 1 + (c & 1), cj = j - 1 + (c >> 1);
        if (ci < 0 || cj < 0 || ci >= grid->na - 1 || cj >= grid->nb - 1)
            continue;
        const int here = grid->medium[cj * (grid->na - 1) + ci];
        if (here == MEDIUM_MIXED)
            return plane_medium_at(grid->plane, (struct vec2){grid->a[i], grid->b[j]});
        if (here == MEDIUM_CONDUCTOR)
            continue;
        if (medium != MEDIUM_CONDUCTOR && medium != here)
            return MEDIUM_BORDER;
        medium = here;
    }
    return medium;
}

static bool near_insulator(const struct grid *grid, int i, int j)
{
    for (size_t p = 0; p < grid->plane->part_count; p++) {
        const struct part *part = &grid->plane->parts[p];
        struct vec2 low, high;
        if (part_is_conductor(part))
            continue;
        shape_bounds(&part->shape, &low, &high);
        if (grid->a[i] <= high.a && grid->a[i + 1] >= low.a && grid->b[j] <= high.b &&
            grid->b[j + 1] >= low.b)
            return true;
    }
    return false;
}

enum status grid_fill_media(struct grid *grid)
{
    const size_t cells = (size_t)(grid->na - 1) * (size_t)(grid->nb - 1);
    if (!plane_has_media(grid->plane))
        return STATUS_OK;
    grid->medium = MEM_NEW(cells, int);
    grid->coefficient = MEM_NEW(cells, double);
    grid->node_medium = MEM_NEW((size_t)grid->na * (size_t)grid->nb, int);
    if (grid->medium == NULL || grid->coefficient == NULL || grid->node_medium == NULL)
        return STATUS_MEMORY;
    for (size_t c = 0; c < cells; c++) {
        const int i = (int)c % (grid->na - 1), j = (int)c / (grid->na - 1);
        grid->medium[c] = MEDIUM_VACUUM;
        grid->coefficient[c] = 1.0;
        if (near_insulator(grid, i, j))
            fill_cell(grid, i, j);
    }
    for (int n = 0; n < grid->na * grid->nb; n++)
        grid->node_medium[n] = medium_of_node(grid, n % grid->na, n / grid->na);
    return STATUS_OK;
}
