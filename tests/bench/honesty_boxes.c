/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Closed boxes.
 *  - Square coaxial line: one eighth is mapped onto the half plane with the corners at
 *    t = 0, 1, m and infinity, dz/dt = t^(-1/2) (1-t)^(-1/4) (m-t)^(-3/4); its capacitance
 *    is K(k)/K(k') with k^2 = 1/m (F. Bowman, Proc. London Math. Soc. 39, 205, 1935).
 *  - Side walls at +-V, top and bottom earthed: separation of variables.
 *  - Slot: F. W. Carter (1901).
 *  - Uniform fields: linear walls. */

#include "tests/bench/honesty_families.h"

#include <math.h>
#include <stdlib.h>

#include "shared/constants.h"
#include "tests/bench/honesty_quadrature.h"
#include "tests/support/scene.h"

#define VOLTS 640.0
#define KIND  PLANE_ELECTRIC_ACROSS

static double inner_side(double x, double y, const void *m)
{
    return pow(x, -0.5) * pow(y, -0.25) * pow(*(const double *)m - x, -0.75);
}

/* t = m/x. */
static double outer_side(double x, double y, const void *m)
{
    const double v = *(const double *)m;
    return pow(v, -0.25) * pow(x, -0.5) * pow(y, -0.75) * pow(v - x, -0.25);
}

static double side_ratio(double m)
{
    return quadrature(inner_side, &m) / quadrature(outer_side, &m);
}

/* The ratio falls from 1 (m = 1) to 0; bisection in ln(m - 1). */
static double parameter_of_ratio(double ratio)
{
    double low = -60.0, high = 60.0;
    for (int k = 0; k < 100; k++) {
        const double middle = 0.5 * (low + high);
        if (side_ratio(1.0 + exp(middle)) > ratio)
            low = middle;
        else
            high = middle;
    }
    return 1.0 + exp(low);
}

/* C/eps0. */
static double line_capacitance(double m)
{
    return 8.0 * elliptic_k(sqrt(1.0 - 1.0 / m)) / elliptic_k(sqrt(1.0 / m));
}

struct stretch {
    double m, reach;
};

/* Along the middle of a side t = -reach x runs from the inner face outwards. */
static double middle_line(double x, double y, const void *context)
{
    const struct stretch *s = context;
    const double t = s->reach * x;
    (void)y;
    return s->reach * pow(t, -0.5) * pow(1.0 + t, -0.25) * pow(s->m + t, -0.75);
}

/* Point of the middle line t = -tau: distance from the inner face and field per volt, in
 * units of half the outer side. dw/dt = (t (t+1) (t+m))^(-1/2) runs through 2 K(k')/sqrt(m)
 * from conductor to conductor. */
static void middle_point(double m, double tau, double *distance, double *field)
{
    const struct stretch s = {m, tau};
    const double side = quadrature(outer_side, &m);
    *distance = quadrature(middle_line, &s) / side;
    *field = pow(1.0 + tau, -0.25) * pow(m + tau, 0.25) * side * sqrt(m) /
             (2.0 * elliptic_k(sqrt(1.0 / m)));
}

static void expect_line(struct honesty_case *c, double ratio, double half, double angle)
{
    const double m = parameter_of_ratio(ratio), capacitance = line_capacitance(m);
    static const double taus[3] = {0.3, 2.1, 17.0};
    for (int k = 0; k < 3; k++) {
        double distance, field;
        middle_point(m, taus[k] * sqrt(m), &distance, &field);
        const struct vec2 way = {cos(angle), sin(angle)};
        honesty_expect_point(c, vec2_scale(way, half * (ratio + distance)), 0.0,
                             vec2_scale(way, VOLTS * field / half));
    }
    honesty_expect_flux(c, 0, VOLTS * capacitance);
    honesty_expect_capacitance(c, 0, capacitance);
}

static void square_points(struct vec2 points[4], double half, double angle)
{
    for (int k = 0; k < 4; k++) {
        const double turn = angle + PI * (0.25 + 0.5 * k);
        points[k] =
            (struct vec2){sqrt(2.0) * half * cos(turn), sqrt(2.0) * half * sin(turn)};
    }
}

static void straight_line_case(struct honesty_tally *tally, double ratio)
{
    struct honesty_case c;
    char name[HONESTY_NAME];
    const double half = 17e-3;
    (void)snprintf(name, sizeof name, "square line, side ratio %.4g", ratio);
    struct plane *plane = honesty_begin(
        &c, name, KIND, VOLTS, (struct vec2){-half, -half}, (struct vec2){half, half});
    scene_box(plane, "inner", 1.0, -ratio * half, ratio * half, -ratio * half,
              ratio * half, 0.0);
    expect_line(&c, ratio, half, 0.0);
    honesty_run(&c, tally);
}

static void cut_square(struct part *part, double half, double angle)
{
    struct vec2 points[4];
    struct shape square;
    square_points(points, half, angle);
    if (shape_init_polygon(&square, points, 4, 0.0, NULL) != STATUS_OK ||
        shape_cut(&part->shape, &square) != STATUS_OK)
        abort();
    shape_free(&square);
}

static void turned_line_case(struct honesty_tally *tally, double ratio, double degrees)
{
    struct honesty_case c;
    char name[HONESTY_NAME];
    struct vec2 points[4];
    const double half = 17e-3, wide = 1.05 * sqrt(2.0) * half;
    const double angle = degrees * PI / 180.0;
    (void)snprintf(name, sizeof name, "square line, side ratio %.4g, turned %.4g deg",
                   ratio, degrees);
    struct plane *plane = honesty_begin(
        &c, name, KIND, VOLTS, (struct vec2){-wide, -wide}, (struct vec2){wide, wide});
    square_points(points, ratio * half, angle);
    scene_polygon(plane, "inner", 1.0, points, 4);
    cut_square(scene_box(plane, "outer", 0.0, -wide, wide, -wide, wide, 0.0), half,
               angle);
    expect_line(&c, ratio, half, angle);
    honesty_run(&c, tally);
}

/* Potential and field at (x, y) for side walls x = +-d/2 at +-V/2, y = +-g/2 earthed. */
static void side_wall_series(double d, double g, struct vec2 at, double *potential,
                             struct vec2 *field)
{
    *potential = 0.0;
    *field = (struct vec2){0.0, 0.0};
    for (int k = 0; k < 60; k++) {
        const double w = (2 * k + 1) * PI / g, sign = k % 2 ? -1.0 : 1.0;
        const double share = 2.0 * VOLTS / (w * g) * sign / sinh(0.5 * w * d);
        *potential += share * cos(w * at.b) * sinh(w * at.a);
        field->a -= share * w * cos(w * at.b) * cosh(w * at.a);
        field->b += share * w * sin(w * at.b) * sinh(w * at.a);
    }
}

static void side_wall_case(struct honesty_tally *tally, double g_over_d)
{
    struct honesty_case c;
    char name[HONESTY_NAME];
    const double d = 19e-3, g = g_over_d * d;
    static const struct vec2 shares[4] = {
        {0.0, 0.0}, {0.21, 0.13}, {-0.13, 0.31}, {0.3, -0.23}};
    (void)snprintf(name, sizeof name, "side walls, height/width %.4g", g_over_d);
    struct plane *plane =
        honesty_begin(&c, name, KIND, VOLTS, (struct vec2){-0.5 * d, -0.5 * g},
                      (struct vec2){0.5 * d, 0.5 * g});
    scene_wall(plane, SIDE_A_LOW, -0.5, -0.5);
    scene_wall(plane, SIDE_A_HIGH, 0.5, 0.5);
    for (int k = 0; k < 4; k++) {
        const struct vec2 at = {shares[k].a * d, shares[k].b * g};
        double potential;
        struct vec2 field;
        side_wall_series(d, g, at, &potential, &field);
        honesty_expect_point(&c, at, potential, field);
    }
    honesty_run(&c, tally);
}

/* Half of an opening of width s in a face at distance g from a flat one; 4 s deep, where
 * the field has died to exp(-4 pi). */
static void slot_case(struct honesty_tally *tally, double s_over_g)
{
    struct honesty_case c;
    char name[HONESTY_NAME];
    const double g = 4.7e-3, s = s_over_g * g, u = 0.5 * s_over_g;
    const double reach = 0.5 * s + 5.0 * g, top = g + 4.0 * s;
    const double sigma = 2.0 / PI * (atan(u) - log1p(u * u) / (2.0 * u));
    (void)snprintf(name, sizeof name, "slot, opening/gap %.4g", s_over_g);
    struct plane *plane = honesty_begin(&c, name, KIND, VOLTS, (struct vec2){0.0, 0.0},
                                        (struct vec2){reach, top});
    plane->sides[SIDE_A_LOW].kind = plane->sides[SIDE_A_HIGH].kind = SIDE_MIRROR;
    plane->sides[SIDE_B_HIGH].kind = SIDE_MIRROR;
    scene_box(plane, "face", 1.0, 0.5 * s, reach, g, top, 0.0);
    honesty_expect_flux(&c, 0, VOLTS / g * (reach - 0.5 * sigma * s));
    honesty_run(&c, tally);
}

/* A slanted conductor and walls that continue its uniform field. */
static void slanted_uniform_case(struct honesty_tally *tally, double degrees)
{
    struct honesty_case c;
    char name[HONESTY_NAME];
    const double angle = degrees * PI / 180.0, half = 10e-3, face = 8.1e-3;
    const struct vec2 n = {cos(angle), sin(angle)};
    const struct vec2 corners[3] = {{half, half},
                                    {(face - half * n.b) / n.a, half},
                                    {half, (face - half * n.a) / n.b}};
    (void)snprintf(name, sizeof name, "uniform field, slanted %.4g deg", degrees);
    struct plane *plane = honesty_begin(
        &c, name, KIND, VOLTS, (struct vec2){-half, -half}, (struct vec2){half, half});
    scene_polygon(plane, "slanted", 1.0, corners, 3);
    /* Potential VOLTS (n . r)/face. */
    const double a = half * n.a / face, b = half * n.b / face;
    scene_wall(plane, SIDE_A_LOW, -a - b, -a + b);
    scene_wall(plane, SIDE_A_HIGH, a - b, a + b);
    scene_wall(plane, SIDE_B_LOW, -a - b, a - b);
    scene_wall(plane, SIDE_B_HIGH, -a + b, a + b);
    for (int k = 0; k < 3; k++) {
        const struct vec2 at = {0.7 * half * sin(2.385 * (k + 1)), -0.2 * half * k};
        honesty_expect_point(&c, at, VOLTS * vec2_dot(n, at) / face,
                             vec2_scale(n, -VOLTS / face));
    }
    honesty_run(&c, tally);
}

static void check_closed_forms(void)
{
    static const double table[3][2] = {{0.5, 10.23409256936805},
                                       {1.0 / 3.0, 6.215547284858944},
                                       {0.4, 7.561531539810583}};
    for (int k = 0; k < 3; k++) {
        const double got = line_capacitance(parameter_of_ratio(table[k][0]));
        if (!(fabs(got - table[k][1]) < 1e-12 * got)) {
            (void)fprintf(stderr, "square line: closed form gives %.16g\n", got);
            exit(EXIT_FAILURE);
        }
    }
}

void honesty_boxes(struct honesty_tally *tally)
{
    static const double ratios[] = {0.2, 1.0 / 3.0, 0.4, 0.5, 0.7};
    static const double walls[] = {0.5, 1.0, 1.7, 3.0};
    static const double slots[] = {0.5, 1.0, 5.0, 10.0};
    honesty_family(tally, "boxes");
    check_closed_forms();
    for (int k = 0; k < 5; k++)
        straight_line_case(tally, ratios[k]);
    turned_line_case(tally, 0.5, 13.0);
    turned_line_case(tally, 1.0 / 3.0, 22.5);
    turned_line_case(tally, 0.4, 30.0);
    turned_line_case(tally, 0.5, 45.0);
    for (int k = 0; k < 4; k++)
        side_wall_case(tally, walls[k]);
    for (int k = 0; k < 4; k++)
        slot_case(tally, slots[k]);
    slanted_uniform_case(tally, 33.0);
}
