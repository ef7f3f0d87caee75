/* SPDX-License-Identifier: GPL-3.0-or-later */

/* The difference scheme, the cut legs and the graded lines are all of second order, so the
 * two finest grids are extrapolated with order 2. Next to the smooth error series there is
 * scatter: where a point lies in its cell and where a surface cuts its leg changes from
 * grid to grid. The measured order, which rests on the coarsest grid, therefore says how
 * far to trust the result more than how to get it. The uncertainty is how far other
 * readings of the same three values lie away. Its factors were set with
 * tests/bench/bench_honesty.c, against exact solutions. */

#include "solver/extrapolate.h"

#include <math.h>

/* Relative size of round-off in a solved figure. */
#define NOISE 1e-12
/* The coarsest grid may correct the value where the measured order is that near to 2. */
#define NEAR_SECOND 0.5
/* Uncertainty: SERIES_FACTOR times the correction by the h^3 term, which vanishes where
 * the measured order happens to be 2, so never less than LEAST_SHARE of the correction by
 * the h^2 term. */
#define SERIES_FACTOR 4.0
#define LEAST_SHARE   0.15
/* Orders from here to 2 - NEAR_SECOND are slow, not disorder. */
#define LEAST_ORDER 0.5
/* Margin on the distance to the extrapolation with a slow order. */
#define SLOW_FACTOR 1.1
/* Changes that alternate but fall like second order do are no disorder. */
#define FALL_SHARE 0.25
/* Changes below this share of the scale never count as unsettled, whatever their order:
 * an uncertainty of DISORDER_FACTOR times the change says all there is to say. */
#define SMALL_SHARE     1e-4
#define DISORDER_FACTOR 3.0

/* Value at h = 0 of a + b h^2. */
static double second_order(double coarse, double fine)
{
    return fine + (fine - coarse) / 3.0;
}

static struct estimate from_two(double coarse, double fine, double noise)
{
    return (struct estimate){second_order(coarse, fine), fabs(fine - coarse) + noise,
                             0.0, true};
}

/* Error series h^2, h^3. The coarsest grid, where it was far off, only widens the
 * uncertainty. */
static struct estimate from_series(const double *v, double order, double noise)
{
    const double first = second_order(v[0], v[1]), second = second_order(v[1], v[2]);
    const double third = (second - first) / 7.0;
    const double value = fabs(order - 2.0) <= NEAR_SECOND ? second + third : second;
    const double least = LEAST_SHARE * fabs(second - v[2]);
    return (struct estimate){value, fmax(SERIES_FACTOR * fabs(third), least) + noise,
                             order, true};
}

/* Slower than second order: by scatter of the coarsest grid, or in truth. The distance to
 * the extrapolation with the measured order covers both. */
static struct estimate from_slow(const double *v, double order, double noise)
{
    const double value = second_order(v[1], v[2]);
    const double slow = v[2] + (v[2] - v[1]) / (exp2(order) - 1.0);
    return (struct estimate){value, SLOW_FACTOR * fabs(slow - value) + noise, order,
                             true};
}

static struct estimate from_disorder(const double *v, double scale, double noise)
{
    const double d1 = fabs(v[1] - v[0]), d2 = fabs(v[2] - v[1]);
    const double spread = fmax(d1, d2);
    const bool settled = spread <= SMALL_SHARE * scale || d2 < 0.5 * d1;
    return (struct estimate){v[2], DISORDER_FACTOR * spread + noise, 0.0, settled};
}

struct estimate extrapolate(const double *values, int levels, double scale)
{
    for (int k = 0; k < levels; k++)
        if (!isfinite(values[k]))
            return (struct estimate){values[levels - 1], (double)INFINITY, 0.0, false};
    for (int k = 0; k < levels && scale == 0.0; k++)
        scale = fmax(scale, fabs(values[k]));
    const double noise = NOISE * scale;
    if (levels == 2)
        return from_two(values[0], values[1], noise);
    const double d1 = values[1] - values[0], d2 = values[2] - values[1];
    if (fabs(d1) <= 10.0 * noise && fabs(d2) <= 10.0 * noise)
        return (struct estimate){values[2], fmax(fabs(d1), fabs(d2)) + noise, 0.0,
                                 true};
    const double order = d1 * d2 > 0.0 ? log2(d1 / d2) : 0.0;
    if (order >= 2.0 - NEAR_SECOND ||
        (order == 0.0 && fabs(d2) <= FALL_SHARE * fabs(d1)))
        return from_series(values, order, noise);
    if (order >= LEAST_ORDER)
        return from_slow(values, order, noise);
    return from_disorder(values, scale, noise);
}
