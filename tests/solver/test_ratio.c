/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Evenness figures of profiles written down as functions. */

#include "tests/support/assert_close.h"

#include <string.h>

#include "solver/ratio.h"

#define HALF 0.1       /* m, the path runs from -HALF to HALF */
#define E0   15.5e3    /* V/m */
#define B0   (-0.1037) /* T */

static double e_samples[PATH_LINES][PATH_POINTS], b_samples[PATH_LINES][PATH_POINTS];

/* Profiles E0 e(z), B0 b(z) on the axis and, scaled by 1 + spread * line offset, on the
 * other lines. */
static void fill(struct path *path, double (*e)(double), double (*b)(double),
                 double spread)
{
    memset(path, 0, sizeof *path);
    path->present = true;
    path->step = 2.0 * HALF / (PATH_POINTS - 1);
    path->lines = PATH_LINES;
    path->e_centre = E0 * e(0.0);
    path->b_centre = B0 * b(0.0);
    for (int line = 0; line < PATH_LINES; line++) {
        path->e_x[line] = e_samples[line];
        path->b_y[line] = b_samples[line];
        for (int k = 0; k < PATH_POINTS; k++) {
            path->z[k] = HALF * (2.0 * k / (PATH_POINTS - 1) - 1.0);
            e_samples[line][k] =
                E0 * e(path->z[k]) * (1.0 + spread * path_line_offset(line));
            b_samples[line][k] = B0 * b(path->z[k]);
        }
    }
}

static double one(double z)
{
    (void)z;
    return 1.0;
}

/* Falls as 1 - (z/HALF)^2; with `one` for B the ratio error is -(z/HALF)^2. */
static double parabola(double z)
{
    return 1.0 - z * z / (HALF * HALF);
}

static double negative_slope(double z)
{
    return 1.0 - 0.37 * z / HALF;
}

static void test_flat_length_of_a_parabola(void **state)
{
    (void)state;
    static struct path path;
    struct ratio_summary s;
    fill(&path, parabola, one, 0.0);
    ratio_summarise(&path, 0.0, 0.04, &s);
    /* |error| = (z/HALF)^2 <= 0.04 for |z| <= 0.2 HALF; linear between samples. */
    assert_close(s.flat_from, -0.2 * HALF, 0.0, 1e-4 * path.step);
    assert_close(s.flat_to, 0.2 * HALF, 0.0, 1e-4 * path.step);
}

static void test_flat_end_between_samples_is_interpolated(void **state)
{
    (void)state;
    static struct path path;
    struct ratio_summary s;
    const double bound = 0.0417;
    fill(&path, parabola, one, 0.0);
    ratio_summarise(&path, 0.0, bound, &s);
    assert_close(s.flat_to, HALF * sqrt(bound), 0.0, 2e-3 * path.step);
    assert_close(s.flat_from, -HALF * sqrt(bound), 0.0, 2e-3 * path.step);
}

static void test_flat_stretch_needs_the_reference_point_to_be_even(void **state)
{
    (void)state;
    static struct path path;
    struct ratio_summary s;
    fill(&path, parabola, one, 0.0);
    ratio_summarise(&path, 0.5 * HALF, 0.04, &s);
    assert_true(s.flat_from == s.flat_to);
    assert_close(s.flat_from, 0.5 * HALF, 1e-12, 0.0);
}

static void test_even_ratio_is_flat_to_both_ends(void **state)
{
    (void)state;
    static struct path path;
    struct ratio_summary s;
    fill(&path, negative_slope, negative_slope, 0.0);
    ratio_summarise(&path, 0.0, 1e-3, &s);
    assert_true(s.flat_from == -HALF && s.flat_to == HALF);
    assert_close(s.peak, 0.0, 0.0, 1e-15);
    assert_close(s.imbalance, 0.0, 0.0, 1e-15);
}

/* The zone is where both fields exceed half: |z| <= HALF/sqrt(2); the peak is at its
 * edge. rms of t^2 over |t| <= T: T^2/sqrt(5). */
