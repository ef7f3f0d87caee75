/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "tests/support/assert_close.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include <unistd.h>

#include "mesh/reader.h"
#include "shared/constants.h"
#include "shared/mem.h"

/* A handful of operations on doubles. */
#define ROUNDING 1e-14

struct fixture {
    struct geometry geometry;
    struct messages messages;
};

static int set_up(void **state)
{
    static struct fixture fixture;
    memset(&fixture, 0, sizeof fixture);
    *state = &fixture;
    return 0;
}

static int tear_down(void **state)
{
    struct fixture *fixture = *state;
    geometry_free(&fixture->geometry);
    geometry_free(&fixture->geometry);
    messages_free(&fixture->messages);
    return 0;
}

static const struct geometry *read_fine(struct fixture *fixture, const char *text)
{
    geometry_free(&fixture->geometry);
    enum status status = reader_read_text("t.yaml", text, strlen(text),
                                          &fixture->geometry, &fixture->messages);
    if (status != STATUS_OK)
        fail_msg("%s", fixture->messages.count > 0 ? fixture->messages.items[0].text
                                                   : status_text(status));
    return &fixture->geometry;
}

static const char *const one_plane =
    "evengap: 1\n"
    "values: {gap: 20 mm}\n"
    "supplies: {plates: 110 V, bias: 7 V}\n"
    "planes:\n"
    "  electric_along:\n"
    "    region: {z: [-140 mm, 140 mm], x: [-50 mm, 50 mm]}\n"
    "    sides: {z: {low: mirror, high: antimirror}, x: {wall: [bias, 3 V]}}\n"
    "    parts:\n"
    "      upper plate:\n"
    "        electrode: plates/2 + 5 V\n"
    "        box: {z: [-57 mm, 57 mm], x: [gap/2, gap/2 + 4 mm]}\n"
    "        rounding: 1 mm\n"
    "        edge_radius: 0.2 mm\n"
    "        twin: {across: x, potential: -plates/2, name: lower plate}\n"
    "      stop:\n"
    "        clamp:\n"
    "        disc: {z: 100 mm, x: 30 mm, radius: 5 mm}\n"
    "        twin: [{across: x}, {across: [z, x]}]\n";

static void test_defaults_hold_for_what_is_not_given(void **state)
{
    const struct geometry *geometry = read_fine(*state, "evengap: 1\n");
    assert_string_equal(geometry->path, "t.yaml");
    assert_null(geometry->title);
    assert_close(geometry->fineness, 1, 0, 0);
    assert_close(geometry->memory_budget, 2e9, 0, 0);
    assert_false(geometry->has_reference || geometry->lattice.present);
    for (int k = 0; k < PLANE_KINDS; k++)
        assert_true(geometry->planes[k].kind == (enum plane_kind)k &&
                    !geometry->planes[k].present);
}

static void test_values_and_supplies_are_kept_in_si(void **state)
{
    const struct geometry *geometry =
        read_fine(*state, "evengap: 1\ntitle: A filter\n"
                          "values: {b: a/4, a: 30 mm}\n"
                          "supplies: {plates: 0.11 kV, coil: 3200 A}\n");
    assert_string_equal(geometry->title, "A filter");
    assert_int_equal(geometry->value_count, 2);
    assert_string_equal(geometry->values[0].name, "b");
    assert_close(geometry->values[0].value, 7.5e-3, ROUNDING, 0);
    assert_int_equal(geometry->values[0].place.line, 3);
    assert_close(geometry->supplies[0].setting, 110, ROUNDING, 0);
    assert_false(geometry->supplies[0].is_current);
    assert_true(geometry->supplies[1].is_current);
    assert_int_equal(geometry->supplies[1].place.column, 29);
}

static void test_region_and_sides_are_read(void **state)
{
    const struct geometry *geometry = read_fine(*state, one_plane);
    const struct plane *plane = &geometry->planes[PLANE_ELECTRIC_ALONG];
    assert_true(plane->present);
    assert_close(plane->low.a, -0.14, ROUNDING, 0);
    assert_close(plane->high.b, 0.05, ROUNDING, 0);
    assert_int_equal(plane->sides[SIDE_A_LOW].kind, SIDE_MIRROR);
    assert_int_equal(plane->sides[SIDE_A_HIGH].kind, SIDE_ANTIMIRROR);
    assert_int_equal(plane->sides[SIDE_B_HIGH].kind, SIDE_WALL);
    assert_close(plane->sides[SIDE_B_LOW].from.gain[1], 1, ROUNDING, 0);
    assert_close(plane->sides[SIDE_B_HIGH].to.constant, 3, ROUNDING, 0);
    assert_int_equal(plane->sides[SIDE_B_LOW].place.line, 7);
}

