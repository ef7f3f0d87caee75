/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "tests/support/assert_close.h"

#include <stdio.h>
#include <string.h>

#include "mesh/geometry_check.h"
#include "mesh/reader.h"
#include "shared/mem.h"
#include "tests/mesh/test_check_text.h"

#define PLANE                                                                          \
    "supplies: {p: 9 V}\nplanes:\n  electric_along:\n"                                 \
    "    region: {z: [-100 mm, 100 mm], x: [-50 mm, 50 mm]}\n"
#define PLATES                                                                         \
    "    parts:\n"                                                                     \
    "      up: {electrode: p, box: {z: [-40 mm, 40 mm], x: [10 mm, 14 mm]},\n"         \
    "           twin: {across: x, potential: -p, name: low}}\n"

#define MAGNETIC                                                                       \
    "supplies: {c: 9 A}\nplanes:\n  magnetic_along:\n"                                 \
    "    region: {z: [-100 mm, 100 mm], y: [-50 mm, 50 mm]}\n    parts:\n"             \
    "      up: {pole: c, box: {z: [-40 mm, 40 mm], y: [20 mm, 40 mm]}}\n"

static void test_sound_plane_passes(void **state)
{
    (void)state;
    assert_fine(PLANE PLATES);
    assert_fine(MAGNETIC);
}

static void test_file_without_planes_is_refused(void **state)
{
    (void)state;
    assert_mistake("title: x\n", 0, "there is no plane", "electric_along");
}

static void test_unused_supply_is_named(void **state)
{
    (void)state;
    assert_mistake("supplies: {p: 9 V, spare: 2 A}\nplanes:\n  electric_along:\n"
                   "    region: {z: [-100 mm, 100 mm], x: [-50 mm, 50 mm]}\n" PLATES,
                   2, "\"spare\" is not used", "expected a part or wall");
}

static void test_overlap_at_different_potential_is_located(void **state)
{
    (void)state;
    assert_mistake(PLANE PLATES "      pin: {guard: p/2, disc: {z: 40 mm, x: 12 mm, "
                                "radius: 1 mm}}\n",
                   9, "\"up\" and \"pin\"", "different potential");
    assert_mistake(PLANE PLATES "      pin: {guard: 9 V, disc: {z: 40 mm, x: 12 mm, "
                                "radius: 1 mm}}\n",
                   9, "touch or overlap", "x 1"); /* equal only at today's setting */
}

static void test_touching_parts_at_different_potential_are_found(void **state)
{
    (void)state;
    assert_mistake(PLANE PLATES
                   "      bar: {clamp: , box: {z: [40 mm, 50 mm], x: [0, 12 mm]}}\n",
                   9, "\"up\" and \"bar\"", "z 40 mm");
}

static void test_overlap_at_equal_potential_is_fine(void **state)
{
    (void)state;
    assert_fine(PLANE PLATES "      pin: {guard: 2*p/2, disc: {z: 40 mm, x: 12 mm, "
                             "radius: 1 mm}}\n");
}

static void test_parts_with_a_gap_are_fine(void **state)
{
    (void)state;
    assert_fine(PLANE PLATES
                "      bar: {clamp: , box: {z: [41 mm, 50 mm], x: [0, 12 mm]}}\n");
}

static void test_part_in_a_hole_of_another_is_fine(void **state)
{
    (void)state;
    assert_fine(PLANE "    parts:\n"
                      "      ring: {electrode: p, disc: {z: 0, x: 0, radius: 20 mm},\n"
                      "        cut: {disc: {z: 0, x: 0, radius: 15 mm}}}\n"
                      "      rod: {guard: 0, disc: {z: 0, x: 0, radius: 5 mm}}\n");
}

static void test_parts_outside_the_region_are_located(void **state)
{
    (void)state;
    assert_mistake(PLANE PLATES
                   "      far: {guard: p, disc: {z: 90 mm, x: 0, radius: 11 mm}}\n",
                   9, "\"far\" lies partly outside", "z 101 mm");
    assert_mistake(PLANE PLATES
                   "      far: {guard: p, disc: {z: 200 mm, x: 0, radius: 11 mm}}\n",
                   9, "\"far\" lies outside", "z 211 mm");
}

