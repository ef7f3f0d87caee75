/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "tests/bench/honesty_map.h"

#include <math.h>

#include "shared/constants.h"
#include "tests/bench/honesty_quadrature.h"

enum { ARC_PANELS = 64, FRINGE_PANELS = 4000 };

struct half_gap half_gap_thin_edge(void)
{
    return (struct half_gap){1, {1.0}, {1.0}, 1.0, false};
}

struct half_gap half_gap_square_edge(void)
{
    return (struct half_gap){1, {1.0}, {0.5}, 1.0, false};
}

struct half_gap half_gap_thick_clamp(double distance, double aperture)
{
    /* aperture = 1/sqrt(pq), distance = sqrt((1-p)(q-1)/(pq))/2 */
    const double product = 1.0 / (aperture * aperture);
    const double sum = 1.0 + product * (1.0 + 4.0 * distance * distance);
    const double q = 0.5 * (sum + sqrt(sum * sum - 4.0 * product)), p = product / q;
    return (struct half_gap){3, {p, q, 1.0}, {0.5, 0.5, -1.0}, p, true};
}

/* Distance and aperture of the thin clamp with parameters p < 1 < q. */
static void thin_clamp_sizes(double p, double q, double *distance, double *aperture)
{
    const double a = p * q, h = (1.0 - p) * (q - 1.0), scale = 1.0 / (2.0 * PI * a);
    const double u = sqrt(1.0 - p), v = sqrt(q - 1.0);
    *distance = -2.0 * scale * (u + 0.5 * a * log((1.0 - u) / (1.0 + u)) - h / u);
    *aperture = 4.0 * scale * (v + a * atan(1.0 / v) + h / v);
}

/* Sizes in the free variables ln(p/(1-p)) and ln(q-1). */
static struct vec2 sizes_at(double p, double q)
{
    struct vec2 sizes;
    thin_clamp_sizes(1.0 / (1.0 + exp(-p)), 1.0 + exp(q), &sizes.a, &sizes.b);
    return sizes;
}

/* Newton's method, damped, with difference quotients as slopes. */
struct half_gap half_gap_thin_clamp(double distance, double aperture)
{
    const double step = 1e-6;
    double p = 0.0, q = -0.5;
    for (int k = 0; k < 100; k++) {
        const struct vec2 here = sizes_at(p, q);
        const struct vec2 by_p = vec2_scale(
            vec2_sub(sizes_at(p + step, q), sizes_at(p - step, q)), 0.5 / step);
        const struct vec2 by_q = vec2_scale(
            vec2_sub(sizes_at(p, q + step), sizes_at(p, q - step)), 0.5 / step);
        const struct vec2 rest = vec2_sub((struct vec2){distance, aperture}, here);
        const double det = vec2_cross(by_p, by_q);
        const double dp = vec2_cross(rest, by_q) / det;
        const double dq = vec2_cross(by_p, rest) / det;
        const double damp = 0.5 / fmax(0.5, fmax(fabs(dp), fabs(dq)));
        p += damp * dp;
        q += damp * dq;
    }
    p = 1.0 / (1.0 + exp(-p));
    return (struct half_gap){3, {p, 1.0 + exp(q), 1.0}, {1.0, 1.0, -1.5}, p, true};
}

struct half_gap half_gap_between_planes(double height)
{
    /* z = a1 ln t + a2 ln(1 + t) with pi a1 = 1/2 and pi a2 = height - 1/2, so the tip,
     * where dz/dt = 0, is at t = -1/(2 height). */
    const double p = 0.5 / height;
    return (struct half_gap){2, {p, 1.0}, {1.0, -1.0}, p, true};
}

struct half_gap half_gap_step(double height)
{
    /* dz/dt = A sqrt((t + 1)/(t + q))/t: inner channel A pi/sqrt(q) = 1/2, outer
     * channel A pi = height. The first corner met is t = -1 (q > 1). */
    return (struct half_gap){2, {1.0, 4.0 * height * height}, {0.5, -0.5}, 1.0, false};
}

static double complex product_at(const struct half_gap *map, double complex t)
{
    double complex g = 1.0;
    for (int k = 0; k < map->factors; k++)
        g *= cpow(t + map->at[k], map->power[k]);
    return g;
}

