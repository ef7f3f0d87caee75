/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Open sides: what is drawn is a small region, the solutions are those of endless space.
 * Wires beside each other, bare and coated, as coaxal circles (honesty_coaxal.h); a ball
 * before an earthed plane by images (honesty_spheres.h) and alone; two discs by Love's
 * equation (tests/support/love.h). Uncertainties hold what the doubling test adds. */

#include "tests/bench/honesty_families.h"

#include "shared/constants.h"
#include "tests/bench/honesty_coaxal.h"
#include "tests/bench/honesty_layers.h"
#include "tests/bench/honesty_spheres.h"
#include "tests/support/love.h"
#include "tests/support/scene.h"

#define VOLTS 238.5

static const enum side_index ALL[] = {SIDE_A_LOW, SIDE_A_HIGH, SIDE_B_LOW, SIDE_B_HIGH},
                             UPPER[] = {SIDE_A_LOW, SIDE_A_HIGH, SIDE_B_HIGH},
                             AXIS[] = {SIDE_B_LOW};

/* Two wires: u on their surfaces and on those of their coats (the same: without). */
struct wires {
    double half, angle; /* of the pencil: m, rad */
    double right, right_coat, left_coat, left;
    double permittivity; /* of the coats */
    double margin;       /* m, from the wires to the open sides */
};

/* No net charge: the potential far away, where u = ln(half), is 0. The right wire is at
 * VOLTS/2. */
static void set_layers(struct layers *l, const struct wires *w)
{
    const double far = log(w->half);
    *l = (struct layers){.count = 3,
                         .bound = {w->right, w->right_coat, w->left_coat, w->left},
                         .permittivity = {w->permittivity, 1.0, w->permittivity},
                         .first = 0.5 * VOLTS};
    const double near =
        (w->right_coat - w->right) / w->permittivity + far - w->right_coat;
    const double rest = (w->left - w->left_coat) / w->permittivity + w->left_coat - far;
    l->last = -l->first * rest / near;
    layers_solve(l);
}

static void grow(struct vec2 *low, struct vec2 *high, struct vec2 centre, double reach)
{
    *low =
        (struct vec2){fmin(low->a, centre.a - reach), fmin(low->b, centre.b - reach)};
    *high =
        (struct vec2){fmax(high->a, centre.a + reach), fmax(high->b, centre.b + reach)};
}

static void expect_wires(struct honesty_case *c, const struct wires *w,
                         const struct layers *l, const struct coaxal *pencil)
{
    const double middle[3] = {0.2, 0.5, 0.71}, turn[3] = {PI, 2.1, 0.8};
    for (int k = 0; k < 3; k++)
        layers_expect_point(
            c, l, 1, coaxal_u, pencil,
            coaxal_point(pencil, l->bound[1] + middle[k] * (l->bound[2] - l->bound[1]),
                         turn[k]));
    for (int k = 0; k < 3 && w->right_coat > w->right; k += 2)
        layers_expect_point(
            c, l, k, coaxal_u, pencil,
            coaxal_point(pencil, 0.4 * l->bound[k] + 0.6 * l->bound[k + 1], 1.3 + k));
    honesty_expect_flux(c, 0, 2.0 * PI * l->strength[0]);
    honesty_expect_flux(c, 1, -2.0 * PI * l->strength[0]);
}

/* Parts: the wires, then their coats. */
static void wires_case(struct honesty_tally *tally, const char *name,
                       const struct wires *w)
{
    struct honesty_case c;
    struct layers l;
    const struct coaxal pencil = coaxal_beside(w->half, w->angle);
    struct vec2 low = {0.0, 0.0}, high = {0.0, 0.0};
    set_layers(&l, w);
    for (int k = 0; k < 4; k++) {
        double radius;
        const struct vec2 centre = coaxal_circle(&pencil, l.bound[k], &radius);
        grow(&low, &high, centre, radius + w->margin);
    }
    struct plane *plane =
        honesty_begin(&c, name, PLANE_ELECTRIC_ACROSS, VOLTS, low, high);
    honesty_sides(plane, ALL, 4, SIDE_OPEN);
    (void)coaxal_disc(plane, "right", 0.5, &pencil, l.bound[0]);
    (void)coaxal_disc(plane, "left", l.last / VOLTS, &pencil, l.bound[3]);
    for (int k = 1; k < 3 && w->permittivity > 1.0; k++)
        honesty_insulate(coaxal_disc(plane, "coat", 0.0, &pencil, l.bound[k]),
                         w->permittivity);
    expect_wires(&c, w, &l, &pencil);
    honesty_run(&c, tally);
}