static void test_part_too_thin_for_the_grid_is_refused(void **state)
{
    (void)state;
    assert_mistake(PLANE PLATES
                   "      foil: {guard: 9 V, box: {z: [0, 10 mm], x: [0, 1e-6 mm]}}\n",
                   9, "\"foil\" of \"electric_along\" is too thin", "at least");
}

static void test_part_on_a_wall_needs_its_potential(void **state)
{
    (void)state;
    assert_fine(PLANE PLATES
                "      bar: {clamp: , box: {z: [60 mm, 70 mm], x: [20 mm, 50 mm]}}\n");
    assert_mistake(
        PLANE PLATES
        "      bar: {clamp: 1 V, box: {z: [60 mm, 70 mm], x: [20 mm, 50 mm]}}\n",
        9, "\"bar\" touches the wall at the high end of x",
        "the potential of the wall");
}

static void test_part_on_a_running_wall_is_compared_where_it_touches(void **state)
{
    (void)state;
    /* The wall at x = 50 mm runs from 0 V at z = -100 mm to 200 V at 100 mm. */
    const char *sides = PLANE "    sides: {x: {high: {wall: [0, 200 V]}}}\n    parts:\n"
                              "      rod: {electrode: p, disc: {z: 0, x: 0, radius: 5 "
                              "mm}}\n";
    char text[2000];
    (void)snprintf(text, sizeof text,
                   "%s      a: {guard: 100 V, outline: [[-5 mm, 40 mm], [5 mm, 40 mm], "
                   "[0, 50 mm]]}\n",
                   sides);
    assert_fine(text);
    (void)snprintf(
        text, sizeof text,
        "%s      a: {guard: 100 V, box: {z: [0, 5 mm], x: [40 mm, 50 mm]}}\n", sides);
    assert_mistake(text, 9, "\"a\" touches the wall", "high end of x");
}

static void test_part_on_an_antimirror_must_be_at_zero(void **state)
{
    (void)state;
    const char *plane = "planes:\n  electric_along:\n"
                        "    region: {z: [-100 mm, 100 mm], x: [0, 50 mm]}\n"
                        "    sides: {x: {low: antimirror}}\n    parts:\n"
                        "      a: {electrode: 3 V, disc: {z: 0, x: 30 mm, radius: 5 "
                        "mm}}\n";
    char text[2000];
    (void)snprintf(text, sizeof text,
                   "%s      b: {clamp: , box: {z: [0, 5 mm], x: [0, 5 mm]}}\n", plane);
    assert_fine(text);
    (void)snprintf(text, sizeof text,
                   "%s      b: {clamp: 1 V, box: {z: [0, 5 mm], x: [0, 5 mm]}}\n",
                   plane);
    assert_mistake(text, 8, "\"b\" touches the antimirror at the low end of x",
                   "a potential of 0");
}

static void test_part_on_a_mirror_is_fine(void **state)
{
    (void)state;
    assert_fine("planes:\n  electric_along:\n"
                "    region: {z: [-100 mm, 100 mm], x: [0, 50 mm]}\n"
                "    sides: {x: {low: mirror}}\n    parts:\n"
                "      a: {electrode: 3 V, box: {z: [0, 9 mm], x: [0, 9 mm]}}\n");
}

static void test_parts_of_one_name_are_found(void **state)
{
    (void)state;
    assert_mistake(PLANE PLATES
                   "      low: {guard: p, disc: {z: 0, x: 30 mm, radius: 1 mm}}\n",
                   9, "called \"low\"", "in line 8");
}

static void test_plane_that_nothing_drives_is_refused(void **state)
{
    (void)state;
    const char *none = "there is no potential difference in \"electric_across\"";
    assert_mistake("planes: {electric_across: {region: {x: [0, 1 m], y: [0, 1 m]}}}\n",
                   2, none, "expected parts or walls");
    assert_mistake("planes: {electric_across: {region: {x: [0, 1 m], y: [0, 1 m]},\n"
                   "  sides: {x: mirror, y: {wall: 4 V}}}}\n",
                   2, none, "expected parts or walls");
    assert_mistake("planes: {electric_across: {region: {x: [0, 1 m], y: [0, 1 m]},\n"
                   "  sides: {x: mirror, y: mirror}}}\n",
                   2, "nothing fixes the potential", "mirrors only");
    assert_fine("planes: {electric_across: {region: {x: [0, 1 m], y: [0, 1 m]},\n"
                "  sides: {x: mirror, y: {low: wall, high: {wall: 4 V}}}}}\n");
}

