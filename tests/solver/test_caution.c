/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Cautions from lists of figures made by hand. */

#include "tests/support/assert_close.h"

#include <string.h>

#include "shared/mem.h"
#include "solver/caution.h"

static void add(struct figures *figures, const char *name, double value,
                enum figure_state state)
{
    const struct figure figure = {
        .name = name, .title = name, .unit = "V/m", .state = state, .value = value};
    assert_int_equal(figures_add(figures, &figure, "upper plate", "radius 1 mm"),
                     STATUS_OK);
}

/* The one caution that a figure gives; NULL for none. */
static char *words(const char *name, double value, enum figure_state state)
{
    struct figures figures = {0};
    struct cautions cautions;
    char *text = NULL;
    add(&figures, "charge", 1e9, FIGURE_GOOD);
    add(&figures, name, value, state);
    assert_int_equal(cautions_of_figures(&figures, &cautions), STATUS_OK);
    assert_true(cautions.count <= 1);
    if (cautions.count == 1) {
        assert_string_equal(cautions.items[0].figure, name);
        assert_string_equal(cautions.items[0].subject, "upper plate");
        text = mem_text(cautions.items[0].text);
    }
    cautions_free(&cautions);
    cautions_free(&cautions);
    figures_free(&figures);
    return text;
}

static void assert_says(const char *name, double value, const char *start,
                        const char *part)
{
    char *text = words(name, value, FIGURE_GOOD);
    assert_non_null(text);
    assert_ptr_equal(strstr(text, start), text);
    assert_non_null(strstr(text, part));
    assert_non_null(strstr(text, "common practice"));
    mem_free(text);
}

static void test_low_fields_give_none(void **state)
{
    (void)state;
    assert_null(words("surface_field", 0.99e6, FIGURE_GOOD));
    assert_null(words("insulator_field", 0.29e6, FIGURE_GOOD));
}

static void test_unpolished_surfaces_are_named_above_their_bound(void **state)
{
    (void)state;
    assert_says("surface_field", 1.234e6,
                "surface field of upper plate: 1.23 kV/mm (radius 1 mm), above ",
                "unpolished");
    assert_says("surface_field", -1.234e6, "surface field of upper plate: 1.23 kV/mm",
                "1 to 2 kV/mm");
}

static void test_polished_surfaces_are_named_above_theirs(void **state)
{
    (void)state;
    assert_says("surface_field", 5.01e6, "surface field of upper plate: 5.01 kV/mm",
                "polished and conditioned");
}

static void test_insulators_have_their_own_bounds(void **state)
{
    (void)state;
    assert_says("insulator_field", 0.31e6,
                "field along the surface of upper plate: 0.31 kV/mm", "in the range");
    assert_says("insulator_field", 1.7e6,
                "field along the surface of upper plate: 1.7 kV/mm", "above what");
}

static void test_unsettled_figures_count_and_missing_ones_do_not(void **state)
{
    (void)state;
    char *text = words("surface_field", 3e6, FIGURE_UNSETTLED);
    assert_non_null(text);
    mem_free(text);
    assert_null(words("surface_field", 3e6, FIGURE_MISSING));
}

static void test_every_failed_allocation_is_reported(void **state)
{
    (void)state;
    struct figures figures = {0};
    struct cautions cautions;
    enum status status = STATUS_MEMORY;
    int failures = 0;
    add(&figures, "surface_field", 2.4e6, FIGURE_GOOD);
    add(&figures, "insulator_field", 2.4e6, FIGURE_GOOD);
    for (long k = 1; status != STATUS_OK; k++) {
        mem_fail_at(k);
        status = cautions_of_figures(&figures, &cautions);
        mem_fail_at(0);
        assert_true(status == STATUS_OK || cautions.count == 0);
        failures += status == STATUS_MEMORY;
    }
    assert_true(failures >= 5);
    assert_int_equal(cautions.count, 2);
    cautions_free(&cautions);
    figures_free(&figures);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_low_fields_give_none),
        cmocka_unit_test(test_unpolished_surfaces_are_named_above_their_bound),
        cmocka_unit_test(test_polished_surfaces_are_named_above_theirs),
        cmocka_unit_test(test_insulators_have_their_own_bounds),
        cmocka_unit_test(test_unsettled_figures_count_and_missing_ones_do_not),
        cmocka_unit_test(test_every_failed_allocation_is_reported),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
