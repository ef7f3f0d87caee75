/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_TESTS_LOVE_H
#define EVENGAP_TESTS_LOVE_H

/* The capacitance of two equal, thin, coaxial discs in free space from Love's integral
 * equation
 *     f(x) - (1/pi) integral over -1 < y < 1 of k/(k^2 + (x - y)^2) f(y) dy = 1,
 * k the distance over the radius: C = 2 eps0 radius * integral of f. E. R. Love, Q. J.
 * Mech. Appl. Math. 2, 428 (1949), from memory; far apart (f = 1) it is half the
 * 8 eps0 radius of a single disc. */

/** C/(eps0 radius), by Gauss-Legendre quadrature at `points` points; the error falls as
 *  (k + sqrt(1 + k^2))^(-2 points). GSL has the points to full precision for 32, 64, 96,
 *  100, 128, 256, 512 and 1024, otherwise to 1e-10 only. Failures of allocation abort. */
double love_capacitance(double distance_over_radius, int points);

#endif
