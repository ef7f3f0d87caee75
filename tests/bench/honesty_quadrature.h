/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_TESTS_HONESTY_QUADRATURE_H
#define EVENGAP_TESTS_HONESTY_QUADRATURE_H

/* Integrals and elliptic integrals for closed forms. */

/* An integrand on (0, 1): x is the distance from 0 and y = 1 - x that from 1, each with
 * full relative precision. */
typedef double (*integrand)(double x, double y, const void *context);

/** Integral over (0, 1) by the double-exponential rule: about 1e-14 also with algebraic
 *  singularities at the ends.
 *  Source  Takahasi and Mori, Publ. RIMS 9, 721 (1974) (from memory). */
double quadrature(integrand f, const void *context);

/** Complete elliptic integral K of modulus k, 0 <= k < 1, given k' = sqrt(1 - k^2): by the
 *  arithmetic-geometric mean. */
double elliptic_k(double k_prime);

#endif
