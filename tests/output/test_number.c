/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Numbers for people: a table of what each should look like. */

#include <string.h>

#include "output/number.h"
#include "tests/support/assert_close.h"

static void test_uncertainty_decides_the_digits(void **state)
{
    (void)state;
    static const struct {
        double value, uncertainty;
        const char *text;
    } rows[] = {
        {1.234567, 0.00008, "1.23457(8)"},
        {1.234567, 0.000081, "1.23457(9)"}, /* rounded up, never down */
        {1.234567, 0.00012, "1.23457(12)"},
        {-1.234567, 0.02, "-1.23(2)"},
        {53798.0, 2.3, "53798(3)"},
        {1234, 30, "1230(30)"},
        {1234, 130, "1230(130)"},
        {0.00012345, 0.0000021, "1.23(3)e-4"},
        {12345678, 2000, "1.2346(2)e7"},
        {0, 0.003, "0.000(3)"},
        {0.3, 2, "0(2)"},
        {-0.3, 2, "0(2)"},
        {1.5, 0.00096, "1.5000(10)"},
        {1.25, 1e-15, "1.25000000(1)"},
    };
    for (size_t k = 0; k < sizeof rows / sizeof rows[0]; k++) {
        char text[NUMBER_TEXT];
        number_format(rows[k].value, rows[k].uncertainty, text, sizeof text);
        assert_string_equal(text, rows[k].text);
    }
}

static void test_exact_number_has_no_bracket(void **state)
{
    (void)state;
    static const struct {
        double value;
        const char *text;
    } rows[] = {{0.0, "0"},           {-0.0, "0"},        {110, "110"},
                {2.385, "2.385"},     {1e-3, "0.001"},    {9.5e-4, "9.5e-4"},
                {999999.9999, "1e6"}, {-4.5e8, "-4.5e8"}, {(double)NAN, "not finite"}};
    for (size_t k = 0; k < sizeof rows / sizeof rows[0]; k++) {
        char text[NUMBER_TEXT];
        number_format(rows[k].value, 0, text, sizeof text);
        if (k == 6) /* nine digits keep it below a million */
            assert_string_equal(text, "1e6");
        else
            assert_string_equal(text, rows[k].text);
    }
}

static void test_quantity_uses_the_unit_of_the_trade(void **state)
{
    (void)state;
    static const struct {
        double value, uncertainty;
        const char *unit, *text;
    } rows[] = {
        {0.0572, 0.00003, "m", "57.20(3) mm"},
        {-2.2e-6, 4e-7, "m", "-2.2(4) um"},
        {5507.3, 0.4, "V/m", "5.5073(4) kV/m"},
        {0.10237, 3e-6, "T", "102.370(3) mT"},
        {1.21, 0.02, "T", "1.21(2) T"},
        {5.31e-11, 2e-14, "F/m", "53.10(2) pF/m"},
        {3.5e-3, 0, "rad", "3.5 mrad"},
        {53798, 2.3, "m/s", "53.798(3) km/s"},
        {8.1e-4, 2e-5, "1", "8.1(2)e-4"},
        {7.5, 0.5, "kg m", "7.5(5) kg m"},
        {0, 2e-5, "T", "0(20) uT"},
        {0, 0, "V", "0 V"},
        {0, 0, "m", "0 mm"},
    };
    for (size_t k = 0; k < sizeof rows / sizeof rows[0]; k++) {
        char text[NUMBER_TEXT];
        number_quantity(rows[k].value, rows[k].uncertainty, rows[k].unit, text,
                        sizeof text);
        assert_string_equal(text, rows[k].text);
    }
}

static void test_every_text_fits_the_stated_size(void **state)
{
    (void)state;
    static const double values[] = {-1.7976931348623157e308, 4.9e-324, -123456789.123,
                                    -9.87654321e-5};
    static const double shares[] = {0, 1e-300, 1e-9, 0.012, 1, 1e6};
    for (size_t k = 0; k < 4; k++) {
        for (size_t u = 0; u < 6; u++) {
            char text[NUMBER_TEXT + 1];
            memset(text, '#', sizeof text);
            number_quantity(values[k], fabs(values[k]) * shares[u], "uWb/m of flux",
                            text, NUMBER_TEXT);
            assert_non_null(memchr(text, '\0', NUMBER_TEXT));
            assert_int_equal(text[NUMBER_TEXT], '#');
            assert_non_null(strstr(text, "flux")); /* nothing was cut off */
        }
    }
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_uncertainty_decides_the_digits),
        cmocka_unit_test(test_exact_number_has_no_bracket),
        cmocka_unit_test(test_quantity_uses_the_unit_of_the_trade),
        cmocka_unit_test(test_every_text_fits_the_stated_size),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
