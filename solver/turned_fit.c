/* SPDX-License-Identifier: GPL-3.0-or-later */

/* The terms satisfy the differential equation exactly, so all of the fit's freedom goes
 * into the solution, as with harmonic polynomials in a planar plane. (Polynomials of
 * degree 6 held to the equation by extra rows were as accurate for a ring's potential,
 * but need 28 terms for these 13 and meet no logarithm exactly.) The one term that does
 * not satisfy it is x^2, for the reason told in harmonic_fit.h. */

#include "solver/turned_fit.h"

#include <math.h>
#include <stdbool.h>
#include <stddef.h>

#include "solver/least_squares.h"

_Static_assert((int)TURNED_RADIALS > (int)HARMONIC_DEGREE,
               "a radial function for every degree");

/* Value and slopes (per scale) of one term. */
struct term {
    double value, slope_z, slope_r;
};

/* What all terms have in common at one point. */
struct basis {
    double power[TURNED_RADIALS]; /* x^k */
    double radial[TURNED_RADIALS], slope[TURNED_RADIALS];
};

static bool about_axis(const struct turned_harmonic *fit)
{
    return !(fit->centre.b > 0.0);
}

static bool counts(const struct fit_point *point, struct vec2 centre)
{
    return centre.b > 0.0 ? point->at.b > 0.0 : point->at.b >= 0.0;
}

static double reach_of(const struct fit_point *points, int count, struct vec2 centre)
{
    double reach = 0.0;
    for (int k = 0; k < count; k++)
        if (counts(&points[k], centre))
            reach = fmax(reach, vec2_length(vec2_sub(points[k].at, centre)));
    return reach > 0.0 ? reach : 1.0;
}

static int rows_of(const struct fit_point *points, int count, struct vec2 centre)
{
    int rows = 0;
    for (int k = 0; k < count; k++)
        rows += counts(&points[k], centre);
    return rows;
}

/* About two points for every term. */
static int degree_for(int rows, bool axis)
{
    const int degree = axis ? rows / 2 - 1 : (rows - 1) / 4;
    if (degree < 1)
        return rows >= 3 ? 1 : 0;
    return degree < HARMONIC_DEGREE ? degree : HARMONIC_DEGREE;
}

/* Terms that solve the equation. */
static int exact_terms(const struct turned_harmonic *fit)
{
    return about_axis(fit) ? fit->degree + 1 : 2 * fit->degree + 1;
}

/* With the one that does not, at full degree. */
static int terms_of(const struct turned_harmonic *fit)
{
    return exact_terms(fit) + (!fit->exact && fit->degree == HARMONIC_DEGREE ? 1 : 0);
}

static struct basis basis_at(const struct turned_harmonic *fit, struct vec2 at)
{
    struct basis basis;
    const double x = (at.a - fit->centre.a) / fit->scale;
    basis.power[0] = 1.0;
    for (int k = 1; k <= fit->degree; k++)
        basis.power[k] = basis.power[k - 1] * x;
    turned_radial_at(fit->radial, fit->centre.b, fit->scale, at.b, fit->degree,
                     basis.radial, basis.slope);
    return basis;
}

/* U_n for first = 0, V_n for first = 1. */
static struct term term_at(const struct basis *basis, int n, int first)
{
    struct term term = {0.0, 0.0, 0.0};
    double factor = first == 0 ? 1.0 : n; /* n!/(n-k)! */
    for (int k = first; k <= n; k += 2) {
        term.value += factor * basis->power[n - k] * basis->radial[k];
        term.slope_r += factor * basis->power[n - k] * basis->slope[k];
        if (k < n)
            term.slope_z +=
                factor * (n - k) * basis->power[n - k - 1] * basis->radial[k];
        factor *= (n - k) * (n - k - 1);
    }
    return term;
}

/* Term t of the sum. */
static struct term term_of(const struct turned_harmonic *fit, const struct basis *basis,
                           int t)
{
    if (t == exact_terms(fit))
        return (struct term){basis->power[2], 2.0 * basis->power[1], 0.0};
    if (about_axis(fit))
        return term_at(basis, t, 0);
    return term_at(basis, (t + 1) / 2, t > 0 && t % 2 == 0);
}

/* Column-major matrix [terms][rows] of weighted terms, and weighted values. */
static void fill(const struct turned_harmonic *fit, const struct fit_point *points,
                 int count, int rows, double *matrix, double *right)
{
    const int terms = terms_of(fit);
    int row = 0;
    for (int k = 0; k < count; k++) {
        if (!counts(&points[k], fit->centre))
            continue;
        const struct basis basis = basis_at(fit, points[k].at);
        for (int t = 0; t < terms; t++)
            matrix[(size_t)t * (size_t)rows + (size_t)row] =
                points[k].weight * term_of(fit, &basis, t).value;
        right[row++] = points[k].weight * points[k].value;
    }
}

static enum status fit_with(const struct turned_radial *radial,
                            const struct fit_point *points, int count,
                            struct vec2 centre, bool exact, double *work,
                            struct turned_harmonic *fit)
{
    double *matrix = work, *right = work + (size_t)count * HARMONIC_TERMS;
    const int rows = rows_of(points, count, centre);
    *fit = (struct turned_harmonic){.radial = radial,
                                    .centre = centre,
                                    .scale = reach_of(points, count, centre),
                                    .degree = degree_for(rows, !(centre.b > 0.0)),
                                    .exact = exact};
    if (rows == 0)
        return STATUS_UNTRUSTED;
    fill(fit, points, count, rows, matrix, right);
    enum status status = least_squares(matrix, rows, terms_of(fit), right);
    for (int t = 0; t < terms_of(fit) && status == STATUS_OK; t++)
        fit->coefficient[t] = right[t];
    return status;
}

enum status turned_fit(const struct turned_radial *radial,
                       const struct fit_point *points, int count, struct vec2 centre,
                       double *work, struct turned_harmonic *fit)
{
    return fit_with(radial, points, count, centre, false, work, fit);
}

enum status turned_fit_exact(const struct turned_radial *radial,
                             const struct fit_point *points, int count,
                             struct vec2 centre, double *work,
                             struct turned_harmonic *fit)
{
    return fit_with(radial, points, count, centre, true, work, fit);
}

double turned_value(const struct turned_harmonic *fit, struct vec2 at,
                    struct vec2 *gradient)
{
    const struct basis basis = basis_at(fit, at);
    const int terms = terms_of(fit);
    double value = 0.0;
    *gradient = (struct vec2){0.0, 0.0};
    for (int t = 0; t < terms; t++) {
        const struct term term = term_of(fit, &basis, t);
        value += fit->coefficient[t] * term.value;
        gradient->a += fit->coefficient[t] * term.slope_z / fit->scale;
        gradient->b += fit->coefficient[t] * term.slope_r / fit->scale;
    }
    return value;
}
