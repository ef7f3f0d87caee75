/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Turned planes (a = z, b = r), with and without the axis: coaxial tubes and concentric
 * spheres (honesty_layers.h), a ball shifted in a hollow sphere (honesty_spheres.h), cans
 * and a tube with a running potential (honesty_can.h). */

#include "tests/bench/honesty_families.h"

#include "shared/constants.h"
#include "tests/bench/honesty_can.h"
#include "tests/bench/honesty_layers.h"
#include "tests/bench/honesty_spheres.h"
#include "tests/support/scene.h"

#define VOLTS 271.3
#define KIND  PLANE_ELECTRIC_TURNED

/* Both ends of a tube; the axis. */
static const enum side_index ENDS[] = {SIDE_A_LOW, SIDE_A_HIGH}, AXIS[] = {SIDE_B_LOW};

static void expect_peak(struct honesty_case *c, size_t part, double exact)
{
    honesty_expect(
        c, (struct honesty_figure){.kind = HONESTY_PEAK, .part = part, .exact = exact});
}

/* Parts: the tube, then what is inside it: a rod about the axis, or a tube too. */
static void tubes_case(struct honesty_tally *tally, double inner, double outer,
                       bool has_axis)
{
    static const double share[4] = {0.12, 0.37, 0.61, 0.93};
    struct honesty_case c;
    char name[HONESTY_NAME];
    const double length = 7.1e-3, low = has_axis ? 0.0 : 0.8 * inner;
    struct layers l = {.count = 1,
                       .bound = {log(inner), log(outer)},
                       .permittivity = {1.0},
                       .first = VOLTS};
    layers_solve(&l);
    (void)snprintf(name, sizeof name, "%s in a tube, radii 1 : %.4g",
                   has_axis ? "rod" : "tube", outer / inner);
    struct plane *plane = honesty_begin(&c, name, KIND, VOLTS, (struct vec2){0.0, low},
                                        (struct vec2){length, 1.1 * outer});
    honesty_sides(plane, ENDS, 2, SIDE_MIRROR);
    honesty_sides(plane, AXIS, 1, SIDE_MIRROR);
    scene_box(plane, "tube", 0.0, 0.0, length, outer, 1.1 * outer, 0.0);
    scene_box(plane, "inner", 1.0, 0.0, length, low, inner, 0.0);
    for (int k = 0; k < 4; k++)
        layers_expect_point(&c, &l, 0, tube_u, NULL,
                            (struct vec2){length * (0.17 + 0.2 * k),
                                          inner + share[k] * (outer - inner)});
    honesty_expect_flux(&c, 0, -length * l.strength[0]);
    honesty_expect_flux(&c, 1, length * l.strength[0]);
    honesty_expect_capacitance(&c, 1, length * l.strength[0] / VOLTS);
    expect_peak(&c, 0, l.strength[0] / outer);
    expect_peak(&c, 1, l.strength[0] / inner);
    honesty_run(&c, tally);
}

/* A ball in a hollow sphere: the region, and parts: the shell, then the ball. half: a
 * mirror at z = 0. */
static struct plane *begin_spheres(struct honesty_case *c, const char *name,
                                   double ball, double shell, double shift, bool half)
{
    const double far = 1.15 * shell, low = half ? 0.0 : -far;
    struct plane *plane = honesty_begin(c, name, KIND, VOLTS, (struct vec2){low, 0.0},
                                        (struct vec2){far, far});
    honesty_sides(plane, AXIS, 1, SIDE_MIRROR);
    if (half)
        honesty_sides(plane, ENDS, 1, SIDE_MIRROR);
    scene_cut_disc(scene_box(plane, "shell", 0.0, low, far, 0.0, far, 0.0), 0.0, 0.0,
                   shell);
    scene_disc(plane, "ball", 1.0, shift, 0.0, ball);
    return plane;
}

static void concentric_case(struct honesty_tally *tally, double ball, double shell,
                            bool half)
{
    static const double turn[4] = {0.0, 0.37, 0.9, 1.43};
    struct honesty_case c;
    char name[HONESTY_NAME];
    const double centre = 0.0;
    struct layers l = {.count = 1,
                       .bound = {-1.0 / ball, -1.0 / shell},
                       .permittivity = {1.0},
                       .first = VOLTS};
    layers_solve(&l);
    (void)snprintf(name, sizeof name, "concentric spheres, radii 1 : %.4g%s",
                   shell / ball, half ? ", half" : "");
    (void)begin_spheres(&c, name, ball, shell, 0.0, half);
    for (int k = 0; k < 4; k++) {
        const double r = ball + (0.15 + 0.22 * k) * (shell - ball);
        layers_expect_point(&c, &l, 0, sphere_u, &centre,
                            (struct vec2){r * cos(turn[k]), r * sin(turn[k])});
    }
    const double flux = (half ? 1.0 : 2.0) * l.strength[0];
    honesty_expect_flux(&c, 0, -flux);
    honesty_expect_flux(&c, 1, flux);
    honesty_expect_capacitance(&c, 1, flux / VOLTS);
    expect_peak(&c, 0, l.strength[0] / (shell * shell));
    expect_peak(&c, 1, l.strength[0] / (ball * ball));
    honesty_run(&c, tally);
}

static double flux_in_shell(double ball, double shell, double shift)
{
    struct images images;
    images_in_shell(ball, shell, shift, &images);
    return images_flux(&images);
}

/* V^2/2 dC/dshift, by a difference quotient of fourth order. */
static double force_in_shell(double ball, double shell, double shift)
{
    const double step = 1e-3 * (shell - ball - shift);
    const double near = flux_in_shell(ball, shell, shift + step) -
                        flux_in_shell(ball, shell, shift - step);
    const double far = flux_in_shell(ball, shell, shift + 2.0 * step) -
                       flux_in_shell(ball, shell, shift - 2.0 * step);
    return 0.5 * VOLTS * VOLTS * (8.0 * near - far) / (12.0 * step);
}

