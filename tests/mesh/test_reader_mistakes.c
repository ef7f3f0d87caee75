/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "tests/support/assert_close.h"

#include <stdio.h>
#include <string.h>

#include "mesh/reader.h"
#include "shared/mem.h"

/* A file that is wrong in one place, and the message it must give. */
struct mistake {
    const char *text; /* put behind `before` */
    int line, column; /* in the whole file */
    const char *part; /* of the message */
};

static void read_wrong(const char *text, struct messages *messages)
{
    struct geometry geometry = {.value_count = 7};
    enum status status =
        reader_read_text("t.yaml", text, strlen(text), &geometry, messages);
    if (status != STATUS_INPUT)
        fail_msg("\"%s\" gave \"%s\"", text, status_text(status));
    assert_int_equal(geometry.value_count, 0); /* empty after a mistake */
    assert_null(geometry.path);
}

/* Each text gives exactly its one message. */
static void assert_mistakes(const char *before, const struct mistake *mistakes,
                            size_t count)
{
    for (size_t k = 0; k < count; k++) {
        char text[2000];
        struct messages messages = {0};
        (void)snprintf(text, sizeof text, "%s%s", before, mistakes[k].text);
        read_wrong(text, &messages);
        const struct message *message = &messages.items[0];
        if (messages.count != 1)
            fail_msg("%s: %zu messages: %s", mistakes[k].text, messages.count,
                     messages.items[messages.count - 1].text);
        if (strstr(message->text, mistakes[k].part) == NULL)
            fail_msg("%s: \"%s\" lacks \"%s\"", mistakes[k].text, message->text,
                     mistakes[k].part);
        if (message->place.line != mistakes[k].line ||
            message->place.column != mistakes[k].column)
            fail_msg("%s: at %d:%d", mistakes[k].text, message->place.line,
                     message->place.column);
        messages_free(&messages);
    }
}

#define ASSERT_MISTAKES(before, list)                                                  \
    assert_mistakes(before, list, sizeof(list) / sizeof((list)[0]))

static void test_version_and_keys(void **state)
{
    (void)state;
    static const struct mistake list[] = {
        {"title: x\n", 1, 1, "the line \"evengap: 1\""},
        {"evengap: 2\n", 1, 10, "expected the file format version 1; found 2"},
        {"evengap: 1\ntitel: x\n", 2, 1, "did you mean \"title\"?"},
        {"evengap: 1\nwinding: x\n", 2, 1, "expected one of evengap, title, values"},
        {"evengap: 1\ntitle: [x]\n", 2, 8, "expected one line of text; found a list"},
        {"evengap: 1\ntitle: x\ntitle: y\n", 3, 1, "found it before in line 2"},
        {"evengap: 1\ntitle: x: y\n", 2, 9, "not valid YAML"},
        {"evengap: 1\nbeam: 4 mm\n", 2, 7, "expected keys with values; found 4 mm"},
    };
    ASSERT_MISTAKES("", list);
}

static void test_values(void **state)
{
    (void)state;
    static const struct mistake list[] = {
        {"values: [1]\n", 2, 9, "names with expressions"},
        {"values: {a b: 1}\n", 2, 10, "this cannot be a name"},
        {"values: {2a: 1}\n", 2, 10, "this cannot be a name"},
        {"values: {min: 1}\n", 2, 10, "this cannot be a name"},
        {"values: {a: 1 + 4 V}\n", 2, 15, "a number without a unit plus a voltage"},
        {"values: {a: b, b: 2*a}\n", 2, 21, "a -> b -> a"},
        {"values: {a: a}\n", 2, 13, "a -> a"},
        {"values: {a: 1, b: {c: 1}}\n", 2, 19, "found keys with values"},
        {"values: {a: }\n", 2, 10, "found nothing"},
        {"values: {a: 1/0, b: 2*a}\n", 2, 14, "not a finite number"},
        {"values: {a: p}\nsupplies: {p: 3 V}\n", 2, 13, "unknown name \"p\""},
        {"values: {a: 1}\nsupplies: {a: 3 V}\n", 3, 12, "has the name of a value"},
    };
    ASSERT_MISTAKES("evengap: 1\n", list);
}

static void test_supplies(void **state)
{
    (void)state;
    static const struct mistake list[] = {
        {"supplies: 3\n", 2, 11, "names with settings"},
        {"supplies: {p: 3}\n", 2, 15, "a setting in V, or in A"},
        {"supplies: {p: 4 mm}\n", 2, 15, "a setting in V, or in A"},
        {"supplies: {p: 3200 A turn}\n", 2, 22, "ampere-turns are written in A"},
        {"supplies: {p: 3 V, q: 2*p}\n", 2, 25, "\"p\" is a supply"},
    };
    ASSERT_MISTAKES("evengap: 1\n", list);
}

