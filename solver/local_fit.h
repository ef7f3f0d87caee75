/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_LOCAL_FIT_H
#define EVENGAP_SOLVER_LOCAL_FIT_H

/* The potential round one node as a sum of exact solutions of the plane's equation:
 * harmonic polynomials in a planar plane, their turned counterparts in a turned one. */

#include <stdbool.h>
#include <stddef.h>

#include "solver/harmonic_fit.h"
#include "solver/turned_fit.h"

struct local_fit {
    bool turned; /* which of the two holds */
    union {
        struct harmonic planar;
        struct turned_harmonic turned;
    } of;
};

/** Doubles of scratch a fit to `count` points takes. */
size_t local_fit_work(int count);

/** Fits points[count] round a centre. radial: NULL in a planar plane, else borrowed by
 *  the fit; a centre with b = 0 is then on the axis. exact: nothing but exact solutions
 *  (harmonic_fit_exact). work[local_fit_work(count)].
 *  STATUS_UNTRUSTED if the fit failed. */
enum status local_fit_make(const struct turned_radial *radial,
                           const struct fit_point *points, int count,
                           struct vec2 centre, bool exact, double *work,
                           struct local_fit *fit) MUST_CHECK;

/** Value and gradient (per metre). */
double local_fit_value(const struct local_fit *fit, struct vec2 at,
                       struct vec2 *gradient);

#endif