static void test_supplies_at_zero_give_a_warning(void **state)
{
    (void)state;
    struct messages messages = {0};
    assert_int_equal(check("supplies: {p: 0 V}\nplanes: {electric_across: {region: {x: "
                           "[0, 1 m], y: [0, 1 m]},\n  sides: {x: {wall: [0, p]}}}}\n",
                           &messages),
                     STATUS_OK);
    assert_int_equal(messages.count, 1);
    assert_int_equal(messages.items[0].severity, SEVERITY_WARNING);
    messages_free(&messages);
}

static void test_absurd_regions_are_refused(void **state)
{
    (void)state;
    assert_mistake(
        "planes: {electric_across: {region: {x: [0, 1 nm], y: [0, 1 nm]}}}\n", 2,
        "cannot be solved", "from 1 um to 1 km");
    assert_mistake("planes: {electric_across: {region: {x: [0, 9 m], y: [0, 9 um]}}}\n",
                   2, "cannot be solved", "9000 mm by 0.009 mm");
}

static void test_path_must_lie_inside_the_planes_along_it(void **state)
{
    (void)state;
    assert_mistake(PLANE PLATES "beam: {path: {from: -110 mm, to: 90 mm}}\n", 9,
                   "the path of the beam reaches outside", "z from -100 mm to 100 mm");
    assert_fine(PLANE PLATES "beam: {path: {from: -100 mm, to: 100 mm}}\n");
}

static void test_mirror_at_zero_doubles_the_region(void **state)
{
    (void)state;
    const char *half = "planes: {electric_along: {region: {z: [0, 100 mm], x: [-50 mm, "
                       "50 mm]},\n  sides: {z: {low: mirror}, x: {wall: [0, 9 V]}}}}\n";
    char text[1000];
    (void)snprintf(text, sizeof text, "%sbeam: {path: {from: -90 mm, to: 90 mm}}\n",
                   half);
    assert_fine(text);
    (void)snprintf(text, sizeof text, "%sbeam: {path: {from: -101 mm, to: 90 mm}}\n",
                   half);
    assert_mistake(text, 4, "reaches outside", "z from -100 mm to 100 mm");
}

static void test_path_through_a_part_is_located(void **state)
{
    (void)state;
    const char *stop = PLANE PLATES
        "      stop: {clamp: , box: {z: [60 mm, 70 mm], x: [1 mm, 9 mm]}}\n";
    char text[2000];
    (void)snprintf(text, sizeof text, "%sbeam: {path: {from: -90 mm, to: 90 mm}}\n",
                   stop);
    assert_fine(text);
    (void)snprintf(
        text, sizeof text,
        "%sbeam: {path: {from: -90 mm, to: 90 mm}, footprint: {x: 2 mm, y: 1 "
        "mm}}\n",
        stop);
    assert_mistake(text, 10, "runs into the part \"stop\"", "line 9");
}

/* Crossings computed with rounding must not let a path slip through. */
static void test_path_without_width_through_a_block_is_located(void **state)
{
    (void)state;
    assert_mistake(PLANE PLATES
                   "      stop: {clamp: , box: {z: [60 mm, 70 mm], x: [-5 mm, 5 mm]}}\n"
                   "beam: {path: {from: -90 mm, to: 90 mm}}\n",
                   10, "runs into the part \"stop\"", "line 9");
}

static void test_folded_path_meets_parts_of_the_half(void **state)
{
    (void)state;
    assert_mistake("planes: {electric_along: {region: {z: [0, 100 mm], x: [-50 mm, 50 "
                   "mm]},\n  sides: {z: {low: mirror}}, parts: {\n"
                   "  a: {guard: 3 V, disc: {z: 80 mm, x: 0, radius: 4 mm}}}}}\n"
                   "beam: {path: {from: -90 mm, to: 10 mm}}\n",
                   5, "runs into the part \"a\"", "line 4");
}

