/* SPDX-License-Identifier: GPL-3.0-or-later */

#include "tests/support/assert_close.h"

#include <complex.h>

#include "solver/harmonic_fit.h"

enum { POINTS = 49 };

static double work[POINTS * HARMONIC_TERMS + POINTS];

static const struct vec2 CENTRE = {3.17e-3, -7.1e-3};
#define SIZE 2.3e-3

/* Sum over n <= degree of Re(c_n w^n) with c_n = (1 + 0.3 n) - 0.7 i n; w in units of
 * SIZE from CENTRE. */
static double harmonic_of(int degree, struct vec2 at, struct vec2 *gradient)
{
    const double complex w =
        ((at.a - CENTRE.a) + (at.b - CENTRE.b) * (double complex)I) / SIZE;
    double complex sum = 0.0, slope = 0.0, power = 1.0;
    for (int n = 0; n <= degree; n++) {
        const double complex c = 1.0 + 0.3 * n - 0.7 * n * (double complex)I;
        sum += c * power;
        if (n < degree)
            slope += (n + 1) *
                     (1.0 + 0.3 * (n + 1) - 0.7 * (n + 1) * (double complex)I) * power;
        power *= w;
    }
    *gradient = (struct vec2){creal(slope) / SIZE, -cimag(slope) / SIZE};
    return creal(sum);
}

/* Points on a 7 by 7 lattice, the second axis squeezed by `squeeze`. */
static void lattice(int degree, double squeeze, struct fit_point points[POINTS])
{
    for (int k = 0; k < POINTS; k++) {
        const int i = k % 7 - 3, j = k / 7 - 3;
        struct vec2 unused;
        points[k].at = (struct vec2){CENTRE.a + SIZE / 3.0 * i,
                                     CENTRE.b + squeeze * SIZE / 3.0 * j};
        points[k].value = harmonic_of(degree, points[k].at, &unused);
        points[k].weight = 1.0 / (1.0 + i * i + j * j);
    }
}

/* Compares the fit with the polynomial at points within `reach` of SIZE. */
static void compare(const struct harmonic *fit, int degree, double squeeze,
                    double tolerance)
{
    for (int k = 0; k < 40; k++) {
        const struct vec2 at = {CENTRE.a + 0.9 * SIZE * sin(2.385 * k),
                                CENTRE.b + 0.9 * squeeze * SIZE * sin(1.711 * k)};
        struct vec2 got, want;
        const double value = harmonic_of(degree, at, &want);
        assert_close(harmonic_value(fit, at, &got), value, 0.0, tolerance);
        assert_close(got.a, want.a, 0.0, tolerance / SIZE / squeeze);
        assert_close(got.b, want.b, 0.0, tolerance / SIZE / squeeze);
    }
}

static void test_harmonics_to_sixth_degree_are_reproduced(void **state)
{
    (void)state;
    for (int degree = 0; degree <= HARMONIC_DEGREE; degree++) {
        struct fit_point points[POINTS];
        struct harmonic fit;
        lattice(degree, 1.0, points);
        assert_int_equal(harmonic_fit(points, POINTS, CENTRE, work, &fit), STATUS_OK);
        assert_int_equal(fit.degree, HARMONIC_DEGREE);
        compare(&fit, degree, 1.0, 1e-11);
    }
}

static void test_stretched_cells_are_fitted_too(void **state)
{
    (void)state;
    struct fit_point points[POINTS];
    struct harmonic fit;
    lattice(2, 0.03, points);
    assert_int_equal(harmonic_fit(points, POINTS, CENTRE, work, &fit), STATUS_OK);
    compare(&fit, 2, 0.03, 1e-8);
}

