/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Made-up families of values whose limit is known: the estimate must come close and its
 * uncertainty must cover the rest. */

#include "tests/support/assert_close.h"

#include "solver/extrapolate.h"

#define LIMIT 2.385

enum { GRIDS = 4 };

/* LIMIT + c2 h^2 + c3 h^3 on h = 1, 1/2, 1/4, 1/8. */
static void series(double c2, double c3, double values[GRIDS])
{
    for (int k = 0; k < GRIDS; k++) {
        const double h = ldexp(1.0, -k);
        values[k] = LIMIT + c2 * h * h + c3 * h * h * h;
    }
}

static void power(double c, double order, double values[GRIDS])
{
    for (int k = 0; k < GRIDS; k++)
        values[k] = LIMIT + c * exp2(-order * k);
}

static void assert_covers(const struct estimate *e, double limit)
{
    assert_true(e->settled);
    assert_at_most(fabs(e->value - limit), e->uncertainty);
}

static void test_second_and_third_order_terms_are_removed(void **state)
{
    (void)state;
    double v[GRIDS];
    series(0.31, 0.17, v);
    const struct estimate e = extrapolate(v, 3, 0.0);
    assert_close(e.value, LIMIT, 1e-14, 0.0);
    assert_covers(&e, LIMIT);
    assert_true(e.uncertainty > 0.0 && e.uncertainty < fabs(v[2] - LIMIT));
    assert_true(e.order > 1.5 && e.order < 3.0);
}

static void test_pure_second_order_is_measured(void **state)
{
    (void)state;
    double v[GRIDS];
    series(-0.31, 0.0, v);
    const struct estimate e = extrapolate(v, 3, 0.0);
    assert_close(e.order, 2.0, 1e-12, 0.0);
    assert_close(e.value, LIMIT, 1e-14, 0.0);
    /* Never less than a share of the last change. */
    assert_close(e.uncertainty, 0.02 * fabs(v[2] - v[1]), 1e-7, 0.0); /* and noise */
}

static void test_fourth_order_remainder_is_covered(void **state)
{
    (void)state;
    double v[3];
    for (int k = 0; k < 3; k++) {
        const double h = ldexp(1.0, -k);
        v[k] = LIMIT + 0.31 * h * h + 0.1 * h * h * h - 0.02 * h * h * h * h;
    }
    const struct estimate e = extrapolate(v, 3, 0.0);
    assert_covers(&e, LIMIT);
    assert_at_most(fabs(e.value - LIMIT), 0.05 * fabs(v[2] - LIMIT));
}

/* A low measured order is mostly scatter of the coarsest grid, so order 2 stands; but if
 * it is true, the limit must be covered, and not by much. */
static void test_lower_orders_are_measured_and_covered(void **state)
{
    (void)state;
    const double orders[] = {0.6, 0.667, 1.0, 1.333, 1.49};
    for (size_t k = 0; k < sizeof orders / sizeof *orders; k++) {
        double v[GRIDS];
        power(-0.43, orders[k], v);
        const struct estimate e = extrapolate(v, 3, 0.0);
        assert_close(e.order, orders[k], 1e-10, 0.0);
        assert_close(e.value, v[2] + (v[2] - v[1]) / 3.0, 1e-14, 0.0);
        assert_covers(&e, LIMIT);
        assert_at_most(e.uncertainty, 1.11 * fabs(e.value - LIMIT));
    }
}

/* Second order but for the coarsest grid, which is off: by half of the first change
 * towards the next grid, by more than all of it away from it. */
static void test_scatter_of_the_coarsest_grid_is_covered(void **state)
{
    (void)state;
    double clean[GRIDS];
    series(0.31, 0.02, clean);
    for (int k = -4; k <= 9; k++) {
        const double v[3] = {clean[0] + 0.031 * k, clean[1], clean[2]};
        const struct estimate e = extrapolate(v, 3, 0.0);
        assert_covers(&e, LIMIT);
        assert_at_most(fabs(e.value - LIMIT), 0.8 * fabs(v[2] - LIMIT));
    }
}

/* The coarsest grid far off: order 2 on the two others, widely. */
static void test_fast_change_widens_the_uncertainty(void **state)
{
    (void)state;
    const double v[3] = {4.0, 2.4, 2.385 + 0.003};
    const struct estimate e = extrapolate(v, 3, 0.0);
    assert_close(e.value, 2.384, 1e-12, 0.0);
    assert_covers(&e, LIMIT);
    assert_true(e.uncertainty > fabs(v[2] - v[1]) &&
                e.uncertainty < fabs(v[1] - v[0]) / 4.0);
}

