/* SPDX-License-Identifier: GPL-3.0-or-later */

/* With the defect subtracted from the right-hand side the whole plane behaves as if every
 * node had whole legs: the error of the potential is a smooth function times h^2, right up
 * to round surfaces, which is what extrapolation over the grids needs. The equations of
 * whole legs come from the same grid with its cuts forgotten. */

#include "solver/cut_defect.h"

#include <stdbool.h>
#include <string.h>

#include "shared/mem.h"
#include "solver/field_window.h"
#include "solver/local_fit.h"
#include "solver/stencil.h"

struct bench {
    const struct grid *grid;
    struct grid whole; /* the same grid without cuts; borrows all but first_cut */
    double *work;
    struct turned_radial *radial; /* NULL in a planar plane */
    struct field_window window;
};

static enum status bench_open(struct bench *bench, const struct grid *grid)
{
    bench->grid = grid;
    bench->whole = *grid;
    bench->whole.cut_count = 0;
    bench->whole.first_cut = MEM_NEW((size_t)grid->nb + 1, int);
    bench->work = MEM_NEW(local_fit_work(WINDOW_POINTS), double);
    if (bench->whole.first_cut == NULL || bench->work == NULL)
        return STATUS_MEMORY;
    if (!plane_kind_is_turned(grid->plane->kind))
        return STATUS_OK;
    bench->radial = MEM_NEW(1, struct turned_radial);
    if (bench->radial == NULL)
        return STATUS_MEMORY;
    turned_radial_init(bench->radial);
    return STATUS_OK;
}

static void bench_close(struct bench *bench)
{
    mem_free(bench->whole.first_cut);
    mem_free(bench->work);
    mem_free(bench->radial);
}

/* The equation of a node put to the fit. */
static double left_over(const struct grid *grid, int node, const struct local_fit *fit)
{
    static const int step[LEG_COUNT][2] = {{-1, 0}, {1, 0}, {0, -1}, {0, 1}};
    const struct vec2 at = {grid->a[node % grid->na], grid->b[node / grid->na]};
    struct vec2 gradient;
    const double here = local_fit_value(fit, at, &gradient);
    struct stencil s;
    double sum = 0.0;
    stencil_at(grid, node, &s);
    for (int leg = 0; leg < LEG_COUNT; leg++) {
        const struct vec2 end = {at.a + step[leg][0] * s.length[leg],
                                 at.b + step[leg][1] * s.length[leg]};
        if (s.weight[leg] != 0.0)
            sum += s.weight[leg] * (local_fit_value(fit, end, &gradient) - here);
    }
    return sum;
}

/* In a turned plane a whole leg may reach the axis, where fits about a point off it have
 * no value. */
static bool stays_off_axis(const struct grid *grid, int node)
{
    return !plane_kind_is_turned(grid->plane->kind) ||
           grid_cut(grid, node, LEG_SOUTH) == NULL ||
           grid->b[node / grid->na - 1] > 0.0;
}

static enum status node_defect(struct bench *bench, int node, const double *phi,
                               const double *part_value, double *defect)
{
    struct local_fit fit;
    field_window_collect(bench->grid, phi, part_value, node, &bench->window);
    if (bench->window.mixed)
        return STATUS_OK;
    enum status status =
        local_fit_make(bench->radial, bench->window.points, bench->window.count,
                       bench->window.centre, false, bench->work, &fit);
    if (status != STATUS_OK)
        return status;
    *defect = left_over(bench->grid, node, &fit);
    if (stays_off_axis(bench->grid, node))
        *defect -= left_over(&bench->whole, node, &fit);
    return STATUS_OK;
}

enum status cut_defect(const struct grid *grid, const double *phi,
                       const double *part_value, double *defect)
{
    struct bench bench = {0};
    memset(defect, 0, (size_t)grid->na * (size_t)grid->nb * sizeof *defect);
    enum status status = bench_open(&bench, grid);
    int last = -1;
    for (size_t k = 0; k < grid->cut_count && status == STATUS_OK; k++) {
        const int node = grid->cuts[k].node;
        if (node != last)
            status = node_defect(&bench, node, phi, part_value, &defect[node]);
        last = node;
    }
    bench_close(&bench);
    return status;
}
