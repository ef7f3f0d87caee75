/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Turned planes, floating parts, insulators and open sides as the reader keeps them. */
#include "tests/support/assert_close.h"

#include <stdio.h>
#include <string.h>

#include "mesh/reader.h"
#include "shared/mem.h"

#define ROUNDING 1e-14 /* a handful of operations on doubles */

static void read_fine(const char *text, struct geometry *geometry)
{
    struct messages messages = {0};
    if (reader_read_text("t.yaml", text, strlen(text), geometry, &messages) !=
        STATUS_OK)
        fail_msg("%s", messages.items[0].text);
    messages_free(&messages);
}

#define PLANAR                                                                         \
    "evengap: 1\nsupplies: {p: 7 V}\nplanes:\n  electric_across:\n"                    \
    "    region: {x: [-60 mm, 60 mm], y: [-40 mm, 40 mm]}\n"                           \
    "    sides: {x: open, y: {low: {wall: p}, high: open}}\n    parts:\n"              \
    "      bar:\n        floating: 2.385 nC/m\n"                                       \
    "        box: {x: [10 mm, 20 mm], y: [3 mm, 9 mm]}\n"                              \
    "        twin: [{across: x, name: left}, {across: [x, y], name: far}]\n"           \
    "      block:\n        insulator: 9.2/2\n"                                         \
    "        box: {x: [30 mm, 35 mm], y: [3 mm, 9 mm]}\n        twin: {across: y}\n"

static void test_floating_parts_carry_their_charge(void **state)
{
    (void)state;
    struct geometry geometry;
    read_fine(PLANAR, &geometry);
    const struct plane *plane = &geometry.planes[PLANE_ELECTRIC_ACROSS];
    assert_int_equal(plane->part_count, 5);
    for (int k = 0; k < 3; k++) {
        const struct part *part = &plane->parts[k];
        assert_int_equal(part->kind, PART_FLOATING);
        assert_true(part_is_conductor(part));
        assert_close(part->charge, 2.385e-9, ROUNDING, 0);
        assert_close(part->potential.constant, 0, 0, 0);
        assert_close(part->potential.gain[0], 0, 0, 0);
    }
    geometry_free(&geometry);
}

static void test_insulators_carry_their_permittivity(void **state)
{
    (void)state;
    struct geometry geometry;
    read_fine(PLANAR, &geometry);
    const struct plane *plane = &geometry.planes[PLANE_ELECTRIC_ACROSS];
    for (int k = 3; k < 5; k++) {
        const struct part *part = &plane->parts[k];
        assert_int_equal(part->kind, PART_INSULATOR);
        assert_false(part_is_conductor(part));
        assert_close(part->permittivity, 4.6, ROUNDING, 0);
        assert_close(part->charge, 0, 0, 0);
        assert_non_null(part->potential.gain);
    }
    geometry_free(&geometry);
}

static void test_open_sides_are_read(void **state)
{
    (void)state;
    struct geometry geometry;
    read_fine(PLANAR, &geometry);
    const struct side *sides = geometry.planes[PLANE_ELECTRIC_ACROSS].sides;
    assert_int_equal(sides[SIDE_A_LOW].kind, SIDE_OPEN);
    assert_int_equal(sides[SIDE_A_HIGH].kind, SIDE_OPEN);
    assert_int_equal(sides[SIDE_B_LOW].kind, SIDE_WALL);
    assert_int_equal(sides[SIDE_B_HIGH].kind, SIDE_OPEN);
    assert_close(sides[SIDE_B_HIGH].from.gain[0], 0, 0, 0);
    assert_close(sides[SIDE_B_LOW].from.gain[0], 1, 0, 0);
    geometry_free(&geometry);
}

