/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Insulators. Bounded by lines of constant potential: layers on a core (honesty_layers.h),
 * in planar planes also eccentric ones, as a conformal map leaves permittivities alone.
 * Bounded by field lines: a sector of a coaxial line, whose potential it does not change.
 * Neither: rods and shells in a lattice (tests/support/lattice_of_rods.h), a can with an
 * insulating floor (honesty_can.h). */

#include "tests/bench/honesty_families.h"

#include <stdlib.h>

#include "shared/constants.h"
#include "tests/bench/honesty_can.h"
#include "tests/bench/honesty_coaxal.h"
#include "tests/bench/honesty_layers.h"
#include "tests/support/lattice_of_rods.h"
#include "tests/support/scene.h"

#define VOLTS 512.7
#define CELL  40e-3 /* m, lattice constant */

static const enum side_index ALL[] = {SIDE_A_LOW, SIDE_A_HIGH, SIDE_B_LOW, SIDE_B_HIGH};

/* --- rods in a lattice ---------------------------------------------------------- */

static double along_rod(const struct lattice_of_rods *lattice, double turn)
{
    struct vec2 gradient;
    const double r = lattice->rod.radius;
    (void)lattice_of_rods_at(lattice, (struct vec2){r * cos(turn), r * sin(turn)},
                             &gradient);
    return fabs(gradient.b * cos(turn) - gradient.a * sin(turn));
}

/* The field along the surface, mean field 1, has one peak in a quarter of a rod. */
static double highest_along_rod(const struct lattice_of_rods *lattice)
{
    double low = 0.0, high = 0.75 * PI;
    while (high - low > 1e-7) {
        const double p = low + (high - low) / 3.0, q = high - (high - low) / 3.0;
        if (along_rod(lattice, p) < along_rod(lattice, q))
            low = p;
        else
            high = q;
    }
    return along_rod(lattice, low);
}

/* Potential V/2 on the right plate, -V/2 on the left. */
static void expect_cell_point(struct honesty_case *c,
                              const struct lattice_of_rods *lattice, struct vec2 at)
{
    struct vec2 gradient;
    const double potential =
        lattice_of_rods_at(lattice, vec2_scale(at, 1.0 / CELL), &gradient);
    honesty_expect_point(c, at, VOLTS * potential, vec2_scale(gradient, -VOLTS / CELL));
}

static void cell_case(struct honesty_tally *tally, struct rod rod)
{
    struct honesty_case c;
    char name[HONESTY_NAME];
    const double half = 0.5 * CELL, plate = half + 3e-3, core = rod.core_radius;
    const struct lattice_of_rods lattice = lattice_of_rods(rod);
    (void)snprintf(name, sizeof name, "lattice of rods, radius %.4g of %.4g, core %.4g",
                   rod.radius, rod.permittivity, core);
    struct plane *plane =
        honesty_begin(&c, name, PLANE_ELECTRIC_ACROSS, VOLTS,
                      (struct vec2){-plate, -half}, (struct vec2){plate, half});
    honesty_sides(plane, ALL, 4, SIDE_MIRROR);
    scene_box(plane, "left", -0.5, -plate, -half, -half, half, 0.0);
    scene_box(plane, "right", 0.5, half, plate, -half, half, 0.0);
    honesty_insulate(scene_disc(plane, "rod", 0.0, 0.0, 0.0, CELL * rod.radius),
                     rod.permittivity);
    if (core > 0.0)
        honesty_insulate(scene_disc(plane, "core", 0.0, 0.0, 0.0, CELL * core),
                         rod.core_permittivity);
    const double r = CELL * rod.radius, inner = CELL * (core + 0.1 * rod.radius);
    expect_cell_point(&c, &lattice, (struct vec2){2.1e-3, 1.3e-3});
    expect_cell_point(&c, &lattice, (struct vec2){0.5 * (r + inner), 0.0});
    expect_cell_point(&c, &lattice,
                      (struct vec2){0.3 * (r + inner), 0.4 * (r + inner)});
    expect_cell_point(&c, &lattice, (struct vec2){-0.75 * r, 0.8 * r});
    expect_cell_point(&c, &lattice, (struct vec2){0.5 * (half + r), 0.11 * half});
    expect_cell_point(&c, &lattice, (struct vec2){0.71 * half, 0.8 * half});
    honesty_expect_flux(&c, 1, VOLTS * lattice.effective);
    honesty_expect_capacitance(&c, 1, lattice.effective);
    if (core <= 0.0)
        honesty_expect(&c, (struct honesty_figure){
                               .kind = HONESTY_CREEP,
                               .part = 2,
                               .exact = VOLTS / CELL * highest_along_rod(&lattice)});
    honesty_run(&c, tally);
}

