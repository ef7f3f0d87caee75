/* SPDX-License-Identifier: GPL-3.0-or-later */

/* In l = ln(r/r0) the recursion reads f_k'' = -exp(2 l) f_(k-2) with f_k = F_k
 * (scale/r0)^k. Near l = 0 it is solved by a power series, whose terms have one sign at
 * every power (nothing cancels); elsewhere by the closed form
 *     f_k = sum over m of exp(2 m l) (p_m + q_m l),
 * which cancels near l = 0 down to l^k. */

#include "solver/turned_radial.h"

#include <math.h>

#define SERIES_REACH 0.75
#define NEAREST      1e-6

enum { POWERS = TURNED_RADIALS / 2 + 1 }; /* exp(0) ... exp(2 m l) */

void turned_radial_init(struct turned_radial *radial)
{
    double exponential[TURNED_SERIES_LENGTH] = {1.0}; /* of exp(2 l) */
    for (int j = 1; j < TURNED_SERIES_LENGTH; j++)
        exponential[j] = exponential[j - 1] * 2.0 / j;
    *radial = (struct turned_radial){{{0.0}}};
    radial->term[0][0] = 1.0;
    radial->term[1][0] = 1.0;
    for (int k = 2; k < TURNED_RADIALS; k++)
        for (int j = 0; j < TURNED_SERIES_LENGTH; j++) {
            double sum = 0.0;
            for (int i = 0; i <= j; i++)
                sum += exponential[i] * radial->term[k - 2][j - i];
            radial->term[k][j] = -sum / ((k + j) * (k + j - 1));
        }
}

/* f_k/l^k and f_k'/l^(k-1). */
static void series_at(const double *term, int k, double l, double *value, double *slope)
{
    *value = *slope = 0.0;
    for (int j = TURNED_SERIES_LENGTH - 1; j >= 0; j--) {
        *value = *value * l + term[j];
        *slope = *slope * l + (k + j) * term[j];
    }
}

static void near_centre(const struct turned_radial *radial, double y, double l,
                        double ratio, int last, double *value, double *slope)
{
    double power = 1.0, lower = 0.0; /* y^k, y^(k-1) */
    for (int k = 0; k <= last; k++) {
        double v, s;
        series_at(radial->term[k], k, l, &v, &s);
        value[k] = power * v;
        slope[k] = lower * s * ratio;
        lower = power;
        power *= y;
    }
}

struct closed_form {
    double p[POWERS], q[POWERS];
};

/* The two-fold integral of -exp(2 l) f from 0. */
static struct closed_form next_form(const struct closed_form *f)
{
    struct closed_form next = {{0.0}, {0.0}};
    for (int m = 1; m < POWERS; m++) {
        const double square = 4.0 * m * m;
        next.q[m] = -f->q[m - 1] / square;
        next.p[m] = -(f->p[m - 1] - f->q[m - 1] / m) / square;
        next.p[0] -= next.p[m];
        next.q[0] -= 2.0 * m * next.p[m] + next.q[m];
    }
    return next;
}

static void form_at(const struct closed_form *f, double l, double *value, double *slope)
{
    *value = *slope = 0.0;
    for (int m = 0; m < POWERS; m++) {
        const double e = exp(2.0 * m * l), inner = f->p[m] + f->q[m] * l;
        *value += e * inner;
        *slope += e * (2.0 * m * inner + f->q[m]);
    }
}

static void far_from_centre(double size, double l, double ratio, int last,
                            double *value, double *slope)
{
    struct closed_form form[2] = {{{1.0}, {0.0}}, {{0.0}, {1.0}}};
    double power = 1.0; /* (r0/scale)^k */
    for (int k = 0; k <= last; k++) {
        double v, s;
        form_at(&form[k % 2], l, &v, &s);
        form[k % 2] = next_form(&form[k % 2]);
        value[k] = power * v;
        slope[k] = power / size * s * ratio;
        power *= size;
    }
}

/* (-1)^m (y/2)^(2m)/m!^2 */
static void about_axis(double y, int last, double *value, double *slope)
{
    double term = 1.0, lower = 0.0; /* F_k and F_k/y */
    for (int k = 0; k <= last; k++) {
        value[k] = slope[k] = 0.0;
        if (k % 2 != 0)
            continue;
        value[k] = term;
        slope[k] = k * lower;
        lower = -term * y / ((k + 2) * (k + 2));
        term = lower * y;
    }
}

void turned_radial_at(const struct turned_radial *radial, double centre, double scale,
                      double r, int last, double *value, double *slope)
{
    if (!(centre > 0.0)) {
        about_axis(r / scale, last, value, slope);
        return;
    }
    const double at = fmax(r, NEAREST * centre);
    const double size = centre / scale, l = log1p((at - centre) / centre);
    if (fabs(l) <= SERIES_REACH)
        near_centre(radial, size * l, l, centre / at, last, value, slope);
    else
        far_from_centre(size, l, centre / at, last, value, slope);
}
