/* SPDX-License-Identifier: GPL-3.0-or-later */

/* The model plates, from a geometry file, within 1e-6: fields on the axis and the integral
 * of E_x, against reference values from an independent boundary-integral computation that
 * agrees with itself to 1e-12. Both the printed uncertainty and the true error must be
 * within what was asked. */

#include "tests/support/assert_close.h"

#include <stdio.h>
#include <string.h>

#include "mesh/geometry_check.h"
#include "mesh/reader.h"
#include "solver/run.h"

#define WITHIN 1e-6

enum { POINTS = 6 };

/* |E_x| (V/m) at z = 0, 40, 55, 60, 65, 75 mm; |integral of E_x dz| (V). */
struct reference {
    double field[POINTS], integral;
};

static const struct reference square = {{49.9999997827e3, 49.9688828191e3,
                                         46.9465347357e3, 39.6826984003e3,
                                         27.8706574731e3, 10.8964685982e3},
                                        6868.00517925};
static const struct reference rounded = {{49.9999997615e3, 49.9658573173e3,
                                          46.6986668524e3, 39.1455423941e3,
                                          27.3467218744e3, 10.6989416485e3},
                                         6845.50367817};

static const char TEXT[] =
    "evengap: 1\n"
    "beam: {path: {from: -150 mm, to: 150 mm}}\n"
    "supplies: {plates: 1000 V}\n"
    "planes:\n"
    "  electric_along:\n"
    "    region: {z: [-150 mm, 150 mm], x: [-40 mm, 40 mm]}\n"
    "    parts:\n"
    "      upper plate:\n"
    "        electrode: plates/2\n"
    "        box: {z: [-60 mm, 60 mm], x: [10 mm, 14 mm]}\n"
    "        %s\n"
    "        twin: {across: x, potential: -plates/2, name: lower plate}\n"
    "probes:\n"
    "  - {z: 0 mm}\n  - {z: 40 mm}\n  - {z: 55 mm}\n"
    "  - {z: 60 mm}\n  - {z: 65 mm}\n  - {z: 75 mm}\n"
    "grid: {memory: 4 GB}\n";

static void read_plates(const char *line, struct geometry *geometry)
{
    char text[sizeof TEXT + 40];
    (void)snprintf(text, sizeof text, TEXT, line);
    assert_int_equal(
        reader_read_text("plates.yaml", text, strlen(text), geometry, NULL), STATUS_OK);
    assert_int_equal(geometry_check(geometry, NULL), STATUS_OK);
}

static void assert_within(double got, double uncertainty, double want)
{
    assert_true(uncertainty <= WITHIN * want);
    assert_close(fabs(got), want, WITHIN, 0.0);
    assert_close(fabs(got), want, 1e-11, uncertainty);
}

static void check_plates(const char *line, const struct reference *want)
{
    struct geometry geometry;
    struct result result;
    struct messages messages = {0};
    read_plates(line, &geometry);
    assert_int_equal(run_geometry(&geometry, &(struct run_options){.within = WITHIN},
                                  &result, &messages),
                     STATUS_OK);
    if (result.accuracy.state != ACCURACY_MET)
        fail_msg("%s", messages.items[0].text);
    assert_int_equal(result.probe_count, POINTS);
    for (size_t k = 0; k < POINTS; k++)
        assert_within(result.probes[k].field[1], result.probes[k].field_err[1],
                      want->field[k]);
    const struct figure *length =
        figures_find(&result.figures, "effective_length_electric", NULL);
    const double centre =
        fabs(figures_find(&result.figures, "centre_electric_field", NULL)->value);
    assert_within(length->value * centre, length->uncertainty * centre, want->integral);
    messages_free(&messages);
    result_free(&result);
    geometry_free(&geometry);
}

static void test_square_model_plates_are_within_a_millionth(void **state)
{
    (void)state;
    check_plates("", &square);
}

static void test_rounded_model_plates_are_within_a_millionth(void **state)
{
    (void)state;
    check_plates("rounding: 1 mm", &rounded);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_square_model_plates_are_within_a_millionth),
        cmocka_unit_test(test_rounded_model_plates_are_within_a_millionth),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
