/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Expansions of fields that are known exactly: walls that run linearly make uniform
 * fields and, as phi = x y or phi = x^2 - y^2 cannot run linearly, the saddle x y. */

#include "tests/support/assert_close.h"

#include "shared/constants.h"
#include "solver/expansion.h"
#include "tests/support/scene.h"

#define HALF_X 21e-3
#define HALF_Y 17e-3
#define RADIUS 5e-3

/* Potential c0 x/HALF_X + c1 y/HALF_Y + c2 (x/HALF_X)(y/HALF_Y) times the supply. */
static void solve(enum plane_kind kind, const double c[3], struct geometry *g,
                  struct plane_solution *s)
{
    scene_begin(g, 640.0, plane_kind_is_magnetic(kind));
    struct plane *p = scene_plane(g, kind, -HALF_X, HALF_X, -HALF_Y, HALF_Y);
    const double ll = -c[0] - c[1] + c[2], hl = c[0] - c[1] - c[2];
    const double lh = -c[0] + c[1] - c[2], hh = c[0] + c[1] + c[2];
    scene_wall(p, SIDE_A_LOW, ll, lh);
    scene_wall(p, SIDE_A_HIGH, hl, hh);
    scene_wall(p, SIDE_B_LOW, ll, hl);
    scene_wall(p, SIDE_B_HIGH, lh, hh);
    assert_int_equal(plane_solve(g, kind,
                                 &(struct grid_request){.fineness = 1.0, .level = 0}, s,
                                 NULL),
                     STATUS_OK);
}

static void expand(enum plane_kind kind, const double c[3], struct expansion *e)
{
    struct geometry g;
    struct plane_solution s;
    solve(kind, c, &g, &s);
    assert_int_equal(expansion_of_plane(&s, RADIUS, e), STATUS_OK);
    plane_solution_free(&s);
    geometry_free(&g);
}

static void assert_terms(const struct expansion *e, const double real[EXPANSION_TERMS],
                         const double imag[EXPANSION_TERMS])
{
    for (int n = 0; n < EXPANSION_TERMS; n++) {
        assert_close(e->real[n], real[n], 0.0, 1e-9);
        assert_close(e->imag[n], imag[n], 0.0, 1e-9);
    }
}

static void test_uniform_electric_field_has_one_term(void **state)
{
    (void)state;
    const double c[3] = {0.5, 0.0, 0.0};
    const double real[EXPANSION_TERMS] = {1.0}, imag[EXPANSION_TERMS] = {0.0};
    struct expansion e;
    expand(PLANE_ELECTRIC_ACROSS, c, &e);
    assert_close(e.centre, -0.5 * 640.0 / HALF_X, 1e-10, 0.0);
    assert_true(e.radius == RADIUS);
    assert_terms(&e, real, imag);
}

static void test_uniform_magnetic_field_has_one_term(void **state)
{
    (void)state;
    const double c[3] = {0.0, 0.5, 0.0};
    const double real[EXPANSION_TERMS] = {1.0}, imag[EXPANSION_TERMS] = {0.0};
    struct expansion e;
    expand(PLANE_MAGNETIC_ACROSS, c, &e);
    assert_close(e.centre, -VACUUM_PERMEABILITY * 0.5 * 640.0 / HALF_Y, 1e-10, 0.0);
    assert_terms(&e, real, imag);
}

/* E = -(c0/X + c2 y/(X Y), c2 x/(X Y)): E_x - i E_y = -c0/X + i c2 w/(X Y). */
static void test_skew_quadrupole_of_the_electric_field(void **state)
{
    (void)state;
    const double c[3] = {0.5, 0.0, 0.031};
    const double real[EXPANSION_TERMS] = {1.0};
    const double imag[EXPANSION_TERMS] = {0.0, -0.031 / 0.5 / HALF_Y * RADIUS};
    struct expansion e;
    expand(PLANE_ELECTRIC_ACROSS, c, &e);
    assert_terms(&e, real, imag);
}

/* B = -mu0 (c2 y/(X Y), c1/Y + c2 x/(X Y)): B_y + i B_x = -mu0 (c1/Y + c2 w/(X Y)). */
static void test_quadrupole_of_the_magnetic_field(void **state)
{
    (void)state;
    const double c[3] = {0.0, 0.5, 0.031};
    const double real[EXPANSION_TERMS] = {1.0, 0.031 / 0.5 / HALF_X * RADIUS};
    const double imag[EXPANSION_TERMS] = {0.0};
    struct expansion e;
    expand(PLANE_MAGNETIC_ACROSS, c, &e);
    assert_terms(&e, real, imag);
}

/* E_y beside E_x turns the uniform field: imaginary part of the first term. */
static void test_tilted_field_shows_in_the_imaginary_part(void **state)
{
    (void)state;
    const double c[3] = {0.5, 0.07, 0.0};
    struct expansion e;
    expand(PLANE_ELECTRIC_ACROSS, c, &e);
    assert_close(e.imag[0], -(0.07 / HALF_Y) / (0.5 / HALF_X), 1e-10, 0.0);
}

static void test_circle_must_lie_in_free_space(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    struct expansion e;
    scene_begin(&g, 640.0, false);
    struct plane *p =
        scene_plane(&g, PLANE_ELECTRIC_ACROSS, -HALF_X, HALF_X, -HALF_Y, HALF_Y);
    scene_box(p, "plate", 1.0, 6e-3, 8e-3, -5e-3, 5e-3, 0.0);
    assert_int_equal(plane_solve(&g, PLANE_ELECTRIC_ACROSS,
                                 &(struct grid_request){.fineness = 1.0, .level = 0},
                                 &s, NULL),
                     STATUS_OK);
    assert_int_equal(expansion_of_plane(&s, 5e-3, &e), STATUS_OK);
    assert_int_equal(expansion_of_plane(&s, 7e-3, &e), STATUS_SIZE);
    assert_int_equal(expansion_of_plane(&s, 18e-3, &e), STATUS_SIZE);
    plane_solution_free(&s);
    geometry_free(&g);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_uniform_electric_field_has_one_term),
        cmocka_unit_test(test_uniform_magnetic_field_has_one_term),
        cmocka_unit_test(test_skew_quadrupole_of_the_electric_field),
        cmocka_unit_test(test_quadrupole_of_the_magnetic_field),
        cmocka_unit_test(test_tilted_field_shows_in_the_imaginary_part),
        cmocka_unit_test(test_circle_must_lie_in_free_space),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