static void test_footprint_is_checked_across_the_beam(void **state)
{
    (void)state;
    const char *plane =
        "planes: {electric_across: {region: {x: [-9 mm, 9 mm], y: [-9 mm, 9 mm]}, "
        "parts: {\n  a: {guard: 3 V, disc: {x: 5 mm, y: 5 mm, radius: 1 mm}}}}}\n";
    char text[1000];
    (void)snprintf(text, sizeof text, "%sbeam: {footprint: {x: 5 mm, y: 4.5 mm}}\n",
                   plane);
    assert_mistake(text, 4, "the footprint of the beam runs into the part \"a\"", "mm");
    (void)snprintf(text, sizeof text, "%sbeam: {footprint: {x: 4 mm, y: 3.5 mm}}\n",
                   plane);
    assert_fine(text);
    (void)snprintf(text, sizeof text, "%sbeam: {footprint: {x: 10 mm, y: 2 mm}}\n",
                   plane);
    assert_mistake(text, 4, "reaches outside", "x from -9 mm to 9 mm");
}

static void test_probes_must_lie_in_a_plane(void **state)
{
    (void)state;
    assert_fine(PLANE PLATES
                "probes: [{z: 99 mm}, {x: 3 mm, plane: electric_along}]\n");
    assert_mistake(PLANE PLATES "probes: [{z: 101 mm}]\n", 9, "outside every plane",
                   "z 101 mm");
    assert_mistake(PLANE PLATES "probes: [{x: 51 mm, plane: electric_along}]\n", 9,
                   "the probe reaches outside", "x from -50 mm to 50 mm");
    assert_mistake(PLANE PLATES "probes: [{x: 1 mm, plane: magnetic_along}]\n", 9,
                   "the probe names the plane \"magnetic_along\"", "does not have");
}

static void test_lattice_must_lie_in_its_planes(void **state)
{
    (void)state;
    assert_fine(PLANE PLATES "lattice: {z: [-100 mm, 100 mm, 1 mm], x: [0, 1 mm, 1 mm],"
                             " y: [-1 m, 1 m, 1 m]}\n");
    assert_mistake(PLANE PLATES "lattice: {z: [-100 mm, 101 mm, 1 mm], x: [0, 1 mm, 1 "
                                "mm], y: [0, 0, 1 m]}\n",
                   9, "the lattice reaches outside", "z from -100 mm to 100 mm");
}

static void test_reference_point_must_be_free(void **state)
{
    (void)state;
    assert_fine(PLANE PLATES "reference: {z: 0}\n");
    assert_mistake(PLANE PLATES "reference: {x: 12 mm}\n", 7,
                   "the reference point lies inside the part \"up\"", "free space");
    assert_mistake(PLANE PLATES "reference: {z: 1 m}\n", 5, "reaches outside",
                   "found 1000 mm to 1000 mm");
}

static void test_centre_matters_only_with_both_fields(void **state)
{
    (void)state;
    const char *electric = "  electric_along: {region: {z: [1 mm, 9 mm], x: [-9 mm, 9 "
                           "mm]}, sides: {x: {wall: [0, 9 V]}}}\n";
    char text[1000];
    (void)snprintf(text, sizeof text, "planes:\n%s", electric);
    assert_fine(text);
    (void)snprintf(
        text, sizeof text,
        "planes:\n%s  magnetic_along: {region: {z: [-9 mm, 9 mm], y: [-9 mm, "
        "9 mm]}, sides: {y: {wall: [0, 9 A]}}}\n",
        electric);
    assert_mistake(text, 3, "the centre, as none is given", "z from 1 mm to 9 mm");
}

static void test_limits_name_what_they_lack(void **state)
{
    (void)state;
    static const char *const cases[][2] = {
        {"ratio_error: 1e-3", "the footprint of the beam"},
        {"even_radius: 1 mm", "the limit \"ratio_error\""},
        {"kick: 1 mrad", "mass, charge and energy"},
        {"offset: 1 mm", "the path of the beam"},
        {"detuning: 1e-3", "electric_along and magnetic_along"},
        {"resolution: 100", "the slit of the beam"},
        {"flat_length: 9 mm", "the limit \"ratio_error\""},
        {"length_mismatch: 9 mm", "the path of the beam"},
    };
    for (size_t k = 0; k < sizeof cases / sizeof cases[0]; k++) {
        char text[1000];
        struct messages messages = {0};
        bool found = false;
        (void)snprintf(text, sizeof text, "%slimits: {%s}\n", PLANE PLATES,
                       cases[k][0]);
        assert_int_equal(check(text, &messages), STATUS_INPUT);
        for (size_t j = 0; j < messages.count; j++)
            found = found || strstr(messages.items[j].text, cases[k][1]) != NULL;
        if (!found)
            fail_msg("%s does not miss %s", cases[k][0], cases[k][1]);
        messages_free(&messages);
    }
}

