/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Forces and capacitance matrix in the sheet, the summary and the report. */

#include <jansson.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "output/report.h"
#include "output/sheet.h"
#include "output/sheet_conductors.h"
#include "output/summary.h"
#include "tests/output/fixture.h"
#include "tests/support/assert_close.h"

#define KIND PLANE_ELECTRIC_ALONG

static const char *const names[] = {"upper plate", "lower <plate>", "guard",
                                    "a part whose name takes a line of its own"};

static void add(struct figures *figures, struct figure figure, const char *subject,
                const char *note)
{
    figure.group = FIGURE_HARDWARE;
    figure.planes = 1U << KIND;
    assert_int_equal(figures_add(figures, &figure, subject, note), STATUS_OK);
}

static double entry_value(size_t i, size_t j)
{
    return i == j ? 1.2345e-10 * (double)(i + 1) : -1.07e-12 * (double)(10 * i + j);
}

static void make_figures(struct figures *figures, size_t n)
{
    *figures = (struct figures){0};
    for (size_t i = 0; i < n; i++)
        for (size_t j = i; j < n; j++) {
            char subject[200];
            (void)snprintf(subject, sizeof subject, "%s, %s", names[i], names[j]);
            add(figures,
                (struct figure){.name = "capacitance_matrix",
                                .title = "capacitance matrix per metre",
                                .unit = "F/m",
                                .value = entry_value(i, j),
                                .uncertainty = 3e-15},
                subject, NULL);
        }
    add(figures,
        (struct figure){.name = "force_z",
                        .title = "force along z per metre",
                        .unit = "N/m",
                        .state = FIGURE_MISSING},
        "upper plate", "a mirror cuts the part");
    add(figures,
        (struct figure){.name = "force_x",
                        .title = "force along x per metre",
                        .unit = "N/m",
                        .value = -1.524219e-4,
                        .uncertainty = 4e-10},
        "upper plate", "on the half of the part inside the region");
}

static char *tables_of(const struct figures *figures)
{
    struct capture capture;
    capture_open(&capture);
    sheet_conductors(&capture.sink, figures);
    capture_close(&capture);
    return capture.text;
}

static void test_forces_stand_side_by_side_with_the_reason_of_a_gap(void **state)
{
    (void)state;
    struct figures figures;
    make_figures(&figures, 2);
    char *text = tables_of(&figures);
    const char *head = strstr(text, "electric_along");
    const char *row = strstr(text, "\n    upper plate ");
    assert_true(head != NULL && row != NULL && head < row);
    assert_non_null(strstr(head, "force along z"));
    assert_non_null(strstr(row, "-152.4219(4) uN/m"));
    assert_non_null(strstr(row, "a mirror cuts the part"));
    free(text);
    figures_free(&figures);
}

static void test_lower_half_of_the_matrix_is_shown_in_blocks(void **state)
{
    (void)state;
    struct figures figures;
    make_figures(&figures, 4);
    char *text = tables_of(&figures);
    const char *matrix = strstr(text, "capacitance matrix");
    assert_non_null(matrix);
    assert_non_null(strstr(matrix, "    1 upper plate"));
    assert_non_null(strstr(matrix, "    2 lower <plate>"));
    assert_non_null(
        strstr(matrix, "    4 a part whose name takes a line of its own\n"));
    assert_non_null(strstr(matrix, "123.450(3) pF/m"));
    assert_non_null(strstr(matrix, "493.800(3) pF/m"));
    int entries = 0;
    for (const char *at = matrix; (at = strstr(at, " pF/m")) != NULL; at++)
        entries++;
    assert_int_equal(entries, 10);
    for (const char *line = text; *line != '\0'; line = strchr(line, '\n') + 1)
        assert_true(strcspn(line, "\n") <= 88);
    free(text);
    figures_free(&figures);
}

/* force_imbalance_peak is a figure along the path. */
static void test_forces_of_other_groups_are_left_alone(void **state)
{
    (void)state;
    struct figure figure = {.name = "force_imbalance_peak", .group = FIGURE_ALONG};
    assert_false(sheet_is_conductor_figure(&figure));
    figure = (struct figure){.name = "force_z", .group = FIGURE_HARDWARE};
    assert_true(sheet_is_conductor_figure(&figure));
}

static void test_nothing_is_shown_without_conductors(void **state)
{
    (void)state;
    const struct figures none = {0};
    char *text = tables_of(&none);
    assert_string_equal(text, "");
    free(text);
}

