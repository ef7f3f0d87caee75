/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Capacitance matrices of conductors one within the other, where each shields what is
 * inside it, and forces as the derivatives of capacitances, F = V^2/2 dC/dx. */

#include "tests/bench/honesty_families.h"

#include <stdlib.h>

#include "shared/constants.h"
#include "tests/support/scene.h"

#define VOLTS 143.9

static const enum side_index CORNER[] = {SIDE_A_LOW, SIDE_B_LOW},
                             TUBE[] = {SIDE_A_LOW, SIDE_A_HIGH, SIDE_B_LOW},
                             AXIS[] = {SIDE_B_LOW};

/* Parts 0 and 1, the outer one in what is earthed. */
static void expect_nested(struct honesty_case *c, double inner, double outer)
{
    honesty_expect_matrix(c, 0, 0, inner);
    honesty_expect_matrix(c, 0, 1, -inner);
    honesty_expect_matrix(c, 1, 1, inner + outer);
    honesty_expect_capacitance(c, 0, inner);
    honesty_expect_capacitance(c, 1, inner + outer);
    honesty_expect_flux(c, 0, 0.7 * VOLTS * inner);
    honesty_expect_flux(c, 1, VOLTS * (0.3 * outer - 0.7 * inner));
}

/* A quarter of core, tube and shell; planar, or half of spheres in a turned plane. */
static void shells_case(struct honesty_tally *tally, enum plane_kind kind, double core,
                        double from, double to, double shell)
{
    struct honesty_case c;
    char name[HONESTY_NAME];
    const bool turned = plane_kind_is_turned(kind);
    const double half = 1.1 * shell;
    (void)snprintf(name, sizeof name, "matrix of nested %s, radii 1 : %.4g",
                   turned ? "spheres" : "tubes", shell / core);
    struct plane *plane = honesty_begin(&c, name, kind, VOLTS, (struct vec2){0.0, 0.0},
                                        (struct vec2){half, half});
    honesty_sides(plane, CORNER, 2, SIDE_MIRROR);
    scene_disc(plane, "core", 1.0, 0.0, 0.0, core);
    scene_cut_disc(scene_disc(plane, "tube", 0.3, 0.0, 0.0, to), 0.0, 0.0, from);
    scene_cut_disc(scene_box(plane, "shell", 0.0, 0.0, half, 0.0, half, 0.0), 0.0, 0.0,
                   shell);
    if (turned)
        expect_nested(&c, 1.0 / (1.0 / core - 1.0 / from),
                      1.0 / (1.0 / to - 1.0 / shell));
    else
        expect_nested(&c, 0.5 * PI / log(from / core), 0.5 * PI / log(shell / to));
    honesty_run(&c, tally);
}

/* Tubes between mirrors in a turned plane. */
static void tubes_case(struct honesty_tally *tally)
{
    struct honesty_case c;
    const double length = 20e-3, core = 2e-3, from = 4.1e-3, to = 5e-3, shell = 12e-3;
    struct plane *plane =
        honesty_begin(&c, "matrix of turned tubes", PLANE_ELECTRIC_TURNED, VOLTS,
                      (struct vec2){0.0, 0.0}, (struct vec2){length, shell});
    honesty_sides(plane, TUBE, 3, SIDE_MIRROR);
    scene_box(plane, "core", 1.0, 0.0, length, 0.0, core, 0.0);
    scene_box(plane, "tube", 0.3, 0.0, length, from, to, 0.0);
    expect_nested(&c, length / log(from / core), length / log(shell / to));
    honesty_run(&c, tally);
}

/* C/eps0 = 2 pi/acosh(x), x = (a^2 + b^2 - d^2)/(2 a b), of a core of radius a, its axis at
 * d from that of a shell of radius b (Smythe, Static and Dynamic Electricity, sec. 4.14;
 * from memory). */
static double eccentric_capacitance(double a, double b, double d, double *slope)
{
    const double x = (a * a + b * b - d * d) / (2.0 * a * b), arc = acosh(x);
    *slope = 2.0 * PI / (arc * arc * sqrt(x * x - 1.0)) * d / (a * b);
    return 2.0 * PI / arc;
}

/* A wire within a free sleeve: matrix, and the force on the wire. */
static void sleeve_case(struct honesty_tally *tally, double a, double b, double d,
                        double angle)
{
    struct honesty_case c;
    char name[HONESTY_NAME];
    double slope;
    const double inner = eccentric_capacitance(a, b, d, &slope), half = 1.5 * b;
    const double force = 0.5 * 0.49 * VOLTS * VOLTS * slope;
    (void)snprintf(name, sizeof name, "wire in a sleeve, radii 1 : %.4g, shift %.4g",
                   b / a, d / a);
    struct plane *plane =
        honesty_begin(&c, name, PLANE_ELECTRIC_ACROSS, VOLTS,
                      (struct vec2){-half, -half}, (struct vec2){half, half});
    scene_disc(plane, "wire", 1.0, d * cos(angle), d * sin(angle), a);
    scene_cut_disc(scene_disc(plane, "sleeve", 0.3, 0.0, 0.0, 1.2 * b), 0.0, 0.0, b);
    honesty_expect_matrix(&c, 0, 0, inner);
    honesty_expect_matrix(&c, 0, 1, -inner);
    honesty_expect_capacitance(&c, 0, inner);
    honesty_expect_force(&c, 0, (struct vec2){force * cos(angle), force * sin(angle)});
    honesty_run(&c, tally);
}

