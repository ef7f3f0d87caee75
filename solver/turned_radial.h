/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_TURNED_RADIAL_H
#define EVENGAP_SOLVER_TURNED_RADIAL_H

/* The functions of r that make harmonic polynomials in a turned plane. With
 * x = (z - z0)/scale and T_n,k = n!/(n-k)! x^(n-k) the sums over even k and over odd k
 *     U_n = sum T_n,k F_k(r),      V_n = sum T_n,k F_k(r)
 * satisfy (1/r)(r u_r)_r + u_zz = 0 exactly if
 *     (1/r)(r F_k')' = -F_(k-2)/scale^2,   F_0 = 1,   F_1 = (r0/scale) ln(r/r0)
 * and F_k, F_k' vanish at r0 for k >= 2: U_n has the values x^n and no slope at r0, V_n
 * no value and the slope n x^(n-1)/scale. Far from the axis U_n and V_n go over into the
 * real and imaginary parts of (x + iy)^n, y = (r - r0)/scale; at r0 = 0 the odd ones
 * are singular and left out, and U_n = R^n P_n(cos t), the solid harmonics. */

enum {
    TURNED_RADIALS = 7,       /* F_0 ... F_6 */
    TURNED_SERIES_LENGTH = 28 /* round-off is reached at |ln(r/r0)| = 0.75 */
};

/* Coefficients of F_k = (r0/scale)^k l^k sum term[k][j] l^j, l = ln(r/r0): the same for
 * every r0. */
struct turned_radial {
    double term[TURNED_RADIALS][TURNED_SERIES_LENGTH];
};

/** Fills the coefficients. */
void turned_radial_init(struct turned_radial *radial);

/** value[k] = F_k(r) and slope[k] = scale * dF_k/dr for k <= last < TURNED_RADIALS.
 *  centre: r0 (m) >= 0; 0: the even ones only, the odd ones are 0. scale (m) > 0. For
 *  centre > 0 an r below 1e-6 centre counts as that: ln r has no value on the axis.
 *  Accuracy  1e-12 relative. */
void turned_radial_at(const struct turned_radial *radial, double centre, double scale,
                      double r, int last, double *value, double *slope);

#endif
