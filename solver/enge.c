/* SPDX-License-Identifier: GPL-3.0-or-later */

/* What a user of the coefficients needs is F, so F is what is fitted, not its logarithm:
 * far inside and far outside ln(1/F - 1) is all noise. The logarithm, weighted by
 * F (1 - F) = -dF/dP, gives the start. Distances are scaled to at most 1 during the fit,
 * which keeps six powers well apart (condition about 100). */

#include "solver/enge.h"

#include <math.h>
#include <stdbool.h>
#include <string.h>

#include <gsl/gsl_errno.h>
#include <gsl/gsl_multifit.h>
#include <gsl/gsl_multifit_nlinear.h>

#include "shared/mem.h"

enum { ITERATIONS_MAX = 200 };

/* Relative change of the coefficients at which the iteration stops. */
#define COEFFICIENT_TOLERANCE 1e-10
/* Start: samples nearer to 0 or 1 than this say nothing about the exponent. */
#define START_MARGIN 1e-5

/* The samples during a fit. */
struct samples {
    const double *t; /* [count] s over its largest size */
    const double *f; /* [count] */
    int count;
    int terms;
};

static double exponent(const double *a, int terms, double s)
{
    double p = 0.0;
    for (int k = terms - 1; k >= 0; k--)
        p = p * s + a[k];
    return p;
}

/* 1/(1 + exp(p)) and its derivative -F (1 - F), neither of which overflows. */
static double falling(double p, double *slope)
{
    const double small = exp(-fabs(p)), large = 1.0 / (1.0 + small);
    *slope = -small * large * large;
    return p > 0.0 ? small * large : large;
}

double enge_value(const double a[ENGE_TERMS], double s)
{
    double slope;
    return falling(exponent(a, ENGE_TERMS, s), &slope);
}

static int residuals(const gsl_vector *a, void *data, gsl_vector *out)
{
    const struct samples *samples = data;
    for (int k = 0; k < samples->count; k++) {
        double slope;
        const double p = exponent(a->data, samples->terms, samples->t[k]);
        gsl_vector_set(out, (size_t)k, falling(p, &slope) - samples->f[k]);
    }
    return GSL_SUCCESS;
}

static int slopes(const gsl_vector *a, void *data, gsl_matrix *out)
{
    const struct samples *samples = data;
    for (int k = 0; k < samples->count; k++) {
        double term;
        (void)falling(exponent(a->data, samples->terms, samples->t[k]), &term);
        for (int n = 0; n < samples->terms; n++) {
            gsl_matrix_set(out, (size_t)k, (size_t)n, term);
            term *= samples->t[k];
        }
    }
    return GSL_SUCCESS;
}

/* Row k of the weighted linear fit of ln(1/F - 1): all 0 where F says nothing. */
static void start_row(const struct samples *samples, int k, double *row, double *right)
{
    const double f = samples->f[k];
    const bool tells = f > START_MARGIN && f < 1.0 - START_MARGIN;
    double term = tells ? f * (1.0 - f) : 0.0;
    *right = tells ? term * log(1.0 / f - 1.0) : 0.0;
    for (int n = 0; n < samples->terms; n++) {
        row[n] = term;
        term *= samples->t[k];
    }
}

static enum status solve_start(const struct samples *samples, double *rows,
                               double *right, double *a)
{
    const size_t count = (size_t)samples->count, terms = (size_t)samples->terms;
    double spread[ENGE_TERMS * ENGE_TERMS], rest;
    gsl_multifit_linear_workspace *work = gsl_multifit_linear_alloc(count, terms);
    if (work == NULL)
        return STATUS_MEMORY;
    for (int k = 0; k < samples->count; k++)
        start_row(samples, k, rows + (size_t)k * terms, &right[k]);
    gsl_matrix_view x = gsl_matrix_view_array(rows, count, terms);
    gsl_vector_view y = gsl_vector_view_array(right, count);
    gsl_vector_view c = gsl_vector_view_array(a, terms);
    gsl_matrix_view cov = gsl_matrix_view_array(spread, terms, terms);
    const int result =
        gsl_multifit_linear(&x.matrix, &y.vector, &c.vector, &cov.matrix, &rest, work);
    gsl_multifit_linear_free(work);
    return result == GSL_SUCCESS ? STATUS_OK : STATUS_UNTRUSTED;
}

