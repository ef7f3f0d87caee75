/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "solver/fringe.h"

#include <math.h>

#include "shared/mem.h"

static double fringe_integral(const struct path *path, const double *f, double centre,
                              int i, int j)
{
    double weighted[PATH_POINTS];
    for (int k = i; k <= j; k++)
        weighted[k] = f[k] / centre * (1.0 - f[k] / centre);
    return path_integral(path, weighted, i, j);
}

struct fringe fringe_of(const struct path *path, const double *f, double centre,
                        double reference_z, double gap)
{
    const int last = PATH_POINTS - 1;
    int middle = (int)lround((reference_z - path->z[0]) / path->step);
    middle = middle < 0 ? 0 : middle > last ? last : middle;
    const double before = path_integral(path, f, 0, middle) / centre;
    const double after = path_integral(path, f, middle, last) / centre;
    struct fringe fringe = {.length = before + after,
                            .entrance = path->z[middle] - before,
                            .exit = path->z[middle] + after,
                            .leftover_from = fabs(f[0] / centre),
                            .leftover_to = fabs(f[last] / centre)};
    if (gap > 0.0) {
        fringe.k_entrance = fringe_integral(path, f, centre, 0, middle) / gap;
        fringe.k_exit = fringe_integral(path, f, centre, middle, last) / gap;
    }
    return fringe;
}

static bool reflects_at(const struct plane *plane, enum side_index side, double edge,
                        double b)
{
    return plane->sides[side].kind != SIDE_WALL &&
           fabs(b - edge) <= 1e-9 * (plane->high.b - plane->low.b);
}

/* Narrows [*below, *above] by the solid stretches of one part. */
static enum status narrow(const struct part *part, double a, double b, double tolerance,
                          double *below, double *above)
{
    struct span *spans = NULL;
    size_t capacity = 0, count = 0;
    enum status status =
        shape_spans(&part->shape, 1, a, tolerance, &spans, &capacity, &count);
    for (size_t k = 0; k < count && status == STATUS_OK; k++) {
        if (spans[k].high <= b)
            *below = fmax(*below, spans[k].high);
        if (spans[k].low >= b)
            *above = fmin(*above, spans[k].low);
    }
    mem_free(spans);
    return status;
}

bool fringe_gap(const struct plane *plane, double a, double b, double *gap)
{
    const double tolerance = 1e-11 * (plane->high.b - plane->low.b);
    double below = -(double)INFINITY, above = (double)INFINITY;
    *gap = 0.0;
    for (size_t p = 0; p < plane->part_count; p++)
        if (narrow(&plane->parts[p], a, b, tolerance, &below, &above) != STATUS_OK)
            return false;
    if (reflects_at(plane, SIDE_B_LOW, plane->low.b, b))
        below = 2.0 * b - above;
    if (reflects_at(plane, SIDE_B_HIGH, plane->high.b, b))
        above = 2.0 * b - below;
    if (!isfinite(below) || !isfinite(above))
        return false;
    *gap = above - below;
    return true;
}
