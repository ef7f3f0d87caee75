/* SPDX-License-Identifier: GPL-3.0-or-later */

/* A disc in a box, on three coarse grids: every lattice value and its uncertainty must be
 * what extrapolating the levels at that point gives. */

#include "tests/support/assert_close.h"

#include <string.h>

#include "shared/mem.h"
#include "solver/extrapolate.h"
#include "solver/lattice_field.h"
#include "tests/support/scene.h"

enum { LEVELS = 3, NX = 5, NY = 2, NZ = 4 };

struct bench {
    struct geometry geometry;
    struct plane_solution solutions[LEVELS];
    struct view views[LEVELS];
};

static struct bench bench;

static int set_up(void **state)
{
    (void)state;
    struct geometry *g = &bench.geometry;
    scene_begin(g, 1.0, false);
    struct plane *p =
        scene_plane(g, PLANE_ELECTRIC_ALONG, -31e-3, 31e-3, -23e-3, 23e-3);
    (void)scene_disc(p, "rod", 217.0, 2e-3, 0.0, 6e-3);
    g->lattice.present = true;
    g->lattice.axes[AXIS_X] = (struct lattice_axis){-10e-3, 10e-3, 5e-3, NX};
    g->lattice.axes[AXIS_Y] = (struct lattice_axis){1e-3, 4e-3, 3e-3, NY};
    g->lattice.axes[AXIS_Z] = (struct lattice_axis){-13e-3, 17e-3, 10e-3, NZ};
    for (int l = 0; l < LEVELS; l++) {
        const struct grid_request request = {.fineness = 0.5, .level = l};
        if (plane_solve(g, PLANE_ELECTRIC_ALONG, &request, &bench.solutions[l], NULL))
            return -1;
        bench.views[l] =
            (struct view){g, {[PLANE_ELECTRIC_ALONG] = &bench.solutions[l]}};
    }
    return 0;
}

static int tear_down(void **state)
{
    (void)state;
    for (int l = 0; l < LEVELS; l++)
        plane_solution_free(&bench.solutions[l]);
    geometry_free(&bench.geometry);
    return 0;
}

/* Component c (0 along z, 1 along x) of the field at lattice point (x, z) on a level. */
static double field_on(int level, int x, int z, int c, int *part)
{
    double field[2];
    const struct vec2 at = {-13e-3 + 10e-3 * z, -10e-3 + 5e-3 * x};
    assert_int_equal(plane_field(&bench.solutions[level], at, field, part), STATUS_OK);
    return field[c];
}

static double scale_of_coarsest(void)
{
    double scale = 0.0;
    int part;
    for (int z = 0; z < NZ; z++)
        for (int x = 0; x < NX; x++)
            for (int c = 0; c < 2; c++)
                scale = fmax(scale, fabs(field_on(0, x, z, c, &part)));
    return scale;
}

static void check_point(const struct lattice_field *lattice, double scale, int x, int z)
{
    for (int c = 0; c < 2; c++) {
        double values[LEVELS];
        int part;
        for (int l = 0; l < LEVELS; l++)
            values[l] = field_on(l, x, z, c, &part);
        const struct estimate want = extrapolate(values, LEVELS, scale);
        const size_t sheet =
            lattice_sheet_index(lattice, PLANE_ELECTRIC_ALONG, (int[3]){x, 0, z});
        for (int y = 0; y < NY; y++) {
            const size_t n = ((size_t)z * NY + (size_t)y) * NX + (size_t)x;
            assert_close(lattice->e[c == 0 ? AXIS_Z : AXIS_X][n], want.value, 1e-9,
                         1e-9);
            assert_int_equal(lattice->solid[n], part >= 0);
        }
        assert_close(lattice->e_err[c][sheet], part >= 0 ? 0.0 : want.uncertainty, 1e-3,
                     1e-9);
    }
}

