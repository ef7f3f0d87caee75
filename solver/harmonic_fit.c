/* SPDX-License-Identifier: GPL-3.0-or-later */

/* On strongly stretched cells the sine terms are tiny but carry the short direction: the
 * least squares scale their columns first. */

#include "solver/harmonic_fit.h"

#include <complex.h>
#include <math.h>
#include <stdbool.h>
#include <stddef.h>

#include "solver/least_squares.h"

static double reach_of(const struct fit_point *points, int count, struct vec2 centre)
{
    double reach = 0.0;
    for (int k = 0; k < count; k++)
        reach = fmax(reach, vec2_length(vec2_sub(points[k].at, centre)));
    return reach > 0.0 ? reach : 1.0;
}

static int degree_for(int count)
{
    int degree = (count - 1) / 4; /* about two points for every term */
    if (degree < 1)
        return count >= 3 ? 1 : 0;
    return degree < HARMONIC_DEGREE ? degree : HARMONIC_DEGREE;
}

/* Column-major matrix [terms][count] of weighted terms, and weighted values. */
static void fill(const struct fit_point *points, int count, const struct harmonic *fit,
                 int terms, double *matrix, double *right)
{
    for (int k = 0; k < count; k++) {
        const struct vec2 d = vec2_sub(points[k].at, fit->centre);
        const double complex w = (d.a + d.b * (double complex)I) / fit->scale;
        double complex power = 1.0;
        matrix[k] = points[k].weight;
        right[k] = points[k].weight * points[k].value;
        for (int n = 1; n <= fit->degree; n++) {
            power *= w;
            matrix[(2 * n - 1) * count + k] = points[k].weight * creal(power);
            matrix[2 * n * count + k] = points[k].weight * cimag(power);
        }
        if (terms == HARMONIC_TERMS)
            matrix[(terms - 1) * count + k] = points[k].weight * creal(w) * creal(w);
    }
}

static enum status fit_with(const struct fit_point *points, int count,
                            struct vec2 centre, bool exact, double *work,
                            struct harmonic *fit)
{
    double *matrix = work, *right = work + (size_t)count * HARMONIC_TERMS;
    *fit = (struct harmonic){
        centre, reach_of(points, count, centre), degree_for(count), {0.0}};
    const bool source = !exact && fit->degree == HARMONIC_DEGREE;
    const int terms = source ? HARMONIC_TERMS : 2 * fit->degree + 1;
    fill(points, count, fit, terms, matrix, right);
    enum status status = least_squares(matrix, count, terms, right);
    for (int t = 0; t < terms && status == STATUS_OK; t++)
        fit->coefficient[t] = right[t];
    return status;
}

enum status harmonic_fit(const struct fit_point *points, int count, struct vec2 centre,
                         double *work, struct harmonic *fit)
{
    return fit_with(points, count, centre, false, work, fit);
}

enum status harmonic_fit_exact(const struct fit_point *points, int count,
                               struct vec2 centre, double *work, struct harmonic *fit)
{
    return fit_with(points, count, centre, true, work, fit);
}

double harmonic_value(const struct harmonic *fit, struct vec2 at, struct vec2 *gradient)
{
    const struct vec2 d = vec2_sub(at, fit->centre);
    const double complex w = (d.a + d.b * (double complex)I) / fit->scale;
    double complex power = 1.0;
    const double g = fit->coefficient[HARMONIC_TERMS - 1];
    double value = fit->coefficient[0] + g * creal(w) * creal(w);
    *gradient = (struct vec2){2.0 * g * creal(w) / fit->scale, 0.0};
    for (int n = 1; n <= fit->degree; n++) {
        const double c = fit->coefficient[2 * n - 1],
                     s = fit->coefficient[2 * (size_t)n];
        const double slope = n / fit->scale;
        /* d/da w^n = n w^(n-1)/scale, d/db w^n = i n w^(n-1)/scale */
        gradient->a += slope * (c * creal(power) + s * cimag(power));
        gradient->b += slope * (s * creal(power) - c * cimag(power));
        power *= w;
        value += c * creal(power) + s * cimag(power);
    }
    return value;
}