static void test_sides_are_grounded_walls_by_default(void **state)
{
    const struct geometry *geometry = read_fine(
        *state, "evengap: 1\nplanes: {magnetic_across: {region: {x: [0, 1 m], y: [0, 1 "
                "m]}, sides: {x: {high: mirror}}}}\n");
    const struct plane *plane = &geometry->planes[PLANE_MAGNETIC_ACROSS];
    assert_int_equal(plane->sides[SIDE_A_LOW].kind, SIDE_WALL);
    assert_int_equal(plane->sides[SIDE_A_HIGH].kind, SIDE_MIRROR);
    assert_close(plane->sides[SIDE_B_LOW].from.constant, 0, 0, 0);
    assert_non_null(plane->sides[SIDE_B_LOW].from.gain);
    assert_non_null(plane->sides[SIDE_A_HIGH].to.gain);
}

static void test_parts_carry_potential_and_shape(void **state)
{
    const struct geometry *geometry = read_fine(*state, one_plane);
    const struct part *part = &geometry->planes[PLANE_ELECTRIC_ALONG].parts[0];
    struct vec2 low, high;
    assert_string_equal(part->name, "upper plate");
    assert_int_equal(part->kind, PART_ELECTRODE);
    assert_int_equal(part->place.line, 9);
    assert_close(part->edge_radius, 0.2e-3, ROUNDING, 0);
    assert_close(geometry_potential(geometry, &part->potential), 60, ROUNDING, 0);
    shape_bounds(&part->shape, &low, &high);
    assert_close(low.a, -57e-3, ROUNDING, 0);
    assert_close(high.b, 14e-3, ROUNDING, 0);
    assert_false(shape_contains(&part->shape, (struct vec2){57e-3, 14e-3}, 1e-9));
}

static void test_twins_are_mirror_images(void **state)
{
    const struct geometry *geometry = read_fine(*state, one_plane);
    const struct plane *plane = &geometry->planes[PLANE_ELECTRIC_ALONG];
    struct vec2 low, high;
    assert_int_equal(plane->part_count, 5);
    const struct part *lower = &plane->parts[1], *far = &plane->parts[4];
    assert_string_equal(lower->name, "lower plate");
    assert_close(geometry_potential(geometry, &lower->potential), -55, ROUNDING, 0);
    assert_close(lower->edge_radius, 0.2e-3, ROUNDING, 0);
    shape_bounds(&lower->shape, &low, &high);
    assert_close(low.b, -14e-3, ROUNDING, 0);
    assert_string_equal(far->name, "stop (twin across z, x)");
    assert_int_equal(far->kind, PART_CLAMP);
    shape_bounds(&far->shape, &low, &high);
    assert_close(low.a, -105e-3, ROUNDING, 0);
    assert_close(high.b, -25e-3, ROUNDING, 0);
}

static void test_use_of_supplies_is_noted(void **state)
{
    const struct geometry *geometry =
        read_fine(*state, "evengap: 1\n"
                          "supplies: {p: 1 V, q: 2 V, r: 3 V}\n"
                          "planes: {electric_across: {region: {x: [0, 1 m], y: [0, 1 "
                          "m]}, sides: {x: {wall: q}},\n"
                          "  parts: {a: {guard: p - p, disc: {x: 0.5 m, y: 0.5 m, "
                          "radius: 9 mm}}}}}\n");
    assert_false(geometry->supplies[0].used); /* p - p: no influence */
    assert_true(geometry->supplies[1].used);
    assert_false(geometry->supplies[2].used);
}

static void test_cuts_and_turns_apply_in_order(void **state)
{
    const struct geometry *geometry = read_fine(
        *state,
        "evengap: 1\n"
        "planes: {electric_along: {region: {z: [-1 m, 1 m], x: [-1 m, 1 m]}, parts: {\n"
        "  a: {electrode: 3 V, box: {z: [0 mm, 40 mm], x: [0 mm, 20 mm]},\n"
        "      cut: [{disc: {z: 30 mm, x: 10 mm, radius: 3 mm}}],\n"
        "      turn: 90 deg}}}}\n");
    const struct shape *shape = &geometry->planes[PLANE_ELECTRIC_ALONG].parts[0].shape;
    struct vec2 low, high;
    shape_bounds(shape, &low, &high);
    assert_close(low.a, 10e-3, 1e-12, 0);
    assert_close(high.b, 30e-3, 1e-12, 0);
    assert_false(shape_contains(shape, (struct vec2){20e-3, 20e-3}, 1e-9));
    assert_true(shape_contains(shape, (struct vec2){20e-3, 0}, 1e-9));
}

