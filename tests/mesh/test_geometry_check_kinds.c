/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Floating parts, insulators, open sides and turned planes in a geometry as a whole. */
#include "tests/mesh/test_check_text.h"

#define PLANE                                                                          \
    "supplies: {p: 9 V}\nplanes:\n  electric_along:\n"                                 \
    "    region: {z: [-100 mm, 100 mm], x: [-50 mm, 50 mm]}\n"
#define PLATES                                                                         \
    "    parts:\n"                                                                     \
    "      up: {electrode: p, box: {z: [-40 mm, 40 mm], x: [10 mm, 14 mm]},\n"         \
    "           twin: {across: x, potential: -p, name: low}}\n"
#define BLOCK(low, high) "box: {z: [" low ", " high "], x: [-5 mm, 5 mm]}}\n"

/* One part more, in line 9. */
static void assert_part_fine(const char *part)
{
    char text[2000];
    (void)snprintf(text, sizeof text, PLANE PLATES "      %s", part);
    assert_fine(text);
}

static void assert_part_mistake(const char *part, const char *first, const char *second)
{
    char text[2000];
    (void)snprintf(text, sizeof text, PLANE PLATES "      %s", part);
    assert_mistake(text, 9, first, second);
}

static void test_floating_part_in_free_space_is_fine(void **state)
{
    (void)state;
    assert_part_fine("f: {floating: 0, " BLOCK("60 mm", "70 mm"));
    assert_part_fine("f: {floating: 3 nC/m, " BLOCK("60 mm", "70 mm"));
}

static void test_floating_part_must_not_touch_what_has_a_potential(void **state)
{
    (void)state;
    assert_part_mistake("f: {floating: 0, box: {z: [0, 70 mm], x: [14 mm, 20 mm]}}\n",
                        "\"up\" and \"f\"", "so the floating one would be at");
    assert_part_mistake("f: {floating: 0, " BLOCK("60 mm", "100 mm"),
                        "touches the wall at the high end of z",
                        "a gap, as the part floats");
}

/* A floating part has no potential that could equal 0. */
static void test_floating_part_is_not_at_zero_volts(void **state)
{
    (void)state;
    assert_mistake(
        PLANE PLATES "      g: {clamp: , " BLOCK(
            "60 mm", "70 mm") "      f: {floating: 0, " BLOCK("70 mm", "80 mm"),
        10, "\"g\" and \"f\"", "potential of the other");
}

static void test_floating_parts_that_touch_are_one(void **state)
{
    (void)state;
    assert_mistake(
        PLANE PLATES "      f: {floating: 0, " BLOCK(
            "60 mm", "70 mm") "      g: {floating: 0, " BLOCK("70 mm", "80 mm"),
        10, "\"f\" and \"g\"", "one part drawn for both");
}

static void test_floating_part_on_mirrors(void **state)
{
    (void)state;
    assert_fine("planes: {electric_along: {region: {z: [0, 90 mm], x: [-50 mm, 50 mm]},"
                "\n  sides: {z: {low: mirror}, x: {wall: [0, 9 V]}},\n"
                "  parts: {f: {floating: 0, box: {z: [0, 9 mm], x: [0, 9 mm]}}}}}\n");
    assert_mistake("planes: {electric_along: {region: {z: [0, 90 mm], x: [0, 50 mm]},\n"
                   "  sides: {x: {low: antimirror, high: {wall: 9 V}}}, parts: {\n"
                   "  f: {floating: 0, box: {z: [20 mm, 30 mm], x: [0, 9 mm]}}}}}\n",
                   4, "touches the antimirror at the low end of x", "floats");
}

static void test_floating_parts_fix_no_potential(void **state)
{
    (void)state;
    assert_mistake(
        "planes: {electric_across: {region: {x: [0, 1 m], y: [0, 1 m]},\n"
        "  sides: {x: mirror, y: mirror}, parts: {\n"
        "  f: {floating: 1 nC/m, box: {x: [0.2 m, 0.4 m], y: [0.2 m, 0.4 m]}}}}}\n",
        2, "nothing fixes the potential", "mirrors and floating parts only");
}

#define CHARGED(charge)                                                                \
    "planes: {electric_across: {region: {x: [0, 1 m], y: [0, 1 m]}, parts: {\n"        \
    "  f: {floating: " charge ", box: {x: [0.2 m, 0.4 m], y: [0.2 m, 0.4 m]}}}}}\n"