/* Bare wires of given radii, `distance` between their axes. */
static void pair_case(struct honesty_tally *tally, double right, double left,
                      double distance, double angle, double margin)
{
    char name[HONESTY_NAME];
    struct wires w = {.angle = angle, .permittivity = 1.0, .margin = margin};
    /* Axes at sqrt(radius^2 + half^2) from the middle, on either side. */
    const double place = 0.5 * (distance + (right * right - left * left) / distance);
    w.half = sqrt(place * place - right * right);
    w.right = w.right_coat = log(w.half) - asinh(w.half / right);
    w.left = w.left_coat = log(w.half) + asinh(w.half / left);
    (void)snprintf(name, sizeof name,
                   "wires of %.4g and %.4g, distance %.4g, margin %.4g mm", 1e3 * right,
                   1e3 * left, 1e3 * distance, 1e3 * margin);
    wires_case(tally, name, &w);
}

/* A wire above an antimirror: as one of a pair. */
static void image_case(struct honesty_tally *tally, double radius, double height)
{
    struct honesty_case c;
    char name[HONESTY_NAME];
    const double half = sqrt(height * height - radius * radius), wide = height + radius;
    const struct coaxal pencil = coaxal_beside(half, 0.5 * PI);
    const double far = log(half), arc = asinh(half / radius);
    struct layers l = {
        .count = 1, .bound = {far - arc, far}, .permittivity = {1.0}, .first = VOLTS};
    layers_solve(&l);
    (void)snprintf(name, sizeof name, "wire above a plane, height/radius %.4g",
                   height / radius);
    struct plane *plane =
        honesty_begin(&c, name, PLANE_ELECTRIC_ACROSS, VOLTS, (struct vec2){-wide, 0.0},
                      (struct vec2){wide, height + 2.0 * radius});
    honesty_sides(plane, UPPER, 3, SIDE_OPEN);
    plane->sides[SIDE_B_LOW].kind = SIDE_ANTIMIRROR;
    scene_disc(plane, "wire", 1.0, 0.0, height, radius);
    for (int k = 0; k < 3; k++)
        layers_expect_point(
            &c, &l, 0, coaxal_u, &pencil,
            coaxal_point(&pencil, far - (0.8 - 0.3 * k) * arc, 2.7 - 0.7 * k));
    honesty_expect_flux(&c, 0, 2.0 * PI * l.strength[0]);
    honesty_expect_capacitance(&c, 0, 2.0 * PI / arc);
    /* C = 2 pi/acosh(height/radius). */
    honesty_expect_force(&c, 0,
                         (struct vec2){0.0, -PI * VOLTS * VOLTS / (arc * arc * half)});
    honesty_run(&c, tally);
}

static void ball_case(struct honesty_tally *tally, double ball, double height)
{
    struct honesty_case c;
    struct images images;
    char name[HONESTY_NAME];
    images_at_plane(ball, height, &images);
    (void)snprintf(name, sizeof name, "ball before a plane, height/radius %.4g",
                   height / ball);
    struct plane *plane =
        honesty_begin(&c, name, PLANE_ELECTRIC_TURNED, VOLTS, (struct vec2){0.0, 0.0},
                      (struct vec2){height + 2.0 * ball, 2.0 * ball});
    honesty_sides(plane, ALL, 4, SIDE_OPEN);
    honesty_sides(plane, AXIS, 1, SIDE_MIRROR);
    plane->sides[SIDE_A_LOW].kind = SIDE_ANTIMIRROR;
    scene_disc(plane, "ball", 1.0, height, 0.0, ball);
    for (int k = 0; k < 4; k++) {
        const struct vec2 at = {(height - ball) * (0.2 + 0.3 * k), 0.53 * ball * k};
        struct vec2 field;
        const double potential = images_at(&images, at, &field);
        honesty_expect_point(&c, at, VOLTS * potential, vec2_scale(field, VOLTS));
    }
    honesty_expect_flux(&c, 0, VOLTS * images_flux(&images));
    honesty_expect_capacitance(&c, 0, images_flux(&images));
    honesty_run(&c, tally);
}

