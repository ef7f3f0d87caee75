/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_HARMONIC_FIT_H
#define EVENGAP_SOLVER_HARMONIC_FIT_H

/* Least-squares fit of a harmonic polynomial
 *     p(w) = c_0 + sum over n of Re((c_n - i s_n) w^n),   w = ((a-a0) + i(b-b0))/scale,
 * to scattered values. Rank-revealing, so thin or one-sided sets of points are fine.
 *
 * At full degree one term more is fitted that is not harmonic, g ((a-a0)/scale)^2. Nodal
 * potentials solve the difference equation, not the differential one: their Laplacian is
 * about a constant of size h^2 over the few cells of a window. Forced into the harmonic
 * terms it would disturb the gradient at h^3, much amplified beside surfaces. */

#include "shared/attributes.h"
#include "shared/status.h"
#include "shared/vec2.h"

enum { HARMONIC_DEGREE = 6, HARMONIC_TERMS = 2 * HARMONIC_DEGREE + 2 };

struct harmonic {
    struct vec2 centre; /* m */
    double scale;       /* m */
    int degree;
    double coefficient[HARMONIC_TERMS]; /* 1, Re w, Im w, Re w^2, Im w^2, ...; the last,
                                           0 where it is not fitted, is g */
};

struct fit_point {
    struct vec2 at; /* m */
    double value;
    double weight; /* > 0 */
};

/** Fits; the degree is lowered where there are few points. count >= 1. work is scratch
 *  of at least count*HARMONIC_TERMS + count doubles.
 *  STATUS_UNTRUSTED if the fit failed. */
enum status harmonic_fit(const struct fit_point *points, int count, struct vec2 centre,
                         double *work, struct harmonic *fit) MUST_CHECK;

/** The same without the term that is not harmonic: for points that leave one side open,
 *  where it would be guessed. */
enum status harmonic_fit_exact(const struct fit_point *points, int count,
                               struct vec2 centre, double *work,
                               struct harmonic *fit) MUST_CHECK;

/** Value and gradient (per metre) of the polynomial. */
double harmonic_value(const struct harmonic *fit, struct vec2 at,
                      struct vec2 *gradient);

#endif
