/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "solver/fringe.h"

#include <math.h>

#include "mesh/gap.h"

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

bool fringe_gap(const struct plane *plane, double a, double b, double *gap)
{
    double below, above;
    *gap = 0.0;
    if (gap_at(plane, 1, (struct vec2){a, b}, &below, &above) != STATUS_OK ||
        !isfinite(below) || !isfinite(above))
        return false;
    *gap = above - below;
    return true;
}
