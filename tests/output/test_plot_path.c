/* SPDX-License-Identifier: GPL-3.0-or-later */

/* What gnuplot is told about the path, uncertainties in particular: a program in its
 * place returns the script as the picture. */

#include <stdlib.h>
#include <string.h>

#include "output/plot_path.h"
#include "shared/mem.h"
#include "tests/output/fixture.h"
#include "tests/support/assert_close.h"

enum { COLUMNS = 10 };

static char *draw(struct fixture *fixture)
{
    struct folder folder = {0};
    bool drawn;
    assert_int_equal(folder_begin(&folder, fixture_path(fixture, "out"), "summary",
                                  &fixture->messages),
                     STATUS_OK);
    assert_int_equal(plot_path(&folder, &fixture->result, &drawn, &fixture->messages),
                     STATUS_OK);
    assert_true(drawn);
    char *path = folder_path(&folder, "path.svg");
    char *text = fixture_read(path);
    assert_non_null(text);
    mem_free(path);
    folder_free(&folder);
    return text;
}

/* Row k of $path. */
static void read_row(char *script, size_t k, double row[COLUMNS])
{
    char *at = strstr(script, "$path << EOD\n") + strlen("$path << EOD\n");
    for (; k > 0; k--)
        at = strchr(at, '\n') + 1;
    for (int c = 0; c < COLUMNS; c++)
        row[c] = strtod(at, &at);
    assert_int_equal(*at, '\n');
}

static void test_gnuplot_is_told_fields_and_their_uncertainties(void **state)
{
    struct fixture *fixture = *state;
    const struct profile *profile = &fixture->result.profile;
    const double e = profile->e_x[110], b = profile->b_y[110]; /* z = 0 */
    double row[COLUMNS];
    fixture_show_scripts(fixture);
    char *script = draw(fixture);
    for (size_t k = 60; k < 110; k += 7) {
        read_row(script, k, row);
        assert_close(row[0], profile->z[k] * 1e3, 1e-8, 0);
        assert_close(row[1], profile->e_x[k] / e, 1e-8, 0);
        assert_close(row[2], profile->b_y[k] / b, 1e-8, 0);
        assert_close(row[4], profile->ratio_error[k], 1e-8, 0);
        assert_close(row[5], profile->ratio_error_err[k], 1e-8, 0);
        assert_close(row[8], profile->e_x_err[k] / e, 1e-8, 0);
        assert_close(row[9], profile->b_y_err[k] / b, 1e-8, 0);
    }
    read_row(script, 0, row); /* hardly any field: no ratio there */
    assert_true(isnan(row[4]) && isnan(row[5]) && isfinite(row[8]));
    free(script);
}

static void test_thin_band_is_a_note_and_wide_one_is_drawn(void **state)
{
    struct fixture *fixture = *state;
    struct profile *profile = &fixture->result.profile;
    fixture_show_scripts(fixture);
    char *script = draw(fixture);
    assert_non_null(strstr(script, "Uncertainty of E_x: at most 6.7e-5 of the value at "
                                   "the reference, thinner than the line."));
    assert_non_null(strstr(script, "Uncertainty of B_y: at most 2.8e-5 of"));
    assert_null(strstr(script, "($2-$9)"));
    free(script);
    profile->e_x_err[70] = 0.021 * profile->e_x[110];
    script = draw(fixture);
    assert_non_null(strstr(script, "Uncertainty of E_x: at most 0.021 of the value at "
                                   "the reference, drawn as a band."));
    assert_non_null(strstr(script, "($2-$9):($2+$9) with filledcurves"));
    assert_null(strstr(script, "($3-$10)"));
    free(script);
}

static void test_ratio_band_counts_where_the_ratio_is_in_view(void **state)
{
    struct fixture *fixture = *state;
    struct profile *profile = &fixture->result.profile;
    fixture_show_scripts(fixture);
    for (size_t k = 0; k < profile->count; k++)
        profile->ratio_error_err[k] =
            fabs(profile->ratio_error[k]) > 3e-3 ? 0.5 : 1.3e-6;
    char *script = draw(fixture);
    assert_non_null(strstr(script, "ratio error: at most 1.3e-6 where it is in view, "
                                   "thinner than the line."));
    assert_null(strstr(script, "($5-$6)"));
    free(script);
    profile->ratio_error_err[110] = 1.2e-4;
    script = draw(fixture);
    assert_non_null(strstr(script, "at most 1.2e-4 where it is in view, drawn as"));
    assert_non_null(strstr(script, "(s*($5-$6)):(s*($5+$6)) with filledcurves"));
    free(script);
}

static void test_note_tells_how_far_the_ratio_leaves_its_panel(void **state)
{
    struct fixture *fixture = *state;
    struct profile *profile = &fixture->result.profile;
    fixture_show_scripts(fixture);
    char *script = draw(fixture);
    assert_non_null(strstr(script, "goes on beyond its panel, from -0.87 to 0.091"));
    free(script);
    for (size_t k = 0; k < profile->count; k++)
        profile->ratio_error[k] *= 1e-3;
    script = draw(fixture);
    assert_null(strstr(script, "beyond its panel"));
    free(script);
}

static void test_only_fills_that_are_there_are_explained(void **state)
{
    struct fixture *fixture = *state;
    struct plane *plane = &fixture->geometry.planes[PLANE_MAGNETIC_ALONG];
    fixture_show_scripts(fixture);
    char *script = draw(fixture);
    assert_non_null(strstr(script, "'Along the path: electrode dark, pole light'"));
    free(script);
    plane->parts[1].kind = PART_CLAMP;
    script = draw(fixture);
    assert_non_null(strstr(script, "pole light, clamp hatched'"));
    free(script);
}

#define EACH(test)                                                                     \
    cmocka_unit_test_setup_teardown(test, fixture_setup, fixture_teardown)

int main(void)
{
    const struct CMUnitTest tests[] = {
        EACH(test_gnuplot_is_told_fields_and_their_uncertainties),
        EACH(test_thin_band_is_a_note_and_wide_one_is_drawn),
        EACH(test_ratio_band_counts_where_the_ratio_is_in_view),
        EACH(test_note_tells_how_far_the_ratio_leaves_its_panel),
        EACH(test_only_fills_that_are_there_are_explained),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