static void test_seventh_degree_is_beyond_the_fit(void **state)
{
    (void)state;
    struct fit_point points[POINTS];
    struct harmonic fit;
    struct vec2 gradient, unused;
    lattice(7, 1.0, points);
    assert_int_equal(harmonic_fit(points, POINTS, CENTRE, work, &fit), STATUS_OK);
    const struct vec2 at = {CENTRE.a + 0.8 * SIZE, CENTRE.b + 0.7 * SIZE};
    assert_true(
        fabs(harmonic_value(&fit, at, &gradient) - harmonic_of(7, at, &unused)) > 1e-3);
}

static void test_few_points_lower_the_degree(void **state)
{
    (void)state;
    struct fit_point points[POINTS];
    struct harmonic fit;
    struct vec2 gradient;
    lattice(1, 1.0, points);
    assert_int_equal(harmonic_fit(points + 17, 1, CENTRE, work, &fit), STATUS_OK);
    assert_int_equal(fit.degree, 0);
    assert_close(harmonic_value(&fit, CENTRE, &gradient), points[17].value, 1e-14, 0.0);
    assert_true(gradient.a == 0.0 && gradient.b == 0.0);
    const struct fit_point three[3] = {points[10], points[25], points[37]};
    assert_int_equal(harmonic_fit(three, 3, CENTRE, work, &fit), STATUS_OK);
    assert_int_equal(fit.degree, 1);
    compare(&fit, 1, 1.0, 1e-12);
}

/* Points on one line say nothing across it: the fit must stay finite and right along
 * the line. */
static void test_points_on_a_line_are_fitted_along_it(void **state)
{
    (void)state;
    struct fit_point points[7];
    struct harmonic fit;
    for (int k = 0; k < 7; k++) {
        struct vec2 unused;
        points[k].at = (struct vec2){CENTRE.a + SIZE / 3.0 * (k - 3), CENTRE.b};
        points[k].value = harmonic_of(1, points[k].at, &unused);
        points[k].weight = 1.0;
    }
    assert_int_equal(harmonic_fit(points, 7, CENTRE, work, &fit), STATUS_OK);
    struct vec2 got, want;
    const struct vec2 at = {CENTRE.a + 0.37 * SIZE, CENTRE.b};
    const double value = harmonic_of(1, at, &want);
    assert_close(harmonic_value(&fit, at, &got), value, 1e-12, 0.0);
    assert_close(got.a, want.a, 1e-12, 0.0);
    assert_close(got.b, 0.0, 0.0, 1e-9 * fabs(want.a)); /* minimum norm */
}

static void test_points_in_one_place_give_their_mean(void **state)
{
    (void)state;
    struct fit_point points[9];
    struct harmonic fit;
    struct vec2 gradient;
    for (int k = 0; k < 9; k++)
        points[k] = (struct fit_point){CENTRE, 2.0 + (k % 3), 1.0};
    assert_int_equal(harmonic_fit(points, 9, CENTRE, work, &fit), STATUS_OK);
    assert_close(harmonic_value(&fit, CENTRE, &gradient), 3.0, 1e-13, 0.0);
    assert_close(gradient.a, 0.0, 0.0, 1e-12);
    assert_close(gradient.b, 0.0, 0.0, 1e-12);
}

static void test_value_that_is_not_finite_is_not_trusted(void **state)
{
    (void)state;
    struct fit_point points[POINTS];
    struct harmonic fit;
    lattice(3, 1.0, points);
    points[11].value = (double)NAN;
    assert_int_equal(harmonic_fit(points, POINTS, CENTRE, work, &fit),
                     STATUS_UNTRUSTED);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_harmonics_to_sixth_degree_are_reproduced),
        cmocka_unit_test(test_stretched_cells_are_fitted_too),
        cmocka_unit_test(test_seventh_degree_is_beyond_the_fit),
        cmocka_unit_test(test_few_points_lower_the_degree),
        cmocka_unit_test(test_points_on_a_line_are_fitted_along_it),
        cmocka_unit_test(test_points_in_one_place_give_their_mean),
        cmocka_unit_test(test_value_that_is_not_finite_is_not_trusted),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
