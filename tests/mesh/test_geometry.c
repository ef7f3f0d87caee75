/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The words and rules of the geometry model that need no file. */
#include "tests/support/assert_close.h"

#include <string.h>

#include "mesh/gap.h"
#include "mesh/geometry.h"

static void test_every_kind_has_its_own_key(void **state)
{
    (void)state;
    for (int k = 0; k < PLANE_KINDS; k++)
        for (int j = 0; j < k; j++)
            assert_string_not_equal(plane_kind_key((enum plane_kind)k),
                                    plane_kind_key((enum plane_kind)j));
    for (int k = 0; k <= PART_INSULATOR; k++)
        for (int j = 0; j < k; j++)
            assert_string_not_equal(part_kind_key((enum part_kind)k),
                                    part_kind_key((enum part_kind)j));
    for (int k = 0; k <= SIDE_OPEN; k++)
        for (int j = 0; j < k; j++)
            assert_string_not_equal(side_kind_key((enum side_kind)k),
                                    side_kind_key((enum side_kind)j));
}

static void test_a_plane_is_along_across_or_turned(void **state)
{
    (void)state;
    for (int k = 0; k < PLANE_KINDS; k++) {
        const enum plane_kind kind = (enum plane_kind)k;
        assert_int_equal(plane_kind_is_along(kind) + plane_kind_is_across(kind) +
                             plane_kind_is_turned(kind),
                         1);
        assert_int_equal(plane_kind_is_magnetic(kind),
                         strncmp(plane_kind_key(kind), "magnetic", 8) == 0);
    }
}

static void test_a_point_is_seen_in_the_axes_of_the_plane(void **state)
{
    (void)state;
    static const struct vec2 want[PLANE_KINDS] = {
        [PLANE_ELECTRIC_ALONG] = {-2.5, 3},  [PLANE_ELECTRIC_ACROSS] = {3, -4},
        [PLANE_MAGNETIC_ALONG] = {-2.5, -4}, [PLANE_MAGNETIC_ACROSS] = {3, -4},
        [PLANE_ELECTRIC_TURNED] = {-2.5, 5},
    };
    for (int k = 0; k < PLANE_KINDS; k++) {
        const struct vec2 got = plane_kind_project((enum plane_kind)k, 3, -4, -2.5);
        assert_close(got.a, want[k].a, 1e-15, 0);
        assert_close(got.b, want[k].b, 1e-15, 0);
    }
}

static void test_a_turned_plane_reads_probes_that_give_z(void **state)
{
    (void)state;
    struct geometry geometry = {0};
    const struct probe with = {.z = 1e-3, .has_z = true}, without = {.x = 1e-3};
    geometry.planes[PLANE_ELECTRIC_TURNED].present = true;
    assert_true(geometry_probe_counts(&geometry, &with, PLANE_ELECTRIC_TURNED));
    assert_false(geometry_probe_counts(&geometry, &without, PLANE_ELECTRIC_TURNED));
}

/* A plane of 40 mm by 20 mm with one block from b = 3 mm up. */
static void block(struct plane *plane, struct part *part, enum part_kind kind)
{
    *plane = (struct plane){.present = true,
                            .low = {-20e-3, -10e-3},
                            .high = {20e-3, 10e-3},
                            .parts = part,
                            .part_count = 1};
    *part = (struct part){.kind = kind};
    assert_int_equal(shape_init_box(&part->shape, (struct vec2){-5e-3, 3e-3},
                                    (struct vec2){5e-3, 7e-3}, 0),
                     STATUS_OK);
}

static void test_the_gap_ends_on_conductors_only(void **state)
{
    (void)state;
    static const enum part_kind kinds[] = {PART_FLOATING, PART_INSULATOR};
    for (int k = 0; k < 2; k++) {
        struct plane plane;
        struct part part;
        double below = 0, above = 0;
        block(&plane, &part, kinds[k]);
        assert_int_equal(gap_at(&plane, 1, (struct vec2){1e-3, 0}, &below, &above),
                         STATUS_OK);
        assert_true(isinf(below));
        if (kinds[k] == PART_FLOATING)
            assert_close(above, 3e-3, 1e-12, 0);
        else
            assert_true(isinf(above));
        shape_free(&part.shape);
    }
}

static void test_an_open_side_reflects_no_gap(void **state)
{
    (void)state;
    static const enum side_kind kinds[] = {SIDE_MIRROR, SIDE_OPEN};
    for (int k = 0; k < 2; k++) {
        struct plane plane;
        struct part part;
        double below = 0, above = 0;
        block(&plane, &part, PART_GUARD);
        plane.low.b = 0;
        plane.sides[SIDE_B_LOW].kind = kinds[k];
        assert_int_equal(gap_at(&plane, 1, (struct vec2){1e-3, 0}, &below, &above),
                         STATUS_OK);
        if (kinds[k] == SIDE_MIRROR)
            assert_close(below, -3e-3, 1e-12, 0);
        else
            assert_true(isinf(below));
        shape_free(&part.shape);
    }
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_every_kind_has_its_own_key),
        cmocka_unit_test(test_a_plane_is_along_across_or_turned),
        cmocka_unit_test(test_a_point_is_seen_in_the_axes_of_the_plane),
        cmocka_unit_test(test_a_turned_plane_reads_probes_that_give_z),
        cmocka_unit_test(test_the_gap_ends_on_conductors_only),
        cmocka_unit_test(test_an_open_side_reflects_no_gap),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
