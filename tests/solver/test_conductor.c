/* SPDX-License-Identifier: GPL-3.0-or-later */

#include "tests/support/assert_close.h"

#include "shared/mem.h"
#include "solver/conductor.h"
#include "tests/support/scene.h"

#define KIND PLANE_ELECTRIC_ACROSS

static void find(const struct plane *plane, struct conductors *c)
{
    assert_int_equal(conductors_find(plane, c), STATUS_OK);
}

static void test_chain_of_touching_parts_is_one_conductor(void **state)
{
    (void)state;
    struct geometry g;
    struct conductors c;
    scene_begin(&g, 1.0, false);
    struct plane *p = scene_plane(&g, KIND, -40e-3, 40e-3, -20e-3, 20e-3);
    scene_box(p, "left", 0.5, -10e-3, -3e-3, -2e-3, 2e-3, 0.0);
    scene_box(p, "far", 0.5, -30e-3, -20e-3, -2e-3, 2e-3, 0.0);
    scene_box(p, "right", 0.5, 3e-3, 10e-3, -2e-3, 2e-3, 0.0);
    scene_box(p, "bridge", 0.5, -3e-3, 3e-3, -1e-3, 1e-3, 0.0);
    find(p, &c);
    assert_int_equal(c.count, 2);
    assert_int_equal(c.of_part[0], 0);
    assert_int_equal(c.of_part[1], 1);
    assert_int_equal(c.of_part[2], 0);
    assert_int_equal(c.of_part[3], 0);
    assert_int_equal(c.items[0].first, 0);
    assert_int_equal(c.items[0].parts, 3);
    assert_int_equal(c.items[1].first, 1);
    conductors_free(&c);
    geometry_free(&g);
}

static void test_other_potentials_floating_parts_and_insulators_stay_apart(void **state)
{
    (void)state;
    struct geometry g;
    struct conductors c;
    scene_begin(&g, 1.0, false);
    struct plane *p = scene_plane(&g, KIND, -40e-3, 40e-3, -20e-3, 20e-3);
    scene_box(p, "earthed", 0.0, -10e-3, 0.0, -2e-3, 2e-3, 0.0);
    scene_box(p, "glass", 0.0, 0.0, 3e-3, -2e-3, 2e-3, 0.0)->kind = PART_INSULATOR;
    scene_box(p, "driven", 1.0, 5e-3, 10e-3, -2e-3, 2e-3, 0.0);
    scene_box(p, "loose", 0.0, -12e-3, -10e-3, -2e-3, 2e-3, 0.0)->kind = PART_FLOATING;
    find(p, &c);
    assert_int_equal(c.count, 3);
    assert_int_equal(c.of_part[1], c.count);
    assert_int_equal(c.of_part[2], 1);
    assert_int_equal(c.of_part[3], 2);
    conductors_free(&c);
    geometry_free(&g);
}

static void test_conductor_is_held_through_any_of_its_parts(void **state)
{
    (void)state;
    struct geometry g;
    struct conductors c;
    scene_begin(&g, 1.0, false);
    struct plane *p = scene_plane(&g, KIND, -40e-3, 40e-3, -20e-3, 20e-3);
    p->sides[SIDE_A_LOW].kind = SIDE_MIRROR;
    p->sides[SIDE_B_LOW].kind = SIDE_ANTIMIRROR;
    scene_box(p, "arm", 0.0, -5e-3, 5e-3, 0.0, 10e-3, 0.0);
    scene_box(p, "foot", 0.0, -5e-3, 5e-3, 10e-3, 20e-3, 0.0);
    scene_box(p, "half", 1.0, -40e-3, -35e-3, 2e-3, 4e-3, 0.0);
    scene_box(p, "plinth", 0.0, 20e-3, 25e-3, -20e-3, -15e-3, 0.0);
    find(p, &c);
    assert_int_equal(c.count, 3);
    assert_true(c.items[0].held && !c.items[0].cut[0]);
    assert_true(!c.items[1].held && c.items[1].cut[0] && !c.items[1].cut[1]);
    assert_true(c.items[2].held);
    conductors_free(&c);
    geometry_free(&g);
}

static void test_axis_of_a_turned_plane_cuts_nothing(void **state)
{
    (void)state;
    struct geometry g;
    struct conductors c;
    scene_begin(&g, 1.0, false);
    struct plane *p = scene_plane(&g, PLANE_ELECTRIC_TURNED, -40e-3, 40e-3, 0.0, 20e-3);
    p->sides[SIDE_B_LOW].kind = p->sides[SIDE_B_HIGH].kind = SIDE_MIRROR;
    scene_box(p, "rod", 1.0, -5e-3, 5e-3, 0.0, 3e-3, 0.0);
    scene_box(p, "disc", 1.0, 15e-3, 17e-3, 0.0, 20e-3, 0.0);
    find(p, &c);
    assert_true(!c.items[0].held && !c.items[0].cut[1]);
    assert_true(!c.items[1].held && c.items[1].cut[1]);
    conductors_free(&c);
    geometry_free(&g);
}

static void test_plane_without_parts_has_no_conductor(void **state)
{
    (void)state;
    struct geometry g;
    struct conductors c;
    scene_begin(&g, 1.0, false);
    find(scene_plane(&g, KIND, 0.0, 1e-3, 0.0, 1e-3), &c);
    assert_int_equal(c.count, 0);
    conductors_free(&c);
    conductors_free(&c);
    geometry_free(&g);
}

static void test_every_failed_allocation_is_reported(void **state)
{
    (void)state;
    struct geometry g;
    struct conductors c;
    enum status status = STATUS_MEMORY;
    long k = 0;
    scene_begin(&g, 1.0, false);
    struct plane *p = scene_plane(&g, KIND, -40e-3, 40e-3, -20e-3, 20e-3);
    scene_box(p, "left", 0.5, -10e-3, 0.0, -2e-3, 2e-3, 0.0);
    scene_disc(p, "right", 0.5, 3e-3, 0.0, 4e-3);
    while (status == STATUS_MEMORY) {
        mem_fail_at(++k);
        status = conductors_find(p, &c);
        mem_fail_at(0);
        assert_true((c.items == NULL) == (status != STATUS_OK));
    }
    assert_int_equal(status, STATUS_OK);
    assert_true(k > 2);
    assert_int_equal(c.count, 1);
    conductors_free(&c);
    geometry_free(&g);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_chain_of_touching_parts_is_one_conductor),
        cmocka_unit_test(
            test_other_potentials_floating_parts_and_insulators_stay_apart),
        cmocka_unit_test(test_conductor_is_held_through_any_of_its_parts),
        cmocka_unit_test(test_axis_of_a_turned_plane_cuts_nothing),
        cmocka_unit_test(test_plane_without_parts_has_no_conductor),
        cmocka_unit_test(test_every_failed_allocation_is_reported),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
