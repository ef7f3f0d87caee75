/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "solver/ratio.h"

#include <math.h>
#include <string.h>

bool ratio_is_available(const struct path *path)
{
    return path->present && path->e_x[0] != NULL && path->b_y[0] != NULL &&
           path->e_centre != 0.0 && path->b_centre != 0.0;
}

double ratio_reference(const struct path *path)
{
    return ratio_is_available(path) ? path->e_centre / path->b_centre : 0.0;
}

bool ratio_is_defined(const struct path *path, int line_e, int line_b, int k,
                      double share)
{
    return path->e_x[line_e][k] / path->e_centre >= share &&
           path->b_y[line_b][k] / path->b_centre >= share;
}

double ratio_error(const struct path *path, int line_e, int line_b, int k)
{
    return (path->e_x[line_e][k] / path->e_centre) /
               (path->b_y[line_b][k] / path->b_centre) -
           1.0;
}

static void summarise_zone(const struct path *path, struct ratio_summary *s)
{
    double squares = 0.0;
    int count = 0;
    for (int k = 0; k < PATH_POINTS; k++) {
        if (!ratio_is_defined(path, 0, 0, k, RATIO_ZONE))
            continue;
        const double error = ratio_error(path, 0, 0, k);
        if (count == 0)
            s->zone_from = path->z[k];
        s->zone_to = path->z[k];
        squares += error * error;
        count++;
        if (fabs(error) > s->peak) {
            s->peak = fabs(error);
            s->peak_z = path->z[k];
        }
    }
    s->rms = count > 0 ? sqrt(squares / count) : 0.0;
}

static void summarise_bundle(const struct path *path, struct ratio_summary *s)
{
    for (int k = 0; k < PATH_POINTS; k++)
        for (int e = 0; e < path->lines; e++)
            for (int b = 0; b < path->lines; b++)
                if (ratio_is_defined(path, e, b, k, RATIO_ZONE))
                    s->bundle_peak =
                        fmax(s->bundle_peak, fabs(ratio_error(path, e, b, k)));
}

static void summarise_imbalance(const struct path *path, struct ratio_summary *s)
{
    for (int k = 0; k < PATH_POINTS; k++) {
        const double imbalance =
            fabs(path->e_x[0][k] / path->e_centre - path->b_y[0][k] / path->b_centre);
        if (imbalance > s->imbalance) {
            s->imbalance = imbalance;
            s->imbalance_z = path->z[k];
        }
    }
}

/* Excess of |ratio error| over the bound; positive where the ratio has no meaning. */
static double excess(const struct path *path, int k, double bound)
{
    if (!ratio_is_defined(path, 0, 0, k, RATIO_FLOOR))
        return 1.0;
    return fabs(ratio_error(path, 0, 0, k)) - bound;
}

/* End of the flat stretch going from sample k in steps of +-1. */
static double flat_end(const struct path *path, int k, int step, double bound)
{
    while (k + step >= 0 && k + step < PATH_POINTS) {
        const double here = excess(path, k, bound),
                     next = excess(path, k + step, bound);
        if (next > 0.0) {
            const double t = here < next ? -here / (next - here) : 0.0;
            return path->z[k] + step * path->step * fmin(fmax(t, 0.0), 1.0);
        }
        k += step;
    }
    return path->z[k];
}

static void summarise_flat(const struct path *path, double reference_z, double bound,
                           struct ratio_summary *s)
{
    const double at = (reference_z - path->z[0]) / path->step;
    int k = (int)lround(at);
    k = k < 0 ? 0 : k > PATH_POINTS - 1 ? PATH_POINTS - 1 : k;
    s->flat_from = s->flat_to = path->z[k];
    if (excess(path, k, bound) > 0.0)
        return;
    s->flat_from = flat_end(path, k, -1, bound);
    s->flat_to = flat_end(path, k, 1, bound);
}

void ratio_summarise(const struct path *path, double reference_z, double bound,
                     struct ratio_summary *summary)
{
    memset(summary, 0, sizeof *summary);
    summarise_zone(path, summary);
    summarise_bundle(path, summary);
    summarise_imbalance(path, summary);
    summarise_flat(path, reference_z, bound, summary);
}