/* The fixture's result with figures of conductors in the place of its own. */
static struct result with_figures(const struct fixture *fixture,
                                  const struct figures *figures)
{
    struct result result = fixture->result;
    struct quality *finest = &result.planes[KIND].quality[1];
    result.figures = *figures;
    finest->reciprocity = 2.7e-6;
    finest->row_sum = 3.1e-13;
    return result;
}

static void test_sheet_shows_reciprocity_of_the_finest_grid(void **state)
{
    struct figures figures;
    struct capture capture;
    make_figures(&figures, 2);
    const struct result result = with_figures(*state, &figures);
    capture_open(&capture);
    sheet_write(&capture.sink, &result);
    capture_close(&capture);
    assert_non_null(strstr(capture.text, "C_ij - C_ji up to 2.7e-06"));
    assert_non_null(strstr(capture.text, "row sums up to 3.1e-13"));
    assert_null(strstr(capture.text, "missing: "));
    capture_free(&capture);
    figures_free(&figures);
}

static void test_matrix_reads_back_from_the_summary(void **state)
{
    struct figures figures;
    struct capture capture;
    make_figures(&figures, 3);
    const struct result result = with_figures(*state, &figures);
    capture_open(&capture);
    assert_int_equal(summary_write(&capture.sink, &result, NULL, 0), STATUS_OK);
    capture_close(&capture);
    json_t *root = json_loads(capture.text, JSON_REJECT_DUPLICATES, NULL);
    const json_t *planes = json_object_get(root, "planes");
    const json_t *matrix =
        json_object_get(json_array_get(planes, 0), "capacitance_matrix");
    assert_non_null(matrix);
    assert_null(json_object_get(json_array_get(planes, 1), "capacitance_matrix"));
    const json_t *values = json_object_get(matrix, "value");
    assert_int_equal(json_array_size(values), 3);
    for (size_t i = 0; i < 3; i++) {
        const json_t *name = json_array_get(json_object_get(matrix, "conductors"), i);
        assert_string_equal(json_string_value(name), names[i]);
        for (size_t j = 0; j < 3; j++)
            assert_close(
                json_number_value(json_array_get(json_array_get(values, i), j)),
                i < j ? entry_value(i, j) : entry_value(j, i), 1e-15, 0.0);
    }
    assert_close(json_number_value(json_object_get(matrix, "reciprocity")), 2.7e-6,
                 1e-15, 0.0);
    assert_close(json_number_value(json_object_get(matrix, "row_sum")), 3.1e-13, 1e-15,
                 0.0);
    json_decref(root);
    capture_free(&capture);
    figures_free(&figures);
}

static void test_report_has_the_matrix_as_a_table(void **state)
{
    struct fixture *fixture = *state;
    struct figures figures;
    struct folder folder = {0};
    make_figures(&figures, 3);
    const struct result result = with_figures(fixture, &figures);
    assert_int_equal(folder_begin(&folder, fixture_path(fixture, "one.result"), "run",
                                  &fixture->messages),
                     STATUS_OK);
    assert_int_equal(report_write(&folder, &result, &fixture->messages), STATUS_OK);
    assert_int_equal(folder_commit(&folder, &fixture->messages), STATUS_OK);
    folder_free(&folder);
    char *text = fixture_read(fixture_path(fixture, "one.result/report.html"));
    assert_non_null(text);
    assert_non_null(strstr(text, "<th>lower &lt;plate&gt;</th>"));
    assert_non_null(strstr(text, "<td class=\"n\">370.350(3) pF/m</td>"));
    assert_null(strstr(text, "<td>capacitance matrix per metre"));
    assert_non_null(strstr(text, "force along x per metre, upper plate"));
    free(text);
    figures_free(&figures);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_forces_stand_side_by_side_with_the_reason_of_a_gap),
        cmocka_unit_test(test_lower_half_of_the_matrix_is_shown_in_blocks),
        cmocka_unit_test(test_forces_of_other_groups_are_left_alone),
        cmocka_unit_test(test_nothing_is_shown_without_conductors),
        cmocka_unit_test_setup_teardown(test_sheet_shows_reciprocity_of_the_finest_grid,
                                        fixture_setup, fixture_teardown),
        cmocka_unit_test_setup_teardown(test_matrix_reads_back_from_the_summary,
                                        fixture_setup, fixture_teardown),
        cmocka_unit_test_setup_teardown(test_report_has_the_matrix_as_a_table,
                                        fixture_setup, fixture_teardown),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
