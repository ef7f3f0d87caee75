/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "tests/bench/honesty_can.h"

#include <gsl/gsl_sf_bessel.h>

#include "shared/constants.h"

/* Of one Bessel term in one layer: exp(-kz) and a wave that comes back from its far end. */
struct wave {
    double k;       /* 1/m */
    double from;    /* m, z where the layer begins */
    double end;     /* m, ... and ends */
    double back;    /* share that comes back */
    double at_from; /* value where the layer begins */
};

/* Value and slope along z. */
static double wave_at(const struct wave *w, double z, double *slope)
{
    const double forth = exp(-w->k * (z - w->from));
    const double back = w->back * exp(-w->k * (2.0 * w->end - w->from - z));
    const double whole = 1.0 + w->back * exp(-2.0 * w->k * (w->end - w->from));
    *slope = -w->at_from * w->k * (forth - back) / whole;
    return w->at_from * (forth + back) / whole;
}

/* The far layer first: its slope where it begins sets what comes back in the near one. */
static double mode_at(const struct can *can, double k, double z, double *slope)
{
    struct wave far = {k, can->layer, can->length, can->mirror ? 1.0 : -1.0, 1.0};
    struct wave near = {k, 0.0, can->layer, 0.0, 1.0};
    (void)wave_at(&far, can->layer, slope);
    const double ratio = -*slope / (k * can->permittivity);
    near.back = (1.0 - ratio) / (1.0 + ratio);
    if (z < can->layer)
        return wave_at(&near, z, slope);
    far.at_from = wave_at(&near, can->layer, slope);
    return wave_at(&far, z, slope);
}

double can_at(const struct can *can, struct vec2 at, struct vec2 *field)
{
    double sum = 0.0, slope;
    *field = (struct vec2){0.0, 0.0};
    for (unsigned n = 1; n <= 80; n++) {
        const double zero = gsl_sf_bessel_zero_J0(n), k = zero / can->radius;
        const double a = 2.0 / (zero * gsl_sf_bessel_J1(zero));
        const double shape = mode_at(can, k, at.a, &slope);
        sum += a * gsl_sf_bessel_J0(k * at.b) * shape;
        field->a -= a * gsl_sf_bessel_J0(k * at.b) * slope;
        field->b += a * k * gsl_sf_bessel_J1(k * at.b) * shape;
    }
    return sum;
}

double ramp_at(double radius, double length, struct vec2 at, struct vec2 *field)
{
    double sum = 0.5;
    *field = (struct vec2){0.0, 0.0};
    for (int n = 1; n < 4000; n += 2) {
        const double k = n * PI / length, a = 4.0 / (n * PI * n * PI);
        const double scale =
            exp(-k * (radius - at.b)) / gsl_sf_bessel_I0_scaled(k * radius);
        const double shape = scale * gsl_sf_bessel_I0_scaled(k * at.b);
        if (shape < 1e-18)
            break;
        sum -= a * cos(k * at.a) * shape;
        field->a -= a * k * sin(k * at.a) * shape;
        field->b += a * k * cos(k * at.a) * scale * gsl_sf_bessel_I1_scaled(k * at.b);
    }
    return sum;
}