/* The plates of a cell are at +-1/2. */
static void check_lattice(struct rod rod)
{
    const struct lattice_of_rods lattice = lattice_of_rods(rod);
    struct vec2 gradient;
    for (int n = 0; n < 2; n++) {
        const double got =
            lattice_of_rods_at(&lattice, (struct vec2){0.5, 0.25 * n}, &gradient);
        if (!(fabs(got - 0.5) < 1e-11)) {
            (void)fprintf(stderr, "lattice of rods: the plate is at %.16g\n", got);
            exit(EXIT_FAILURE);
        }
    }
}

/* --- layers --------------------------------------------------------------------- */

/* Layers between a core and a shell: where they end, as shares of the way in u, and
 * permittivities. */
struct coating {
    int count;
    double share[3], permittivity[3];
};

static void set_layers(struct layers *l, const struct coating *coating, double from,
                       double to)
{
    *l = (struct layers){.count = coating->count, .first = VOLTS};
    l->bound[0] = from;
    for (int k = 0; k < coating->count; k++) {
        l->bound[k + 1] = from + coating->share[k] * (to - from);
        l->permittivity[k] = coating->permittivity[k];
    }
    layers_solve(l);
}

/* Insulators from the outermost on: later parts hold. A free outermost layer needs none. */
static bool is_filled(const struct layers *l, int k)
{
    return k < l->count - 1 || l->permittivity[k] > 1.0;
}

/* Where the insulator of a layer ends: the outermost within the shell, which holds. */
static double end_of(const struct layers *l, int k)
{
    return l->bound[k + 1] + (k == l->count - 1 ? 0.05 : 0.0);
}

/* Parts: the shell, the core, the insulators. */
static void begin_coaxal(struct honesty_case *c, const char *name, double shell,
                         const struct coaxal *pencil, const struct layers *l)
{
    const double half = 1.1 * shell;
    struct plane *plane =
        honesty_begin(c, name, PLANE_ELECTRIC_ACROSS, VOLTS,
                      (struct vec2){-half, -half}, (struct vec2){half, half});
    scene_cut_disc(scene_box(plane, "shell", 0.0, -half, half, -half, half, 0.0), 0.0,
                   0.0, shell);
    (void)coaxal_disc(plane, "core", 1.0, pencil, l->bound[0]);
    for (int k = l->count - 1; k >= 0; k--)
        if (is_filled(l, k))
            honesty_insulate(coaxal_disc(plane, "layer", 0.0, pencil, end_of(l, k)),
                             l->permittivity[k]);
}

