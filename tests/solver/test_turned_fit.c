/* SPDX-License-Identifier: GPL-3.0-or-later */

/* What is exact in a turned plane is fitted exactly, on the axis and off it: the solid
 * harmonics R^n P_n(cos t) to the sixth, and the three lowest with ln r. */

#include "tests/support/assert_close.h"

#include <gsl/gsl_sf_legendre.h>

#include "solver/turned_fit.h"

enum { POINTS = 49 };

static double work[POINTS * HARMONIC_TERMS + POINTS];

#define Z0   (-7.1e-3)
#define SIZE 2.3e-3

typedef double (*potential)(int n, double z, double r);

/* Of degree n about (0, 0), in units of SIZE. */
static double solid(int n, double z, double r)
{
    const double d = hypot(z, r) / SIZE;
    return d == 0.0 ? n == 0 : pow(d, n) * gsl_sf_legendre_Pl(n, z / hypot(z, r));
}

static double logarithmic(int n, double z, double r)
{
    const double l = log(r / SIZE), x = z / SIZE, y = r / SIZE;
    return n == 0 ? l : n == 1 ? x * l : (x * x - 0.5 * y * y) * l + 0.5 * y * y;
}

/* A point charge on the axis. */
static double point_charge(int n, double z, double r)
{
    (void)n;
    return SIZE / hypot(z - Z0 - 3.1 * SIZE, r);
}

/* Points on a 7 by 7 lattice about (Z0, r0), half width `width`, in r times squeeze. */
static void lattice(potential phi, int n, double r0, double width, double squeeze,
                    struct fit_point points[POINTS])
{
    for (int k = 0; k < POINTS; k++) {
        const int i = k % 7 - 3, j = k / 7 - 3;
        points[k].at =
            (struct vec2){Z0 + width / 3.0 * i, r0 + squeeze * width / 3.0 * j};
        points[k].value = phi(n, points[k].at.a, fabs(points[k].at.b));
        points[k].weight = 1.0 / (1.0 + i * i + j * j);
    }
}

/* Largest error of value and gradient over points within the lattice; the gradient of
 * phi by differences of the eighth order. */
static double fit_error(potential phi, int n, double r0, double width, double squeeze)
{
    static const double c[4] = {4.0 / 5.0, -1.0 / 5.0, 4.0 / 105.0, -1.0 / 280.0};
    struct turned_radial radial;
    struct fit_point points[POINTS];
    struct turned_harmonic fit;
    double worst = 0.0;
    turned_radial_init(&radial);
    lattice(phi, n, r0, width, squeeze, points);
    assert_int_equal(
        turned_fit(&radial, points, POINTS, (struct vec2){Z0, r0}, work, &fit),
        STATUS_OK);
    assert_int_equal(fit.degree, HARMONIC_DEGREE);
    for (int k = 0; k < 40; k++) {
        const double z = Z0 + 0.6 * width * sin(2.385 * k);
        const double r = fabs(r0 + 0.6 * squeeze * width * sin(1.711 * k));
        const double step = 0.01 * squeeze * width;
        struct vec2 got, want = {0.0, 0.0};
        double error =
            fabs(turned_value(&fit, (struct vec2){z, r}, &got) - phi(n, z, r));
        for (int m = 1; m <= 4; m++) {
            want.a +=
                c[m - 1] * (phi(n, z + m * step, r) - phi(n, z - m * step, r)) / step;
            want.b += c[m - 1] *
                      (phi(n, z, fabs(r + m * step)) - phi(n, z, fabs(r - m * step))) /
                      step;
        }
        error = fmax(error, vec2_length(vec2_sub(got, want)) * width * squeeze);
        if (!(error <= worst))
            worst = error;
    }
    return worst;
}

static void test_solid_harmonics_are_reproduced(void **state)
{
    (void)state;
    for (int n = 0; n <= HARMONIC_DEGREE; n++) {
        const double size = pow(hypot(Z0, 3.7e-3) / SIZE, n);
        assert_at_most(fit_error(solid, n, 0.0, SIZE, 1.0), 1e-11 * size);
        assert_at_most(fit_error(solid, n, 3.7e-3, SIZE, 1.0), 1e-11 * size);
    }
}

static void test_logarithms_are_reproduced_off_the_axis(void **state)
{
    (void)state;
    for (int n = 0; n < 3; n++) {
        assert_at_most(fit_error(logarithmic, n, 2.31e-3, SIZE, 1.0), 1e-9);
        assert_at_most(fit_error(logarithmic, n, 7.7e-3, SIZE, 1.0), 1e-10);
        assert_at_most(fit_error(logarithmic, n, 2.3, SIZE, 1.0),
                       1e-13 * fabs(logarithmic(n, Z0, 2.3)) + 1e-10);
    }
}

