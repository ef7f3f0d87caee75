/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Floating conductors: shells between a core and an earthed shell in coaxal circles and
 * concentric spheres (honesty_layers.h), with and without a charge of their own, and a
 * charged ball in a hollow sphere (honesty_spheres.h). */

#include "tests/bench/honesty_families.h"

#include "shared/constants.h"
#include "tests/bench/honesty_coaxal.h"
#include "tests/bench/honesty_layers.h"
#include "tests/bench/honesty_spheres.h"
#include "tests/support/scene.h"

#define VOLTS 385.7

/* A floating shell: where it begins and ends, as shares of the way in u from core to
 * shell, and its charge as a share of that of the core without it. */
struct floats {
    double from, to, charge;
};

/* Layers: space, shell, space, (shell, space). */
static void set_layers(struct layers *l, double first, double last,
                       const struct floats *shells, int count)
{
    const double way = last - first;
    const struct floats *shell = shells;
    *l = (struct layers){.count = 2 * count + 1, .first = VOLTS};
    l->bound[0] = first;
    l->bound[l->count] = last;
    l->permittivity[0] = 1.0;
    for (int k = 1; k < l->count; k += 2, shell++) {
        l->bound[k] = first + shell->from * way;
        l->bound[k + 1] = first + shell->to * way;
        l->permittivity[k] = (double)INFINITY;
        l->permittivity[k + 1] = 1.0;
        l->charge[k] = shell->charge * VOLTS / way;
    }
    layers_solve(l);
}

static void expect_found(struct honesty_case *c, size_t part, double exact)
{
    honesty_expect(c, (struct honesty_figure){
                          .kind = HONESTY_FOUND, .part = part, .exact = exact});
}

/* Parts: the shell, the core, the floating shells. quarter: mirrors through the axis. */
static struct plane *begin_coaxal(struct honesty_case *c, const char *name,
                                  const struct coaxal *pencil, const struct layers *l,
                                  bool quarter)
{
    static const enum side_index mirrors[] = {SIDE_A_LOW, SIDE_B_LOW};
    double radius;
    (void)coaxal_circle(pencil, l->bound[l->count], &radius);
    const double half = 1.1 * radius, low = quarter ? 0.0 : -half;
    struct plane *plane =
        honesty_begin(c, name, PLANE_ELECTRIC_ACROSS, VOLTS, (struct vec2){low, low},
                      (struct vec2){half, half});
    if (quarter)
        honesty_sides(plane, mirrors, 2, SIDE_MIRROR);
    coaxal_cut(scene_box(plane, "shell", 0.0, low, half, low, half, 0.0), pencil,
               l->bound[l->count]);
    (void)coaxal_disc(plane, "core", 1.0, pencil, l->bound[0]);
    return plane;
}

/* flux: 2 pi, or that of a quarter. */
static void add_floating(struct honesty_case *c, struct plane *plane,
                         const struct coaxal *pencil, const struct layers *l,
                         double flux)
{
    size_t part = 2;
    for (int k = 1; k < l->count; k += 2, part++) {
        char name[16];
        (void)snprintf(name, sizeof name, "floating %d", k / 2 + 1);
        coaxal_cut(honesty_float(coaxal_disc(plane, name, 0.0, pencil, l->bound[k + 1]),
                                 VACUUM_PERMITTIVITY * flux * l->charge[k]),
                   pencil, l->bound[k]);
        expect_found(c, part, l->potential[k]);
    }
}

static void coaxal_case(struct honesty_tally *tally, const char *name,
                        const struct coaxal *pencil, const struct layers *l,
                        bool quarter)
{
    struct honesty_case c;
    const double flux = quarter ? 0.5 * PI : 2.0 * PI;
    struct plane *plane = begin_coaxal(&c, name, pencil, l, quarter);
    add_floating(&c, plane, pencil, l, flux);
    for (int k = 0; k < l->count; k += 2)
        for (int n = 0; n < 2; n++) {
            const double share = 0.3 + 0.4 * n;
            const double u = l->bound[k] + share * (l->bound[k + 1] - l->bound[k]);
            const double turn =
                quarter ? 0.2 + 0.31 * k + 0.4 * n : 0.6 + 2.385 * (k + n);
            layers_expect_point(&c, l, k, coaxal_u, pencil,
                                coaxal_point(pencil, u, turn));
        }
    honesty_expect_flux(&c, 0, -flux * l->strength[l->count - 1]);
    honesty_expect_flux(&c, 1, flux * l->strength[0]);
    honesty_run(&c, tally);
}

static void concentric_case(struct honesty_tally *tally, const char *name,
                            const struct floats *shells, int count)
{
    const struct coaxal pencil = coaxal_within(2e-3, 10.3e-3, 0.0, 0.0);
    struct layers l;
    set_layers(&l, log(2e-3), log(10.3e-3), shells, count);
    coaxal_case(tally, name, &pencil, &l, true);
}

static void eccentric_case(struct honesty_tally *tally, const char *name, double shift,
                           double angle, const struct floats *shells, int count)
{
    const double core = 2.9e-3, shell = 14e-3;
    const struct coaxal pencil = coaxal_within(core, shell, shift, angle);
    struct vec2 gradient;
    const double way[2] = {cos(angle), sin(angle)};
    const struct vec2 at_core = {(shift + core) * way[0], (shift + core) * way[1]};
    const struct vec2 at_shell = {shell * way[0], shell * way[1]};
    struct layers l;
    set_layers(&l, coaxal_u(&pencil, at_core, &gradient),
               coaxal_u(&pencil, at_shell, &gradient), shells, count);
    coaxal_case(tally, name, &pencil, &l, false);
}