static void coaxal_case(struct honesty_tally *tally, double core, double shell,
                        double shift, double angle, const struct coating *coating)
{
    struct honesty_case c;
    struct layers l;
    struct vec2 gradient;
    char name[HONESTY_NAME];
    const double way[2] = {cos(angle), sin(angle)};
    const struct vec2 at_core = {(shift + core) * way[0], (shift + core) * way[1]};
    const struct vec2 at_shell = {shell * way[0], shell * way[1]};
    const struct coaxal pencil = coaxal_within(core, shell, shift, angle);
    set_layers(&l, coating, coaxal_u(&pencil, at_core, &gradient),
               coaxal_u(&pencil, at_shell, &gradient));
    (void)snprintf(name, sizeof name,
                   "layered line, b/a %.4g, shift %.4g a, %.4g / %.4g", shell / core,
                   shift / core, l.permittivity[0], l.permittivity[1]);
    begin_coaxal(&c, name, shell, &pencil, &l);
    for (int n = 0; n < 2 * l.count; n++) {
        const int k = n / 2;
        const double share = n % 2 == 0 ? 0.27 : 0.81;
        const double u = l.bound[k] + share * (l.bound[k + 1] - l.bound[k]);
        layers_expect_point(&c, &l, k, coaxal_u, &pencil,
                            coaxal_point(&pencil, u, 0.7 + 2.385 * n));
    }
    honesty_expect_flux(&c, 0, -2.0 * PI * l.strength[0]);
    honesty_expect_flux(&c, 1, 2.0 * PI * l.strength[0]);
    honesty_expect_capacitance(&c, 1, 2.0 * PI * l.strength[0] / VOLTS);
    honesty_run(&c, tally);
}

/* The same in a turned plane with concentric spheres; half, a mirror at z = 0. */
static void spheres_case(struct honesty_tally *tally, double ball, double shell,
                         const struct coating *coating)
{
    static const enum side_index mirrors[] = {SIDE_A_LOW, SIDE_B_LOW};
    struct honesty_case c;
    struct layers l;
    char name[HONESTY_NAME];
    const double far = 1.1 * shell, centre = 0.0;
    set_layers(&l, coating, -1.0 / ball, -1.0 / shell);
    (void)snprintf(name, sizeof name, "layered spheres, radii 1 : %.4g, %.4g / %.4g",
                   shell / ball, l.permittivity[0], l.permittivity[1]);
    struct plane *plane =
        honesty_begin(&c, name, PLANE_ELECTRIC_TURNED, VOLTS, (struct vec2){0.0, 0.0},
                      (struct vec2){far, far});
    honesty_sides(plane, mirrors, 2, SIDE_MIRROR);
    scene_cut_disc(scene_box(plane, "shell", 0.0, 0.0, far, 0.0, far, 0.0), 0.0, 0.0,
                   shell);
    scene_disc(plane, "ball", 1.0, 0.0, 0.0, ball);
    for (int k = l.count - 1; k >= 0; k--)
        if (is_filled(&l, k))
            honesty_insulate(
                scene_disc(plane, "layer", 0.0, 0.0, 0.0, -1.0 / l.bound[k + 1]),
                l.permittivity[k]);
    for (int n = 0; n < 2 * l.count; n++) {
        const int k = n / 2;
        const double share = n % 2 == 0 ? 0.27 : 0.81, turn = 0.41 * n;
        const double r = -1.0 / (l.bound[k] + share * (l.bound[k + 1] - l.bound[k]));
        layers_expect_point(&c, &l, k, sphere_u, &centre,
                            (struct vec2){r * cos(turn), n == 0 ? 0.0 : r * sin(turn)});
    }
    honesty_expect_flux(&c, 0, -l.strength[0]);
    honesty_expect_flux(&c, 1, l.strength[0]);
    honesty_expect_capacitance(&c, 1, l.strength[0] / VOLTS);
    honesty_run(&c, tally);
}

