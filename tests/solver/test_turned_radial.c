/* SPDX-License-Identifier: GPL-3.0-or-later */

#include "tests/support/assert_close.h"

#include "solver/turned_radial.h"

enum { LAST = TURNED_RADIALS - 1 };

#define CENTRE 3.17e-3
#define SCALE  2.9e-3

static void at(double centre, double r, double *value, double *slope)
{
    struct turned_radial radial;
    turned_radial_init(&radial);
    turned_radial_at(&radial, centre, SCALE, r, LAST, value, slope);
}

/* (1/r) (r F')' = -F_(k-2)/scale^2, and the slope is that of the value: differences of
 * step h with error h^2. */
static void obeys_its_equation(double centre, double r)
{
    const double h = 1e-5 * r;
    double v[3][TURNED_RADIALS], s[3][TURNED_RADIALS];
    for (int n = 0; n < 3; n++)
        at(centre, r + (n - 1) * h, v[n], s[n]);
    for (int k = 0; k <= LAST; k++) {
        const double size = fabs(v[1][k]) + fabs(s[1][k]) + 1e-9;
        assert_close((v[2][k] - v[0][k]) / (2.0 * h) * SCALE, s[1][k], 0.0,
                     1e-6 * size * SCALE / r);
        const double left = ((r + h) * s[2][k] - (r - h) * s[0][k]) / (2.0 * h * r);
        const double want = k < 2 ? 0.0 : -v[1][k - 2];
        assert_close(left * SCALE, want, 0.0, 1e-6 * (1.0 + fabs(want)));
    }
}

static void test_radial_functions_obey_their_equation(void **state)
{
    (void)state;
    const double ratio[] = {0.2, 0.45, 0.5, 0.9, 1.05, 1.7, 2.2, 4.1};
    for (int n = 0; n < 8; n++) {
        obeys_its_equation(CENTRE, ratio[n] * CENTRE);
        obeys_its_equation(0.0, ratio[n] * CENTRE);
    }
}

static void test_first_ones_have_closed_forms(void **state)
{
    (void)state;
    for (int n = 0; n < 40; n++) {
        const double r = CENTRE * (0.15 + 0.0831 * n), l = log(r / CENTRE);
        double v[TURNED_RADIALS], s[TURNED_RADIALS];
        at(CENTRE, r, v, s);
        const double size = CENTRE * CENTRE / (SCALE * SCALE);
        assert_close(v[0], 1.0, 1e-15, 0.0);
        assert_close(v[1], CENTRE / SCALE * l, 1e-13, 1e-15);
        assert_close(v[2], -0.25 * size * (expm1(2.0 * l) - 2.0 * l), 1e-12, 1e-15);
        assert_close(s[1], CENTRE / r, 1e-13, 0.0);
    }
}

/* The power series and the closed form meet at |ln(r/r0)| = 3/4. */
static void test_the_two_ways_of_evaluation_agree(void **state)
{
    (void)state;
    for (int sign = -1; sign <= 1; sign += 2) {
        double v[2][TURNED_RADIALS], s[2][TURNED_RADIALS];
        for (int n = 0; n < 2; n++)
            at(CENTRE, CENTRE * exp(sign * 0.75 * (1.0 + (2 * n - 1) * 1e-14)), v[n],
               s[n]);
        for (int k = 0; k <= LAST; k++) {
            assert_close(v[1][k], v[0][k], 2e-12, 0.0);
            assert_close(s[1][k], s[0][k], 2e-12, 0.0);
        }
    }
}

/* y^k/k! with the signs of cos and sin. */
static void test_far_from_the_axis_they_are_powers(void **state)
{
    (void)state;
    const double centre = 1e7 * SCALE, y = 0.73;
    double v[TURNED_RADIALS], s[TURNED_RADIALS], power = 1.0;
    at(centre, centre + y * SCALE, v, s);
    for (int k = 0; k <= LAST; k++) {
        assert_close(v[k], k / 2 % 2 == 0 ? power : -power, 1e-6, 0.0);
        power *= y / (k + 1);
    }
}

static void test_on_the_axis_values_are_finite(void **state)
{
    (void)state;
    double v[TURNED_RADIALS], s[TURNED_RADIALS];
    at(CENTRE, 0.0, v, s);
    for (int k = 0; k <= LAST; k++)
        assert_true(isfinite(v[k]) && isfinite(s[k]));
    at(0.0, 0.0, v, s);
    for (int k = 0; k <= LAST; k++)
        assert_true(v[k] == (k == 0 ? 1.0 : 0.0) && s[k] == 0.0);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_radial_functions_obey_their_equation),
        cmocka_unit_test(test_first_ones_have_closed_forms),
        cmocka_unit_test(test_the_two_ways_of_evaluation_agree),
        cmocka_unit_test(test_far_from_the_axis_they_are_powers),
        cmocka_unit_test(test_on_the_axis_values_are_finite),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
