/* SPDX-License-Identifier: GPL-3.0-or-later */

/* A core of radius a inside a shell of radius b, its axis at distance d from the shell's:
 * the field of two opposite line charges at the points that are images of each other in
 * both circles (Smythe, Static and Dynamic Electricity, sec. 4.14; from memory). With
 * x along the shift, x1 x2 = b^2 and x1 + x2 = (b^2 + d^2 - a^2)/d. */

#include "tests/bench/honesty_families.h"

#include <complex.h>
#include <math.h>

#include "shared/constants.h"
#include "tests/bench/honesty_map.h"
#include "tests/support/scene.h"

#define VOLTS 385.7
#define KIND  PLANE_ELECTRIC_ACROSS

struct cylinders {
    double core, shell; /* m, radii */
    double shift;       /* m */
    double angle;       /* rad, way of the shift */
};

/* Where the charges stand along the shift; the second is infinite without shift. */
static void charges_of(const struct cylinders *c, double *near, double *far)
{
    const double b2 = c->shell * c->shell;
    const double sum = b2 + c->shift * c->shift - c->core * c->core;
    *near =
        2.0 * b2 * c->shift / (sum + sqrt(sum * sum - 4.0 * b2 * c->shift * c->shift));
    *far = c->shift > 0.0 ? b2 / *near : (double)INFINITY;
}

/* ln|w - near| - ln|w - far|, up to a constant that drops out. */
static double logarithm_at(const struct cylinders *c, double complex w)
{
    double near, far;
    charges_of(c, &near, &far);
    return log(cabs(w - near)) - (isfinite(far) ? log(cabs(w / far - 1.0)) : 0.0);
}

static double voltage_scale(const struct cylinders *c)
{
    return VOLTS / (logarithm_at(c, c->shift + c->core) - logarithm_at(c, c->shell));
}

/* Field in the frame of the shift. */
static double complex field_at_point(const struct cylinders *c, double complex w)
{
    double near, far;
    charges_of(c, &near, &far);
    const double complex slope =
        1.0 / (w - near) - (isfinite(far) ? 1.0 / (w - far) : 0.0);
    return -voltage_scale(c) * conj(slope);
}

static void expect_all(struct honesty_case *c, const struct cylinders *g)
{
    const double flux = -2.0 * PI * voltage_scale(g);
    const double share[4] = {0.21, 0.5, 0.83, 0.4}, turn[4] = {0.0, 1.1, 2.385, -1.9};
    for (int k = 0; k < 4; k++) {
        /* A point between the core and the shell, seen from the core. */
        const double complex ray = turn_by(turn[k]);
        const double along = creal(ray) * g->shift;
        const double reach =
            -along + sqrt(along * along + g->shell * g->shell - g->shift * g->shift);
        const double complex w =
            g->shift + ray * (g->core + share[k] * (reach - g->core));
        const double complex rotate = turn_by(g->angle), at = w * rotate;
        const double complex field = field_at_point(g, w) * rotate;
        honesty_expect_point(c, (struct vec2){creal(at), cimag(at)},
                             voltage_scale(g) *
                                 (logarithm_at(g, w) - logarithm_at(g, g->shell)),
                             (struct vec2){creal(field), cimag(field)});
    }
    honesty_expect_flux(c, 0, -flux);
    honesty_expect_flux(c, 1, flux);
    honesty_expect(c, (struct honesty_figure){
                          .kind = HONESTY_SELF, .part = 1, .exact = flux / VOLTS});
    honesty_expect(c, (struct honesty_figure){
                          .kind = HONESTY_PEAK,
                          .part = 1,
                          .exact = cabs(field_at_point(g, g->shift + g->core))});
    honesty_expect(c,
                   (struct honesty_figure){.kind = HONESTY_PEAK,
                                           .part = 0,
                                           .exact = cabs(field_at_point(g, g->shell))});
}

/* by_rounding: the core is a box whose corners are rounded until it is a disc. */
static void cylinders_case(struct honesty_tally *tally, const struct cylinders *g,
                           bool by_rounding)
{
    struct honesty_case c;
    char name[HONESTY_NAME];
    const double half = 1.15 * g->shell, r = g->core;
    const struct vec2 at = {g->shift * cos(g->angle), g->shift * sin(g->angle)};
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
    struct honesty_case c;
    char name[HONESTY_NAME];
    const struct cylinders g = {core, shell, 0.0, 0.0};
    const double half = 1.1 * shell, turn[3] = {0.13, 0.8, 1.31};
    (void)snprintf(name, sizeof name, "quarter cylinders b/a %.4g", shell / core);
    struct plane *plane = honesty_begin(&c, name, KIND, VOLTS, (struct vec2){0.0, 0.0},
                                        (struct vec2){half, half});
    plane->sides[SIDE_A_LOW].kind = plane->sides[SIDE_B_LOW].kind = SIDE_MIRROR;
    scene_cut_disc(scene_box(plane, "shell", 0.0, 0.0, half, 0.0, half, 0.0), 0.0, 0.0,
                   shell);
    scene_disc(plane, "core", 1.0, 0.0, 0.0, core);
    for (int k = 0; k < 3; k++) {
        const double complex w =
            turn_by(turn[k]) * (core + 0.3 * (k + 0.5) * (shell - core));
        const double complex field = field_at_point(&g, w);
        honesty_expect_point(&c, (struct vec2){creal(w), cimag(w)},
                             voltage_scale(&g) *
                                 (logarithm_at(&g, w) - logarithm_at(&g, shell)),
                             (struct vec2){creal(field), cimag(field)});
    }
    honesty_expect_flux(&c, 1, -0.5 * PI * voltage_scale(&g));
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
    for (size_t k = 0; k < sizeof cases / sizeof *cases; k++)
        cylinders_case(tally, &cases[k], false);
    cylinders_case(tally, &(struct cylinders){3.17e-3, 11.3e-3, 1.7e-3, 0.5}, true);
    quarter_case(tally, 3.17e-3, 11.3e-3);
    quarter_case(tally, 6.1e-3, 11.3e-3);
}
