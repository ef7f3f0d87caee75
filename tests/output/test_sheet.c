/* SPDX-License-Identifier: GPL-3.0-or-later */

#include <stdlib.h>
#include <string.h>

#include "output/sheet.h"
#include "output/sheet_figures.h"
#include "output/words.h"
#include "tests/output/fixture.h"
#include "tests/support/assert_close.h"

static char *write_sheet(const struct result *result)
{
    struct capture capture;
    capture_open(&capture);
    sheet_write(&capture.sink, result);
    capture_close(&capture);
    return capture.text;
}

static void test_verdict_comes_before_the_figures(void **state)
{
    char *text = write_sheet(&((struct fixture *)*state)->result);
    char *verdict = strstr(text, "Verdict: NOT within limits: 1 of 2 not met");
    assert_non_null(verdict);
    assert_true(verdict < strstr(text, "wanted speed"));
    assert_non_null(strstr(text, "8.1(3)e-4"));
    assert_non_null(strstr(text, "at most 1.5 mrad"));
    assert_non_null(strstr(text, "the kick cannot be judged"));
    free(text);
}

static void test_every_figure_is_there_in_practical_units(void **state)
{
    char *text = write_sheet(&((struct fixture *)*state)->result);
    assert_non_null(strstr(text, "53.88712 km/s"));
    assert_non_null(strstr(text, "53.798(3) km/s             1 3\n"));
    assert_non_null(strstr(text, "fringe integral, E, exit"));
    assert_non_null(strstr(text, "0.18(2) unsettled"));
    assert_non_null(strstr(text, "2.170(11) mm"));
    char *part = strstr(text, "    upper plate ");
    assert_non_null(part);
    char *missing = strstr(part, "missing");
    assert_non_null(missing);
    assert_non_null(
        strstr(missing, "capacitance per length: needs plane electric_across"));
    free(text);
}

static void test_lines_stay_within_88_columns(void **state)
{
    char *text = write_sheet(&((struct fixture *)*state)->result);
    for (char *line = text; *line; line += strcspn(line, "\n") + 1)
        assert_in_range(strcspn(line, "\n"), 0, 88);
    free(text);
}

static void test_absent_plane_is_named_and_claims_nothing(void **state)
{
    struct fixture *fixture = *state;
    fixture->result.planes[PLANE_MAGNETIC_ALONG].present = false;
    char *text = write_sheet(&fixture->result);
    fixture->result.planes[PLANE_MAGNETIC_ALONG].present = true;
    assert_non_null(strstr(text, "3 magnetic_along: not in the file"));
    assert_non_null(strstr(text, "1 electric_along (z, x), finest grid 41 by 31"));
    assert_null(strstr(text, "endless along x"));
    assert_non_null(strstr(text, "endless along y"));
    free(text);
}

/* The fixture has all planes; without the turned one nobody needs to know r. */
static void test_r_is_explained_where_it_occurs(void **state)
{
    struct fixture *fixture = *state;
    char *text = write_sheet(&fixture->result);
    assert_non_null(strstr(text, "r is the distance from the axis z"));
    assert_non_null(strstr(text, "5 electric_turned (z, r), finest grid 41 by 31"));
    assert_non_null(strstr(text, "round about the axis z"));
    free(text);
    fixture->result.planes[PLANE_ELECTRIC_TURNED].present = false;
    text = write_sheet(&fixture->result);
    fixture->result.planes[PLANE_ELECTRIC_TURNED].present = true;
    assert_null(strstr(text, "r is the distance"));
    assert_non_null(strstr(text, "5 electric_turned: not in the file"));
    free(text);
}

static void test_all_cautions_are_printed(void **state)
{
    char *text = write_sheet(&((struct fixture *)*state)->result);
    static const char *const words[] = {"no safety case", "discharge", "0.5 mT",
                                        "implants",       "X rays",    "Vacuum",
                                        "codes",          "licensed"};
    char *cautions = strstr(text, "\nCautions\n");
    assert_non_null(cautions);
    for (size_t k = 0; k < sizeof words / sizeof words[0]; k++)
        assert_non_null(strstr(cautions, words[k]));
    free(text);
}