static void test_charge_alone_drives_a_field(void **state)
{
    (void)state;
    assert_fine(CHARGED("1 nC/m"));
    assert_mistake(CHARGED("0 C/m"), 2, "no potential difference", "electric_across");
}

static void test_insulators_may_touch_everything(void **state)
{
    (void)state;
    assert_part_fine(
        "s: {insulator: 3.8, box: {z: [0, 100 mm], x: [12 mm, 50 mm]}}\n"
        "      f: {floating: 0, box: {z: [0, 20 mm], x: [30 mm, 40 mm]}}\n"
        "      t: {insulator: 9, box: {z: [0, 20 mm], x: [14 mm, 40 mm]}}\n"
        "      u: {insulator: 2, box: {z: [-9 mm, 9 mm], x: [-14 mm, 14 "
        "mm]}}\n");
}

static void test_insulator_must_lie_in_the_region(void **state)
{
    (void)state;
    assert_part_mistake("s: {insulator: 3.8, " BLOCK("60 mm", "101 mm"),
                        "\"s\" lies partly outside", "z 101 mm");
}

static void test_insulators_drive_nothing(void **state)
{
    (void)state;
    assert_mistake("planes: {electric_across: {region: {x: [0, 1 m], y: [0, 1 m]},\n"
                   "  sides: {x: mirror, y: mirror}, parts: {\n"
                   "  s: {insulator: 2, box: {x: [0, 0.4 m], y: [0, 0.4 m]}}}}}\n",
                   2, "nothing fixes the potential", "found mirrors only");
}

static void test_way_of_the_beam_must_be_free_of_insulators(void **state)
{
    (void)state;
    assert_mistake(PLANE PLATES "      s: {insulator: 2, " BLOCK(
                       "60 mm", "70 mm") "beam: {path: {from: -90 mm, to: 90 mm}}\n",
                   10, "runs into the part \"s\"", "line 9");
    assert_part_mistake(
        "s: {insulator: 2, " BLOCK("60 mm", "70 mm") "reference: {z: 65 mm}\n",
        "the reference point lies inside the part \"s\"", "free space");
}

#define OPEN                                                                           \
    "planes:\n  electric_along:\n"                                                     \
    "    region: {z: [-100 mm, 100 mm], x: [-50 mm, 50 mm]}\n"                         \
    "    sides: {z: open, x: {low: open, high: wall}}\n    parts:\n"

static void test_open_sides_fix_the_potential(void **state)
{
    (void)state;
    assert_fine(OPEN "      a: {electrode: 5 V, " BLOCK("0", "9 mm"));
    assert_mistake(OPEN "      a: {electrode: 0, " BLOCK("0", "9 mm"), 4,
                   "no potential difference", "electric_along");
    assert_fine("planes: {electric_across: {region: {x: [0, 9 mm], y: [0, 9 mm]},\n"
                "  sides: {x: open, y: open}, parts: {a: {guard: 5 V, disc: {x: 4 mm, "
                "y: 4 mm, radius: 1 mm}}}}}\n");
}

static void test_no_part_may_reach_an_open_side(void **state)
{
    (void)state;
    assert_mistake(OPEN "      a: {electrode: 5 V, " BLOCK("0", "100 mm"), 7,
                   "touches the open side at the high end of z",
                   "draw the region larger");
    assert_mistake(
        OPEN "      a: {electrode: 5 V, " BLOCK(
            "0", "9 mm") "      s: {insulator: 2, " BLOCK("-100 mm", "-80 mm"),
        8, "\"s\" touches the open side at the low end of z", "larger");
    assert_mistake(
        OPEN "      a: {clamp: , " BLOCK(
            "-100 mm", "9 mm") "      b: {guard: 3 V, " BLOCK("20 mm", "30 mm"),
        7, "touches the open side", "larger"); /* also at the far potential */
}

static void test_open_side_does_not_double_the_region(void **state)
{
    (void)state;
    assert_mistake("planes: {electric_along: {region: {z: [0, 100 mm], x: [-50 mm, 50 "
                   "mm]},\n  sides: {z: {low: open}, x: {wall: [0, 9 V]}}}}\n"
                   "beam: {path: {from: -20 mm, to: 90 mm}}\n",
                   4, "reaches outside", "z from 0 mm to 100 mm");
    assert_mistake(
        OPEN "      a: {guard: 3 V, " BLOCK("20 mm", "30 mm") "probes: [{z: 101 mm}]\n",
        8, "outside every plane", "z 101 mm");
}

