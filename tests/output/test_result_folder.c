/* SPDX-License-Identifier: GPL-3.0-or-later */

/* The whole folder from the hand-made result: which files, no litter, same bytes. */

#define _XOPEN_SOURCE 700 /* NOLINT: setenv */

#include <stdlib.h>
#include <string.h>
#include <unistd.h>

#include "output/result_folder.h"
#include "shared/mem.h"
#include "tests/output/fixture.h"
#include "tests/support/assert_close.h"

static const char *const all_files[] = {"electric_along.vtk",
                                        "electric_along.svg",
                                        "electric_across.vtk",
                                        "electric_across.svg",
                                        "magnetic_along.vtk",
                                        "magnetic_along.svg",
                                        "magnetic_across.vtk",
                                        "magnetic_across.svg",
                                        "electric_turned.vtk",
                                        "electric_turned.svg",
                                        "path.csv",
                                        "path.svg",
                                        "ratio_map.svg",
                                        "convergence.svg",
                                        "lattice.vtk",
                                        "lattice.csv",
                                        "sheet.txt",
                                        "report.html",
                                        "summary.json"};
#define ALL_FILES (sizeof all_files / sizeof all_files[0])

static bool is_picture(const char *name)
{
    return strstr(name, ".svg") != NULL;
}

static char *read_from(const struct fixture *fixture, const char *folder,
                       const char *name)
{
    char path[128];
    (void)snprintf(path, sizeof path, "%s/%s", folder, name);
    return fixture_read(fixture_path(fixture, path));
}

static void write_to(struct fixture *fixture, const char *folder)
{
    assert_int_equal(result_folder_write(&fixture->result,
                                         fixture_path(fixture, folder),
                                         &fixture->messages),
                     STATUS_OK);
}

static void test_all_files_are_written_and_nothing_else(void **state)
{
    struct fixture *fixture = *state;
    write_to(fixture, "out");
    assert_int_equal(fixture->messages.count, 0);
    assert_int_equal(fixture_entries(fixture_path(fixture, "out")), ALL_FILES);
    char *summary = read_from(fixture, "out", "summary.json");
    for (size_t k = 0; k < ALL_FILES; k++) {
        char quoted[64];
        char *text = read_from(fixture, "out", all_files[k]);
        assert_non_null(text);
        if (is_picture(all_files[k]))
            assert_non_null(strstr(text, "</svg>"));
        (void)snprintf(quoted, sizeof quoted, "\"%s\"", all_files[k]);
        assert_non_null(strstr(summary, quoted));
        free(text);
    }
    free(summary);
}

static void test_second_run_gives_the_same_bytes(void **state)
{
    struct fixture *fixture = *state;
    write_to(fixture, "one");
    write_to(fixture, "two");
    for (size_t k = 0; k < ALL_FILES; k++) {
        char *one = read_from(fixture, "one", all_files[k]);
        char *two = read_from(fixture, "two", all_files[k]);
        assert_string_equal(one, two);
        free(one);
        free(two);
    }
}

static void test_pictures_keep_odd_names_readable(void **state)
{
    struct fixture *fixture = *state;
    write_to(fixture, "out");
    char *picture = read_from(fixture, "out", "electric_along.svg");
    assert_non_null(strstr(picture, "lower &lt;plate"));
    assert_non_null(strstr(picture, " &amp; 'co'"));
    assert_non_null(strstr(picture, "z (mm)"));
    assert_non_null(strstr(picture, "potential (V)"));
    free(picture);
}

static void test_report_escapes_text_and_embeds_pictures(void **state)
{
    struct fixture *fixture = *state;
    write_to(fixture, "out");
    char *report = read_from(fixture, "out", "report.html");
    assert_non_null(
        strstr(report, "Bench filter &quot;A&quot; &lt;2 keV&gt; &amp; more"));
    assert_null(strstr(report, "<2 keV>"));
    assert_non_null(strstr(report,
                           "alt=\"path.svg\" src=\"data:image/svg+xml;base64,"
                           "PD94bWwgdmVyc2lvbj0iMS4w")); /* <?xml version="1.0 */
    assert_true(strstr(report, "Verdict: NOT") < strstr(report, "<table>"));
    free(report);
}

