/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_EXTRAPOLATE_H
#define EVENGAP_SOLVER_EXTRAPOLATE_H

/* One number from a family of nested grids (spacing h, h/2, h/4): its extrapolated
 * value and an uncertainty. */

#include <stdbool.h>

struct estimate {
    double value;
    double uncertainty; /* absolute, >= 0 */
    double order;       /* measured order; 0 where it could not be measured */
    bool settled;       /* false: the grids do not converge on it */
};

/** Estimate from values[levels], coarse to fine, 2 <= levels <= 3. scale (> 0) is the
 *  size against which changes are judged; 0 takes the largest |value|.
 *  The value is that of the two finest grids extrapolated with order 2; where the order
 *  measured on three lies within 1/2 of 2, the next term of the error series h^2, h^3 is
 *  removed as well. The uncertainty is
 *   - two grids: their change;
 *   - three, measured order above 1.5, or changes that alternate but fall to a quarter:
 *     four times the correction by the h^3 term, at least 0.15 of that by h^2;
 *   - measured order between 0.5 and 1.5: 1.1 times the distance to the extrapolation
 *     with the measured order (so a figure of truly lower order is covered);
 *   - else three times the larger change, about the finest value. Such a figure is
 *     unsettled unless its changes are small or halve.
 *  Not a bound: on figures with exact solutions about 97 of 100 lie inside, and the
 *  uncertainty is typically nine times the error (tests/bench/bench_honesty.c).
 *  Values that are not finite give an infinite uncertainty and are never settled.
 *  Source  Richardson (1911); Roache, J. Fluids Eng. 116, 405 (1994): safety factor 3
 *          where the order is assumed (from memory). */
struct estimate extrapolate(const double *values, int levels, double scale);

#endif
