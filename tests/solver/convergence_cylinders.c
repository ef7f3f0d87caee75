/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Round conductors through cut legs: they expose any staircase.
 *  - Coaxial cylinders: phi = V ln(r/b)/ln(a/b), charge 2 pi eps0 V/ln(b/a): closed form,
 *    e.g. Jackson, Classical Electrodynamics, ch. 1 (from memory).
 *  - Eccentric cylinders: C = 2 pi eps0/acosh((a^2 + b^2 - d^2)/(2 a b)); Smythe, Static
 *    and Dynamic Electricity, sec. 4.14 (from memory).
 *  - Wire pair: C = pi eps0/acosh(D/(2a)): closed form, in a wide box. */

#include "tests/support/assert_close.h"

#include "shared/constants.h"
#include "solver/extrapolate.h"
#include "solver/plane_solution.h"
#include "tests/support/lattice_of_rods.h"
#include "tests/support/scene.h"

#define INNER 3.17e-3
#define OUTER 11.3e-3
/* Fine enough that the coarsest grid is in the asymptotic range. */
#define FINENESS 3.0

static void coaxial(struct geometry *g, double shift)
{
    scene_begin(g, 1.0, false);
    struct plane *plane =
        scene_plane(g, PLANE_ELECTRIC_ACROSS, -13e-3, 13e-3, -13e-3, 13e-3);
    scene_cut_disc(scene_box(plane, "shell", 0.0, -13e-3, 13e-3, -13e-3, 13e-3, 0.0),
                   0.0, 0.0, OUTER);
    scene_disc(plane, "core", 1.0, shift, 0.37 * shift, INNER);
}

static void solve(const struct geometry *g, double fineness, int level,
                  struct plane_solution *solution)
{
    assert_int_equal(
        plane_solve(g, PLANE_ELECTRIC_ACROSS,
                    &(struct grid_request){.fineness = fineness, .level = level},
                    solution, NULL),
        STATUS_OK);
}

/* Largest error of the potential over the free nodes. */
static double potential_error(const struct plane_solution *s)
{
    double worst = 0.0;
    for (int n = 0; n < s->grid.na * s->grid.nb; n++) {
        if (s->grid.owner[n] != OWNER_FREE)
            continue;
        const double r = hypot(s->grid.a[n % s->grid.na], s->grid.b[n / s->grid.na]);
        const double error = s->phi[n] - log(r / OUTER) / log(INNER / OUTER);
        if (!(fabs(error) <= worst))
            worst = fabs(error);
    }
    return worst;
}

/* Root mean square error of the field on the core's surface, relative. */
static double surface_error(const struct plane_solution *s)
{
    enum { POINTS = 337 };
    const double exact = 1.0 / (INNER * log(OUTER / INNER));
    double squares = 0.0;
    for (int k = 0; k < POINTS; k++) {
        const double angle = 2.0 * PI * k / POINTS;
        struct field_value v;
        assert_int_equal(
            field_at_surface(s->field,
                             (struct vec2){INNER * cos(angle), INNER * sin(angle)}, &v),
            STATUS_OK);
        const double error = vec2_length(v.gradient) / exact - 1.0;
        squares += error * error;
    }
    return sqrt(squares / POINTS);
}

static void assert_order(const double *error, int count, double order, double within,
                         double finest)
{
    for (int k = 0; k < count; k++)
        print_message("  level %d error %.3e%s\n", k, error[k],
                      k > 0 ? "" : " (coarsest)");
    const double measured = log2(error[0] / error[count - 1]) / (double)(count - 1);
    print_message("  measured order %.3f\n", measured);
    assert_close(measured, order, 0.0, within);
    assert_at_most(error[count - 1], finest);
}

static void test_coaxial_potential_is_second_order(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    double potential[4];
    coaxial(&g, 0.0);
    for (int l = 0; l < 4; l++) {
        solve(&g, FINENESS, l, &s);
        potential[l] = potential_error(&s);
        plane_solution_free(&s);
    }
    assert_order(potential, 4, 2.0, 0.1, 1e-5);
    geometry_free(&g);
}

static void test_coaxial_surface_field_is_second_order(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    double field[4];
    coaxial(&g, 0.0);
    for (int l = 0; l < 4; l++) {
        solve(&g, FINENESS, l, &s);
        field[l] = surface_error(&s);
        plane_solution_free(&s);
    }
    /* Scattered nodes next to the arc carry an h^2 log h of their own. */
    assert_order(field, 4, 2.0, 0.25, 2e-5);
    geometry_free(&g);
}