/* Tubes between mirrors; interfaces along grid lines. */
static void tubes_case(struct honesty_tally *tally, double inner, double outer,
                       const struct coating *coating)
{
    static const enum side_index mirrors[] = {SIDE_A_LOW, SIDE_A_HIGH, SIDE_B_LOW};
    struct honesty_case c;
    struct layers l;
    char name[HONESTY_NAME];
    const double length = 9e-3;
    set_layers(&l, coating, log(inner), log(outer));
    (void)snprintf(name, sizeof name, "layered tubes, radii 1 : %.4g, %.4g / %.4g",
                   outer / inner, l.permittivity[0], l.permittivity[1]);
    struct plane *plane =
        honesty_begin(&c, name, PLANE_ELECTRIC_TURNED, VOLTS, (struct vec2){0.0, 0.0},
                      (struct vec2){length, 1.1 * outer});
    honesty_sides(plane, mirrors, 3, SIDE_MIRROR);
    scene_box(plane, "tube", 0.0, 0.0, length, outer, 1.1 * outer, 0.0);
    scene_box(plane, "rod", 1.0, 0.0, length, 0.0, inner, 0.0);
    for (int k = l.count - 1; k >= 0; k--)
        if (is_filled(&l, k))
            honesty_insulate(scene_box(plane, "layer", 0.0, 0.0, length, 0.0,
                                       exp(l.bound[k + 1]), 0.0),
                             l.permittivity[k]);
    for (int k = 0; k < l.count; k++)
        layers_expect_point(
            &c, &l, k, tube_u, NULL,
            (struct vec2){(0.2 + 0.3 * k) * length,
                          exp(0.4 * l.bound[k] + 0.6 * l.bound[k + 1])});
    honesty_expect_flux(&c, 0, -length * l.strength[0]);
    honesty_expect_flux(&c, 1, length * l.strength[0]);
    honesty_expect_capacitance(&c, 1, length * l.strength[0] / VOLTS);
    honesty_run(&c, tally);
}

/* --- others ----------------------------------------------------------------------- */

/* A quarter of a coaxial line whose sector below `angle` is filled. */
static void sector_case(struct honesty_tally *tally, double core, double shell,
                        double angle, double permittivity)
{
    static const enum side_index mirrors[] = {SIDE_A_LOW, SIDE_B_LOW};
    struct honesty_case c;
    char name[HONESTY_NAME];
    const double half = 1.1 * shell;
    const struct vec2 sector[3] = {{0.0, 0.0}, {half, 0.0}, {half, half * tan(angle)}};
    const struct coaxal pencil = coaxal_within(core, shell, 0.0, 0.0);
    struct layers l;
    set_layers(&l, &(struct coating){1, {1.0}, {1.0}}, log(core), log(shell));
    (void)snprintf(name, sizeof name, "sector of %.4g rad of a line, b/a %.4g, %.4g",
                   angle, shell / core, permittivity);
    struct plane *plane =
        honesty_begin(&c, name, PLANE_ELECTRIC_ACROSS, VOLTS, (struct vec2){0.0, 0.0},
                      (struct vec2){half, half});
    honesty_sides(plane, mirrors, 2, SIDE_MIRROR);
    scene_cut_disc(scene_box(plane, "shell", 0.0, 0.0, half, 0.0, half, 0.0), 0.0, 0.0,
                   shell);
    scene_disc(plane, "core", 1.0, 0.0, 0.0, core);
    honesty_insulate(scene_polygon(plane, "sector", 0.0, sector, 3), permittivity);
    for (int k = 0; k < 4; k++)
        layers_expect_point(
            &c, &l, 0, coaxal_u, &pencil,
            coaxal_point(&pencil,
                         l.bound[0] + (0.2 + 0.2 * k) * (l.bound[1] - l.bound[0]),
                         k < 2 ? angle * (0.3 + 0.6 * k) : angle + 0.3 * (k - 1)));
    const double filled = permittivity * angle + 0.5 * PI - angle;
    honesty_expect_flux(&c, 1, filled * l.strength[0]);
    honesty_expect_capacitance(&c, 1, filled * l.strength[0] / VOLTS);
    honesty_run(&c, tally);
}

static void can_case(struct honesty_tally *tally, const struct can *can)
{
    static const enum side_index axis[] = {SIDE_B_LOW};
    struct honesty_case c;
    char name[HONESTY_NAME];
    (void)snprintf(name, sizeof name, "can with a floor of %.4g, %.4g of the length",
                   can->permittivity, can->layer / can->length);
    struct plane *plane =
        honesty_begin(&c, name, PLANE_ELECTRIC_TURNED, VOLTS, (struct vec2){0.0, 0.0},
                      (struct vec2){can->length, can->radius});
    honesty_sides(plane, axis, 1, SIDE_MIRROR);
    scene_wall(plane, SIDE_A_LOW, 1.0, 1.0);
    honesty_insulate(
        scene_box(plane, "floor", 0.0, 0.0, can->layer, 0.0, can->radius, 0.0),
        can->permittivity);
    for (int k = 0; k < 5; k++) {
        const struct vec2 at = {0.25 * can->radius + 0.17 * k * can->length,
                                k < 2 ? 0.0 : 0.23 * (k - 1) * can->radius};
        struct vec2 field;
        const double potential = can_at(can, at, &field);
        honesty_expect_point(&c, at, VOLTS * potential, vec2_scale(field, VOLTS));
    }
    honesty_run(&c, tally);
}

