/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Insulators against exact solutions: rods and shells in a mean field, layers between
 * plates and between cylinders and spheres. Interfaces off the grid lines must keep
 * second order. */

#include "tests/support/assert_close.h"

#include <math.h>
#include <stdio.h>

#include "shared/constants.h"
#include "solver/extrapolate.h"
#include "solver/plane_solution.h"
#include "tests/support/lattice_of_rods.h"
#include "tests/support/scene.h"

enum { LEVELS = 4 };
#define CELL 40e-3 /* m, lattice constant */

struct table {
    double value[LEVELS];
    double exact;
};

static double order_between(const struct table *t, int level)
{
    return log2(fabs((t->value[level - 1] - t->exact) / (t->value[level] - t->exact)));
}

static double last_error(const struct table *t, int levels)
{
    const struct estimate e = extrapolate(t->value + levels - 3, 3, 0.0);
    return fabs(e.value / t->exact - 1.0);
}

static double last_uncertainty(const struct table *t, int levels)
{
    return extrapolate(t->value + levels - 3, 3, 0.0).uncertainty / fabs(t->exact);
}

static void print(const char *what, const struct table *t, int levels)
{
    for (int l = 0; l < levels; l++)
        printf("%s, grid %d: %.12f, error %.1e\n", what, l, t->value[l],
               t->value[l] / t->exact - 1.0);
}

static struct part *insulate(struct part *part, double permittivity)
{
    part->kind = PART_INSULATOR;
    part->permittivity = permittivity;
    return part;
}

/* One cell of a square lattice of rods in a mean field along a. */
static void cell_of_rods(struct geometry *g, struct rod rod)
{
    const double half = 0.5 * CELL;
    scene_begin(g, 1.0, false);
    struct plane *p = scene_plane(g, PLANE_ELECTRIC_ACROSS, -half, half, -half, half);
    scene_wall(p, SIDE_A_LOW, -0.5 * CELL, -0.5 * CELL);
    scene_wall(p, SIDE_A_HIGH, 0.5 * CELL, 0.5 * CELL);
    p->sides[SIDE_B_LOW].kind = p->sides[SIDE_B_HIGH].kind = SIDE_MIRROR;
    insulate(scene_disc(p, "rod", 0.0, 0.0, 0.0, CELL * rod.radius), rod.permittivity);
    if (rod.core_radius > 0.0)
        insulate(scene_disc(p, "core", 0.0, 0.0, 0.0, CELL * rod.core_radius),
                 rod.core_permittivity);
}

static void solve_rods(struct rod rod, double fineness, int levels, struct table *flux,
                       struct table *centre)
{
    struct geometry g;
    const struct lattice_of_rods exact = lattice_of_rods(rod);
    flux->exact = exact.effective * CELL;
    centre->exact = exact.centre;
    cell_of_rods(&g, rod);
    for (int l = 0; l < levels; l++) {
        struct plane_solution s;
        double field[2];
        assert_int_equal(
            plane_solve(&g, PLANE_ELECTRIC_ACROSS,
                        &(struct grid_request){.fineness = fineness, .level = l}, &s,
                        NULL),
            STATUS_OK);
        assert_int_equal(plane_field(&s, (struct vec2){0.0, 0.0}, field, NULL),
                         STATUS_OK);
        flux->value[l] = s.side_flux[SIDE_A_HIGH];
        centre->value[l] = -field[0];
        plane_solution_free(&s);
    }
    geometry_free(&g);
}

/* Check 14: a rod of 4 in a uniform field has 1.6 times the flux density of the field; a
 * shell of 4 with half its radius hollow 0.703296703 of the field inside. The lattice with
 * thin rods must tend to both (its own correction is of second order in the radius). */
static void test_thin_rods_tend_to_a_rod_alone(void **state)
{
    (void)state;
    const double a = 1e-4;
    assert_close(4.0 * lattice_of_rods((struct rod){a, 4.0, 0.0, 0.0}).centre, 1.6,
                 1e-7, 0.0);
    assert_close(lattice_of_rods((struct rod){a, 4.0, 0.5 * a, 1.0}).centre,
                 0.703296703, 1e-7, 0.0);
}

static void test_dielectric_rod_is_second_order(void **state)
{
    (void)state;
    struct table flux, centre;
    solve_rods((struct rod){0.3, 4.0, 0.0, 0.0}, 1.0, 4, &flux, &centre);
    print("rod, flux", &flux, 4);
    print("rod, field on the axis", &centre, 4);
    assert_close(order_between(&flux, 3), 2.0, 0.0, 0.1);
    assert_close(order_between(&centre, 3), 2.0, 0.0, 0.1);
    assert_at_most(last_error(&flux, 4), 1e-6);
    assert_at_most(last_error(&centre, 4), 1e-6);
    assert_at_most(last_error(&flux, 4), last_uncertainty(&flux, 4));
    assert_at_most(last_error(&centre, 4), last_uncertainty(&centre, 4));
}