static void test_stretched_cells_are_fitted_too(void **state)
{
    (void)state;
    for (int n = 0; n < 3; n++) {
        assert_at_most(fit_error(solid, n, 0.0, SIZE, 0.03), 1e-10);
        assert_at_most(fit_error(solid, n, 3.7e-3, SIZE, 0.03), 1e-8);
        assert_at_most(fit_error(logarithmic, n, 3.7e-3, SIZE, 0.03), 1e-8);
    }
}

/* Of degree 6: the error falls as the seventh power of the width. */
static void test_other_potentials_are_met_to_the_seventh_order(void **state)
{
    (void)state;
    const double place[] = {0.0, 1.9 * SIZE};
    for (int k = 0; k < 2; k++) {
        const double wide = fit_error(point_charge, 0, place[k], SIZE, 1.0);
        const double narrow = fit_error(point_charge, 0, place[k], 0.5 * SIZE, 1.0);
        print_message("  errors %.2e %.2e\n", wide, narrow);
        assert_close(log2(wide / narrow), 7.0, 0.0, 0.6);
        assert_at_most(narrow, 1e-5);
    }
}

static void test_seventh_degree_is_beyond_the_fit(void **state)
{
    (void)state;
    assert_true(fit_error(solid, 7, 0.0, SIZE, 1.0) > 1e-4);
}

static void test_axis_fit_has_no_radial_slope_on_the_axis(void **state)
{
    (void)state;
    struct turned_radial radial;
    struct fit_point points[POINTS];
    struct turned_harmonic fit;
    struct vec2 gradient;
    turned_radial_init(&radial);
    lattice(point_charge, 0, 0.0, 0.5 * SIZE, 1.0, points);
    assert_int_equal(
        turned_fit(&radial, points, POINTS, (struct vec2){Z0, 0.0}, work, &fit),
        STATUS_OK);
    turned_value(&fit, (struct vec2){Z0 + 0.3 * SIZE, 0.0}, &gradient);
    assert_true(gradient.b == 0.0);
    assert_close(gradient.a, 1.0 / (2.8 * 2.8 * SIZE), 1e-4, 0.0);
}

static void test_few_points_lower_the_degree(void **state)
{
    (void)state;
    struct turned_radial radial;
    struct fit_point points[POINTS];
    struct turned_harmonic fit;
    struct vec2 gradient;
    turned_radial_init(&radial);
    lattice(logarithmic, 0, 3.7e-3, SIZE, 1.0, points);
    const struct vec2 centre = {Z0, 3.7e-3};
    const struct fit_point three[3] = {points[10], points[25], points[37]};
    assert_int_equal(turned_fit(&radial, three, 1, centre, work, &fit), STATUS_OK);
    assert_int_equal(fit.degree, 0);
    assert_close(turned_value(&fit, centre, &gradient), three[0].value, 1e-14, 0.0);
    assert_int_equal(turned_fit(&radial, three, 3, centre, work, &fit), STATUS_OK);
    assert_int_equal(fit.degree, 1);
    assert_close(turned_value(&fit, (struct vec2){Z0, 4.1e-3}, &gradient),
                 log(4.1e-3 / SIZE), 1e-12, 0.0);
}

static void test_points_without_meaning_are_not_trusted(void **state)
{
    (void)state;
    struct turned_radial radial;
    struct fit_point points[POINTS];
    struct turned_harmonic fit;
    turned_radial_init(&radial);
    lattice(solid, 2, 3.7e-3, SIZE, 1.0, points);
    points[11].value = (double)NAN;
    assert_int_equal(
        turned_fit(&radial, points, POINTS, (struct vec2){Z0, 3.7e-3}, work, &fit),
        STATUS_UNTRUSTED);
    const struct fit_point beyond = {{Z0, -1e-3}, 1.0, 1.0};
    assert_int_equal(
        turned_fit(&radial, &beyond, 1, (struct vec2){Z0, 0.0}, work, &fit),
        STATUS_UNTRUSTED);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_solid_harmonics_are_reproduced),
        cmocka_unit_test(test_logarithms_are_reproduced_off_the_axis),
        cmocka_unit_test(test_stretched_cells_are_fitted_too),
        cmocka_unit_test(test_other_potentials_are_met_to_the_seventh_order),
        cmocka_unit_test(test_seventh_degree_is_beyond_the_fit),
        cmocka_unit_test(test_axis_fit_has_no_radial_slope_on_the_axis),
        cmocka_unit_test(test_few_points_lower_the_degree),
        cmocka_unit_test(test_points_without_meaning_are_not_trusted),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
