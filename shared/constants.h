/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SHARED_CONSTANTS_H
#define EVENGAP_SHARED_CONSTANTS_H

/* Physical constants in SI units. Source: CODATA 2018 recommended values (Tiesinga et
 * al., Rev. Mod. Phys. 93, 025010, 2021); recalled digits, checked in the tests against
 * the units library and against each other (eps0 mu0 c^2 = 1). */

#define SPEED_OF_LIGHT      299792458.0       /* m/s, exact */
#define ELEMENTARY_CHARGE   1.602176634e-19   /* C, exact */
#define ATOMIC_MASS         1.66053906660e-27 /* kg */
#define ELECTRON_MASS       9.1093837015e-31  /* kg */
#define VACUUM_PERMITTIVITY 8.8541878128e-12  /* F/m */
#define VACUUM_PERMEABILITY 1.25663706212e-6  /* N/A^2 */
#define PI                  3.14159265358979323846

#endif
