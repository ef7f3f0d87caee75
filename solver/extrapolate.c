/* SPDX-License-Identifier: GPL-3.0-or-later */

/* The difference scheme, the cut legs and the graded lines are all of second order, so the
 * two finest grids are extrapolated with order 2. Next to the smooth error series there is
 * scatter: where a point lies in its cell and where a surface cuts its leg changes from
 * grid to grid. The measured order, which rests on the coarsest grid, therefore says how
 * far to trust the result more than how to get it. The uncertainty is how far other
 * readings of the same values lie away. Its factors were set with
 * tests/bench/bench_honesty.c, against exact solutions. */

#include "solver/extrapolate.h"

#include <math.h>

/* Relative size of round-off in a solved figure. */
#define NOISE 1e-12
/* The coarsest grid may correct the value where the measured order is that near to 2. */
#define NEAR_SECOND 0.5
/* Orders below this, and changes that alternate without falling, are disorder. */
#define LEAST_ORDER 0.5
/* Margin on the distance to the extrapolation with a measured order below 2. */
#define SLOW_FACTOR 1.1
/* Changes that alternate but fall like second order do are no disorder. */
#define FALL_SHARE 0.25
/* Changes below this share of the scale never count as unsettled, whatever their order:
 * an uncertainty of DISORDER_FACTOR times the change says all there is to say. What has no
 * limit changes more: the field at a square corner by a quarter from grid to grid. */
#define SMALL_SHARE     1e-2
#define DISORDER_FACTOR 1.5

/* What the uncertainty of a series is the sum of. The first vanishes where the measured
 * order happens to be 2, the second where two measured orders happen to agree. */
struct shares {
    double third;  /* of the correction by the h^3 term */
    double spread; /* of the distance to the same correction without the finest grid */
    double change; /* of the last change */
};
static const struct shares THREE = {2.0, 0.0, 0.02}, FOUR = {1.5, 0.1, 0.005};

/* Value at h = 0 of a + b h^2. */
static double second_order(double coarse, double fine)
{
    return fine + (fine - coarse) / 3.0;
}

/* What the coarsest of three grids adds to that where there is an h^3 term too. */
static double third_order(const double *v)
{
    return (second_order(v[1], v[2]) - second_order(v[0], v[1])) / 7.0;
}

static double corrected(const double *v)
{
    return second_order(v[1], v[2]) + third_order(v);
}

static struct estimate from_two(double coarse, double fine, double noise)
{
    return (struct estimate){second_order(coarse, fine), fabs(fine - coarse) + noise,
                             0.0, true};
}

/* Slower than second order: by scatter of the coarsest grid, or in truth. The distance to
 * the extrapolation with the measured order covers both. */
static double slow_uncertainty(const double *v, double order)
{
    if (!(order > 0.0 && order < 2.0))
        return 0.0;
    const double slow = v[2] + (v[2] - v[1]) / (exp2(order) - 1.0);
    return SLOW_FACTOR * fabs(slow - second_order(v[1], v[2]));
}

/* Error series h^2, h^3 on the three finest grids v. The coarsest of them, where it was
 * far off, only widens the uncertainty. */
static struct estimate from_series(const double *v, double order, double spread,
                                   const struct shares *shares, double noise)
{
    const double second = second_order(v[1], v[2]), third = third_order(v);
    const bool near = fabs(order - 2.0) <= NEAR_SECOND;
    const double sum = shares->third * fabs(third) + shares->spread * spread +
                       shares->change * fabs(v[2] - v[1]);
    return (struct estimate){near ? second + third : second,
                             fmax(sum, slow_uncertainty(v, order)) + noise, order,
                             true};
}

static struct estimate from_disorder(const double *v, double scale, double noise)
{
    const double d1 = fabs(v[1] - v[0]), d2 = fabs(v[2] - v[1]);
    const double spread = fmax(d1, d2);
    const bool settled = spread <= SMALL_SHARE * scale || d2 < 0.5 * d1;
    return (struct estimate){second_order(v[1], v[2]), DISORDER_FACTOR * spread + noise,
                             0.0, settled};
}

/* The three finest grids v; spread and shares as in from_series. */
static struct estimate from_three(const double *v, double spread,
                                  const struct shares *shares, double scale,
                                  double noise)
{
    const double d1 = v[1] - v[0], d2 = v[2] - v[1];
    if (fabs(d1) <= 10.0 * noise && fabs(d2) <= 10.0 * noise)
        return (struct estimate){v[2], fmax(fabs(d1), fabs(d2)) + noise, 0.0, true};
    const double order = d1 * d2 > 0.0 ? log2(d1 / d2) : 0.0;
    if (order >= LEAST_ORDER || (order == 0.0 && fabs(d2) <= FALL_SHARE * fabs(d1)))
        return from_series(v, order, spread, shares, noise);
    return from_disorder(v, scale, noise);
}

struct estimate extrapolate(const double *values, int levels, double scale)
{
    double largest = 0.0;
    for (int k = 0; k < levels; k++) {
        if (!isfinite(values[k]))
            return (struct estimate){values[levels - 1], (double)INFINITY, 0.0, false};
        largest = fmax(largest, fabs(values[k]));
    }
    if (scale == 0.0)
        scale = largest;
    const double noise = NOISE * scale;
    if (levels == 2)
        return from_two(values[0], values[1], noise);
    if (levels == 3)
        return from_three(values, 0.0, &THREE, scale, noise);
    const double spread = fabs(corrected(values + 1) - corrected(values));
    return from_three(values + 1, spread, &FOUR, scale, noise);
}
