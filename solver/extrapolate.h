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
 *  Two grids: order 2 is assumed. Three: where the measured order lies between 1.5 and
 *  3, the error series h^2, h^3 of the graded grids is summed, and four times the
 *  change by its second term is the uncertainty; below that the measured order itself is used;
 *  above it, and where the changes alternate but fall fast, the finest value stands with
 *  its last change as uncertainty. Changes that do not fall are unsettled unless they
 *  are small. A value that is not finite gives an infinite uncertainty.
 *  Values that are not finite are never settled.
 *  Source  Richardson (1911); Roache, J. Fluids Eng. 116, 405 (1994): safety factor 3
 *          where the order is assumed (from memory). */
struct estimate extrapolate(const double *values, int levels, double scale);

#endif