static void test_dielectric_shell_is_second_order(void **state)
{
    (void)state;
    struct table flux, centre;
    solve_rods((struct rod){0.4, 4.0, 0.2, 1.0}, 2.0, 4, &flux, &centre);
    print("shell, flux", &flux, 4);
    print("shell, field on the axis", &centre, 4);
    /* The h^2 term of the field on the axis happens to be small: no order is asked. */
    assert_close(order_between(&flux, 3), 2.0, 0.0, 0.1);
    assert_at_most(last_error(&flux, 4), 1e-6);
    assert_at_most(last_error(&centre, 4), 1e-6);
}

/* Half the cell, with a mirror through the rod's axis: the interface crosses the mirror. */
static void test_half_a_rod_at_a_mirror_is_second_order(void **state)
{
    (void)state;
    const struct rod rod = {0.3, 4.0, 0.0, 0.0};
    struct table flux = {.exact = 0.5 * lattice_of_rods(rod).effective * CELL};
    struct geometry g;
    cell_of_rods(&g, rod);
    g.planes[PLANE_ELECTRIC_ACROSS].low.b = 0.0;
    for (int l = 0; l < LEVELS; l++) {
        struct plane_solution s;
        assert_int_equal(
            plane_solve(&g, PLANE_ELECTRIC_ACROSS,
                        &(struct grid_request){.fineness = 1.0, .level = l}, &s, NULL),
            STATUS_OK);
        flux.value[l] = s.side_flux[SIDE_A_HIGH];
        plane_solution_free(&s);
    }
    print("half a rod, flux", &flux, 4);
    assert_close(order_between(&flux, 3), 2.0, 0.0, 0.1);
    assert_at_most(last_error(&flux, 4), 1e-6);
    geometry_free(&g);
}

/* Layers along grid lines: exact to round-off, in both directions. */
static void test_layers_between_plates_are_exact(void **state)
{
    (void)state;
    const double k = 3.7, gap = 20e-3, layer = 7.3e-3;
    struct geometry g;
    struct plane_solution s;
    scene_begin(&g, 1.0, false);
    struct plane *p = scene_plane(&g, PLANE_ELECTRIC_ACROSS, 0.0, gap, 0.0, gap);
    scene_wall(p, SIDE_A_HIGH, 1.0, 1.0);
    p->sides[SIDE_B_LOW].kind = p->sides[SIDE_B_HIGH].kind = SIDE_MIRROR;
    insulate(scene_box(p, "layer", 0.0, 0.0, layer, 0.0, gap, 0.0), k);
    assert_int_equal(plane_solve(&g, PLANE_ELECTRIC_ACROSS,
                                 &(struct grid_request){.fineness = 1.0}, &s, NULL),
                     STATUS_OK);
    assert_close(s.side_flux[SIDE_A_HIGH], gap / (layer / k + gap - layer), 1e-12, 0.0);
    plane_solution_free(&s);
    geometry_free(&g);
}

static void test_layers_beside_each_other_are_exact(void **state)
{
    (void)state;
    const double k = 3.7, gap = 20e-3, layer = 7.3e-3;
    struct geometry g;
    struct plane_solution s;
    scene_begin(&g, 1.0, false);
    struct plane *p = scene_plane(&g, PLANE_ELECTRIC_ACROSS, 0.0, gap, 0.0, gap);
    scene_wall(p, SIDE_A_HIGH, 1.0, 1.0);
    p->sides[SIDE_B_LOW].kind = p->sides[SIDE_B_HIGH].kind = SIDE_MIRROR;
    insulate(scene_box(p, "layer", 0.0, 0.0, gap, 0.0, layer, 0.0), k);
    assert_int_equal(plane_solve(&g, PLANE_ELECTRIC_ACROSS,
                                 &(struct grid_request){.fineness = 1.0}, &s, NULL),
                     STATUS_OK);
    assert_close(s.side_flux[SIDE_A_HIGH], (layer * k + gap - layer) / gap, 1e-12, 0.0);
    plane_solution_free(&s);
    geometry_free(&g);
}

static void layered_line(struct geometry *g, double a, double c, double b, double k)
{
    scene_begin(g, 1.0, false);
    struct plane *p =
        scene_plane(g, PLANE_ELECTRIC_ACROSS, -18e-3, 18e-3, -18e-3, 18e-3);
    struct part *outer = scene_box(p, "outer", 0.0, -18e-3, 18e-3, -18e-3, 18e-3, 0.0);
    scene_cut_disc(outer, 0.0, 0.0, b);
    scene_disc(p, "inner", 1.0, 0.0, 0.0, a);
    insulate(scene_disc(p, "layer", 0.0, 0.0, 0.0, c), k);
}

/* Coaxial line with a layer of permittivity k between the inner conductor and r = c:
 * C/eps0 = 2 pi/(ln(c/a)/k + ln(b/c)) (any textbook). */