static enum status start(const struct samples *samples, double *a)
{
    double *rows = MEM_NEW((size_t)samples->count * ENGE_TERMS, double);
    double *right = MEM_NEW((size_t)samples->count, double);
    enum status status = rows != NULL && right != NULL
                             ? solve_start(samples, rows, right, a)
                             : STATUS_MEMORY;
    mem_free(right);
    mem_free(rows);
    return status;
}

/* Improves a[] until the sum of squares is least. */
static enum status improve(const struct samples *samples, double *a)
{
    struct samples data = *samples;
    gsl_multifit_nlinear_fdf system = {.f = residuals,
                                       .df = slopes,
                                       .n = (size_t)samples->count,
                                       .p = (size_t)samples->terms,
                                       .params = &data};
    const gsl_multifit_nlinear_parameters parameters =
        gsl_multifit_nlinear_default_parameters();
    gsl_multifit_nlinear_workspace *work = gsl_multifit_nlinear_alloc(
        gsl_multifit_nlinear_trust, &parameters, system.n, system.p);
    if (work == NULL)
        return STATUS_MEMORY;
    const gsl_vector_view from = gsl_vector_view_array(a, system.p);
    int reason = 0;
    int result = gsl_multifit_nlinear_init(&from.vector, &system, work);
    if (result == GSL_SUCCESS)
        result = gsl_multifit_nlinear_driver(ITERATIONS_MAX, COEFFICIENT_TOLERANCE, 0.0,
                                             0.0, NULL, NULL, &reason, work);
    memcpy(a, gsl_multifit_nlinear_position(work)->data, system.p * sizeof *a);
    gsl_multifit_nlinear_free(work);
    return result == GSL_SUCCESS  ? STATUS_OK
           : result == GSL_ENOMEM ? STATUS_MEMORY
                                  : STATUS_UNTRUSTED;
}

/* How far the fit is from the samples. */
static void judge(const double *s, const double *f, int count, struct enge *fit)
{
    double sum = 0.0;
    for (int k = 0; k < count; k++) {
        const double miss = fabs(enge_value(fit->a, s[k]) - f[k]);
        sum += miss * miss;
        if (miss > fit->largest) {
            fit->largest = miss;
            fit->largest_at = s[k];
        }
    }
    fit->rms = sqrt(sum / count);
}

/* Leading term positive, and the exponent from below to above 0 over the samples: the
 * first alone could be round-off. */
static bool falls(const struct samples *samples, const double *a)
{
    return a[samples->terms - 1] > 0.0 &&
           exponent(a, samples->terms, samples->t[0]) < 0.0 &&
           exponent(a, samples->terms, samples->t[samples->count - 1]) > 0.0;
}

/* The fit with so many terms; status as enge_fit. */
static enum status fit_terms(const struct samples *samples, double scale,
                             struct enge *fit)
{
    double power = 1.0;
    enum status status = start(samples, fit->a);
    if (status == STATUS_OK)
        status = improve(samples, fit->a);
    if (status == STATUS_OK && !falls(samples, fit->a))
        status = STATUS_UNTRUSTED;
    for (int n = 0; n < samples->terms; n++) {
        fit->a[n] /= power;
        power *= scale;
    }
    fit->terms = samples->terms;
    return status;
}

static enum status fit_scaled(const double *s, const double *f, int count, double *t,
                              struct enge *fit)
{
    double scale = 0.0;
    for (int k = 0; k < count; k++)
        scale = fmax(scale, fabs(s[k]));
    for (int k = 0; k < count; k++)
        t[k] = s[k] / scale;
    enum status status = STATUS_UNTRUSTED;
    for (int terms = ENGE_TERMS; terms >= 2 && status == STATUS_UNTRUSTED; terms -= 2) {
        const struct samples samples = {t, f, count, terms};
        memset(fit, 0, sizeof *fit);
        status = fit_terms(&samples, scale, fit);
    }
    return status;
}

enum status enge_fit(const double *s, const double *f, int count, struct enge *fit)
{
    memset(fit, 0, sizeof *fit);
    if (count < 2 * ENGE_TERMS)
        return STATUS_SIZE;
    double *t = MEM_NEW((size_t)count, double);
    if (t == NULL)
        return STATUS_MEMORY;
    /* The library's own handler would end the program. */
    gsl_error_handler_t *const handler = gsl_set_error_handler_off();
    enum status status = fit_scaled(s, f, count, t, fit);
    (void)gsl_set_error_handler(handler);
    mem_free(t);
    if (status == STATUS_OK)
        judge(s, f, count, fit);
    else
        memset(fit, 0, sizeof *fit);
    return status;
}
