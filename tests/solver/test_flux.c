/* SPDX-License-Identifier: GPL-3.0-or-later */

#include "tests/support/assert_close.h"

#include "shared/constants.h"
#include "shared/mem.h"
#include "solver/flux.h"
#include "solver/plane_solution.h"
#include "tests/support/scene.h"

#define KIND PLANE_ELECTRIC_ACROSS

/* A uniform field (constant gradient) through a region with a box in it: closed boxes
 * carry no net flux and the sides carry gradient times their length. */
static void test_uniform_gradient_has_flux_through_the_sides_only(void **state)
{
    (void)state;
    const double slope_a = 2.385, slope_b = -1.3;
    double part[1], side[SIDE_COUNT], imbalance;
    struct geometry g;
    struct grid grid;
    scene_begin(&g, 1.0, false);
    struct plane *p = scene_plane(&g, KIND, -7.0, 31.0, 3.0, 29.0);
    scene_box(p, "box", 1.0, 4.0, 9.0, 11.0, 13.0, 0.0);
    assert_int_equal(grid_build(p,
                                &(struct grid_request){
                                    .fineness = 1.0, .level = 1, .memory_budget = 1e9},
                                &grid, NULL),
                     STATUS_OK);
    double *phi = MEM_NEW((size_t)(grid.na * grid.nb), double);
    for (int n = 0; n < grid.na * grid.nb; n++)
        phi[n] = slope_a * grid.a[n % grid.na] + slope_b * grid.b[n / grid.na];
    assert_int_equal(flux_measure(&grid, phi, part, side, &imbalance), STATUS_OK);
    assert_close(part[0], 0.0, 0.0, 1e-13 * slope_a * 38.0);
    assert_at_most(imbalance, 1e-14);
    /* Corner nodes belong to the sides of a; half a cell is missing at each end. */
    const double a0 = grid.a[1] - grid.a[0], b0 = grid.b[1] - grid.b[0];
    const double a1 = grid.a[grid.na - 1] - grid.a[grid.na - 2];
    const double b1 = grid.b[grid.nb - 1] - grid.b[grid.nb - 2];
    assert_close(side[SIDE_A_LOW] + side[SIDE_A_HIGH], 0.0, 0.0, 1.3 * (a0 + a1));
    assert_close(side[SIDE_A_LOW], -slope_a * 26.0, 0.0, 2.4 * (b0 + b1 + a0 + a1));
    assert_close(side[SIDE_B_LOW], -slope_b * 38.0, 0.0, 2.4 * (b0 + b1 + a0 + a1));
    mem_free(phi);
    grid_free(&grid);
    geometry_free(&g);
}

/* Flux between coaxial cylinders: 2 pi V/ln(b/a) (closed form); the same number from
 * either conductor. */
static void test_coaxial_flux_matches_the_closed_form(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    scene_begin(&g, 2.385, false);
    struct plane *p = scene_plane(&g, KIND, -13e-3, 13e-3, -13e-3, 13e-3);
    scene_cut_disc(scene_box(p, "shell", 0.0, -13e-3, 13e-3, -13e-3, 13e-3, 0.0), 0.0,
                   0.0, 11.3e-3);
    scene_disc(p, "core", 1.0, 0.0, 0.0, 3.17e-3);
    assert_int_equal(plane_solve(&g, KIND,
                                 &(struct grid_request){.fineness = 2.0, .level = 1},
                                 &s, NULL),
                     STATUS_OK);
    assert_close(s.part_flux[1], 2.0 * PI * 2.385 / log(11.3 / 3.17), 2e-3, 0.0);
    assert_close(s.part_flux[0], -s.part_flux[1], 1e-11, 0.0);
    plane_solution_free(&s);
    geometry_free(&g);
}

static void test_mirror_sides_have_no_flux(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    scene_begin(&g, 1.0, false);
    struct plane *p = scene_plane(&g, KIND, 0.0, 31e-3, 0.0, 29e-3);
    p->sides[SIDE_A_LOW].kind = SIDE_MIRROR;
    p->sides[SIDE_B_HIGH].kind = SIDE_MIRROR;
    scene_disc(p, "rod", 1.0, 0.0, 15.1e-3, 4.7e-3);
    assert_int_equal(plane_solve(&g, KIND,
                                 &(struct grid_request){.fineness = 1.0, .level = 1},
                                 &s, NULL),
                     STATUS_OK);
    assert_true(s.side_flux[SIDE_A_LOW] == 0.0);
    assert_true(s.side_flux[SIDE_B_HIGH] == 0.0);
    assert_true(s.part_flux[0] > 1.0 && s.side_flux[SIDE_A_HIGH] < -0.1);
    assert_at_most(s.quality.flux_imbalance, 1e-12);
    plane_solution_free(&s);
    geometry_free(&g);
}

/* In a saddle phi = a b no side carries net flux: the balance must be judged against the
 * flux that runs in and out of every side. */
static void test_saddle_without_net_flux_is_balanced(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    scene_begin(&g, 385.7, false);
    struct plane *p = scene_plane(&g, KIND, -31e-3, 31e-3, -17e-3, 17e-3);
    scene_wall(p, SIDE_A_LOW, 1.0, -1.0);
    scene_wall(p, SIDE_A_HIGH, -1.0, 1.0);
    scene_wall(p, SIDE_B_LOW, 1.0, -1.0);
    scene_wall(p, SIDE_B_HIGH, -1.0, 1.0);
    assert_int_equal(plane_solve(&g, KIND,
                                 &(struct grid_request){.fineness = 1.0, .level = 1},
                                 &s, NULL),
                     STATUS_OK);
    for (int side = 0; side < SIDE_COUNT; side++)
        assert_close(s.side_flux[side], 0.0, 0.0, 1e-10 * 385.7);
    assert_at_most(s.quality.flux_imbalance, 1e-12);
    plane_solution_free(&s);
    geometry_free(&g);
}

static void test_no_field_has_no_flux_and_no_imbalance(void **state)
{
    (void)state;
    double part[1], side[SIDE_COUNT], imbalance = 1.0;
    struct geometry g;
    struct grid grid;
    scene_begin(&g, 1.0, false);
    struct plane *p = scene_plane(&g, KIND, -7e-3, 31e-3, 3e-3, 29e-3);
    scene_disc(p, "rod", 1.0, 10e-3, 15.1e-3, 4.7e-3);
    assert_int_equal(grid_build(p,
                                &(struct grid_request){
                                    .fineness = 1.0, .level = 0, .memory_budget = 1e9},
                                &grid, NULL),
                     STATUS_OK);
    double *phi = MEM_NEW((size_t)(grid.na * grid.nb), double);
    assert_int_equal(flux_measure(&grid, phi, part, side, &imbalance), STATUS_OK);
    assert_true(part[0] == 0.0 && imbalance == 0.0);
    mem_fail_at(1);
    assert_int_equal(flux_measure(&grid, phi, part, side, &imbalance), STATUS_MEMORY);
    mem_fail_at(0);
    mem_free(phi);
    grid_free(&grid);
    geometry_free(&g);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_uniform_gradient_has_flux_through_the_sides_only),
        cmocka_unit_test(test_coaxial_flux_matches_the_closed_form),
        cmocka_unit_test(test_mirror_sides_have_no_flux),
        cmocka_unit_test(test_saddle_without_net_flux_is_balanced),
        cmocka_unit_test(test_no_field_has_no_flux_and_no_imbalance),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