static void test_report_explains_the_convergence_plot_or_its_absence(void **state)
{
    struct fixture *fixture = *state;
    struct figures *figures = &fixture->result.figures;
    write_to(fixture, "out");
    char *report = read_from(fixture, "out", "report.html");
    char *picture = strstr(report, "alt=\"convergence.svg\"");
    assert_non_null(picture);
    assert_non_null(strstr(picture, "along the thin line of slope 2"));
    assert_true(picture < strstr(report, "alt=\"electric_along.svg\""));
    assert_null(strstr(report, "There is no convergence plot"));
    free(report);
    for (size_t k = 0; k < figures->count; k++)
        figures->items[k].grid_count = 0;
    write_to(fixture, "none");
    assert_int_equal(fixture_entries(fixture_path(fixture, "none")), ALL_FILES - 1);
    report = read_from(fixture, "none", "report.html");
    assert_null(strstr(report, "convergence.svg"));
    assert_non_null(strstr(report, "There is no convergence plot: no main figure "
                                   "changes from grid to grid."));
    free(report);
}

static void test_subset_of_planes_writes_its_files_only(void **state)
{
    struct fixture *fixture = *state;
    struct result *result = &fixture->result;
    for (int k = 1; k < PLANE_KINDS; k++)
        result->planes[k].present = false;
    result->profile.present = result->section.present = false;
    result->lattice.present = false;
    write_to(fixture, "out");
    assert_int_equal(fixture_entries(fixture_path(fixture, "out")), 6);
    char *text = read_from(fixture, "out", "electric_along.vtk");
    assert_non_null(text);
    free(text);
}

static void test_without_gnuplot_only_plots_are_missing(void **state)
{
    struct fixture *fixture = *state;
    char *path = mem_text(getenv("PATH"));
    assert_int_equal(setenv("PATH", "/nonexistent", 1), 0);
    write_to(fixture, "out");
    assert_int_equal(setenv("PATH", path, 1), 0);
    mem_free(path);
    assert_int_equal(fixture_entries(fixture_path(fixture, "out")), ALL_FILES - 8);
    assert_int_equal(fixture->messages.count, 8);
    assert_int_equal(fixture->messages.errors, 0);
    assert_non_null(strstr(fixture->messages.items[0].text, "gnuplot"));
    char *summary = read_from(fixture, "out", "summary.json");
    assert_null(strstr(summary, ".svg"));
    free(summary);
}

static void test_value_that_is_not_finite_writes_nothing(void **state)
{
    struct fixture *fixture = *state;
    fixture->result.planes[PLANE_MAGNETIC_ALONG].potential[3] = (double)NAN;
    assert_int_equal(result_folder_write(&fixture->result, fixture_path(fixture, "out"),
                                         &fixture->messages),
                     STATUS_UNTRUSTED);
    assert_int_equal(fixture_entries(fixture->folder), 0);
}

/* The pictures make thousands of small requests, so later ones are sampled. */
static void test_failed_allocations_leave_no_litter(void **state)
{
    struct fixture *fixture = *state;
    char *path = mem_text(getenv("PATH")); /* without gnuplot: many runs */
    assert_int_equal(setenv("PATH", "/nonexistent", 1), 0);
    enum status status = STATUS_MEMORY;
    long k = 0, runs = 0;
    while (status == STATUS_MEMORY && k < 1000000) {
        k += 1 + k / 8;
        runs++;
        mem_fail_at(k);
        status =
            result_folder_write(&fixture->result, fixture_path(fixture, "out"), NULL);
        mem_fail_at(0);
        assert_int_equal(fixture_entries(fixture->folder), status == STATUS_OK);
    }
    assert_int_equal(setenv("PATH", path, 1), 0);
    mem_free(path);
    assert_int_equal(status, STATUS_OK);
    assert_true(runs > 30);
}

#define EACH(test)                                                                     \
    cmocka_unit_test_setup_teardown(test, fixture_setup, fixture_teardown)

int main(void)
{
    const struct CMUnitTest tests[] = {
        EACH(test_all_files_are_written_and_nothing_else),
        EACH(test_second_run_gives_the_same_bytes),
        EACH(test_pictures_keep_odd_names_readable),
        EACH(test_report_escapes_text_and_embeds_pictures),
        EACH(test_report_explains_the_convergence_plot_or_its_absence),
        EACH(test_subset_of_planes_writes_its_files_only),
        EACH(test_without_gnuplot_only_plots_are_missing),
        EACH(test_value_that_is_not_finite_writes_nothing),
        EACH(test_failed_allocations_leave_no_litter),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