/* From one branch to the next the uncertainty may not jump much: figures of neighbouring
 * points would look unlike each other. */
static void test_uncertainty_has_no_large_jump_between_orders(void **state)
{
    (void)state;
    double before = 0.0;
    for (int k = 0; k <= 4000; k++) {
        const double order = 0.51 + 0.001 * k;
        const double v[3] = {LIMIT + exp2(order), LIMIT, LIMIT - 1.0};
        const double uncertainty = extrapolate(v, 3, 0.0).uncertainty;
        assert_true(k == 0 || fabs(log(uncertainty / before)) < 0.1);
        before = uncertainty;
    }
}

static void test_growing_changes_are_unsettled(void **state)
{
    (void)state;
    const double v[3] = {2.0, 2.2, 2.5};
    const struct estimate e = extrapolate(v, 3, 0.0);
    assert_false(e.settled);
    assert_true(e.uncertainty >= 0.3);
}

static void test_oscillating_changes_are_unsettled_unless_they_fall(void **state)
{
    (void)state;
    const double swings[3] = {2.0, 2.6, 2.1};
    assert_false(extrapolate(swings, 3, 0.0).settled);
    const double falls[3] = {2.0, 2.6, 2.385};
    const struct estimate e = extrapolate(falls, 3, 0.0);
    assert_covers(&e, LIMIT);
    assert_true(e.uncertainty >= 0.6);
}

/* Changes far below the scale cannot be judged as orders, nor need they be. */
static void test_small_disorder_is_settled_with_a_wide_uncertainty(void **state)
{
    (void)state;
    const double v[3] = {1e-6, 3e-6, -1e-6};
    const struct estimate judged = extrapolate(v, 3, 1.0);
    assert_true(judged.settled);
    assert_close(judged.uncertainty, 6e-6, 1e-6, 0.0);
    assert_false(
        extrapolate(v, 3, 0.0).settled); /* against themselves they are large */
}

static void test_constant_values_stand(void **state)
{
    (void)state;
    const double v[3] = {LIMIT, LIMIT, LIMIT};
    for (int levels = 2; levels <= 3; levels++) {
        const struct estimate e = extrapolate(v, levels, 0.0);
        assert_true(e.settled && e.value == LIMIT);
        assert_true(e.uncertainty > 0.0 && e.uncertainty < 1e-11 * LIMIT);
    }
    const double zeros[3] = {0.0, 0.0, 0.0};
    const struct estimate e = extrapolate(zeros, 3, 0.0);
    assert_true(e.settled && e.value == 0.0 && e.uncertainty == 0.0);
}

static void test_round_off_is_not_taken_for_convergence(void **state)
{
    (void)state;
    const double v[3] = {LIMIT, LIMIT * (1.0 + 4e-15), LIMIT * (1.0 + 5e-15)};
    const struct estimate e = extrapolate(v, 3, 0.0);
    assert_true(e.settled && e.order == 0.0);
    assert_close(e.value, LIMIT, 1e-14, 0.0);
}

static void test_two_grids_assume_second_order_with_a_wide_uncertainty(void **state)
{
    (void)state;
    double v[GRIDS];
    series(0.31, 0.05, v);
    const struct estimate e = extrapolate(v, 2, 0.0);
    assert_close(e.value, v[1] + (v[1] - v[0]) / 3.0, 1e-15, 0.0);
    assert_covers(&e, LIMIT);
    assert_true(e.order == 0.0);
    assert_close(e.uncertainty, fabs(v[1] - v[0]), 1e-9, 0.0);
}

/* The three finest of four grids make the value; a coarsest one that fits their series
 * lets the uncertainty be smaller than they alone would have it, one that does not makes
 * it larger. */
static void test_fourth_grid_judges_the_three_finest(void **state)
{
    (void)state;
    double v[GRIDS];
    series(0.31, 0.17, v);
    const struct estimate three = extrapolate(v + 1, 3, 0.0);
    const struct estimate fits = extrapolate(v, 4, 0.0);
    assert_true(fits.value == three.value && fits.order == three.order);
    assert_covers(&fits, LIMIT);
    assert_true(fits.uncertainty < 0.7 * three.uncertainty);
    v[0] += 2.0;
    const struct estimate off = extrapolate(v, 4, 0.0);
    assert_true(off.value == three.value);
    assert_true(off.uncertainty > 2.0 * fits.uncertainty);
}

/* Two measured orders that are 2 by their nature: what is left is a share of the last
 * change. */
static void
test_four_grids_of_pure_second_order_have_the_least_uncertainty(void **state)
{
    (void)state;
    double v[GRIDS];
    series(-0.31, 0.0, v);
    const struct estimate e = extrapolate(v, 4, 0.0);
    assert_close(e.value, LIMIT, 1e-14, 0.0);
    assert_close(e.uncertainty, 0.005 * fabs(v[3] - v[2]), 1e-6, 0.0);
}

