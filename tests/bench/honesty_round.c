/* SPDX-License-Identifier: GPL-3.0-or-later */

/* A core inside a shell, their axes apart or not (honesty_coaxal.h). All surfaces are cut
 * legs. */

#include "tests/bench/honesty_families.h"

#include "shared/constants.h"
#include "tests/bench/honesty_coaxal.h"
#include "tests/bench/honesty_layers.h"
#include "tests/bench/honesty_map.h"
#include "tests/support/scene.h"

#define VOLTS 385.7
#define KIND  PLANE_ELECTRIC_ACROSS

struct cylinders {
    double core, shell; /* m, radii */
    double shift;       /* m */
    double angle;       /* rad, way of the shift */
};

static struct vec2 polar(double r, double angle)
{
    return (struct vec2){r * cos(angle), r * sin(angle)};
}

/* The single layer between them. */
static struct layers layer_of(const struct cylinders *g, const struct coaxal *pencil)
{
    struct layers l = {.count = 1, .permittivity = {1.0}, .first = VOLTS};
    struct vec2 gradient;
    l.bound[0] = coaxal_u(pencil, polar(g->shift + g->core, g->angle), &gradient);
    l.bound[1] = coaxal_u(pencil, polar(g->shell, g->angle), &gradient);
    layers_solve(&l);
    return l;
}

/* A point between the core and the shell, seen from the core under the angle `turn`. */
static struct vec2 point_between(const struct cylinders *g, double share, double turn)
{
    const double complex ray = turn_by(turn);
    const double along = creal(ray) * g->shift;
    const double reach =
        -along + sqrt(along * along + g->shell * g->shell - g->shift * g->shift);
    const double complex w = g->shift + ray * (g->core + share * (reach - g->core));
    const double complex at = w * turn_by(g->angle);
    return (struct vec2){creal(at), cimag(at)};
}

static double field_on(const struct layers *l, const struct coaxal *pencil,
                       struct vec2 at)
{
    struct vec2 gradient;
    (void)coaxal_u(pencil, at, &gradient);
    return l->strength[0] * vec2_length(gradient);
}

/* Parts: the shell, then the core. */
static void expect_all(struct honesty_case *c, const struct cylinders *g)
{
    static const double share[4] = {0.21, 0.5, 0.83, 0.4};
    static const double turn[4] = {0.0, 1.1, 2.385, -1.9};
    const struct coaxal pencil = coaxal_within(g->core, g->shell, g->shift, g->angle);
    const struct layers l = layer_of(g, &pencil);
    const double flux = 2.0 * PI * l.strength[0];
    for (int k = 0; k < 4; k++)
        layers_expect_point(c, &l, 0, coaxal_u, &pencil,
                            point_between(g, share[k], turn[k]));
    honesty_expect_flux(c, 0, -flux);
    honesty_expect_flux(c, 1, flux);
    honesty_expect_capacitance(c, 1, flux / VOLTS);
    honesty_expect(
        c, (struct honesty_figure){
               .kind = HONESTY_PEAK,
               .part = 1,
               .exact = field_on(&l, &pencil, polar(g->shift + g->core, g->angle))});
    honesty_expect(c, (struct honesty_figure){
                          .kind = HONESTY_PEAK,
                          .part = 0,
                          .exact = field_on(&l, &pencil, polar(g->shell, g->angle))});
}

/* by_rounding: the core is a box whose corners are rounded until it is a disc. */
static void cylinders_case(struct honesty_tally *tally, const struct cylinders *g,
                           bool by_rounding)
{
    struct honesty_case c;
    char name[HONESTY_NAME];
    const double half = 1.15 * g->shell, r = g->core;
    const struct vec2 at = polar(g->shift, g->angle);
    (void)snprintf(name, sizeof name, "cylinders b/a %.4g shift %.4g a%s", g->shell / r,
                   g->shift / r, by_rounding ? " (rounded box)" : "");
    struct plane *plane = honesty_begin(
        &c, name, KIND, VOLTS, (struct vec2){-half, -half}, (struct vec2){half, half});
    scene_cut_disc(scene_box(plane, "shell", 0.0, -half, half, -half, half, 0.0), 0.0,
                   0.0, g->shell);
    if (by_rounding)
        scene_box(plane, "core", 1.0, at.a - r, at.a + r, at.b - r, at.b + r, r);
    else
        scene_disc(plane, "core", 1.0, at.a, at.b, r);
    expect_all(&c, g);
    honesty_run(&c, tally);
}

/* One quarter with mirror sides through the axis. */
static void quarter_case(struct honesty_tally *tally, double core, double shell)
{
    static const enum side_index mirrors[] = {SIDE_A_LOW, SIDE_B_LOW};
    static const double turn[3] = {0.13, 0.8, 1.31};
    struct honesty_case c;
    char name[HONESTY_NAME];
    const struct cylinders g = {core, shell, 0.0, 0.0};
    const struct coaxal pencil = coaxal_within(core, shell, 0.0, 0.0);
    const struct layers l = layer_of(&g, &pencil);
    const double half = 1.1 * shell;
    (void)snprintf(name, sizeof name, "quarter cylinders b/a %.4g", shell / core);
    struct plane *plane = honesty_begin(&c, name, KIND, VOLTS, (struct vec2){0.0, 0.0},
                                        (struct vec2){half, half});
    honesty_sides(plane, mirrors, 2, SIDE_MIRROR);
    scene_cut_disc(scene_box(plane, "shell", 0.0, 0.0, half, 0.0, half, 0.0), 0.0, 0.0,
                   shell);
    scene_disc(plane, "core", 1.0, 0.0, 0.0, core);
    for (int k = 0; k < 3; k++)
        layers_expect_point(&c, &l, 0, coaxal_u, &pencil,
                            polar(core + 0.3 * (k + 0.5) * (shell - core), turn[k]));
    honesty_expect_flux(&c, 1, 0.5 * PI * l.strength[0]);
    honesty_run(&c, tally);
}

void honesty_round(struct honesty_tally *tally)
{
    static const struct cylinders cases[] = {
        {8.69e-3, 11.3e-3, 0.0, 0.0},       {5.65e-3, 11.3e-3, 0.0, 0.0},
        {3.17e-3, 11.3e-3, 0.0, 0.0},       {1.9e-3, 11.3e-3, 0.0, 0.0},
        {0.94e-3, 11.3e-3, 0.0, 0.0},       {5.3e-3, 11.3e-3, 2.7e-3, 0.0},
        {3.17e-3, 11.3e-3, 2.9e-3, 0.3543}, {3.17e-3, 11.3e-3, 5.1e-3, 1.17},
        {1.9e-3, 11.3e-3, 4.3e-3, 2.385},   {7.7e-3, 11.3e-3, 1.3e-3, -0.7},
    };
    honesty_family(tally, "cylinders");
    for (size_t k = 0; k < sizeof cases / sizeof *cases; k++)
        cylinders_case(tally, &cases[k], false);
    cylinders_case(tally, &(struct cylinders){3.17e-3, 11.3e-3, 1.7e-3, 0.5}, true);
    quarter_case(tally, 3.17e-3, 11.3e-3);
    quarter_case(tally, 6.1e-3, 11.3e-3);
}