static void test_beam(void **state)
{
    (void)state;
    static const struct mistake list[] = {
        {"beam: {mass: 40 u}\n", 2, 7, "missing: charge energy (or speed)"},
        {"beam: {charge: 1 e, speed: 5 km/s}\n", 2, 7, "missing: mass"},
        {"beam: {mass: 40 u, charge: 1 e, energy: 1 keV, speed: 1 m/s}\n", 2, 55,
         "both \"energy\" and \"speed\""},
        {"beam: {mass: 40, charge: 1 e, energy: 1 keV}\n", 2, 14,
         "expected a mass such as 40 u; found 40"},
        {"beam: {mass: -4 u, charge: 1 e, energy: 1 keV}\n", 2, 14, "greater than 0"},
        {"beam: {mass: 40 u, charge: 0 e, energy: 1 keV}\n", 2, 28,
         "a charge other than 0"},
        {"beam: {mass: 40 u, charge: 1 e, energy: 2 kV}\n", 2, 41,
         "found 2 kV, which is a voltage"},
        {"beam: {mass: 40 u, charge: 1 e, speed: 3e8 m/s}\n", 2, 40,
         "less than the speed of light"},
        {"beam: {path: {from: 3 mm, to: 1 mm}}\n", 2, 14, "ends before it starts"},
        {"beam: {path: {from: 3 mm}}\n", 2, 14, "lacks \"to\""},
        {"beam: {footprint: {x: 0, y: 1 mm}}\n", 2, 19, "the footprint is empty"},
        {"beam: {slit: {at: 0, width: 0}}\n", 2, 14, "the slit is closed"},
        {"beam: {foot: {x: 0, y: 1 mm}}\n", 2, 8, "unknown key"},
    };
    ASSERT_MISTAKES("evengap: 1\n", list);
}

static void test_planes(void **state)
{
    (void)state;
    static const struct mistake list[] = {
        {"  electric_round: {}\n", 3, 3, "unknown key \"electric_round\""},
        {"  electric_along: {}\n", 3, 19, "lacks \"region\""},
        {"  electric_along: {region: {z: [0, 1 m]}}\n", 3, 28, "missing: x"},
        {"  electric_along: {region: {z: [0, 1 m], y: [0, 1 m], x: [0, 1 m]}}\n", 3, 42,
         "expected one of z, x; found \"y\""},
        {"  electric_along: {region: {z: [1 m, 0], x: [0, 1 m]}}\n", 3, 32,
         "found 1000 mm to 0 mm"},
        {"  electric_along: {region: {z: [0, 1], x: [0, 1 m]}}\n", 3, 36,
         "expected a length such as 4 mm; found 1"},
        {"  electric_along: {region: {z: 1 m, x: [0, 1 m]}}\n", 3, 32,
         "two lengths [from, to]"},
    };
    ASSERT_MISTAKES("evengap: 1\nplanes:\n", list);
}

#define REGION "  electric_along:\n    region: {z: [-1 m, 1 m], x: [-1 m, 1 m]}\n"
#define SUPPLY "supplies: {p: 3 V, c: 5 A}\n"

static void test_sides(void **state)
{
    (void)state;
    static const struct mistake list[] = {
        {"    sides: {z: free}\n", 6, 16, "expected wall, mirror, antimirror, open"},
        {"    sides: {y: wall}\n", 6, 13, "expected one of z, x"},
        {"    sides: {z: {low: wall, hihg: mirror}}\n", 6, 28,
         "did you mean \"high\"?"},
        {"    sides: {z: {wall: [1 V]}}\n", 6, 23, "two [low end, high end]"},
        {"    sides: {z: {wall: c}}\n", 6, 23, "the supply \"c\", which is set in A"},
        {"    sides: {z: {mirror: 1}}\n", 6, 17, "expected one of wall"},
        {"    turned: yes\n", 6, 5, "expected one of region, sides, parts"},
    };
    ASSERT_MISTAKES("evengap: 1\n" SUPPLY "planes:\n" REGION, list);
}

#define BOX "box: {z: [0, 1 mm], x: [0, 2 mm]}"

