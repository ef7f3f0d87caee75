/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_EXPANSION_H
#define EVENGAP_SOLVER_EXPANSION_H

/* Complex expansions of the fields of a cross-section about the axis, w = x + iy:
 *     E_x - i E_y = E_0 sum of e_n (w/r0)^n,   B_y + i B_x = B_0 sum of b_n (w/r0)^n.
 * Equal expansions give an exactly even ratio. */

#include "shared/attributes.h"
#include "shared/status.h"
#include "solver/plane_solution.h"

enum { EXPANSION_TERMS = 7 }; /* n = 0..6 */

struct expansion {
    double radius;                /* m, r0 */
    double centre;                /* V/m or T: real part of the n = 0 term */
    double real[EXPANSION_TERMS]; /* of e_n or b_n; real[0] = 1 */
    double imag[EXPANSION_TERMS];
};

/** Expansion on the circle of the given radius (m) about the origin, which must lie in
 *  free space within the plane (or its reflections): STATUS_SIZE otherwise, and if there
 *  is no centre field to refer to.
 *  Order  that of the field; the discrete Fourier sum over the circle adds terms n >= 57
 *         only.
 *  Source discrete Cauchy integral, common practice. */
enum status expansion_of_plane(const struct plane_solution *plane, double radius,
                               struct expansion *expansion) MUST_CHECK;

#endif