/* Tables of parts say whether their charges are per metre or of a whole ring. */
static void test_tables_of_parts_say_what_they_count(void **state)
{
    (void)state;
    struct figures figures = {0};
    static const unsigned planes[] = {1u << PLANE_ELECTRIC_ALONG,
                                      1u << PLANE_ELECTRIC_ACROSS,
                                      1u << PLANE_ELECTRIC_TURNED};
    for (int k = 0; k < 3; k++) {
        const struct figure figure = {.name = "charge",
                                      .title = "charge",
                                      .unit = k == 2 ? "C" : "C/m",
                                      .group = FIGURE_HARDWARE,
                                      .planes = planes[k],
                                      .value = 1.5e-9};
        assert_int_equal(figures_add(&figures, &figure, "ring", NULL), STATUS_OK);
    }
    struct capture capture;
    capture_open(&capture);
    sheet_figures(&capture.sink, &figures);
    capture_close(&capture);
    char *metre = strstr(capture.text, "  Per metre of depth; capacitance of a part");
    char *whole = strstr(capture.text, "  Of whole rings; capacitance of a part");
    assert_true(metre != NULL && whole != NULL);
    assert_true(metre < strstr(capture.text, "electric_along"));
    assert_null(strstr(metre + 5, "Per metre"));
    assert_true(strstr(capture.text, "electric_across") < whole);
    assert_true(whole < strstr(capture.text, "electric_turned"));
    free(capture.text);
    figures_free(&figures);
}

static void add(struct figures *figures, const char *name, enum figure_state state,
                const char *subject, const char *note)
{
    const struct figure figure = {.name = name,
                                  .title = name,
                                  .unit = "1",
                                  .group = FIGURE_ALONG,
                                  .state = state,
                                  .planes = 1,
                                  .value = state == FIGURE_MISSING ? 0 : 3.917284,
                                  .uncertainty = state == FIGURE_MISSING ? 0 : 2e-5};
    assert_int_equal(figures_add(figures, &figure, subject, note), STATUS_OK);
}

/* A table with the ends that there are; what is left out is a dash, what is missing as
 * a whole is told once, by its error. */
static void test_enge_functions_make_one_table(void **state)
{
    (void)state;
    struct figures figures = {0};
    struct capture capture;
    add(&figures, "enge_error_electric_exit", FIGURE_GOOD, NULL, "range and zero");
    add(&figures, "enge_electric_exit", FIGURE_GOOD, "a1", NULL);
    add(&figures, "enge_electric_exit", FIGURE_UNSETTLED, "a3", "grids");
    add(&figures, "enge_electric_exit", FIGURE_MISSING, "a5", "left out");
    add(&figures, "enge_error_magnetic_exit", FIGURE_MISSING, NULL, "no plane");
    add(&figures, "enge_magnetic_exit", FIGURE_MISSING, "a1", "no plane");
    capture_open(&capture);
    sheet_figures(&capture.sink, &figures);
    capture_close(&capture);
    assert_non_null(strstr(capture.text, "    a1       -                 3.91728(2) "));
    assert_non_null(strstr(capture.text, "    a3       -                 unsettled "));
    assert_non_null(strstr(capture.text, "    a5       -                 -  "));
    assert_non_null(strstr(capture.text, "    error    -                 3.91728(2) "));
    assert_non_null(strstr(capture.text, "E_x, exit: range and zero"));
    const char *missing = strstr(capture.text, "missing: no plane\n");
    assert_non_null(missing);
    assert_non_null(strstr(missing, "enge_error_magnetic_exit\n"));
    assert_null(strstr(missing, "a1"));
    free(capture.text);
    figures_free(&figures);
}

static void test_verdict_words_cover_all_cases(void **state)
{
    (void)state;
    struct verdict verdict = {.all_met = true};
    char text[128];
    words_verdict(&verdict, text, sizeof text);
    assert_non_null(strstr(text, "no limits are given"));
    verdict.count = 1;
    verdict.items[0].met = true;
    words_verdict(&verdict, text, sizeof text);
    assert_string_equal(text, "the limit is met");
    verdict.count = 3;
    verdict.items[1].met = verdict.items[2].met = true;
    words_verdict(&verdict, text, sizeof text);
    assert_string_equal(text, "all 3 limits are met");
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_verdict_comes_before_the_figures),
        cmocka_unit_test(test_every_figure_is_there_in_practical_units),
        cmocka_unit_test(test_lines_stay_within_88_columns),
        cmocka_unit_test(test_absent_plane_is_named_and_claims_nothing),
        cmocka_unit_test(test_r_is_explained_where_it_occurs),
        cmocka_unit_test(test_all_cautions_are_printed),
        cmocka_unit_test(test_tables_of_parts_say_what_they_count),
        cmocka_unit_test(test_enge_functions_make_one_table),
        cmocka_unit_test(test_verdict_words_cover_all_cases),
    };
    return cmocka_run_group_tests(tests, fixture_setup, fixture_teardown);
}