static void test_four_grids_cover_a_fourth_order_remainder(void **state)
{
    (void)state;
    for (int n = -4; n <= 4; n++) {
        double v[GRIDS];
        series(0.31, 0.1, v);
        for (int k = 0; k < GRIDS; k++)
            v[k] += 0.05 * n * exp2(-4.0 * k);
        const struct estimate e = extrapolate(v, 4, 0.0);
        assert_covers(&e, LIMIT);
        assert_at_most(fabs(e.value - LIMIT), 0.05 * fabs(v[3] - LIMIT));
    }
}

static void test_four_grids_cover_lower_orders(void **state)
{
    (void)state;
    const double orders[] = {0.6, 0.667, 1.0, 1.333, 1.49, 1.7, 1.9};
    for (size_t k = 0; k < sizeof orders / sizeof *orders; k++) {
        double v[GRIDS];
        power(-0.43, orders[k], v);
        const struct estimate e = extrapolate(v, 4, 0.0);
        assert_close(e.order, orders[k], 1e-10, 0.0);
        assert_covers(&e, LIMIT);
    }
}

/* The limits of growing and of constant values are judged by the finest grids. */
static void test_four_grids_with_growing_changes_are_unsettled(void **state)
{
    (void)state;
    const double grows[GRIDS] = {1.9, 2.0, 2.2, 2.5},
                 stands[GRIDS] = {1.9, 2.0, 2.0, 2.0};
    assert_false(extrapolate(grows, 4, 0.0).settled);
    const struct estimate e = extrapolate(stands, 4, 0.0);
    assert_true(e.settled && e.value == 2.0 && e.uncertainty < 1e-11);
}

/* The first value may be the small one: a change of round-off only beside the others. */
static void test_scale_left_out_is_the_largest_value(void **state)
{
    (void)state;
    const double v[3] = {1e-7, LIMIT, LIMIT * (1.0 + 1e-9)};
    assert_true(extrapolate(v, 3, 0.0).uncertainty ==
                extrapolate(v, 3, LIMIT * (1.0 + 1e-9)).uncertainty);
    assert_true(extrapolate(v, 3, 0.0).uncertainty !=
                extrapolate(v, 3, v[0]).uncertainty);
}

/* A value that is no number must never come out as settled. */
static void test_not_a_number_is_never_settled(void **state)
{
    (void)state;
    for (int at = 0; at < GRIDS; at++) {
        double v[GRIDS] = {LIMIT, LIMIT * (1.0 + 1e-7), LIMIT * (1.0 + 2e-7), LIMIT};
        v[at] = (double)NAN;
        assert_false(extrapolate(v, 4, 1.0).settled);
        if (at == 3)
            break;
        assert_false(extrapolate(v, 3, 0.0).settled);
        assert_false(extrapolate(v, 3, 1.0).settled);
        if (at < 2)
            assert_false(extrapolate(v, 2, 1.0).settled);
    }
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_second_and_third_order_terms_are_removed),
        cmocka_unit_test(test_pure_second_order_is_measured),
        cmocka_unit_test(test_fourth_order_remainder_is_covered),
        cmocka_unit_test(test_lower_orders_are_measured_and_covered),
        cmocka_unit_test(test_scatter_of_the_coarsest_grid_is_covered),
        cmocka_unit_test(test_fast_change_widens_the_uncertainty),
        cmocka_unit_test(test_uncertainty_has_no_large_jump_between_orders),
        cmocka_unit_test(test_growing_changes_are_unsettled),
        cmocka_unit_test(test_oscillating_changes_are_unsettled_unless_they_fall),
        cmocka_unit_test(test_small_disorder_is_settled_with_a_wide_uncertainty),
        cmocka_unit_test(test_constant_values_stand),
        cmocka_unit_test(test_round_off_is_not_taken_for_convergence),
        cmocka_unit_test(test_two_grids_assume_second_order_with_a_wide_uncertainty),
        cmocka_unit_test(test_fourth_grid_judges_the_three_finest),
        cmocka_unit_test(
            test_four_grids_of_pure_second_order_have_the_least_uncertainty),
        cmocka_unit_test(test_four_grids_cover_a_fourth_order_remainder),
        cmocka_unit_test(test_four_grids_cover_lower_orders),
        cmocka_unit_test(test_four_grids_with_growing_changes_are_unsettled),
        cmocka_unit_test(test_scale_left_out_is_the_largest_value),
        cmocka_unit_test(test_not_a_number_is_never_settled),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
