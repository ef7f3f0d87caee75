/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_ENGE_H
#define EVENGAP_SOLVER_ENGE_H

/* The end of a field as an Enge function,
 *     F(s) = 1 / (1 + exp(a_0 + a_1 s + ... + a_5 s^5)),
 * s the distance outward in gaps, F the field over that inside. */

#include "shared/attributes.h"
#include "shared/status.h"

enum { ENGE_TERMS = 6 };

/* A fitted end. */
struct enge {
    double a[ENGE_TERMS]; /* 0 from `terms` on */
    int terms;            /* 6, 4 or 2 */
    double rms;           /* of the fit minus the samples */
    double largest;       /* largest |fit - sample| */
    double largest_at;    /* s of it */
};

/** F(s); any finite s, no overflow. */
double enge_value(const double a[ENGE_TERMS], double s);

/** Least squares of F over the samples, every sample of equal weight, with six terms.
 *  The leading term, of odd power, must come out positive, else F would rise again far
 *  outside and fall far inside: where it does not, two terms fewer are taken.
 *
 *  s, f   in   [count] distance (gaps), rising, and field over that inside; not all s 0
 *  fit    out  zeroed unless STATUS_OK
 *
 *  Returns  STATUS_OK; STATUS_SIZE if count < 2 ENGE_TERMS; STATUS_UNTRUSTED if not even
 *           two terms give a fit that settles and falls through 1/2; STATUS_MEMORY.
 *  Source   Enge, Rev. Sci. Instrum. 35, 278 (1964), and in Focusing of Charged
 *           Particles, ed. Septier (1967), vol. 2 (from memory). Levenberg-Marquardt of
 *           the GNU Scientific Library; start from the linear fit of ln(1/F - 1).
 */
enum status enge_fit(const double *s, const double *f, int count,
                     struct enge *fit) MUST_CHECK;

#endif
