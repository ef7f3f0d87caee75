/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "tests/support/assert_close.h"

#include "shared/constants.h"
#include "shared/mem.h"
#include "shared/quantity.h"

/* A unit is one multiplication away from its definition. */
#define ROUNDING 1e-15

static int open_table(void **state)
{
    const char *reason = NULL;
    struct units *units = NULL;
    if (units_create(&units, &reason) != STATUS_OK)
        return -1;
    *state = units;
    return 0;
}

static int close_table(void **state)
{
    struct units *units = *state;
    units_destroy(&units);
    units_destroy(&units);
    return units == NULL ? 0 : -1;
}

static void assert_unit(const struct units *units, const char *text, double factor,
                        struct dimension dimension)
{
    struct quantity unit;
    assert_int_equal(units_lookup(units, text, &unit), STATUS_OK);
    assert_close(unit.value, factor, ROUNDING, 0);
    assert_true(dimension_equal(unit.dimension, dimension));
}

static void test_units_of_the_trade_are_known(void **state)
{
    assert_unit(*state, "mm", 1e-3, DIMENSION_LENGTH);
    assert_unit(*state, "kV", 1e3, DIMENSION_VOLT);
    assert_unit(*state, "A", 1, DIMENSION_AMPERE);
    assert_unit(*state, "kV/mm", 1e6, DIMENSION_VOLT_PER_METRE);
    assert_unit(*state, "km/s", 1e3, DIMENSION_SPEED);
    assert_unit(*state, "K", 1, DIMENSION_TEMPERATURE);
    assert_unit(*state, "\xC2\xB5m", 1e-6, DIMENSION_LENGTH);
    assert_unit(*state, "%", 1e-2, DIMENSION_NONE);
}

static void test_angles_are_numbers(void **state)
{
    assert_unit(*state, "mrad", 1e-3, DIMENSION_NONE);
    assert_unit(*state, "deg", PI / 180, DIMENSION_NONE);
    assert_unit(*state, "turn", 2 * PI, DIMENSION_NONE);
}

static void test_particle_units_agree_with_the_constants(void **state)
{
    assert_unit(*state, "u", ATOMIC_MASS, DIMENSION_MASS);
    assert_unit(*state, "amu", ATOMIC_MASS, DIMENSION_MASS);
    assert_unit(*state, "kDa", 1e3 * ATOMIC_MASS, DIMENSION_MASS);
    assert_unit(*state, "e", ELEMENTARY_CHARGE, DIMENSION_CHARGE);
    assert_unit(*state, "keV", 1e3 * ELEMENTARY_CHARGE, DIMENSION_ENERGY);
}

static void test_constants_agree_with_each_other(void **state)
{
    (void)state;
    double product =
        VACUUM_PERMITTIVITY * VACUUM_PERMEABILITY * SPEED_OF_LIGHT * SPEED_OF_LIGHT;
    assert_close(product, 1, 1e-10, 0); /* eps0 and mu0 are given to 11 digits */
}

static void test_unfit_units_are_refused(void **state)
{
    static const char *const texts[] = {"furlongz", "degC", "mol",
                                        "mm/",      "dBm",  "m^120"};
    for (size_t k = 0; k < sizeof texts / sizeof texts[0]; k++) {
        struct quantity unit = {7, DIMENSION_LENGTH};
        assert_int_equal(units_lookup(*state, texts[k], &unit), STATUS_INPUT);
        assert_close(unit.value, 0, 0, 0);
    }
}

static void test_dimensions_are_put_into_words(void **state)
{
    (void)state;
    char text[64];
    dimension_describe(DIMENSION_LENGTH, text, sizeof text);
    assert_string_equal(text, "a length");
    dimension_describe(DIMENSION_VOLT, text, sizeof text);
    assert_string_equal(text, "a voltage");
    dimension_describe(DIMENSION_AMPERE, text, sizeof text);
    assert_string_equal(text, "a current");
    dimension_describe(DIMENSION_NONE, text, sizeof text);
    assert_string_equal(text, "a number without a unit");
    dimension_describe((struct dimension){2, 1, -3, 0, 1}, text, sizeof text);
    assert_string_equal(text, "kg m2 s-3 K");
}

static void test_short_buffer_is_terminated(void **state)
{
    (void)state;
    char text[6] = "xxxxx";
    dimension_describe((struct dimension){2, 1, -3, 0, 1}, text, sizeof text);
    assert_int_equal(text[5], '\0');
    dimension_describe(DIMENSION_NONE, text, sizeof text);
    assert_string_equal(text, "a num");
}

static void test_dimensions_multiply(void **state)
{
    (void)state;
    struct dimension dimension = DIMENSION_VOLT;
    assert_true(dimension_multiply(&dimension, DIMENSION_LENGTH, -1));
    assert_true(dimension_equal(dimension, DIMENSION_VOLT_PER_METRE));
    assert_false(dimension_multiply(&dimension, DIMENSION_LENGTH, 100));
    assert_true(dimension_equal(dimension, DIMENSION_VOLT_PER_METRE));
}

static void test_lack_of_memory_is_told(void **state)
{
    (void)state;
    const char *reason = "untouched";
    struct units *units = NULL;
    mem_fail_at(1);
    assert_int_equal(units_create(&units, &reason), STATUS_MEMORY);
    mem_fail_at(0);
    assert_null(units);
    assert_null(reason);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_units_of_the_trade_are_known),
        cmocka_unit_test(test_angles_are_numbers),
        cmocka_unit_test(test_particle_units_agree_with_the_constants),
        cmocka_unit_test(test_constants_agree_with_each_other),
        cmocka_unit_test(test_unfit_units_are_refused),
        cmocka_unit_test(test_dimensions_are_put_into_words),
        cmocka_unit_test(test_short_buffer_is_terminated),
        cmocka_unit_test(test_dimensions_multiply),
        cmocka_unit_test(test_lack_of_memory_is_told),
    };
    return cmocka_run_group_tests(tests, open_table, close_table);
}
