/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Columns are scaled to unit length before the rank is judged: on strongly stretched
 * cells the sine terms are tiny but carry the short direction. */

#include "solver/harmonic_fit.h"

#include <complex.h>
#include <lapacke.h>
#include <math.h>

/* Directions less certain than this are left out (minimum-norm solution). */
#define FIT_RCOND 1e-10

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
                 double *matrix, double *right)
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
    }
}

static void scale_columns(double *matrix, int count, int terms, double *norms)
{
    for (int t = 0; t < terms; t++) {
        double sum = 0.0;
        for (int k = 0; k < count; k++)
            sum += matrix[t * count + k] * matrix[t * count + k];
        norms[t] = sum > 0.0 ? sqrt(sum) : 1.0;
        for (int k = 0; k < count; k++)
            matrix[t * count + k] /= norms[t];
    }
}

enum status harmonic_fit(const struct fit_point *points, int count, struct vec2 centre,
                         double *work, struct harmonic *fit)
{
    double *matrix = work, *right = work + (size_t)count * HARMONIC_TERMS;
    double norms[HARMONIC_TERMS];
    lapack_int pivots[HARMONIC_TERMS] = {0}, rank = 0;
    *fit = (struct harmonic){
        centre, reach_of(points, count, centre), degree_for(count), {0.0}};
    const int terms = 2 * fit->degree + 1;
    fill(points, count, fit, matrix, right);
    scale_columns(matrix, count, terms, norms);
    if (LAPACKE_dgelsy(LAPACK_COL_MAJOR, count, terms, 1, matrix, count, right,
                       count > terms ? count : terms, pivots, FIT_RCOND, &rank) != 0)
        return STATUS_UNTRUSTED;
    for (int t = 0; t < terms; t++) {
        fit->coefficient[t] = right[t] / norms[t];
        if (!isfinite(fit->coefficient[t]))
            return STATUS_UNTRUSTED;
    }
    return STATUS_OK;
}

double harmonic_value(const struct harmonic *fit, struct vec2 at, struct vec2 *gradient)
{
    const struct vec2 d = vec2_sub(at, fit->centre);
    const double complex w = (d.a + d.b * (double complex)I) / fit->scale;
    double complex power = 1.0;
    double value = fit->coefficient[0];
    *gradient = (struct vec2){0.0, 0.0};
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