static void test_parts(void **state)
{
    (void)state;
    static const struct mistake list[] = {
        {"{" BOX "}\n", 7, 10, "kind of the part \"a\" is not clear"},
        {"{electrode: p, guard: p, " BOX "}\n", 7, 10, "found several"},
        {"{pole: c, " BOX "}\n", 7, 17,
         "expected \"electrode\", \"guard\", \"clamp\", \"floating\" or"},
        {"{electrode: c, " BOX "}\n", 7, 22, "the supply \"c\", which is set in A"},
        {"{electrode: 4 mm, " BOX "}\n", 7, 22, "which is a length"},
        {"{electrode: p*p, " BOX "}\n", 7, 23, "linear in the supplies"},
        {"{electrode: , " BOX "}\n", 7, 11, "found nothing"},
        {"{electrode: p}\n", 7, 10, "one of \"box\", \"disc\" and \"outline\""},
        {"{electrode: p, " BOX ", disc: {z: 0, x: 0, radius: 1 mm}}\n", 7, 10,
         "several"},
        {"{electrode: p, " BOX ", edge_radius: 0}\n", 7, 73, "greater than 0"},
        {"{electrode: p, " BOX ", turn: 3}\n", 7, 66,
         "an angle such as 3 deg; found 3"},
        {"{electrode: p, " BOX ", turn: {about: {z: 0, x: 0}}}\n", 7, 66, "lacks"},
        {"{electrode: p, " BOX ", twin: {name: b}}\n", 7, 66, "lacks \"across\""},
        {"{electrode: p, " BOX ", twin: {across: y}}\n", 7, 75, "expected z or x"},
        {"{electrode: p, " BOX ", twin: {across: []}}\n", 7, 75, "at least one axis"},
        {"{electrode: p, " BOX ", cut: {guard: p}}\n", 7, 66, "unknown key"},
        {"{electrode: p, " BOX ", iron: 3}\n", 7, 60, "unknown key"},
    };
    ASSERT_MISTAKES("evengap: 1\n" SUPPLY "planes:\n" REGION "    parts:\n      a: ",
                    list);
}

static void test_floating_parts_and_insulators(void **state)
{
    (void)state;
    static const struct mistake list[] = {
        {"{floating: 1 C, " BOX "}\n", 7, 21,
         "a charge per metre such as 0 C/m; found 1 C, which is a charge"},
        {"{floating: 3 V, " BOX "}\n", 7, 21, "found 3 V, which is a voltage"},
        {"{floating: , " BOX "}\n", 7, 11, "found nothing"},
        {"{floating: 0, guard: p, " BOX "}\n", 7, 10, "found several"},
        {"{floating: 0, " BOX ", twin: {across: x, potential: 0}}\n", 7, 88,
         "takes no potential; expected \"floating\" as that of the original"},
        {"{insulator: 0.5, " BOX "}\n", 7, 22,
         "a relative permittivity of 1 or more, such as 4.5; found 0.5"},
        {"{insulator: 4 mm, " BOX "}\n", 7, 22, "which is a length"},
        {"{insulator: p, " BOX "}\n", 7, 22, "\"p\" is a supply"},
        {"{insulator: 4, " BOX ", twin: {across: x, potential: 0}}\n", 7, 89,
         "takes no potential; expected \"insulator\" as that of the original"},
    };
    ASSERT_MISTAKES("evengap: 1\n" SUPPLY "planes:\n" REGION "    parts:\n      a: ",
                    list);
}

static void test_kinds_of_electric_parts_in_a_magnetic_plane(void **state)
{
    (void)state;
    static const struct mistake list[] = {
        {"{floating: 0, box: {z: [0, 1 mm], y: [0, 1 mm]}}\n", 6, 21,
         "expected \"pole\" or \"clamp\"; found \"floating\""},
        {"{insulator: 2, box: {z: [0, 1 mm], y: [0, 1 mm]}}\n", 6, 22,
         "expected \"pole\" or \"clamp\"; found \"insulator\""},
    };
    ASSERT_MISTAKES("evengap: 1\nplanes:\n  magnetic_along:\n"
                    "    region: {z: [-1 m, 1 m], y: [-1 m, 1 m]}\n    parts:\n"
                    "      a: ",
                    list);
}

