/* SPDX-License-Identifier: GPL-3.0-or-later */

#include <stdlib.h>
#include <string.h>

#include "output/path_csv.h"
#include "tests/output/fixture.h"
#include "tests/support/assert_close.h"

#define COLUMNS 10

static char *write_profile(const struct profile *profile)
{
    struct capture capture;
    capture_open(&capture);
    path_csv_write(&capture.sink, profile);
    capture_close(&capture);
    return capture.text;
}

/* Splits one CRLF row into cells in place; returns the next row. */
static char *split_row(char *row, char *cells[COLUMNS])
{
    char *end = strstr(row, "\r\n");
    assert_non_null(end);
    *end = '\0';
    for (int k = 0; k < COLUMNS; k++) {
        cells[k] = row;
        row += strcspn(row, ",");
        assert_int_equal(*row == ',', k < COLUMNS - 1);
        *row++ = '\0';
    }
    return end + 2;
}

static void test_full_profile_reads_back(void **state)
{
    const struct profile *profile = &((struct fixture *)*state)->result.profile;
    const double *columns[COLUMNS] = {profile->z,
                                      profile->e_x,
                                      profile->e_x_err,
                                      profile->b_y,
                                      profile->b_y_err,
                                      profile->ratio_error,
                                      profile->ratio_error_err,
                                      profile->bundle_low,
                                      profile->bundle_high,
                                      profile->imbalance};
    char *text = write_profile(profile), *cells[COLUMNS];
    char *row = split_row(text, cells);
    assert_string_equal(cells[0], "z_m");
    assert_string_equal(cells[1], "E_x_V_per_m");
    assert_string_equal(cells[9], "force_imbalance");
    for (size_t k = 0; k < profile->count; k++) {
        row = split_row(row, cells);
        for (int c = 0; c < COLUMNS; c++) {
            bool ratio = c >= 5 && c <= 8;
            if (ratio && !profile->defined[k])
                assert_string_equal(cells[c], "");
            else
                assert_close(strtod(cells[c], NULL), columns[c][k], 1e-11, 0);
        }
    }
    assert_string_equal(row, "");
    free(text);
}

static void test_missing_plane_leaves_cells_empty(void **state)
{
    struct profile profile = ((struct fixture *)*state)->result.profile;
    profile.b_y = profile.b_y_err = profile.ratio_error = profile.imbalance = NULL;
    char *text = write_profile(&profile), *cells[COLUMNS];
    char *row = split_row(text, cells);
    (void)split_row(row, cells);
    for (int c = 3; c < COLUMNS; c++)
        assert_string_equal(cells[c], "");
    assert_close(strtod(cells[1], NULL), profile.e_x[0], 1e-11, 0);
    free(text);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_full_profile_reads_back),
        cmocka_unit_test(test_missing_plane_leaves_cells_empty),
    };
    return cmocka_run_group_tests(tests, fixture_setup, fixture_teardown);
}