/* Half of concentric spheres, a mirror at z = 0: the charge is that of half the shell. */
static void spheres_case(struct honesty_tally *tally, const char *name,
                         const struct floats *shell)
{
    static const enum side_index mirrors[] = {SIDE_A_LOW, SIDE_B_LOW};
    struct honesty_case c;
    struct layers l;
    const double ball = 2.7e-3, outer = 12.1e-3, far = 1.1 * outer, centre = 0.0;
    set_layers(&l, -1.0 / ball, -1.0 / outer, shell, 1);
    struct plane *plane =
        honesty_begin(&c, name, PLANE_ELECTRIC_TURNED, VOLTS, (struct vec2){0.0, 0.0},
                      (struct vec2){far, far});
    honesty_sides(plane, mirrors, 2, SIDE_MIRROR);
    scene_cut_disc(scene_box(plane, "shell", 0.0, 0.0, far, 0.0, far, 0.0), 0.0, 0.0,
                   outer);
    scene_disc(plane, "ball", 1.0, 0.0, 0.0, ball);
    scene_cut_disc(
        honesty_float(scene_disc(plane, "floating", 0.0, 0.0, 0.0, -1.0 / l.bound[2]),
                      2.0 * PI * VACUUM_PERMITTIVITY * l.charge[1]),
        0.0, 0.0, -1.0 / l.bound[1]);
    expect_found(&c, 2, l.potential[1]);
    for (int k = 0; k < 4; k++) {
        const int layer = k < 2 ? 0 : 2;
        const double share = k % 2 == 0 ? 0.3 : 0.72, turn = 0.35 * k;
        const double u = l.bound[layer] + share * (l.bound[layer + 1] - l.bound[layer]);
        layers_expect_point(&c, &l, layer, sphere_u, &centre,
                            (struct vec2){-cos(turn) / u, -sin(turn) / u});
    }
    honesty_expect_flux(&c, 0, -l.strength[2]);
    honesty_expect_flux(&c, 1, l.strength[0]);
    honesty_run(&c, tally);
}

/* A charged ball in an earthed hollow sphere. */
static void ball_case(struct honesty_tally *tally, double ball, double shell,
                      double shift)
{
    static const enum side_index axis[] = {SIDE_B_LOW};
    struct honesty_case c;
    struct images images;
    char name[HONESTY_NAME];
    const double charge = 217e-12, far = 1.1 * shell;
    images_in_shell(ball, shell, shift, &images);
    const double volts =
        charge / (2.0 * PI * VACUUM_PERMITTIVITY * images_flux(&images));
    (void)snprintf(name, sizeof name, "charged ball in a sphere, 1 : %.4g, shift %.4g",
                   shell / ball, shift / ball);
    struct plane *plane =
        honesty_begin(&c, name, PLANE_ELECTRIC_TURNED, VOLTS, (struct vec2){-far, 0.0},
                      (struct vec2){far, far});
    honesty_sides(plane, axis, 1, SIDE_MIRROR);
    scene_cut_disc(scene_box(plane, "shell", 0.0, -far, far, 0.0, far, 0.0), 0.0, 0.0,
                   shell);
    honesty_float(scene_disc(plane, "ball", 0.0, shift, 0.0, ball), charge);
    expect_found(&c, 1, volts);
    for (int k = 0; k < 3; k++) {
        const struct vec2 at = {shift + 1.4 * ball * cos(1.1 * k),
                                1.4 * ball * sin(1.1 * k)};
        struct vec2 field;
        const double potential = images_at(&images, at, &field);
        honesty_expect_point(&c, at, volts * potential, vec2_scale(field, volts));
    }
    honesty_expect_flux(&c, 0, -volts * images_flux(&images));
    honesty_run(&c, tally);
}

void honesty_floating(struct honesty_tally *tally)
{
    static const struct floats one[] = {{0.4, 0.6, 0.0}},
                               charged[] = {{0.35, 0.52, 0.7}},
                               two[] = {{0.3, 0.42, 0.0}, {0.66, 0.75, 0.0}},
                               two_charged[] = {{0.28, 0.4, -0.45}, {0.62, 0.8, 1.3}};
    honesty_family(tally, "floating");
    concentric_case(tally, "floating tube", one, 1);
    concentric_case(tally, "charged floating tube", charged, 1);
    concentric_case(tally, "two floating tubes", two, 2);
    concentric_case(tally, "two charged floating tubes", two_charged, 2);
    eccentric_case(tally, "eccentric floating tube", 3.3e-3, 0.47, one, 1);
    eccentric_case(tally, "eccentric charged floating tube", 2.1e-3, -1.3, charged, 1);
    spheres_case(tally, "floating sphere", one);
    spheres_case(tally, "charged floating sphere", charged);
    ball_case(tally, 3.17e-3, 11.3e-3, 4.3e-3);
    ball_case(tally, 4.9e-3, 11.3e-3, 1.9e-3);
}