static void test_layered_coaxial_line_is_second_order(void **state)
{
    (void)state;
    const double a = 4e-3, c = 9e-3, b = 17e-3, k = 2.8;
    struct table t = {.exact = 2.0 * PI / (log(c / a) / k + log(b / c))};
    for (int l = 0; l < LEVELS; l++) {
        struct geometry g;
        struct plane_solution s;
        layered_line(&g, a, c, b, k);
        assert_int_equal(
            plane_solve(&g, PLANE_ELECTRIC_ACROSS,
                        &(struct grid_request){.fineness = 1.0, .level = l}, &s, NULL),
            STATUS_OK);
        t.value[l] = s.part_flux[1];
        plane_solution_free(&s);
        geometry_free(&g);
    }
    print("layered coaxial line", &t, LEVELS);
    assert_close(order_between(&t, 3), 2.0, 0.0, 0.1);
    assert_at_most(last_error(&t, 4), 1e-6);
}

/* The same line: fields on both sides of the interface, and the normal flux across it. The
 * places are not those of grid nodes; some lie within a cell of the interface. */
static void test_fields_beside_a_round_interface_are_second_order(void **state)
{
    (void)state;
    const double a = 4e-3, c = 9e-3, b = 17e-3, k = 2.8;
    const double flux = 1.0 / (log(c / a) / k + log(b / c));
    double rms[LEVELS];
    for (int l = 0; l < LEVELS; l++) {
        struct geometry g;
        struct plane_solution s;
        layered_line(&g, a, c, b, k);
        assert_int_equal(
            plane_solve(&g, PLANE_ELECTRIC_ACROSS,
                        &(struct grid_request){.fineness = 1.0, .level = l}, &s, NULL),
            STATUS_OK);
        double sum = 0.0;
        for (int n = 0; n < 97; n++)
            for (int side = 0; side < 2; side++) {
                double field[2];
                const double t = 2.0 * PI * n / 97.0, r = c + (side ? 3e-6 : -3e-6);
                const struct vec2 at = {r * cos(t), r * sin(t)};
                assert_int_equal(plane_field(&s, at, field, NULL), STATUS_OK);
                const double want = flux / r / (side ? 1.0 : k);
                const double off = field[0] * cos(t) + field[1] * sin(t) - want;
                sum += off * off / (want * want);
            }
        rms[l] = sqrt(sum / (2.0 * 97.0));
        printf("fields beside the interface, grid %d: rms error %.1e\n", l, rms[l]);
        plane_solution_free(&s);
        geometry_free(&g);
    }
    assert_close(log2(rms[1] / rms[3]) / 2.0, 2.0, 0.0, 0.2);
    assert_at_most(rms[3], 5e-5);
}

/* Sphere with a layer of permittivity k in a hollow sphere, turned:
 * C/(4 pi eps0) = 1/((1/a - 1/c)/k + 1/c - 1/b) (any textbook); fluxes are per radian. */
static void test_layered_sphere_is_second_order(void **state)
{
    (void)state;
    const double a = 4e-3, c = 9e-3, b = 17e-3, k = 2.8;
    struct table t = {.exact = 2.0 / ((1.0 / a - 1.0 / c) / k + 1.0 / c - 1.0 / b)};
    for (int l = 0; l < LEVELS; l++) {
        struct geometry g;
        struct plane_solution s;
        scene_begin(&g, 1.0, false);
        struct plane *p =
            scene_plane(&g, PLANE_ELECTRIC_TURNED, -18e-3, 18e-3, 0.0, 18e-3);
        p->sides[SIDE_B_LOW].kind = SIDE_MIRROR;
        struct part *outer =
            scene_box(p, "outer", 0.0, -18e-3, 18e-3, -18e-3, 18e-3, 0.0);
        scene_cut_disc(outer, 0.0, 0.0, b);
        scene_disc(p, "inner", 1.0, 0.0, 0.0, a);
        insulate(scene_disc(p, "layer", 0.0, 0.0, 0.0, c), k);
        assert_int_equal(
            plane_solve(&g, PLANE_ELECTRIC_TURNED,
                        &(struct grid_request){.fineness = 1.0, .level = l}, &s, NULL),
            STATUS_OK);
        t.value[l] = s.part_flux[1];
        plane_solution_free(&s);
        geometry_free(&g);
    }
    print("layered sphere", &t, LEVELS);
    assert_close(order_between(&t, 3), 2.0, 0.0, 0.1);
    assert_at_most(last_error(&t, 4), 1e-6);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_thin_rods_tend_to_a_rod_alone),
        cmocka_unit_test(test_dielectric_rod_is_second_order),
        cmocka_unit_test(test_dielectric_shell_is_second_order),
        cmocka_unit_test(test_layers_between_plates_are_exact),
        cmocka_unit_test(test_layers_beside_each_other_are_exact),
        cmocka_unit_test(test_half_a_rod_at_a_mirror_is_second_order),
        cmocka_unit_test(test_layered_coaxial_line_is_second_order),
        cmocka_unit_test(test_fields_beside_a_round_interface_are_second_order),
        cmocka_unit_test(test_layered_sphere_is_second_order),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