static void test_turned_plane(void **state)
{
    (void)state;
    static const struct mistake list[] = {
        {"region: {z: [0, 1 m], r: [0, 1 m], x: [0, 1 m]}}\n", 3, 56,
         "expected one of z, r; found \"x\""},
        {"region: {z: [0, 1 m], r: [-5 mm, 1 m]}}\n", 3, 46,
         "expected an interval from 0 mm or more; found -5 mm to 1000 mm"},
        {"region: {z: [0, 1 m], r: [0, 1 m]}, sides: {r: {low: wall, high: wall}}}\n",
         3, 74, "always a mirror; expected \"mirror\" or nothing; found \"wall\""},
        {"region: {z: [0, 1 m], r: [0, 1 m]}, sides: {r: {low: {wall: 3 V}}}}\n", 3, 74,
         "always a mirror"},
        {"region: {z: [0, 1 m], r: [0, 1 m]}, sides: {r: {low: open}}}\n", 3, 74,
         "found \"open\""},
        {"region: {z: [0, 1 m], r: [0, 1 m]}, sides: {r: shut}}\n", 3, 68,
         "expected wall, mirror"},
        {"region: {z: [0, 1 m], r: [0, 1 m]}, parts: {a: {clamp: , disc: {z: 0, r: 5 "
         "mm, radius: 1 mm}, twin: {across: r}}}}\n",
         3, 130, "expected z, as a part of a turned plane has no image across r"},
        {"region: {z: [0, 1 m], r: [0, 1 m]}, parts: {a: {floating: 0 C/m, disc: {z: "
         "0, "
         "r: 5 mm, radius: 1 mm}}}}\n",
         3, 79, "expected a charge such as 0 C; found 0 C/m"},
    };
    for (size_t k = 0; k < sizeof list / sizeof list[0]; k++)
        assert_mistakes("evengap: 1\nplanes:\n  electric_turned: {", &list[k], 1);
}

static void test_shapes(void **state)
{
    (void)state;
    static const struct mistake list[] = {
        {"box: {z: [0, 1 mm]}", 7, 30, "missing: x"},
        {"box: {z: [0, 1 mm], x: [0, 2 mm]}, rounding: 0.6 mm", 7, 30,
         "at most half the shorter side"},
        {"box: {z: [0, 1 mm], x: [0, 2 mm]}, rounding: -1 mm", 7, 70, "0 or more"},
        {"disc: {z: 0, x: 0}", 7, 31, "missing: radius"},
        {"disc: {z: 0, x: 0, radius: 0}", 7, 52, "greater than 0"},
        {"disc: {z: 0, x: 0, radius: 1 mm}, rounding: 1 mm", 7, 69, "no corners"},
        {"outline: 3", 7, 34, "a list of points"},
        {"outline: [[0, 0], [1 mm, 0]]", 7, 34, "at least 3; found 2"},
        {"outline: [[0, 0], [1 mm], [0, 1 mm]]", 7, 43, "a point of two lengths"},
        {"outline: {file: a.txt}", 7, 34, "missing: unit"},
        {"outline: {file: nowhere.txt, unit: V}", 7, 60, "a unit of length"},
        {"outline: {file: nowhere.txt, unit: mm}", 7, 41, "there is no such file"},
    };
    for (size_t k = 0; k < sizeof list / sizeof list[0]; k++) {
        char text[200];
        struct mistake mistake = list[k];
        (void)snprintf(text, sizeof text, "%s}\n", list[k].text);
        mistake.text = text;
        assert_mistakes("evengap: 1\n" SUPPLY "planes:\n" REGION
                        "    parts:\n      a: {electrode: p, ",
                        &mistake, 1);
    }
}

static void test_outline_that_crosses_itself_names_a_point(void **state)
{
    (void)state;
    struct messages messages = {0};
    read_wrong("evengap: 1\nplanes:\n" REGION "    parts:\n      a:\n        clamp:\n"
               "        outline:\n          - [0, 0]\n          - [2 mm, 2 mm]\n"
               "          - [0, 2 mm]\n          - [2 mm, 0]\n",
               &messages);
    assert_non_null(strstr(messages.items[0].text, "lines that do not cross"));
    assert_in_range(messages.items[0].place.line, 9, 12);
    assert_int_equal(messages.items[0].place.column, 13);
    messages_free(&messages);
}

static void test_probes_limits_and_reference(void **state)
{
    (void)state;
    static const struct mistake list[] = {
        {"probes: 3\n", 2, 9, "expected a list"},
        {"probes: [4 mm]\n", 2, 10, "coordinates such as {z: 0 mm, x: 2 mm}"},
        {"probes: [{r: 0}]\n", 2, 11, "unknown key"},
        {"probes: [{x: 4}]\n", 2, 14, "a length such as 4 mm"},
        {"probes: [{x: 0, plane: along}]\n", 2, 24,
         "one of electric_along, electric_across, magnetic_along, magnetic_across, "
         "electric_turned; found along"},
        {"limits: {ratio: 1e-3}\n", 2, 10, "expected one of ratio_error"},
        {"limits: {ratio_error: 0}\n", 2, 23, "greater than 0"},
        {"limits: {ratio_error: 1 mm}\n", 2, 23, "which is a length"},
        {"limits: {kick: 1}\n", 2, 16, "an angle such as 3 deg; found 1"},
        {"limits: {surface_field: 5 kV}\n", 2, 25, "an electric field such as 2 kV/mm"},
        {"reference: {z: 0, a: 0}\n", 2, 19, "unknown key"},
    };
    ASSERT_MISTAKES("evengap: 1\n", list);
}

