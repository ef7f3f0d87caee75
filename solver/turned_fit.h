/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_TURNED_FIT_H
#define EVENGAP_SOLVER_TURNED_FIT_H

/* Least-squares fit of exact solutions in a turned plane,
 *     u(z, r) = c_0 + sum over n of c_n U_n(z, r) + s_n V_n(z, r)
 * (turned_radial.h), to scattered values: what harmonic_fit is in a planar one. About a
 * centre on the axis the sum has the regular terms U_n only and is even in r. At full
 * degree g ((z-z0)/scale)^2 is fitted as well, for the reason told in harmonic_fit.h. */

#include <stdbool.h>

#include "shared/attributes.h"
#include "shared/status.h"
#include "solver/harmonic_fit.h"
#include "solver/turned_radial.h"

/* The radial functions are borrowed. */
struct turned_harmonic {
    const struct turned_radial *radial;
    struct vec2 centre; /* m, (z, r); r = 0: about the axis */
    double scale;       /* m */
    int degree;
    bool exact; /* without g */
    double
        coefficient[HARMONIC_TERMS]; /* off the axis 1, U_1, V_1, U_2, V_2, ...; about
                                           it 1, U_1, U_2, ...; g comes after them */
};

/** Fits; the degree is lowered where there are few points. Points beyond the axis
 *  (r < 0), and for a centre off the axis those on it, are left out. count >= 1. work is
 *  scratch of at least count*HARMONIC_TERMS + count doubles.
 *  STATUS_UNTRUSTED if the fit failed. */
enum status turned_fit(const struct turned_radial *radial,
                       const struct fit_point *points, int count, struct vec2 centre,
                       double *work, struct turned_harmonic *fit) MUST_CHECK;

/** The same without g (harmonic_fit_exact). */
enum status turned_fit_exact(const struct turned_radial *radial,
                             const struct fit_point *points, int count,
                             struct vec2 centre, double *work,
                             struct turned_harmonic *fit) MUST_CHECK;

/** Value and gradient (per metre) of the sum. */
double turned_value(const struct turned_harmonic *fit, struct vec2 at,
                    struct vec2 *gradient);

#endif