static void test_coaxial_charge_is_second_order(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    double error[4];
    coaxial(&g, 0.0);
    for (int l = 0; l < 4; l++) {
        solve(&g, FINENESS, l, &s);
        error[l] = fabs(s.part_flux[1] / (2.0 * PI / log(OUTER / INNER)) - 1.0);
        assert_close(s.part_flux[0], -s.part_flux[1], 1e-10, 0.0);
        plane_solution_free(&s);
    }
    assert_order(error, 4, 2.0, 0.25, 1e-5);
    geometry_free(&g);
}

static void test_eccentric_charge_matches_closed_form(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    const double shift = 2.9e-3, d = shift * hypot(1.0, 0.37);
    const double exact =
        2.0 * PI /
        acosh((INNER * INNER + OUTER * OUTER - d * d) / (2.0 * INNER * OUTER));
    coaxial(&g, shift);
    solve(&g, 1.0, 3, &s);
    assert_close(s.part_flux[1], exact, 3e-5, 0.0);
    plane_solution_free(&s);
    geometry_free(&g);
}

/* One quarter of the pair: an antimirror between the wires, a mirror through both. The
 * box 200 spacings wide changes the charge by about (spacing/width)^2. */
static void test_wire_pair_charge_matches_closed_form(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    double flux[3];
    const double a = 1.3e-3, spacing = 7.1e-3, wide = 100.0 * spacing;
    scene_begin(&g, 2.0, false);
    struct plane *plane = scene_plane(&g, PLANE_ELECTRIC_ACROSS, 0.0, wide, 0.0, wide);
    plane->sides[SIDE_A_LOW].kind = SIDE_ANTIMIRROR;
    plane->sides[SIDE_B_LOW].kind = SIDE_MIRROR;
    scene_disc(plane, "right wire", 0.5, 0.5 * spacing, 0.0, a);
    for (int l = 0; l < 3; l++) {
        solve(&g, 1.0, l, &s);
        flux[l] = 2.0 * s.part_flux[0];
        plane_solution_free(&s);
    }
    const double got = extrapolate(flux, 3, 0.0).value;
    const double exact = 2.0 * PI / acosh(0.5 * spacing / a);
    print_message("  relative error %.2e\n", got / exact - 1.0);
    assert_close(got, exact, 5e-5, 0.0);
    geometry_free(&g);
}

/* A conducting rod in a mean field: one cell of a square lattice (lattice_of_rods.h; a
 * permittivity of 1e12 stands for a conductor to 1e-12). */
static void test_rod_in_a_mean_field_matches_the_lattice(void **state)
{
    (void)state;
    const double cell = 40e-3, half = 0.5 * cell;
    struct geometry g;
    struct plane_solution s;
    double flux[3];
    scene_begin(&g, 1.0, false);
    struct plane *p = scene_plane(&g, PLANE_ELECTRIC_ACROSS, -half, half, -half, half);
    scene_wall(p, SIDE_A_LOW, -half, -half);
    scene_wall(p, SIDE_A_HIGH, half, half);
    p->sides[SIDE_B_LOW].kind = p->sides[SIDE_B_HIGH].kind = SIDE_MIRROR;
    scene_disc(p, "rod", 0.0, 0.0, 0.0, 0.3 * cell);
    for (int l = 0; l < 3; l++) {
        solve(&g, FINENESS, l, &s);
        flux[l] = s.side_flux[SIDE_A_HIGH];
        plane_solution_free(&s);
    }
    const double exact =
        cell * lattice_of_rods((struct rod){0.3, 1e12, 0.0, 0.0}).effective;
    const struct estimate e = extrapolate(flux, 3, 0.0);
    print_message("  flux: relative error %.2e (%.0e)\n", e.value / exact - 1.0,
                  e.uncertainty / exact);
    assert_close(e.value, exact, 1e-6, 0.0);
    assert_close(e.value, exact, 0.0, e.uncertainty);
    geometry_free(&g);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_coaxial_potential_is_second_order),
        cmocka_unit_test(test_coaxial_surface_field_is_second_order),
        cmocka_unit_test(test_coaxial_charge_is_second_order),
        cmocka_unit_test(test_eccentric_charge_matches_closed_form),
        cmocka_unit_test(test_rod_in_a_mean_field_matches_the_lattice),
        cmocka_unit_test(test_wire_pair_charge_matches_closed_form),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
