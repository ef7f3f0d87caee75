/* SPDX-License-Identifier: GPL-3.0-or-later */

#include <stdlib.h>
#include <string.h>

#include "output/lattice_map.h"
#include "tests/output/fixture.h"
#include "tests/support/assert_close.h"

typedef enum status writer(struct sink *, const struct lattice_field *,
                           struct messages *);

static char *write_lattice(writer *write, const struct lattice_field *lattice)
{
    struct capture capture;
    capture_open(&capture);
    assert_int_equal(write(&capture.sink, lattice, NULL), STATUS_OK);
    capture_close(&capture);
    return capture.text;
}

/* First row of numbers: after the comments and the row of names. */
static char *first_row(char *text, const char *names)
{
    while (*text == '#')
        text = strchr(text, '\n') + 1;
    assert_int_equal(strncmp(text, names, strlen(names)), 0);
    return strchr(text, '\n') + 1;
}

static double next_cell(char **at)
{
    double value = strtod(*at, at);
    assert_true(**at == ',' || **at == '\n');
    ++*at;
    return value;
}

/* Two digits, never less than the number itself. */
static void assert_rounded_up(double got, double want)
{
    assert_true(got >= want * (1 - 2e-12));
    assert_at_most(got, want * 1.1);
}

static void test_csv_reads_back_x_fastest(void **state)
{
    const struct lattice_field *lattice = &((struct fixture *)*state)->result.lattice;
    char *text = write_lattice(lattice_map_write_csv, lattice);
    char *at = first_row(
        text, "x,y,z,Ex,Ey,Ez,Bx,By,Bz,solid,Ex_uncertainty,Ey_uncertainty,"
              "Ez_uncertainty,Bx_uncertainty,By_uncertainty,Bz_uncertainty\n");
    for (int k = 0; k < 24; k++) {
        int index[3] = {k % 3, k / 3 % 2, k / 6};
        for (int axis = 0; axis < 3; axis++)
            assert_close(next_cell(&at),
                         lattice->origin[axis] + index[axis] * lattice->step[axis],
                         1e-11, 1e-15);
        for (int axis = 0; axis < 3; axis++)
            assert_close(next_cell(&at), lattice->e[axis][k], 1e-11, 0);
        for (int axis = 0; axis < 3; axis++)
            assert_close(next_cell(&at), lattice->b[axis][k], 1e-11, 0);
        assert_close(next_cell(&at), k == 5, 0, 0);
        /* From planes (z, x) and (z, y): sheets with z fastest. */
        const int e = index[0] * 4 + index[2], b = index[1] * 4 + index[2];
        assert_rounded_up(next_cell(&at), lattice->e_err[1][e]);
        assert_close(next_cell(&at), 0, 0, 0);
        assert_rounded_up(next_cell(&at), lattice->e_err[0][e]);
        assert_close(next_cell(&at), 0, 0, 0);
        assert_rounded_up(next_cell(&at), lattice->b_err[1][b]);
        assert_rounded_up(next_cell(&at), lattice->b_err[0][b]);
    }
    assert_int_equal(*at, '\0');
    free(text);
}

static void test_csv_header_states_what_a_reader_needs(void **state)
{
    const struct lattice_field *lattice = &((struct fixture *)*state)->result.lattice;
    char *text = write_lattice(lattice_map_write_csv, lattice);
    assert_non_null(strstr(text, "# units: x, y, z in m; E in V/m; B in T"));
    assert_non_null(strstr(text, "# uncertainty: of each component, absolute, in the "
                                 "unit of the component"));
    assert_non_null(strstr(text, "# order: x fastest, then y, then z"));
    assert_non_null(strstr(text, "# z: 4 points from -0.0307 m in steps of 0.0105 m"));
    assert_non_null(strstr(text, "# E: from plane electric_along, uniform along y"));
    assert_non_null(strstr(text, "# B: from plane magnetic_along, uniform along x"));
    free(text);
}

