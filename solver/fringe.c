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

/* Samples over which the decay at an end is measured. */
enum { DECAY_SAMPLES = (PATH_POINTS - 1) / 100 };

/* |F| times the decay length at sample `end`, looking inward from it. A field that does
 * not fall is taken to go on as far again as the end is from the reference point. */
static double tail(const struct path *path, const double *f, double centre, int end,
                   double reference_z)
{
    const int inner = end == 0 ? DECAY_SAMPLES : end - DECAY_SAMPLES;
    const double left = fabs(f[end] / centre), before = fabs(f[inner] / centre);
    const double most = fabs(path->z[end] - reference_z);
    if (left == 0.0)
        return 0.0;
    const double folds = log(before / left);
    const double decay = folds > 0.0 ? DECAY_SAMPLES * path->step / folds : most;
    return left * fmin(decay, most);
}

static bool is_inside(double f, double centre)
{
    return fabs(f / centre - 1.0) <= FRINGE_INSIDE;
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
                            .leftover_to = fabs(f[last] / centre),
                            .inside_from = is_inside(f[0], centre),
                            .inside_to = is_inside(f[last], centre)};
    if (!fringe.inside_from)
        fringe.tail_from = tail(path, f, centre, 0, reference_z);
    if (!fringe.inside_to)
        fringe.tail_to = tail(path, f, centre, last, reference_z);
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
