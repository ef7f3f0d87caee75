/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "solver/extrapolate.h"

#include <math.h>

/* Relative size of round-off in a solved figure. */
#define NOISE 1e-12
/* Share of the first correction that the uncertainty never goes below. */
#define LEAST_SHARE 0.06
/* Safety factor on the last correction of the series. */
#define SERIES_FACTOR 4.0
/* A change that falls below this share of the one before (order 3 and more) is not a
 * series yet. */
#define FAST_SHARE 0.125
/* Changes below this share of the scale never count as unsettled, whatever their order:
 * an uncertainty of DISORDER_FACTOR times the change says all there is to say. */
#define SMALL_SHARE     1e-4
#define DISORDER_FACTOR 3.0

static struct estimate from_two(double coarse, double fine, double noise)
{
    const double change = fine - coarse;
    return (struct estimate){fine + change / 3.0, fabs(change) + noise, 0.0, true};
}

/* Error series h^2, h^3: two corrections. */
static struct estimate from_series(const double *v, double order, double noise)
{
    const double first = v[1] + (v[1] - v[0]) / 3.0;
    const double second = v[2] + (v[2] - v[1]) / 3.0;
    const double value = second + (second - first) / 7.0;
    const double least = LEAST_SHARE * fabs(v[2] - second);
    return (struct estimate){
        value, fmax(SERIES_FACTOR * fabs(value - second), least) + noise, order, true};
}

static struct estimate from_order(const double *v, double order, double noise)
{
    const double rest = (v[2] - v[1]) / (exp2(order) - 1.0);
    return (struct estimate){v[2] + rest, fabs(rest) + noise, order, true};
}

/* The coarsest grid was far off and says little: the last change bounds what is left. */
static struct estimate from_last_change(const double *v, double order, double noise)
{
    return (struct estimate){v[2], fabs(v[2] - v[1]) + noise, order, true};
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
    if (fabs(d2) <= FAST_SHARE * fabs(d1))
        return from_last_change(values, order, noise);
    if (order >= 1.5)
        return from_series(values, order, noise);
    if (order >= 0.5)
        return from_order(values, order, noise);
    if (d1 * d2 < 0.0 && fabs(d2) <= 0.25 * fabs(d1))
        return from_last_change(values, order, noise);
    return from_disorder(values, scale, noise);
}