static void test_field_without_a_plane_is_left_out(void **state)
{
    struct lattice_field lattice = ((struct fixture *)*state)->result.lattice;
    lattice.has_magnetic = false;
    lattice.b[0] = lattice.b[1] = lattice.b[2] = NULL;
    lattice.b_err[0] = lattice.b_err[1] = NULL;
    char *csv = write_lattice(lattice_map_write_csv, &lattice);
    char *vtk = write_lattice(lattice_map_write_vtk, &lattice);
    (void)first_row(
        csv, "x,y,z,Ex,Ey,Ez,solid,Ex_uncertainty,Ey_uncertainty,Ez_uncertainty\n");
    assert_non_null(strstr(csv, "# B: not in this file"));
    assert_null(strstr(vtk, "magnetic_flux_density_uncertainty double"));
    assert_null(strstr(vtk, "VECTORS magnetic_flux_density"));
    assert_non_null(strstr(vtk, "VECTORS electric_field"));
    free(csv);
    free(vtk);
}

static void test_nan_is_refused_by_both(void **state)
{
    struct fixture *fixture = *state;
    struct lattice_field *lattice = &fixture->result.lattice;
    struct capture capture;
    double kept = lattice->b[2][13];
    lattice->b[2][13] = (double)NAN;
    capture_open(&capture);
    assert_int_equal(lattice_map_write_vtk(&capture.sink, lattice, &fixture->messages),
                     STATUS_UNTRUSTED);
    assert_int_equal(lattice_map_write_csv(&capture.sink, lattice, &fixture->messages),
                     STATUS_UNTRUSTED);
    assert_non_null(strstr(fixture->messages.items[0].text, "Bz at point 13"));
    capture_close(&capture);
    capture_free(&capture);
    lattice->b[2][13] = kept;
}

static void test_uncertainty_is_rounded_up_to_two_digits(void **state)
{
    static const struct {
        double value;
        const char *text;
    } cases[] = {{1e-5, ",1.0e-05,"},      {1.0001e-5, ",1.1e-05,"},
                 {9.91e-11, ",1.0e-10,"},  {2.385e3, ",2.4e+03,"},
                 {3.0e-104, ",3.0e-104,"}, {0.0, ",0,"},
                 {7.7, ",7.7e+00,"}};
    struct lattice_field *lattice = &((struct fixture *)*state)->result.lattice;
    double kept = lattice->e_err[1][0];
    for (size_t k = 0; k < sizeof cases / sizeof cases[0]; k++) {
        lattice->e_err[1][0] = cases[k].value;
        char *text = write_lattice(lattice_map_write_csv, lattice);
        char *row = first_row(text, "x,y,z"), *end = strchr(row, '\n');
        *end = '\0';
        assert_non_null(strstr(strstr(row, ",0,"), cases[k].text)); /* after solid */
        free(text);
    }
    lattice->e_err[1][0] = kept;
}

static void test_uncertainty_that_is_not_finite_is_refused(void **state)
{
    struct fixture *fixture = *state;
    struct lattice_field *lattice = &fixture->result.lattice;
    struct capture capture;
    double kept = lattice->b_err[1][7];
    lattice->b_err[1][7] = (double)INFINITY;
    capture_open(&capture);
    assert_int_equal(lattice_map_write_csv(&capture.sink, lattice, &fixture->messages),
                     STATUS_UNTRUSTED);
    const struct messages *messages = &fixture->messages;
    assert_non_null(
        strstr(messages->items[messages->count - 1].text, "uncertainty of By"));
    capture_close(&capture);
    capture_free(&capture);
    lattice->b_err[1][7] = kept;
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_csv_reads_back_x_fastest),
        cmocka_unit_test(test_csv_header_states_what_a_reader_needs),
        cmocka_unit_test(test_field_without_a_plane_is_left_out),
        cmocka_unit_test(test_nan_is_refused_by_both),
        cmocka_unit_test(test_uncertainty_is_rounded_up_to_two_digits),
        cmocka_unit_test(test_uncertainty_that_is_not_finite_is_refused),
    };
    return cmocka_run_group_tests(tests, fixture_setup, fixture_teardown);
}
