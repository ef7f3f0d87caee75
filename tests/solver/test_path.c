/* SPDX-License-Identifier: GPL-3.0-or-later */

#include "tests/support/assert_close.h"

#include <string.h>

#include "shared/mem.h"
#include "solver/path.h"
#include "tests/support/scene.h"

/* A path from -1 to 2 m without fields. */
static void bare(struct path *path)
{
    memset(path, 0, sizeof *path);
    path->step = 3.0 / (PATH_POINTS - 1);
    for (int k = 0; k < PATH_POINTS; k++)
        path->z[k] = -1.0 + 3.0 * k / (PATH_POINTS - 1);
}

static double integral_of(double (*f)(double), int i, int j)
{
    static struct path path;
    static double values[PATH_POINTS];
    bare(&path);
    for (int k = 0; k < PATH_POINTS; k++)
        values[k] = f(path.z[k]);
    return path_integral(&path, values, i, j);
}

static double cubic(double z)
{
    return 2.0 - z + 0.7 * z * z + 1.3 * z * z * z;
}

static double cubic_integral(double z)
{
    return 2.0 * z - 0.5 * z * z + 0.7 / 3.0 * z * z * z + 0.325 * z * z * z * z;
}

static double square(double z)
{
    return z * z;
}

static void test_simpson_is_exact_for_cubics(void **state)
{
    (void)state;
    assert_close(integral_of(cubic, 0, PATH_POINTS - 1),
                 cubic_integral(2.0) - cubic_integral(-1.0), 1e-13, 0.0);
    /* samples 400 and 1000 stand at 0 and 1.5 */
    assert_close(integral_of(cubic, 400, 1000), cubic_integral(1.5), 1e-13, 0.0);
}

static void test_integral_is_of_fourth_order(void **state)
{
    (void)state;
    /* exp has fourth derivative exp: error (e^2 - e^-1) h^4/180. */
    const double h = 3.0 / (PATH_POINTS - 1);
    const double whole = exp(2.0) - exp(-1.0);
    const double error = integral_of(exp, 0, PATH_POINTS - 1) - whole;
    assert_close(error, whole * h * h * h * h / 180.0, 0.05, 1e-14);
}

/* A single interval goes by the trapezoid rule: h^3/6 for z^2. Other odd numbers begin
 * with the 3/8 rule, exact for cubics as Simpson's. */
static void test_odd_numbers_of_intervals(void **state)
{
    (void)state;
    const double h = 3.0 / (PATH_POINTS - 1);
    assert_close(integral_of(square, 400, 401), h * h * h / 3.0 + h * h * h / 6.0,
                 1e-12, 0.0);
    assert_close(integral_of(square, 400, 403), 9.0 * h * h * h, 1e-12, 0.0);
    assert_close(integral_of(cubic, 400, 999), cubic_integral(1.5 - h), 1e-13, 0.0);
}

static void test_empty_integral_is_zero(void **state)
{
    (void)state;
    assert_true(integral_of(cubic, 7, 7) == 0.0);
}

static void test_range_is_the_file_s_or_what_the_planes_share(void **state)
{
    (void)state;
    struct geometry g;
    double from, to;
    scene_begin(&g, 1.0, false);
    assert_false(path_range(&g, &from, &to));
    scene_plane(&g, PLANE_ELECTRIC_ACROSS, -1.0, 1.0, -1.0, 1.0);
    assert_false(path_range(&g, &from, &to));
    scene_plane(&g, PLANE_ELECTRIC_ALONG, -0.11, 0.17, -0.02, 0.02);
    scene_plane(&g, PLANE_MAGNETIC_ALONG, -0.13, 0.14, -0.02, 0.02);
    assert_true(path_range(&g, &from, &to));
    assert_true(from == -0.11 && to == 0.14);
    g.beam.has_path = true;
    g.beam.path_from = -0.05;
    g.beam.path_to = 0.06;
    assert_true(path_range(&g, &from, &to));
    assert_true(from == -0.05 && to == 0.06);
    geometry_free(&g);
}

/* Electric plane with potential rising as x z: E_x = -V z/(w h) on every line. */
static void saddle(struct geometry *g, struct plane_solution *s)
{
    scene_begin(g, 640.0, false);
    struct plane *p =
        scene_plane(g, PLANE_ELECTRIC_ALONG, -40e-3, 40e-3, -20e-3, 20e-3);
    scene_wall(p, SIDE_A_LOW, 1.0, -1.0);
    scene_wall(p, SIDE_A_HIGH, -1.0, 1.0);
    scene_wall(p, SIDE_B_LOW, 1.0, -1.0);
    scene_wall(p, SIDE_B_HIGH, -1.0, 1.0);
    assert_int_equal(plane_solve(g, PLANE_ELECTRIC_ALONG,
                                 &(struct grid_request){.fineness = 1.0, .level = 0}, s,
                                 NULL),
                     STATUS_OK);
}

static void test_samples_are_the_field_on_every_line(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    static struct path path;
    saddle(&g, &s);
    g.beam.has_footprint = true;
    g.beam.half_x = 3e-3;
    g.beam.half_y = 2e-3;
    g.reference_z = 17e-3;
    const struct view view = {&g, {[PLANE_ELECTRIC_ALONG] = &s}};
    assert_int_equal(path_sample(&view, &path), STATUS_OK);
    assert_true(path.present);
    assert_int_equal(path.lines, PATH_LINES);
    assert_null(path.b_y[0]);
    assert_true(path.z[0] == -40e-3 && path.z[PATH_POINTS - 1] == 40e-3);
    for (int line = 0; line < PATH_LINES; line++)
        for (int k = 0; k < PATH_POINTS; k += 100)
            assert_close(path.e_x[line][k], -640.0 * path.z[k] / (40e-3 * 20e-3), 0.0,
                         1e-9 * 640.0 / 20e-3);
    assert_close(path.e_centre, -640.0 * 17e-3 / (40e-3 * 20e-3), 1e-9, 0.0);
    assert_true(path.b_centre == 0.0);
    path_free(&path);
    path_free(&path);
    assert_null(path.e_x[0]);
    plane_solution_free(&s);
    geometry_free(&g);
}

static void test_every_failed_allocation_is_reported(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    static struct path path;
    enum status status = STATUS_MEMORY;
    long k = 0;
    saddle(&g, &s);
    g.beam.has_footprint = true;
    const struct view view = {&g, {[PLANE_ELECTRIC_ALONG] = &s}};
    while (status == STATUS_MEMORY) {
        mem_fail_at(++k);
        status = path_sample(&view, &path);
        mem_fail_at(0);
        path_free(&path);
    }
    assert_int_equal(status, STATUS_OK);
    assert_true(k > PATH_LINES);
    plane_solution_free(&s);
    geometry_free(&g);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_simpson_is_exact_for_cubics),
        cmocka_unit_test(test_integral_is_of_fourth_order),
        cmocka_unit_test(test_odd_numbers_of_intervals),
        cmocka_unit_test(test_empty_integral_is_zero),
        cmocka_unit_test(test_range_is_the_file_s_or_what_the_planes_share),
        cmocka_unit_test(test_samples_are_the_field_on_every_line),
        cmocka_unit_test(test_every_failed_allocation_is_reported),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
