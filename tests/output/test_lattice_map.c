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

static void test_csv_reads_back_x_fastest(void **state)
{
    const struct lattice_field *lattice = &((struct fixture *)*state)->result.lattice;
    char *text = write_lattice(lattice_map_write_csv, lattice);
    char *at = first_row(text, "x,y,z,Ex,Ey,Ez,Bx,By,Bz,solid\n");
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
    }
    assert_int_equal(*at, '\0');
    free(text);
}

static void test_csv_header_states_what_a_reader_needs(void **state)
{
    const struct lattice_field *lattice = &((struct fixture *)*state)->result.lattice;
    char *text = write_lattice(lattice_map_write_csv, lattice);
    assert_non_null(strstr(text, "# units: x, y, z in m; E in V/m; B in T"));
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
    char *csv = write_lattice(lattice_map_write_csv, &lattice);
    char *vtk = write_lattice(lattice_map_write_vtk, &lattice);
    (void)first_row(csv, "x,y,z,Ex,Ey,Ez,solid\n");
    assert_non_null(strstr(csv, "# B: not in this file"));
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

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_csv_reads_back_x_fastest),
        cmocka_unit_test(test_csv_header_states_what_a_reader_needs),
        cmocka_unit_test(test_field_without_a_plane_is_left_out),
        cmocka_unit_test(test_nan_is_refused_by_both),
    };
    return cmocka_run_group_tests(tests, fixture_setup, fixture_teardown);
}