static void test_lattice_and_grid(void **state)
{
    (void)state;
    static const struct mistake list[] = {
        {"lattice: {x: [0, 1 mm, 1 mm], y: [0, 1 mm, 1 mm]}\n", 2, 10, "missing: z"},
        {"lattice: {x: [0, 1 mm], y: [0, 0, 1 mm], z: [0, 0, 1 mm]}\n", 2, 14,
         "three lengths [from, to, step]"},
        {"lattice: {x: [0, 1 mm, 0.3 mm], y: [0, 0, 1 mm], z: [0, 0, 1 mm]}\n", 2, 14,
         "found 3.33333333 steps"},
        {"lattice: {x: [0, 1 mm, 0], y: [0, 0, 1 mm], z: [0, 0, 1 mm]}\n", 2, 14,
         "a step greater than 0"},
        {"lattice: {x: [0, 1 m, 1 um], y: [0, 1 m, 1 um], z: [0, 0, 1 mm]}\n", 2, 10,
         "too many points"},
        {"grid: {fineness: 0}\n", 2, 18, "greater than 0"},
        {"grid: {fineness: 1000}\n", 2, 18, "from 0.1 to 20"},
        {"grid: {memory: 2}\n", 2, 16, "such as 2 GB"},
        {"grid: {memory: 2 mm}\n", 2, 16, "such as 2 GB"},
        {"grid: {memory: 1 kB}\n", 2, 16, "from 1 MB"},
        {"grid: {colour: 1}\n", 2, 8, "expected one of fineness, memory"},
    };
    ASSERT_MISTAKES("evengap: 1\n", list);
}

static void test_several_mistakes_come_in_one_go(void **state)
{
    (void)state;
    struct messages messages = {0};
    read_wrong("evengap: 1\ntitel: x\nvalues: {a: 1 mm + 1 V}\nbeam: {mass: 4}\n"
               "planes:\n" REGION "    parts:\n"
               "      a: {electrode: 1 V, " BOX ", rounding: 1}\n"
               "      b: {guard: q, " BOX "}\n"
               "grid: {fineness: a}\n",
               &messages);
    assert_int_equal(messages.errors, 5);
    assert_int_equal(messages.items[0].place.line, 2);
    assert_int_equal(messages.items[1].place.line, 3);
    assert_int_equal(messages.items[2].place.line, 4);
    assert_int_equal(messages.items[3].place.line, 9);
    assert_int_equal(messages.items[4].place.line, 10);
    messages_free(&messages);
}

static void test_flood_of_mistakes_is_cut_off(void **state)
{
    (void)state;
    char text[4000] = "evengap: 1\nprobes:\n";
    struct messages messages = {0};
    for (int k = 0; k < 200; k++) {
        size_t used = strlen(text);
        (void)snprintf(text + used, sizeof text - used, "  - {x: 4}\n");
    }
    read_wrong(text, &messages);
    assert_int_equal(messages.errors, 40);
    assert_int_equal(messages.count, 41);
    assert_int_equal(messages.items[40].severity, SEVERITY_NOTE);
    messages_free(&messages);
}

static void test_nobody_has_to_listen(void **state)
{
    (void)state;
    read_wrong("evengap: 1\ntitel: x\n", NULL);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_version_and_keys),
        cmocka_unit_test(test_values),
        cmocka_unit_test(test_supplies),
        cmocka_unit_test(test_beam),
        cmocka_unit_test(test_planes),
        cmocka_unit_test(test_sides),
        cmocka_unit_test(test_parts),
        cmocka_unit_test(test_floating_parts_and_insulators),
        cmocka_unit_test(test_kinds_of_electric_parts_in_a_magnetic_plane),
        cmocka_unit_test(test_turned_plane),
        cmocka_unit_test(test_shapes),
        cmocka_unit_test(test_outline_that_crosses_itself_names_a_point),
        cmocka_unit_test(test_probes_limits_and_reference),
        cmocka_unit_test(test_lattice_and_grid),
        cmocka_unit_test(test_several_mistakes_come_in_one_go),
        cmocka_unit_test(test_flood_of_mistakes_is_cut_off),
        cmocka_unit_test(test_nobody_has_to_listen),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