static void test_points_carry_the_uncertainty_of_their_grids(void **state)
{
    (void)state;
    struct lattice_field lattice;
    const double scale = scale_of_coarsest();
    assert_int_equal(lattice_fill(bench.views, LEVELS, &lattice), STATUS_OK);
    for (int z = 0; z < NZ; z++)
        for (int x = 0; x < NX; x++)
            check_point(&lattice, scale, x, z);
    double most = 0.0;
    for (int k = 0; k < NX * NZ; k++)
        most = fmax(most, lattice.e_err[1][k]);
    assert_true(most > 1e-6 * scale && most < 0.05 * scale);
    assert_true(lattice.b_err[0] == NULL && !lattice.has_magnetic);
    lattice_free(&lattice);
}

static void test_doubling_adds_its_factor_times_the_change(void **state)
{
    (void)state;
    struct lattice_field lattice, kept;
    struct plane_result planes[PLANE_KINDS] = {{.present = false}};
    const struct view pair[2] = {bench.views[0], bench.views[1]};
    planes[PLANE_ELECTRIC_ALONG].open = (struct open_test){.done = true, .factor = 2.7};
    assert_int_equal(lattice_fill(bench.views, LEVELS, &kept), STATUS_OK);
    assert_int_equal(lattice_fill(bench.views, LEVELS, &lattice), STATUS_OK);
    assert_int_equal(lattice_widen(pair, planes, &lattice), STATUS_OK);
    for (int z = 0; z < NZ; z++)
        for (int x = 0; x < NX; x++) {
            int part;
            const double change =
                field_on(1, x, z, 1, &part) - field_on(0, x, z, 1, &part);
            const size_t n =
                lattice_sheet_index(&lattice, PLANE_ELECTRIC_ALONG, (int[3]){x, 0, z});
            assert_close(lattice.e_err[1][n] - kept.e_err[1][n], 2.7 * fabs(change),
                         1e-6, 1e-9);
        }
    lattice_free(&lattice);
    lattice_free(&kept);
}

static void test_plane_without_a_doubling_test_is_left_alone(void **state)
{
    (void)state;
    struct lattice_field lattice, kept;
    const struct plane_result planes[PLANE_KINDS] = {{.present = false}};
    const struct view pair[2] = {bench.views[0], bench.views[1]};
    assert_int_equal(lattice_fill(bench.views, LEVELS, &kept), STATUS_OK);
    assert_int_equal(lattice_fill(bench.views, LEVELS, &lattice), STATUS_OK);
    assert_int_equal(lattice_widen(pair, planes, &lattice), STATUS_OK);
    for (int c = 0; c < 2; c++)
        assert_memory_equal(lattice.e_err[c], kept.e_err[c],
                            (size_t)NX * NZ * sizeof *kept.e_err[c]);
    lattice_free(&lattice);
    lattice_free(&kept);
}

static void test_every_failed_allocation_is_reported(void **state)
{
    (void)state;
    struct plane_result planes[PLANE_KINDS] = {{.present = false}};
    const struct view pair[2] = {bench.views[0], bench.views[1]};
    enum status status = STATUS_MEMORY;
    long k = 0;
    planes[PLANE_ELECTRIC_ALONG].open = (struct open_test){.done = true, .factor = 2.0};
    while (status == STATUS_MEMORY) {
        struct lattice_field lattice;
        mem_fail_at(++k);
        status = lattice_fill(bench.views, LEVELS, &lattice);
        if (status == STATUS_OK)
            status = lattice_widen(pair, planes, &lattice);
        mem_fail_at(0);
        lattice_free(&lattice);
    }
    assert_int_equal(status, STATUS_OK);
    assert_true(k > 20);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_points_carry_the_uncertainty_of_their_grids),
        cmocka_unit_test(test_doubling_adds_its_factor_times_the_change),
        cmocka_unit_test(test_plane_without_a_doubling_test_is_left_alone),
        cmocka_unit_test(test_every_failed_allocation_is_reported),
    };
    return cmocka_run_group_tests(tests, set_up, tear_down);
}
