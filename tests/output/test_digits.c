/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "tests/support/assert_close.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "output/digits.h"

static void assert_like_printf(double value)
{
    char got[DIGITS_TEXT], want[64];
    const size_t length = digits_write(value, got);
    assert_int_equal(length, strlen(got));
    (void)snprintf(want, sizeof want, "%.12g", value);
    assert_string_equal(got, want);
}

static void test_chosen_values_are_those_of_printf(void **state)
{
    (void)state;
    static const double values[] = {0.0,
                                    1.0,
                                    -1.0,
                                    10.0,
                                    123456.0,
                                    0.1,
                                    2.385,
                                    1e-4,
                                    9.9e-5,
                                    1e-9,
                                    9.99e-10,
                                    1e-300,
                                    999999.5,
                                    1e11,
                                    1e12,
                                    1e15,
                                    -1e14,
                                    1.0 / 3.0,
                                    2.0 / 3.0,
                                    99999999999.94,
                                    -0.00012,
                                    1.5e-7,
                                    100.0,
                                    0.099999999999999,
                                    9.99999999999e-5,
                                    1e22,
                                    -6.6e30,
                                    123456789012.0,
                                    1234567890123.0};
    for (size_t k = 0; k < sizeof values / sizeof *values; k++)
        assert_like_printf(values[k]);
}

/* A linear congruential sequence over all magnitudes; the text must read back within one
 * unit of the 12th digit. */
static void test_scattered_values_read_back(void **state)
{
    (void)state;
    unsigned long long seed = 20261201;
    int same = 0, count = 0;
    for (int k = 0; k < 100000; k++) {
        seed = seed * 6364136223846793005ULL + 1442695040888963407ULL;
        const double mantissa = (double)(seed >> 11) / 9007199254740992.0 + 0.1;
        const double value = (k % 2 ? -1 : 1) * mantissa * pow(10.0, k % 29 - 12);
        char got[DIGITS_TEXT], want[64];
        (void)digits_write(value, got);
        (void)snprintf(want, sizeof want, "%.12g", value);
        assert_close(strtod(got, NULL), value, 5.1e-12, 0.0);
        same += strcmp(got, want) == 0;
        count++;
    }
    assert_true(same > 0.999 * count);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_chosen_values_are_those_of_printf),
        cmocka_unit_test(test_scattered_values_read_back),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