/* For real t > -corner all factors are positive. */
static double real_product_at(const struct half_gap *map, double t)
{
    double g = 1.0;
    for (int k = 0; k < map->factors; k++)
        g *= pow(fmax(t + map->at[k], 0.0), map->power[k]);
    return g;
}

static double scale_of(const struct half_gap *map)
{
    return 1.0 / (2.0 * PI * real_product_at(map, 0.0));
}

struct stretch {
    const struct half_gap *map;
    double end;
};

/* (G - G(0))/t dt from 0 to the stretch's end. */
static double regular_part(double x, double y, const void *context)
{
    const struct stretch *s = context;
    (void)y;
    const double t = s->end * x;
    return (real_product_at(s->map, t) - real_product_at(s->map, 0.0)) / x;
}

double half_gap_x(const struct half_gap *map, double t)
{
    const struct stretch inner = {map, -map->corner}, outer = {map, t};
    const double regular =
        quadrature(regular_part, &outer) - quadrature(regular_part, &inner);
    return scale_of(map) * (regular + real_product_at(map, 0.0) * log(t / map->corner));
}

double half_gap_t(const struct half_gap *map, double x)
{
    double low = -80.0, high = 40.0;
    for (int k = 0; k < 60; k++) {
        const double middle = 0.5 * (low + high);
        if (half_gap_x(map, exp(middle)) < x)
            low = middle;
        else
            high = middle;
    }
    return exp(0.5 * (low + high));
}

struct map_point half_gap_point(const struct half_gap *map, double complex t)
{
    static const double node[3] = {0.5 - 0.38729833462074170, 0.5,
                                   0.5 + 0.38729833462074170};
    static const double weight[3] = {5.0 / 18.0, 8.0 / 18.0, 5.0 / 18.0};
    const double r = cabs(t), angle = carg(t);
    double complex z = 0.0;
    for (int panel = 0; panel < ARC_PANELS; panel++)
        for (int k = 0; k < 3; k++) {
            const double turn = angle * (panel + node[k]) / ARC_PANELS;
            z += weight[k] * product_at(map, r * turn_by(turn));
        }
    z = half_gap_x(map, r) + complex_of(0.0, scale_of(map) * angle / ARC_PANELS) * z;
    const double complex slope = real_product_at(map, 0.0) / product_at(map, t) /
                                 (map->has_clamp ? 1.0 + t : 1.0);
    const double potential =
        (angle - (map->has_clamp ? carg(1.0 + t) : 0.0)) / (2.0 * PI);
    return (struct map_point){
        {creal(z), cimag(z)}, potential, {-cimag(slope), -creal(slope)}};
}

double half_gap_field(const struct half_gap *map, double t)
{
    return real_product_at(map, 0.0) / real_product_at(map, t) /
           (map->has_clamp ? 1.0 + t : 1.0);
}

/* Integral of the field: the difference of the potential's conjugate. */
static double flux_function(const struct half_gap *map, double t)
{
    return (log(t) - (map->has_clamp ? log1p(t) : 0.0)) / (2.0 * PI);
}

double half_gap_flux(const struct half_gap *map, double from, double to)
{
    return flux_function(map, to) - flux_function(map, from);
}

double half_gap_length(const struct half_gap *map, double from, double to)
{
    return half_gap_flux(map, from, to) / half_gap_field(map, from);
}

/* F (1 - F) dx = (1 - F) times the differential of the flux function; Simpson's rule in
 * ln t, where all is smooth. */
double half_gap_fringe(const struct half_gap *map, double from, double to)
{
    const double centre = half_gap_field(map, from);
    const double step = log(to / from) / FRINGE_PANELS;
    double sum = 0.0;
    for (int k = 0; k <= FRINGE_PANELS; k++) {
        const double t = from * exp(k * step);
        const double weight = k == 0 || k == FRINGE_PANELS ? 1.0 : k % 2 ? 4.0 : 2.0;
        const double density = 1.0 / (2.0 * PI * (map->has_clamp ? 1.0 + t : 1.0));
        sum += weight * density / centre * (1.0 - half_gap_field(map, t) / centre);
    }
    return sum * step / 3.0;
}