/* A quarter of a square in a square frame, sides 1 : 2 (Bowman 1935). */
static void frame_case(struct honesty_tally *tally)
{
    struct honesty_case c;
    struct shape bore;
    const double line = 0.25 * 10.23409256936805;
    struct plane *plane =
        honesty_begin(&c, "matrix of a square frame", PLANE_ELECTRIC_ACROSS, VOLTS,
                      (struct vec2){0.0, 0.0}, (struct vec2){20e-3, 20e-3});
    honesty_sides(plane, CORNER, 2, SIDE_MIRROR);
    scene_box(plane, "core", 1.0, 0.0, 5e-3, 0.0, 5e-3, 0.0);
    struct part *frame = scene_box(plane, "frame", 0.3, 0.0, 12e-3, 0.0, 12e-3, 0.0);
    honesty_must(shape_init_box(&bore, (struct vec2){-10e-3, -10e-3},
                                (struct vec2){10e-3, 10e-3}, 0.0),
                 "bore");
    honesty_must(shape_cut(&frame->shape, &bore), "bore");
    shape_free(&bore);
    honesty_expect_matrix(&c, 0, 0, line);
    honesty_expect_matrix(&c, 0, 1, -line);
    honesty_expect_capacitance(&c, 0, line);
    honesty_expect_flux(&c, 0, 0.7 * VOLTS * line);
    honesty_run(&c, tally);
}

/* A plate or disc from mirror to mirror between walls: exact but for round-off. */
static void plate_case(struct honesty_tally *tally)
{
    static const enum side_index mirrors[] = {SIDE_A_LOW, SIDE_A_HIGH};
    struct honesty_case c;
    const double up = VOLTS / 4e-3, down = VOLTS / 9e-3;
    struct plane *plane =
        honesty_begin(&c, "guarded plate", PLANE_ELECTRIC_ACROSS, VOLTS,
                      (struct vec2){0.0, -9e-3}, (struct vec2){31e-3, 7e-3});
    honesty_sides(plane, mirrors, 2, SIDE_MIRROR);
    scene_box(plane, "plate", 1.0, 0.0, 31e-3, 0.0, 3e-3, 0.0);
    honesty_expect_force(&c, 0,
                         (struct vec2){0.0, 0.5 * 31e-3 * (up * up - down * down)});
    honesty_run(&c, tally);
}

/* A rod across the step of an earthed bore, both ends far away: moving it trades one
 * coaxial capacitance per length for the other, but for exp(-16). */
static void bore_case(struct honesty_tally *tally, double rod, double narrow,
                      double wide)
{
    struct honesty_case c;
    char name[HONESTY_NAME];
    const double reach = 7.0 * wide;
    const double pull = 1.0 / log(wide / rod) - 1.0 / log(narrow / rod);
    (void)snprintf(name, sizeof name,
                   "rod in a stepped bore, radii %.4g, %.4g, %.4g mm", 1e3 * rod,
                   1e3 * narrow, 1e3 * wide);
    struct plane *plane =
        honesty_begin(&c, name, PLANE_ELECTRIC_TURNED, VOLTS,
                      (struct vec2){-reach, 0.0}, (struct vec2){reach, wide});
    honesty_sides(plane, AXIS, 1, SIDE_MIRROR);
    scene_box(plane, "rod", 1.0, -0.6 * reach, 0.55 * reach, 0.0, rod, 0.0);
    scene_box(plane, "step", 0.0, -reach, 0.0, narrow, wide, 0.0);
    honesty_expect_force(&c, 0, (struct vec2){0.5 * VOLTS * VOLTS * pull, 0.0});
    honesty_run(&c, tally);
}

void honesty_conductors(struct honesty_tally *tally)
{
    honesty_family(tally, "conductors");
    shells_case(tally, PLANE_ELECTRIC_ACROSS, 2e-3, 5e-3, 6e-3, 10.3e-3);
    shells_case(tally, PLANE_ELECTRIC_ACROSS, 3.9e-3, 5.7e-3, 7.3e-3, 13e-3);
    shells_case(tally, PLANE_ELECTRIC_TURNED, 3.1e-3, 6.3e-3, 7.9e-3, 12.7e-3);
    tubes_case(tally);
    frame_case(tally);
    sleeve_case(tally, 3e-3, 10e-3, 2.9e-3, 0.7);
    sleeve_case(tally, 4.7e-3, 11e-3, 3.1e-3, 2.0);
    sleeve_case(tally, 1.7e-3, 9e-3, 4.6e-3, -0.4);
    plate_case(tally);
    bore_case(tally, 3e-3, 6e-3, 9e-3);
    bore_case(tally, 4.1e-3, 5.9e-3, 7.7e-3);
}