/* Both ends of r in a plane whose region and sides are given. */
static void assert_ends(const char *region, const char *sides, enum side_kind low,
                        enum side_kind high)
{
    char text[400];
    struct geometry geometry;
    (void)snprintf(text, sizeof text,
                   "evengap: 1\nplanes: {electric_turned: {region: {z: [0, 1 m], r: "
                   "%s}, sides: %s}}\n",
                   region, sides);
    read_fine(text, &geometry);
    const struct plane *plane = &geometry.planes[PLANE_ELECTRIC_TURNED];
    assert_true(plane->present);
    assert_int_equal(plane->sides[SIDE_A_LOW].kind, SIDE_WALL);
    assert_int_equal(plane->sides[SIDE_B_LOW].kind, low);
    assert_int_equal(plane->sides[SIDE_B_HIGH].kind, high);
    for (int s = 0; s < SIDE_COUNT; s++)
        assert_true(plane->sides[s].from.gain != NULL && plane->sides[s].to.gain);
    geometry_free(&geometry);
}

static void test_axis_of_a_turned_plane_is_a_mirror(void **state)
{
    (void)state;
    assert_ends("[0, 1 m]", "{}", SIDE_MIRROR, SIDE_WALL);
    assert_ends("[0 mm, 1 m]", "{r: {low: mirror}}", SIDE_MIRROR, SIDE_WALL);
    assert_ends("[0, 1 m]", "{r: {high: open}}", SIDE_MIRROR, SIDE_OPEN);
    assert_ends("[0, 1 m]", "{r: open}", SIDE_MIRROR, SIDE_OPEN);
    assert_ends("[0, 1 m]", "{r: wall}", SIDE_MIRROR, SIDE_WALL);
    assert_ends("[0.3 mm - 0.1 mm - 0.2 mm, 1 m]", "{}", SIDE_MIRROR, SIDE_WALL);
}

static void test_sides_off_the_axis_are_ordinary(void **state)
{
    (void)state;
    assert_ends("[3 mm, 1 m]", "{}", SIDE_WALL, SIDE_WALL);
    assert_ends("[3 mm, 1 m]", "{r: open}", SIDE_OPEN, SIDE_OPEN);
    assert_ends("[3 mm, 1 m]", "{r: {low: antimirror}}", SIDE_ANTIMIRROR, SIDE_WALL);
}

static void test_charge_of_a_turned_plane_is_in_coulomb(void **state)
{
    (void)state;
    struct geometry geometry;
    read_fine("evengap: 1\nplanes: {electric_turned: {region: {z: [0, 1 m], r: [0, 1 "
              "m]}, parts: {\n  ring: {floating: -3.5 pC, turn: 30 deg, box: {z: [0.2 "
              "m, 0.3 m], r: [0.4 m, 0.5 m]}},\n  ball: {floating: 0, disc: {z: 0.7 m, "
              "r: 0.6 m, radius: 0.1 m}, twin: {across: z}}}}}\n",
              &geometry);
    const struct plane *plane = &geometry.planes[PLANE_ELECTRIC_TURNED];
    struct vec2 low, high;
    assert_close(plane->parts[0].charge, -3.5e-12, ROUNDING, 0);
    assert_int_equal(plane->part_count, 3);
    shape_bounds(&plane->parts[2].shape, &low, &high);
    assert_close(low.a, -0.8, 1e-12, 0);
    assert_close(high.b, 0.7, 1e-12, 0);
    geometry_free(&geometry);
}

static void test_every_lack_of_memory_is_told(void **state)
{
    (void)state;
    struct geometry geometry;
    enum status status = STATUS_MEMORY;
    long k = 0;
    while (status == STATUS_MEMORY) {
        struct messages messages = {0};
        mem_fail_at(++k);
        status = reader_read_text("t", PLANAR, strlen(PLANAR), &geometry, &messages);
        mem_fail_at(0);
        messages_free(&messages);
    }
    assert_int_equal(status, STATUS_OK);
    assert_true(k > 30);
    geometry_free(&geometry);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_floating_parts_carry_their_charge),
        cmocka_unit_test(test_insulators_carry_their_permittivity),
        cmocka_unit_test(test_open_sides_are_read),
        cmocka_unit_test(test_axis_of_a_turned_plane_is_a_mirror),
        cmocka_unit_test(test_sides_off_the_axis_are_ordinary),
        cmocka_unit_test(test_charge_of_a_turned_plane_is_in_coulomb),
        cmocka_unit_test(test_every_lack_of_memory_is_told),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