static void test_turn_about_a_point(void **state)
{
    const struct geometry *geometry = read_fine(
        *state,
        "evengap: 1\n"
        "planes: {electric_along: {region: {z: [-1 m, 1 m], x: [-1 m, 1 m]}, parts: {\n"
        "  a: {clamp: , disc: {z: 40 mm, x: 0, radius: 3 mm},\n"
        "      turn: {angle: 90 deg, about: {z: 10 mm, x: 0}}}}}}\n");
    struct vec2 low, high;
    shape_bounds(&geometry->planes[PLANE_ELECTRIC_ALONG].parts[0].shape, &low, &high);
    assert_close(low.b, 27e-3, 1e-12, 0);
    assert_close(high.a, 13e-3, 1e-12, 0);
}

static void test_outline_points_are_in_the_order_of_the_axes(void **state)
{
    const struct geometry *geometry = read_fine(
        *state,
        "evengap: 1\n"
        "planes: {magnetic_along: {region: {z: [-1 m, 1 m], y: [-1 m, 1 m]}, parts: {\n"
        "  a: {pole: 3 A, outline: [[0, 0], [30 mm, 0], [30 mm, 7 mm], [0, 7 "
        "mm]]}}}}\n");
    struct vec2 low, high;
    shape_bounds(&geometry->planes[PLANE_MAGNETIC_ALONG].parts[0].shape, &low, &high);
    assert_close(high.a, 30e-3, ROUNDING, 0);
    assert_close(high.b, 7e-3, ROUNDING, 0);
}

/* Force balance needs the speed: v from T = (gamma - 1) m c^2, checked by putting gamma
 * of the speed read back into the formula. */
static void test_energy_gives_the_relativistic_speed(void **state)
{
    const struct geometry *geometry = read_fine(
        *state, "evengap: 1\nbeam: {mass: 9.1093837015e-31 kg, charge: -1 e, energy: "
                "100 keV}\n");
    const struct beam *beam = &geometry->beam;
    assert_true(beam->has_particle);
    assert_close(beam->charge, -ELEMENTARY_CHARGE, ROUNDING, 0);
    assert_close(beam->speed / SPEED_OF_LIGHT, 0.548221, 0, 1e-6); /* T-BMT tables */
    double beta = beam->speed / SPEED_OF_LIGHT;
    double gamma = 1 / sqrt(1 - beta * beta);
    double rest = beam->mass * SPEED_OF_LIGHT * SPEED_OF_LIGHT;
    assert_close((gamma - 1) * rest, beam->energy, 1e-12, 0);
}

static void test_slow_ions_keep_all_digits(void **state)
{
    const struct geometry *geometry = read_fine(
        *state, "evengap: 1\nbeam: {mass: 131.293 u, charge: 1 e, energy: 300 "
                "eV}\n");
    const struct beam *beam = &geometry->beam;
    /* sqrt(2 T / m): the relativistic part is 2e-9 of it. */
    assert_close(beam->speed, sqrt(2 * beam->energy / beam->mass), 4e-9, 0);
    assert_close(beam->speed, 20998.4, 0, 0.05);
}

static void test_speed_gives_the_energy_back(void **state)
{
    const struct geometry *geometry = read_fine(
        *state,
        "evengap: 1\nbeam: {mass: 39.948 u, charge: 2 e, speed: 69502.1 m/s}\n");
    assert_close(geometry->beam.energy / ELEMENTARY_CHARGE, 1000, 2e-6, 0);
}

static void test_path_footprint_and_slit_are_read(void **state)
{
    const struct geometry *geometry = read_fine(
        *state,
        "evengap: 1\nbeam:\n  path: {from: -110 mm, to: 120 mm}\n"
        "  footprint: {x: 3 mm, y: 2 mm}\n  slit: {at: 0.5 m, width: 0.4 mm}\n");
    const struct beam *beam = &geometry->beam;
    assert_true(beam->has_path && beam->has_footprint && beam->has_slit);
    assert_false(beam->has_particle);
    assert_close(beam->path_to, 0.12, ROUNDING, 0);
    assert_close(beam->half_y, 2e-3, ROUNDING, 0);
    assert_close(beam->slit_width, 0.4e-3, ROUNDING, 0);
}