static void test_peak_and_rms_are_taken_over_the_zone(void **state)
{
    (void)state;
    static struct path path;
    struct ratio_summary s;
    fill(&path, parabola, one, 0.0);
    ratio_summarise(&path, 0.0, 0.04, &s);
    assert_close(s.zone_to, HALF / sqrt(2.0), 0.0, path.step);
    assert_close(s.zone_from, -HALF / sqrt(2.0), 0.0, path.step);
    assert_close(s.peak, 0.5, 0.0, 3.0 * path.step / HALF);
    assert_close(fabs(s.peak_z), HALF / sqrt(2.0), 0.0, path.step);
    assert_close(s.rms, 0.5 / sqrt(5.0), 0.0, 3.0 * path.step / HALF);
}

static void test_imbalance_is_taken_over_the_whole_path(void **state)
{
    (void)state;
    static struct path path;
    struct ratio_summary s;
    fill(&path, parabola, one, 0.0);
    ratio_summarise(&path, 0.0, 0.04, &s);
    assert_close(s.imbalance, 1.0, 1e-12, 0.0);
    assert_close(fabs(s.imbalance_z), HALF, 1e-12, 0.0);
}

static void test_bundle_takes_the_worst_pair_of_lines(void **state)
{
    (void)state;
    static struct path path;
    struct ratio_summary s;
    fill(&path, one, one, 0.0237);
    ratio_summarise(&path, 0.0, 1e-3, &s);
    assert_close(s.bundle_peak, 0.0237, 1e-12, 0.0);
    assert_close(s.peak, 0.0, 0.0, 1e-15);
}

static void test_ratio_is_defined_for_fields_of_the_centre_s_sign(void **state)
{
    (void)state;
    static struct path path;
    fill(&path, parabola, one, 0.0);
    assert_true(ratio_is_defined(&path, 0, 0, PATH_POINTS / 2, RATIO_FLOOR));
    assert_false(ratio_is_defined(&path, 0, 0, 0, RATIO_FLOOR));
    e_samples[0][PATH_POINTS / 2] *= -1.0;
    assert_false(ratio_is_defined(&path, 0, 0, PATH_POINTS / 2, RATIO_FLOOR));
    e_samples[0][PATH_POINTS / 2] = (double)NAN;
    assert_false(ratio_is_defined(&path, 0, 0, PATH_POINTS / 2, RATIO_FLOOR));
}

static void test_reference_needs_both_fields(void **state)
{
    (void)state;
    static struct path path;
    fill(&path, one, one, 0.0);
    assert_true(ratio_is_available(&path));
    assert_close(ratio_reference(&path), E0 / B0, 1e-15, 0.0);
    path.b_centre = 0.0;
    assert_false(ratio_is_available(&path));
    assert_true(ratio_reference(&path) == 0.0);
    fill(&path, one, one, 0.0);
    path.b_y[0] = NULL;
    assert_false(ratio_is_available(&path));
}

static void test_error_is_relative_to_the_reference(void **state)
{
    (void)state;
    static struct path path;
    fill(&path, negative_slope, parabola, 0.0);
    for (int k = 200; k < 1000; k += 37) {
        const double z = path.z[k];
        assert_close(ratio_error(&path, 0, 0, k), negative_slope(z) / parabola(z) - 1.0,
                     0.0, 1e-14);
    }
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_flat_length_of_a_parabola),
        cmocka_unit_test(test_flat_end_between_samples_is_interpolated),
        cmocka_unit_test(test_flat_stretch_needs_the_reference_point_to_be_even),
        cmocka_unit_test(test_even_ratio_is_flat_to_both_ends),
        cmocka_unit_test(test_peak_and_rms_are_taken_over_the_zone),
        cmocka_unit_test(test_imbalance_is_taken_over_the_whole_path),
        cmocka_unit_test(test_bundle_takes_the_worst_pair_of_lines),
        cmocka_unit_test(test_ratio_is_defined_for_fields_of_the_centre_s_sign),
        cmocka_unit_test(test_reference_needs_both_fields),
        cmocka_unit_test(test_error_is_relative_to_the_reference),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
