/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "tests/support/assert_close.h"

#include "solver/blame.h"
#include "solver/plane_solution.h"
#include "solver/system.h"
#include "tests/support/scene.h"

/* A small chamber inside a ring and the space around it: the wide space is held less
 * firmly, as a smaller share of its legs ends on something fixed. */
static void test_the_space_held_least_is_named(void **state)
{
    (void)state;
    struct geometry g;
    struct grid grid;
    struct blame blame;
    scene_begin(&g, 1.0, false);
    struct plane *plane =
        scene_plane(&g, PLANE_ELECTRIC_ACROSS, -40e-3, 40e-3, -40e-3, 40e-3);
    scene_cut_disc(scene_disc(plane, "ring", 1.0, 3e-3, 2e-3, 9e-3), 3e-3, 2e-3, 7e-3);
    assert_int_equal(grid_build(plane,
                                &(struct grid_request){
                                    .fineness = 0.7, .level = 0, .memory_budget = 20e9},
                                &grid, NULL),
                     STATUS_OK);
    assert_int_equal(blame_space(&grid, &blame), STATUS_OK);
    assert_true(hypot(blame.at.a - 3e-3, blame.at.b - 2e-3) > 9e-3);
    assert_true(blame.hold > 0.0 && blame.hold < 0.5);
    assert_true(blame.nodes < grid.free_count);
    grid_free(&grid);
    geometry_free(&g);
}

/* With every fixed node freed and all sides mirrors the space floats. */
static void floating_grid(struct geometry *g, double fineness, struct grid *grid)
{
    scene_begin(g, 1.0, false);
    struct plane *plane =
        scene_plane(g, PLANE_ELECTRIC_ACROSS, -40e-3, 40e-3, -40e-3, 40e-3);
    scene_box(plane, "bar", 1.0, -11e-3, 5e-3, 2e-3, 9e-3, 0.0);
    assert_int_equal(grid_build(plane,
                                &(struct grid_request){.fineness = fineness,
                                                       .level = 0,
                                                       .memory_budget = 20e9},
                                grid, NULL),
                     STATUS_OK);
    for (int s = 0; s < SIDE_COUNT; s++)
        plane->sides[s].kind = SIDE_MIRROR;
    for (int n = 0; n < grid->na * grid->nb; n++)
        grid->owner[n] = OWNER_FREE;
    grid->free_count = grid->na * grid->nb;
}

static void test_a_floating_space_has_no_hold(void **state)
{
    (void)state;
    struct geometry g;
    struct grid grid;
    struct blame blame;
    floating_grid(&g, 0.7, &grid);
    assert_int_equal(blame_space(&grid, &blame), STATUS_OK);
    assert_true(blame.hold == 0.0);
    assert_int_equal(blame.nodes, grid.na * grid.nb);
    grid_free(&grid);
    geometry_free(&g);
}

/* UMFPACK calls a floating system solved; it must not be trusted at any size. */
static void test_a_floating_system_is_not_trusted(void **state)
{
    (void)state;
    static const double fineness[] = {0.2, 0.7, 2.0};
    for (size_t k = 0; k < 3; k++) {
        struct geometry g;
        struct grid grid;
        struct system *system;
        struct system_facts facts;
        floating_grid(&g, fineness[k], &grid);
        const enum status status = system_create(&grid, &system, &facts);
        const struct quality quality = {.rcond = facts.rcond};
        print_message("  %d unknowns: status %d, rcond %.1e\n", facts.unknowns, status,
                      facts.rcond);
        assert_true(status == STATUS_SINGULAR || !quality_is_trusted(&quality));
        system_destroy(&system);
        grid_free(&grid);
        geometry_free(&g);
    }
}

static void test_a_sound_solve_is_trusted_and_nan_is_not(void **state)
{
    (void)state;
    const double nan_value = (double)NAN;
    const struct quality sound = {.residual = 3e-16, .rcond = 7e-4};
    struct quality bad = sound;
    assert_true(quality_is_trusted(&sound));
    bad.residual = nan_value;
    assert_false(quality_is_trusted(&bad));
    bad = sound;
    bad.rcond = nan_value;
    assert_false(quality_is_trusted(&bad));
    bad = sound;
    bad.flux_imbalance = 1e-3;
    assert_false(quality_is_trusted(&bad));
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_the_space_held_least_is_named),
        cmocka_unit_test(test_a_floating_space_has_no_hold),
        cmocka_unit_test(test_a_floating_system_is_not_trusted),
        cmocka_unit_test(test_a_sound_solve_is_trusted_and_nan_is_not),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