static void test_probes_limits_and_reference_are_read(void **state)
{
    const struct geometry *geometry = read_fine(
        *state, "evengap: 1\n"
                "probes: [{z: 1 mm, x: 2 mm}, {y: 3 mm, plane: magnetic_across}]\n"
                "limits: {ratio_error: 0.1 %, kick: 1.5 mrad, surface_field: 5 kV/mm}\n"
                "reference: {z: 4 mm}\n");
    assert_int_equal(geometry->probe_count, 2);
    assert_true(geometry->probes[0].has_z && !geometry->probes[0].has_plane);
    assert_false(geometry->probes[1].has_z);
    assert_int_equal(geometry->probes[1].plane, PLANE_MAGNETIC_ACROSS);
    assert_close(geometry->probes[1].y, 3e-3, ROUNDING, 0);
    assert_close(geometry->limits[LIMIT_RATIO_ERROR].value, 1e-3, ROUNDING, 0);
    assert_close(geometry->limits[LIMIT_KICK].value, 1.5e-3, ROUNDING, 0);
    assert_close(geometry->limits[LIMIT_SURFACE_FIELD].value, 5e6, ROUNDING, 0);
    assert_false(geometry->limits[LIMIT_OFFSET].present);
    assert_true(geometry->has_reference);
    assert_close(geometry->reference_z, 4e-3, ROUNDING, 0);
}

static void test_lattice_counts_points(void **state)
{
    const struct geometry *geometry = read_fine(
        *state,
        "evengap: 1\nlattice: {z: [-110 mm, 110 mm, 1 mm], x: [-5 mm, 5 mm, 0.5 "
        "mm], y: [0, 0, 1 mm]}\n");
    assert_true(geometry->lattice.present);
    assert_int_equal(geometry->lattice.axes[AXIS_Z].count, 221);
    assert_int_equal(geometry->lattice.axes[AXIS_X].count, 21);
    assert_int_equal(geometry->lattice.axes[AXIS_Y].count, 1);
}

static void test_grid_settings_are_read(void **state)
{
    const struct geometry *geometry =
        read_fine(*state, "evengap: 1\ngrid: {fineness: 1.5, memory: 512 MiB}\n");
    assert_close(geometry->fineness, 1.5, ROUNDING, 0);
    assert_close(geometry->memory_budget, 536870912.0, 0, 0);
}

static void test_aliases_stand_for_their_anchor(void **state)
{
    const struct geometry *geometry = read_fine(
        *state, "evengap: 1\nplanes:\n"
                "  electric_across: {region: &r {x: [-1 m, 1 m], y: [-2 m, 2 m]}}\n"
                "  magnetic_across: {region: *r}\n");
    assert_close(geometry->planes[PLANE_MAGNETIC_ACROSS].high.b, 2, ROUNDING, 0);
}

/* A new directory with a geometry file that refers to an outline file in it. */
static void write_text(const char *folder, const char *name, const char *text,
                       char *path, size_t size)
{
    (void)snprintf(path, size, "%s/%s", folder, name);
    FILE *file = fopen(path, "wb");
    assert_non_null(file);
    assert_true(fputs(text, file) >= 0);
    assert_int_equal(fclose(file), 0);
}

static enum status read_with_outline(struct fixture *fixture, const char *outline)
{
    char folder[] = "/tmp/evengap_reader_XXXXXX";
    char first[100], second[100];
    assert_non_null(mkdtemp(folder));
    write_text(folder, "pole.txt", outline, first, sizeof first);
    write_text(folder, "g.yaml",
               "evengap: 1\nplanes:\n  magnetic_along:\n"
               "    region: {z: [-1 m, 1 m], y: [-1 m, 1 m]}\n"
               "    parts: {a: {pole: 3 A, outline: {file: pole.txt, unit: mm}}}\n",
               second, sizeof second);
    enum status status =
        reader_read_file(second, &fixture->geometry, &fixture->messages);
    assert_int_equal(remove(first) + remove(second) + rmdir(folder), 0);
    return status;
}