#define TURNED                                                                         \
    "planes:\n  electric_turned:\n"                                                    \
    "    region: {z: [0, 60 mm], r: [0, 40 mm]}\n    parts:\n"                         \
    "      rod: {electrode: 5 V, box: {z: [20 mm, 50 mm], r: [0, 8 mm]}}\n"

/* The beam and the reference point have no place in a turned plane. */
static void test_turned_plane_alone_passes(void **state)
{
    (void)state;
    assert_fine(TURNED "limits: {surface_field: 5 kV/mm}\n"
                       "beam: {path: {from: -1 m, to: 1 m}, footprint: {x: 1 m, y: 1 "
                       "m}}\nreference: {z: -3 m}\n");
}

static void test_part_below_the_axis_is_outside(void **state)
{
    (void)state;
    assert_mistake(TURNED "      ball: {guard: 1 V, disc: {z: 9 mm, r: 0, radius: 3 "
                          "mm}}\n",
                   7, "\"ball\" lies partly outside", "r -3 mm");
}

static void test_probes_of_a_turned_plane(void **state)
{
    (void)state;
    assert_fine(TURNED "probes: [{z: 9 mm, x: 24 mm, y: -32 mm}, {z: 0}]\n");
    assert_mistake(TURNED "probes: [{z: 9 mm, x: 24 mm, y: -33 mm}]\n", 7,
                   "outside every plane; expected a place inside a region; found",
                   "-33");
    assert_fine(TURNED "probes: [{x: 24 mm, plane: electric_turned}]\n");
    assert_mistake(TURNED "probes: [{x: 41 mm, plane: electric_turned}]\n", 7,
                   "outside the region of \"electric_turned\"", "r from 0 mm to 40 mm");
    assert_mistake(TURNED "probes: [{x: 24 mm}]\n", 7, "outside every plane",
                   "with its z given for electric_turned");
}

static void test_mirror_across_z_doubles_a_turned_plane(void **state)
{
    (void)state;
    assert_fine("planes: {electric_turned: {region: {z: [0, 60 mm], r: [0, 40 mm]},\n"
                "  sides: {z: {low: mirror, high: {wall: 3 V}}}}}\n"
                "probes: [{z: -59 mm}]\n");
}

static void test_lattice_is_not_filled_from_a_turned_plane(void **state)
{
    (void)state;
    assert_mistake(TURNED "lattice: {x: [0, 1 mm, 1 mm], y: [0, 1 mm, 1 mm], z: [0, 1 "
                          "mm, 1 mm]}\n",
                   7, "the lattice cannot be filled", "\"electric_turned\" only");
}

static void test_ratio_does_not_look_at_a_turned_plane(void **state)
{
    (void)state;
    assert_fine(TURNED "  magnetic_along:\n"
                       "    region: {z: [-60 mm, 60 mm], y: [-50 mm, 50 mm]}\n"
                       "    sides: {y: {wall: [0, 9 A]}}\n");
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_floating_part_in_free_space_is_fine),
        cmocka_unit_test(test_floating_part_must_not_touch_what_has_a_potential),
        cmocka_unit_test(test_floating_part_is_not_at_zero_volts),
        cmocka_unit_test(test_floating_parts_that_touch_are_one),
        cmocka_unit_test(test_floating_part_on_mirrors),
        cmocka_unit_test(test_floating_parts_fix_no_potential),
        cmocka_unit_test(test_charge_alone_drives_a_field),
        cmocka_unit_test(test_insulators_may_touch_everything),
        cmocka_unit_test(test_insulator_must_lie_in_the_region),
        cmocka_unit_test(test_insulators_drive_nothing),
        cmocka_unit_test(test_way_of_the_beam_must_be_free_of_insulators),
        cmocka_unit_test(test_open_sides_fix_the_potential),
        cmocka_unit_test(test_no_part_may_reach_an_open_side),
        cmocka_unit_test(test_open_side_does_not_double_the_region),
        cmocka_unit_test(test_turned_plane_alone_passes),
        cmocka_unit_test(test_part_below_the_axis_is_outside),
        cmocka_unit_test(test_probes_of_a_turned_plane),
        cmocka_unit_test(test_mirror_across_z_doubles_a_turned_plane),
        cmocka_unit_test(test_lattice_is_not_filled_from_a_turned_plane),
        cmocka_unit_test(test_ratio_does_not_look_at_a_turned_plane),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