/* Alone: a net charge, whose potential falls as 1/R. */
static void lone_ball_case(struct honesty_tally *tally, double ball)
{
    struct honesty_case c;
    const double centre = 0.0;
    const struct layers l = {.count = 1,
                             .bound = {-1.0 / ball, 0.0},
                             .permittivity = {1.0},
                             .strength = {VOLTS * ball},
                             .potential = {VOLTS, 0.0}};
    struct plane *plane = honesty_begin(&c, "ball alone", PLANE_ELECTRIC_TURNED, VOLTS,
                                        (struct vec2){-3.0 * ball, 0.0},
                                        (struct vec2){3.0 * ball, 3.0 * ball});
    honesty_sides(plane, ALL, 4, SIDE_OPEN);
    honesty_sides(plane, AXIS, 1, SIDE_MIRROR);
    scene_disc(plane, "ball", 1.0, 0.0, 0.0, ball);
    for (int k = 0; k < 3; k++)
        layers_expect_point(&c, &l, 0, sphere_u, &centre,
                            (struct vec2){(1.3 + 0.4 * k) * ball * cos(0.7 * k),
                                          (1.3 + 0.4 * k) * ball * sin(0.7 * k)});
    honesty_expect_flux(&c, 0, 2.0 * VOLTS * ball);
    honesty_run(&c, tally);
}

/* Two thin discs; one before an antimirror. The thickness adds about 1e-6. */
static void discs_case(struct honesty_tally *tally, double ratio)
{
    struct honesty_case c;
    char name[HONESTY_NAME];
    const double radius = 23.7e-3, thin = 2.5e-7 * radius,
                 middle = 0.5 * ratio * radius;
    (void)snprintf(name, sizeof name, "two discs, distance/radius %.4g", ratio);
    struct plane *plane =
        honesty_begin(&c, name, PLANE_ELECTRIC_TURNED, VOLTS, (struct vec2){0.0, 0.0},
                      (struct vec2){middle + radius, 2.0 * radius});
    honesty_sides(plane, ALL, 4, SIDE_OPEN);
    honesty_sides(plane, AXIS, 1, SIDE_MIRROR);
    plane->sides[SIDE_A_LOW].kind = SIDE_ANTIMIRROR;
    scene_box(plane, "disc", 1.0, middle - 0.5 * thin, middle + 0.5 * thin, 0.0, radius,
              0.0);
    /* Capacitance of the pair, half of that to the middle plane. */
    const double flux = radius * love_capacitance(ratio, 128) / PI;
    honesty_expect_flux(&c, 0, VOLTS * flux);
    honesty_expect_capacitance(&c, 0, flux);
    honesty_run(&c, tally);
}

void honesty_open(struct honesty_tally *tally)
{
    const double half = 9.1e-3, u = log(half);
    const struct wires coated = {half,    0.53,    u - 1.9, u - 1.3,
                                 u + 1.2, u + 1.6, 2.7,     6e-3};
    honesty_family(tally, "open");
    pair_case(tally, 3e-3, 3e-3, 20e-3, 0.0, 5e-3);
    pair_case(tally, 3e-3, 3e-3, 20e-3, 0.0, 10e-3);
    pair_case(tally, 2.3e-3, 4.1e-3, 17e-3, 0.4, 6e-3);
    pair_case(tally, 5.1e-3, 1.9e-3, 13e-3, -1.1, 6e-3);
    wires_case(tally, "coated wires", &coated);
    image_case(tally, 3.3e-3, 7.9e-3);
    image_case(tally, 1.7e-3, 11e-3);
    ball_case(tally, 4.3e-3, 9.7e-3);
    ball_case(tally, 6.1e-3, 8.3e-3);
    lone_ball_case(tally, 3.7e-3);
    discs_case(tally, 1.0);
    discs_case(tally, 0.5);
}
