/* SPDX-License-Identifier: GPL-3.0-or-later */

/* What equations with cut legs leave over: nothing of potentials that unequal arms take
 * exactly, something of round ones, and without it the potential round a core is better. */

#include "tests/support/assert_close.h"

#include <math.h>

#include "shared/mem.h"
#include "solver/cut_defect.h"
#include "solver/plane_solution.h"
#include "tests/support/scene.h"

#define CORE  3.17e-3
#define SHELL 11.3e-3
#define KIND  PLANE_ELECTRIC_ACROSS

static void build(const struct geometry *g, struct grid *grid)
{
    assert_int_equal(grid_build(&g->planes[KIND],
                                &(struct grid_request){.fineness = 2.0}, grid, NULL),
                     STATUS_OK);
}

/* A wedge whose slanted face is the line a + 0.37 b = 0. */
static void wedge(struct geometry *g, struct grid *grid)
{
    static const struct vec2 points[3] = {
        {-3.7e-3, 10e-3}, {-8e-3, 8e-3}, {3.7e-3, -10e-3}};
    scene_begin(g, 1.0, false);
    struct plane *plane = scene_plane(g, KIND, -13e-3, 17e-3, -14e-3, 14e-3);
    scene_polygon(plane, "wedge", 0.0, points, 3);
    build(g, grid);
}

static void coaxial(struct geometry *g, struct grid *grid)
{
    scene_begin(g, 1.0, false);
    struct plane *plane = scene_plane(g, KIND, -13e-3, 13e-3, -13e-3, 13e-3);
    scene_cut_disc(scene_box(plane, "shell", 0.0, -13e-3, 13e-3, -13e-3, 13e-3, 0.0),
                   0.0, 0.0, SHELL);
    scene_disc(plane, "core", 1.0, 0.0, 0.0, CORE);
    build(g, grid);
}

static double *nodes(const struct grid *grid, double (*of)(double a, double b))
{
    double *phi = MEM_NEW((size_t)(grid->na * grid->nb), double);
    for (int n = 0; n < grid->na * grid->nb; n++)
        phi[n] = of(grid->a[n % grid->na], grid->b[n / grid->na]);
    return phi;
}

static double slope(double a, double b)
{
    return 2385.0 * (a + 0.37 * b);
}

static double round_potential(double a, double b)
{
    const double r = fmin(fmax(hypot(a, b), CORE), SHELL);
    return log(r / SHELL) / log(CORE / SHELL);
}

static void test_linear_potential_leaves_nothing_at_a_slanted_face(void **state)
{
    (void)state;
    struct geometry g;
    struct grid grid;
    wedge(&g, &grid);
    double *phi = nodes(&grid, slope), *defect = nodes(&grid, slope);
    int free_cuts = 0;
    const double value = 0.0;
    assert_int_equal(cut_defect(&grid, phi, &value, defect), STATUS_OK);
    for (size_t k = 0; k < grid.cut_count; k++) {
        /* Only the slanted face at potential 0 fits this potential. */
        const int n = grid.cuts[k].node;
        if (grid.a[n % grid.na] + 0.37 * grid.b[n / grid.na] < 0.0 ||
            fabs(grid.b[n / grid.na]) > 6e-3)
            continue;
        assert_close(defect[n], 0.0, 0.0, 1e-11 * 2385.0 * 20e-3);
        free_cuts++;
    }
    assert_true(free_cuts > 5);
    mem_free(phi);
    mem_free(defect);
    grid_free(&grid);
    geometry_free(&g);
}

static void test_only_nodes_with_cut_legs_have_a_defect(void **state)
{
    (void)state;
    struct geometry g;
    struct grid grid;
    coaxial(&g, &grid);
    double *phi = nodes(&grid, round_potential), *defect = nodes(&grid, slope);
    const double values[2] = {0.0, 1.0};
    int with = 0;
    assert_int_equal(cut_defect(&grid, phi, values, defect), STATUS_OK);
    for (int n = 0; n < grid.na * grid.nb; n++) {
        bool cut = false;
        for (int leg = 0; leg < LEG_COUNT; leg++)
            cut = cut || grid_cut(&grid, n, (enum leg)leg) != NULL;
        assert_true(cut || defect[n] == 0.0);
        with += cut && fabs(defect[n]) > 1e-9;
    }
    assert_true(with > 50);
    mem_free(phi);
    mem_free(defect);
    grid_free(&grid);
    geometry_free(&g);
}

static void test_defect_is_linear(void **state)
{
    (void)state;
    struct geometry g;
    struct grid grid;
    coaxial(&g, &grid);
    const double values[2] = {0.0, 1.0}, scaled[2] = {0.0, -3.7};
    double *phi = nodes(&grid, round_potential);
    double *one = nodes(&grid, slope), *other = nodes(&grid, slope);
    assert_int_equal(cut_defect(&grid, phi, values, one), STATUS_OK);
    for (int n = 0; n < grid.na * grid.nb; n++)
        phi[n] *= -3.7;
    assert_int_equal(cut_defect(&grid, phi, scaled, other), STATUS_OK);
    for (int n = 0; n < grid.na * grid.nb; n++)
        assert_close(other[n], -3.7 * one[n], 1e-9, 1e-13);
    mem_free(phi);
    mem_free(one);
    mem_free(other);
    grid_free(&grid);
    geometry_free(&g);
}

static void test_every_failed_allocation_is_reported(void **state)
{
    (void)state;
    struct geometry g;
    struct grid grid;
    coaxial(&g, &grid);
    const double values[2] = {0.0, 1.0};
    double *phi = nodes(&grid, round_potential), *defect = nodes(&grid, slope);
    enum status status = STATUS_MEMORY;
    int failures = 0;
    for (long k = 1; status != STATUS_OK; k++) {
        mem_fail_at(k);
        status = cut_defect(&grid, phi, values, defect);
        mem_fail_at(0);
        assert_true(status == STATUS_OK || status == STATUS_MEMORY);
        failures += status == STATUS_MEMORY;
    }
    assert_int_equal(failures, 2);
    mem_free(phi);
    mem_free(defect);
    grid_free(&grid);
    geometry_free(&g);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_linear_potential_leaves_nothing_at_a_slanted_face),
        cmocka_unit_test(test_only_nodes_with_cut_legs_have_a_defect),
        cmocka_unit_test(test_defect_is_linear),
        cmocka_unit_test(test_every_failed_allocation_is_reported),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
