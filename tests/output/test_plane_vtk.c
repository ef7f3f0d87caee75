/* SPDX-License-Identifier: GPL-3.0-or-later */

/* An independent little parser reads the file back; the real library does the same in
 * vtk_readback.py. */

#include <stdlib.h>
#include <string.h>

#include "output/plane_vtk.h"
#include "tests/output/fixture.h"
#include "tests/support/assert_close.h"

static char *write_plane(const struct fixture *fixture, enum plane_kind kind)
{
    struct capture capture;
    capture_open(&capture);
    assert_int_equal(
        plane_vtk_write(&capture.sink, kind, &fixture->result.planes[kind], NULL),
        STATUS_OK);
    capture_close(&capture);
    return capture.text;
}

/* Position after the line that starts with `keyword`. */
static char *after_line(char *text, const char *keyword)
{
    char *found = strstr(text, keyword);
    assert_non_null(found);
    return strchr(found, '\n') + 1;
}

static void compare(char **text, const double *want, size_t count, double rel)
{
    for (size_t k = 0; k < count; k++)
        assert_close(strtod(*text, text), want[k], rel, 0);
}

static void test_lines_and_potential_read_back(void **state)
{
    const struct fixture *fixture = *state;
    const struct plane_result *plane = &fixture->result.planes[PLANE_ELECTRIC_ALONG];
    char *text = write_plane(fixture, PLANE_ELECTRIC_ALONG);
    char *at = after_line(text, "X_COORDINATES 41 double\n");
    compare(&at, plane->grid.a, 41, 0);
    at = after_line(text, "Y_COORDINATES 31 double\n");
    compare(&at, plane->grid.b, 31, 0);
    at = after_line(after_line(text, "SCALARS potential double 1\n"), "LOOKUP_TABLE");
    compare(&at, plane->potential, (size_t)41 * 31, 1e-11);
    at = after_line(after_line(text, "SCALARS part int 1\n"), "LOOKUP_TABLE");
    for (size_t k = 0; k < (size_t)41 * 31; k++)
        assert_int_equal(strtol(at, &at, 10), plane->grid.owner[k]);
    free(text);
}

static void test_field_reads_back_under_its_own_name(void **state)
{
    const struct fixture *fixture = *state;
    const struct plane_result *plane = &fixture->result.planes[PLANE_MAGNETIC_ACROSS];
    char *text = write_plane(fixture, PLANE_MAGNETIC_ACROSS);
    assert_null(strstr(text, "VECTORS electric_field"));
    char *at = after_line(text, "VECTORS magnetic_flux_density double\n");
    for (size_t k = 0; k < (size_t)41 * 31; k++) {
        assert_close(strtod(at, &at), plane->field_a[k], 1e-11, 0);
        assert_close(strtod(at, &at), plane->field_b[k], 1e-11, 0);
        assert_close(strtod(at, &at), 0, 0, 0);
    }
    free(text);
}

static void test_title_states_axes_and_fits_the_format(void **state)
{
    static const char *const axes[PLANE_KINDS] = {"(z,x,0)", "(x,y,0)", "(z,y,0)",
                                                  "(x,y,0)", "(z,r,0)"};
    for (int kind = 0; kind < PLANE_KINDS; kind++) {
        char *text = write_plane(*state, (enum plane_kind)kind);
        char *title = strchr(text, '\n') + 1;
        assert_in_range(strcspn(title, "\n"), 20, 255);
        *strchr(title, '\n') = '\0';
        assert_non_null(strstr(title, axes[kind]));
        assert_non_null(strstr(title, " in m;"));
        free(text);
    }
}

static void test_nan_is_refused_and_nothing_written(void **state)
{
    struct fixture *fixture = *state;
    struct plane_result *plane = &fixture->result.planes[PLANE_MAGNETIC_ALONG];
    double *const arrays[] = {plane->potential, plane->field_a, plane->field_b};
    for (int k = 0; k < 3; k++) {
        struct capture capture;
        double kept = arrays[k][77];
        arrays[k][77] = k == 1 ? (double)INFINITY : (double)NAN;
        capture_open(&capture);
        assert_int_equal(plane_vtk_write(&capture.sink, PLANE_MAGNETIC_ALONG, plane,
                                         &fixture->messages),
                         STATUS_UNTRUSTED);
        capture_close(&capture);
        assert_int_equal(capture.length, 0);
        assert_non_null(strstr(fixture->messages.items[k].text, "node 77"));
        capture_free(&capture);
        arrays[k][77] = kept;
    }
}

static void test_numbers_below_the_normal_range_become_zero(void **state)
{
    struct fixture *fixture = *state;
    struct plane_result *plane = &fixture->result.planes[PLANE_ELECTRIC_ALONG];
    double kept = plane->potential[0];
    plane->potential[0] = -3e-320;
    char *text = write_plane(fixture, PLANE_ELECTRIC_ALONG);
    char *at =
        after_line(after_line(text, "SCALARS potential double 1\n"), "LOOKUP_TABLE");
    assert_int_equal(strncmp(at, "0\n", 2), 0);
    plane->potential[0] = kept;
    free(text);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_lines_and_potential_read_back),
        cmocka_unit_test(test_field_reads_back_under_its_own_name),
        cmocka_unit_test(test_title_states_axes_and_fits_the_format),
        cmocka_unit_test(test_nan_is_refused_and_nothing_written),
        cmocka_unit_test(test_numbers_below_the_normal_range_become_zero),
    };
    return cmocka_run_group_tests(tests, fixture_setup, fixture_teardown);
}