/* Between plates, a layer on one of them: exact but for round-off. */
static void slab_case(struct honesty_tally *tally)
{
    struct honesty_case c;
    const double gap = 17e-3, layer = 6.1e-3, k = 3.7, wide = 23e-3;
    const double strength = VOLTS / (layer / k + gap - layer);
    struct plane *plane =
        honesty_begin(&c, "slab on a plate", PLANE_ELECTRIC_ACROSS, VOLTS,
                      (struct vec2){0.0, -2e-3}, (struct vec2){wide, gap + 2e-3});
    honesty_sides(plane, ALL, 4, SIDE_MIRROR);
    scene_box(plane, "lower", 1.0, 0.0, wide, -2e-3, 0.0, 0.0);
    scene_box(plane, "upper", 0.0, 0.0, wide, gap, gap + 2e-3, 0.0);
    honesty_insulate(scene_box(plane, "slab", 0.0, 0.0, wide, 0.0, layer, 0.0), k);
    honesty_expect_point(&c, (struct vec2){0.3 * wide, 0.4 * layer},
                         VOLTS - 0.4 * layer * strength / k,
                         (struct vec2){0.0, strength / k});
    honesty_expect_point(&c, (struct vec2){0.6 * wide, gap - 2.3e-3}, 2.3e-3 * strength,
                         (struct vec2){0.0, strength});
    honesty_expect_flux(&c, 0, wide * strength);
    honesty_run(&c, tally);
}

void honesty_insulators(struct honesty_tally *tally)
{
    static const struct rod rods[] = {{0.3, 4.0, 0.0, 0.0},
                                      {0.41, 9.6, 0.0, 0.0},
                                      {0.19, 2.3, 0.0, 0.0},
                                      {0.4, 4.0, 0.2, 1.0},
                                      {0.35, 2.6, 0.25, 6.1}};
    static const struct coating inner = {2, {0.5, 1.0}, {2.8, 1.0}},
                                middle = {3, {0.3, 0.75, 1.0}, {1.0, 4.1, 1.0}},
                                outer = {2, {0.6, 1.0}, {1.0, 9.4}};
    honesty_family(tally, "insulators");
    for (size_t k = 0; k < sizeof rods / sizeof *rods; k++) {
        check_lattice(rods[k]);
        cell_case(tally, rods[k]);
    }
    coaxal_case(tally, 4e-3, 17e-3, 0.0, 0.0, &inner);
    coaxal_case(tally, 3.1e-3, 13e-3, 4.3e-3, 0.61, &inner);
    coaxal_case(tally, 2.7e-3, 13e-3, 3.7e-3, -1.2, &middle);
    coaxal_case(tally, 3.9e-3, 15e-3, 0.0, 0.0, &outer);
    coaxal_case(tally, 3.3e-3, 14e-3, 3.1e-3, 2.1, &outer);
    sector_case(tally, 3.7e-3, 13e-3, 0.43, 5.2);
    sector_case(tally, 6.1e-3, 13e-3, 0.71, 2.4);
    spheres_case(tally, 4e-3, 17e-3, &inner);
    spheres_case(tally, 3.1e-3, 13e-3, &middle);
    tubes_case(tally, 2.9e-3, 11e-3, &middle);
    can_case(tally, &(struct can){5.3e-3, 8.9e-3, 3.1e-3, 3.4, false});
    can_case(tally, &(struct can){7.9e-3, 8.9e-3, 5.3e-3, 7.9, false});
    slab_case(tally);
}