static void expect_image_point(struct honesty_case *c, const struct images *images,
                               struct vec2 at)
{
    struct vec2 field;
    const double potential = images_at(images, at, &field);
    honesty_expect_point(c, at, VOLTS * potential, vec2_scale(field, VOLTS));
}

static void eccentric_case(struct honesty_tally *tally, double ball, double shell,
                           double shift)
{
    struct honesty_case c;
    struct images images;
    struct vec2 at_ball, at_shell;
    char name[HONESTY_NAME];
    images_in_shell(ball, shell, shift, &images);
    (void)snprintf(name, sizeof name, "eccentric spheres, radii 1 : %.4g, shift %.4g",
                   shell / ball, shift / ball);
    (void)begin_spheres(&c, name, ball, shell, shift, false);
    const double space = shell - shift - ball, flux = VOLTS * images_flux(&images);
    expect_image_point(&c, &images, (struct vec2){shift + ball + 0.41 * space, 0.0});
    expect_image_point(&c, &images, (struct vec2){shift - 1.3 * ball, 0.0});
    expect_image_point(&c, &images, (struct vec2){shift, ball + 0.3 * space});
    expect_image_point(&c, &images, (struct vec2){-0.35 * shell, 0.6 * shell});
    honesty_expect_flux(&c, 0, -flux);
    honesty_expect_flux(&c, 1, flux);
    honesty_expect_capacitance(&c, 1, flux / VOLTS);
    (void)images_at(&images, (struct vec2){shell, 0.0}, &at_shell);
    (void)images_at(&images, (struct vec2){shift + ball, 0.0}, &at_ball);
    expect_peak(&c, 0, VOLTS * at_shell.a);
    expect_peak(&c, 1, VOLTS * at_ball.a);
    honesty_expect_force(&c, 1, (struct vec2){force_in_shell(ball, shell, shift), 0.0});
    honesty_run(&c, tally);
}

static void can_case(struct honesty_tally *tally, double radius, double length,
                     bool mirror)
{
    struct honesty_case c;
    char name[HONESTY_NAME];
    const struct can can = {radius, length, 0.0, 1.0, mirror};
    (void)snprintf(name, sizeof name, "can, length/radius %.4g%s", length / radius,
                   mirror ? ", mirror end" : "");
    struct plane *plane = honesty_begin(&c, name, KIND, VOLTS, (struct vec2){0.0, 0.0},
                                        (struct vec2){length, radius});
    honesty_sides(plane, AXIS, 1, SIDE_MIRROR);
    if (mirror)
        plane->sides[SIDE_A_HIGH].kind = SIDE_MIRROR;
    scene_wall(plane, SIDE_A_LOW, 1.0, 1.0);
    for (int k = 0; k < 6; k++) {
        const double reach = fmin(length, 1.7 * radius);
        const struct vec2 at = {0.25 * radius + (reach - 0.3 * radius) * k / 6.0,
                                radius * (k < 3 ? 0.0 : 0.19 * (k - 1))};
        struct vec2 field;
        const double potential = can_at(&can, at, &field);
        honesty_expect_point(&c, at, VOLTS * potential, vec2_scale(field, VOLTS));
    }
    honesty_run(&c, tally);
}

static void ramp_case(struct honesty_tally *tally, double radius, double length)
{
    struct honesty_case c;
    char name[HONESTY_NAME];
    (void)snprintf(name, sizeof name, "ramp along a tube, length/radius %.4g",
                   length / radius);
    struct plane *plane = honesty_begin(&c, name, KIND, VOLTS, (struct vec2){0.0, 0.0},
                                        (struct vec2){length, radius});
    honesty_sides(plane, ENDS, 2, SIDE_MIRROR);
    honesty_sides(plane, AXIS, 1, SIDE_MIRROR);
    scene_wall(plane, SIDE_B_HIGH, 0.0, 1.0);
    for (int k = 0; k < 5; k++) {
        const struct vec2 at = {length * (0.11 + 0.17 * k), radius * 0.17 * k};
        struct vec2 field;
        const double potential = ramp_at(radius, length, at, &field);
        honesty_expect_point(&c, at, VOLTS * potential, vec2_scale(field, VOLTS));
    }
    honesty_run(&c, tally);
}

void honesty_turned(struct honesty_tally *tally)
{
    honesty_family(tally, "turned");
    tubes_case(tally, 7.7e-3, 11.3e-3, true);
    tubes_case(tally, 3.17e-3, 11.3e-3, true);
    tubes_case(tally, 0.6e-3, 11.3e-3, true);
    tubes_case(tally, 8.69e-3, 11.3e-3, false);
    tubes_case(tally, 4.7e-3, 11.3e-3, false);
    tubes_case(tally, 1.9e-3, 11.3e-3, false);
    concentric_case(tally, 3.17e-3, 11.3e-3, false);
    concentric_case(tally, 6.9e-3, 11.3e-3, true);
    concentric_case(tally, 1.7e-3, 11.3e-3, true);
    eccentric_case(tally, 3.17e-3, 11.3e-3, 4.3e-3);
    eccentric_case(tally, 5.3e-3, 11.3e-3, 2.1e-3);
    eccentric_case(tally, 2.3e-3, 11.3e-3, 5.9e-3);
    can_case(tally, 5.3e-3, 8.9e-3, false);
    can_case(tally, 5.3e-3, 3.9e-3, false);
    can_case(tally, 5.3e-3, 6.1e-3, true);
    ramp_case(tally, 5.3e-3, 8.9e-3);
    ramp_case(tally, 5.3e-3, 21e-3);
}