static void test_surface_field_needs_an_electric_plane(void **state)
{
    (void)state;
    assert_fine(PLANE PLATES "limits: {surface_field: 5 kV/mm}\n");
    assert_mistake(MAGNETIC "limits: {surface_field: 5 kV/mm}\n", 8, "cannot be judged",
                   "an electric plane");
}

static void test_example_file_passes(void **state)
{
    (void)state;
    struct geometry geometry;
    struct messages messages = {0};
    assert_int_equal(reader_read_file(SOURCE_DIR "/geometries/bench_filter.yaml",
                                      &geometry, &messages),
                     STATUS_OK);
    assert_int_equal(geometry_check(&geometry, &messages), STATUS_OK);
    assert_int_equal(messages.count, 0);
    geometry_free(&geometry);
    messages_free(&messages);
}

static void test_every_lack_of_memory_is_told(void **state)
{
    (void)state;
    const char *text = "evengap: 1\n" PLANE PLATES
                       "      bar: {clamp: , box: {z: [60 mm, 70 mm], x: [9 mm, 50 "
                       "mm]}}\n"
                       "      pin: {guard: 1 V, disc: {z: 62 mm, x: 12 mm, radius: 5 "
                       "mm}}\n"
                       "beam: {path: {from: -90 mm, to: 90 mm}}\n";
    struct geometry geometry;
    enum status status = STATUS_MEMORY;
    long k = 0;
    assert_int_equal(reader_read_text("t", text, strlen(text), &geometry, NULL),
                     STATUS_OK);
    while (status == STATUS_MEMORY) {
        struct messages messages = {0};
        mem_fail_at(++k);
        status = geometry_check(&geometry, &messages);
        mem_fail_at(0);
        messages_free(&messages);
    }
    assert_int_equal(status, STATUS_INPUT);
    assert_true(k > 3);
    geometry_free(&geometry);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_sound_plane_passes),
        cmocka_unit_test(test_file_without_planes_is_refused),
        cmocka_unit_test(test_unused_supply_is_named),
        cmocka_unit_test(test_overlap_at_different_potential_is_located),
        cmocka_unit_test(test_touching_parts_at_different_potential_are_found),
        cmocka_unit_test(test_overlap_at_equal_potential_is_fine),
        cmocka_unit_test(test_parts_with_a_gap_are_fine),
        cmocka_unit_test(test_part_in_a_hole_of_another_is_fine),
        cmocka_unit_test(test_parts_outside_the_region_are_located),
        cmocka_unit_test(test_part_too_thin_for_the_grid_is_refused),
        cmocka_unit_test(test_part_on_a_wall_needs_its_potential),
        cmocka_unit_test(test_part_on_a_running_wall_is_compared_where_it_touches),
        cmocka_unit_test(test_part_on_an_antimirror_must_be_at_zero),
        cmocka_unit_test(test_part_on_a_mirror_is_fine),
        cmocka_unit_test(test_parts_of_one_name_are_found),
        cmocka_unit_test(test_plane_that_nothing_drives_is_refused),
        cmocka_unit_test(test_supplies_at_zero_give_a_warning),
        cmocka_unit_test(test_absurd_regions_are_refused),
        cmocka_unit_test(test_path_must_lie_inside_the_planes_along_it),
        cmocka_unit_test(test_mirror_at_zero_doubles_the_region),
        cmocka_unit_test(test_path_through_a_part_is_located),
        cmocka_unit_test(test_path_without_width_through_a_block_is_located),
        cmocka_unit_test(test_folded_path_meets_parts_of_the_half),
        cmocka_unit_test(test_footprint_is_checked_across_the_beam),
        cmocka_unit_test(test_probes_must_lie_in_a_plane),
        cmocka_unit_test(test_lattice_must_lie_in_its_planes),
        cmocka_unit_test(test_reference_point_must_be_free),
        cmocka_unit_test(test_centre_matters_only_with_both_fields),
        cmocka_unit_test(test_limits_name_what_they_lack),
        cmocka_unit_test(test_surface_field_needs_an_electric_plane),
        cmocka_unit_test(test_example_file_passes),
        cmocka_unit_test(test_every_lack_of_memory_is_told),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