static void test_outline_file_is_found_beside_the_geometry(void **state)
{
    struct fixture *fixture = *state;
    struct vec2 low, high;
    assert_int_equal(
        read_with_outline(fixture,
                          "# z y\n-30 0\n30, 0 # end\r\n\n30\t12.5\n-30 1.25e1"),
        STATUS_OK);
    shape_bounds(&fixture->geometry.planes[PLANE_MAGNETIC_ALONG].parts[0].shape, &low,
                 &high);
    assert_close(low.a, -30e-3, ROUNDING, 0);
    assert_close(high.b, 12.5e-3, ROUNDING, 0);
}

static void test_mistake_in_an_outline_file_names_its_line(void **state)
{
    struct fixture *fixture = *state;
    assert_int_equal(read_with_outline(fixture, "0 0\n30 0\n30 x\n"), STATUS_INPUT);
    const struct message *message = &fixture->messages.items[0];
    assert_non_null(strstr(message->text, "line 3 of the outline file \"pole.txt\""));
    assert_int_equal(message->place.line, 5);
}

static void test_unreadable_files_are_told(void **state)
{
    struct fixture *fixture = *state;
    assert_int_equal(
        reader_read_file("/nowhere/g.yaml", &fixture->geometry, &fixture->messages),
        STATUS_INPUT);
    assert_non_null(strstr(fixture->messages.items[0].text, "there is no such file"));
    assert_int_equal(reader_read_file("/", &fixture->geometry, &fixture->messages),
                     STATUS_INPUT);
    assert_non_null(strstr(fixture->messages.items[1].text, "it is a directory"));
    assert_string_equal(fixture->messages.file, "/");
}

/* Fails every request in turn; the reading must end in STATUS_MEMORY each time. */
static void sweep(struct fixture *fixture, const char *text, enum status last)
{
    enum status status = STATUS_MEMORY;
    long k = 0;
    while (status == STATUS_MEMORY) {
        struct messages messages = {0};
        mem_fail_at(++k);
        status = reader_read_text("t.yaml", text, strlen(text), &fixture->geometry,
                                  &messages);
        mem_fail_at(0);
        messages_free(&messages);
        if (status != STATUS_OK)
            assert_null(fixture->geometry.path);
    }
    assert_int_equal(status, last);
    assert_true(k > 50);
}

static void test_every_lack_of_memory_is_told(void **state)
{
    sweep(*state, one_plane, STATUS_OK);
    tear_down(state);
    char text[3000];
    (void)snprintf(text, sizeof text,
                   "%s        cut: [{disc: {z: 0.1 m, x: 30 mm, radius: 2 mm}}]\n"
                   "      bar: {guard: 1 V, outline: [[0, 0], [1 mm, 0], [0, 1 mm]]}\n"
                   "probes: [{z: 0}, {x: 0}]\nlimits: {kick: 1 mrad}\n",
                   one_plane);
    sweep(*state, text, STATUS_OK);
}

static void test_lack_of_memory_amid_mistakes_is_told(void **state)
{
    char text[3000];
    (void)snprintf(text, sizeof text, "%stitle: []\nbeam: {mass: 4}\n", one_plane);
    sweep(*state, text, STATUS_INPUT);
}

#define CASE(test) cmocka_unit_test_setup_teardown(test, set_up, tear_down)

int main(void)
{
    const struct CMUnitTest tests[] = {
        CASE(test_defaults_hold_for_what_is_not_given),
        CASE(test_values_and_supplies_are_kept_in_si),
        CASE(test_region_and_sides_are_read),
        CASE(test_sides_are_grounded_walls_by_default),
        CASE(test_parts_carry_potential_and_shape),
        CASE(test_twins_are_mirror_images),
        CASE(test_use_of_supplies_is_noted),
        CASE(test_cuts_and_turns_apply_in_order),
        CASE(test_turn_about_a_point),
        CASE(test_outline_points_are_in_the_order_of_the_axes),
        CASE(test_energy_gives_the_relativistic_speed),
        CASE(test_slow_ions_keep_all_digits),
        CASE(test_speed_gives_the_energy_back),
        CASE(test_path_footprint_and_slit_are_read),
        CASE(test_probes_limits_and_reference_are_read),
        CASE(test_lattice_counts_points),
        CASE(test_grid_settings_are_read),
        CASE(test_aliases_stand_for_their_anchor),
        CASE(test_outline_file_is_found_beside_the_geometry),
        CASE(test_mistake_in_an_outline_file_names_its_line),
        CASE(test_unreadable_files_are_told),
        CASE(test_every_lack_of_memory_is_told),
        CASE(test_lack_of_memory_amid_mistakes_is_told),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
