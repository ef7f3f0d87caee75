/* SPDX-License-Identifier: GPL-3.0-or-later */

#include "tests/support/assert_close.h"

#include "solver/least_squares.h"

/* The straight line through four points: slope 1.3, mean residual known by hand. */
static void test_overdetermined_system_is_fitted(void **state)
{
    (void)state;
    double matrix[8] = {1, 1, 1, 1, 0, 1, 2, 3};
    double right[4] = {2.385, 3.785, 4.885,
                       6.385}; /* 2.385 + 1.3 k + (0, .1, -.1, .1) */
    assert_int_equal(least_squares(matrix, 4, 2, right), STATUS_OK);
    assert_close(right[1], 1.31, 1e-13, 0.0);
    assert_close(right[0], 2.395, 1e-13, 0.0);
}

static void test_columns_of_any_size_are_kept(void **state)
{
    (void)state;
    double matrix[6] = {1, 1, 1, 0, 1e-15, 3e-15};
    double right[3] = {0.7, 1.7, 3.7};
    assert_int_equal(least_squares(matrix, 3, 2, right), STATUS_OK);
    assert_close(right[0], 0.7, 1e-13, 0.0);
    assert_close(right[1], 1e15, 1e-13, 0.0);
}

static void test_equal_columns_share_the_answer(void **state)
{
    (void)state;
    double matrix[6] = {1, 2, 4, 1, 2, 4};
    double right[3] = {1.3, 2.6, 5.2};
    assert_int_equal(least_squares(matrix, 3, 2, right), STATUS_OK);
    assert_close(right[0], 0.65, 1e-13, 0.0);
    assert_close(right[1], 0.65, 1e-13, 0.0);
}

static void test_bad_input_is_reported(void **state)
{
    (void)state;
    double matrix[2] = {1, (double)NAN}, right[2] = {1, 1};
    assert_int_equal(least_squares(matrix, 2, 1, right), STATUS_UNTRUSTED);
    assert_int_equal(least_squares(matrix, 2, LEAST_SQUARES_TERMS + 1, right),
                     STATUS_SIZE);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_overdetermined_system_is_fitted),
        cmocka_unit_test(test_columns_of_any_size_are_kept),
        cmocka_unit_test(test_equal_columns_share_the_answer),
        cmocka_unit_test(test_bad_input_is_reported),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
