/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_EXTRAPOLATE_H
#define EVENGAP_SOLVER_EXTRAPOLATE_H

/* One number from a family of nested grids (spacing h, h/2, h/4, h/8): its extrapolated
 * value and an uncertainty. */

#include <stdbool.h>

struct estimate {
    double value;
    double uncertainty; /* absolute, >= 0 */
    double order;       /* measured order; 0 where it could not be measured */
    bool settled;       /* false: the grids do not converge on it */
};

/** Estimate from values[levels], coarse to fine, 2 <= levels <= 4. scale (> 0) is the
 *  size against which changes are judged; 0 takes the largest |value|.
 *  The value is that of the two finest grids extrapolated with order 2; where the order
 *  measured on the three finest lies within 1/2 of 2, the next term of the error series
 *  h^2, h^3 is removed as well. The uncertainty is
 *   - two grids: their change;
 *   - three, measured order above 1/2, or changes that alternate but fall to a quarter:
 *     twice the correction by the h^3 term plus 0.02 of the last change; at orders
 *     below 2 at least 1.1 times the distance from the extrapolation with order 2 to that
 *     with the measured order (so a figure of truly lower order is covered);
 *   - four: the same of the three finest, but the sum is 1.5 times that correction, 0.1 of
 *     the distance to the same extrapolation of the three coarsest, and 0.005 of the
 *     last change;
 *   - else 1.5 times the larger change. Such a figure is unsettled unless its changes are
 *     small or halve.
 *  Not a bound: on figures with exact solutions about 97 of 100 lie inside (four grids:
 *  98), and the uncertainty is typically ten times the error
 *  (tests/bench/bench_honesty.c). A correction by an h^4 term from four grids makes values
 *  worse: what is left after two terms is scatter.
 *  Values that are not finite give an infinite uncertainty and are never settled.
 *  Source  Richardson (1911); Roache, J. Fluids Eng. 116, 405 (1994): safety factor 3
 *          where the order is assumed (from memory). */
struct estimate extrapolate(const double *values, int levels, double scale);

#endif
