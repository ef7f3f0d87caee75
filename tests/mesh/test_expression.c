/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "tests/support/assert_close.h"

#include <stdio.h>
#include <string.h>

#include "mesh/expression.h"
#include "shared/constants.h"

/* A handful of operations on doubles. */
#define ROUNDING 1e-14

#define NAMES 6

/* Names known to every expression: values gap, ratio, s (also a unit), and supplies. */
struct fixture {
    struct units *units;
    struct messages messages;
    struct mistakes mistakes;
    struct symbols symbols;
    struct node nodes[NAMES];
    char texts[NAMES][32];
};

static void define(struct fixture *fixture, const char *name, const char *text,
                   int supply)
{
    size_t k = fixture->symbols.count;
    (void)snprintf(fixture->texts[k], sizeof fixture->texts[k], "%s", text);
    fixture->nodes[k] = (struct node){
        .kind = NODE_SCALAR, .place = {(int)k + 1, 1}, .text = fixture->texts[k]};
    assert_true(symbols_add(&fixture->symbols, name, &fixture->nodes[k], supply));
}

static void define_supply(struct fixture *fixture, const char *name, int supply,
                          struct dimension dimension)
{
    define(fixture, name, "0", supply);
    struct symbol *symbol = symbols_find(&fixture->symbols, name, strlen(name));
    symbol->state = SYMBOL_KNOWN;
    symbol->value.dimension = dimension;
}

static int set_up(void **state)
{
    static struct fixture fixture;
    const char *reason = NULL;
    memset(&fixture, 0, sizeof fixture);
    if (units_create(&fixture.units, &reason) != STATUS_OK)
        return -1;
    fixture.mistakes.messages = &fixture.messages;
    fixture.symbols.units = fixture.units;
    fixture.symbols.mistakes = &fixture.mistakes;
    define(&fixture, "gap", "half*2", -1);
    define(&fixture, "half", "10 mm", -1);
    define(&fixture, "ratio", "0.25", -1);
    define(&fixture, "s", "3 mm", -1);
    define_supply(&fixture, "plates", 0, DIMENSION_VOLT);
    define_supply(&fixture, "coil", 1, DIMENSION_AMPERE);
    *state = &fixture;
    return 0;
}

static int tear_down(void **state)
{
    struct fixture *fixture = *state;
    symbols_free(&fixture->symbols);
    messages_free(&fixture->messages);
    units_destroy(&fixture->units);
    return 0;
}

static bool evaluate(struct fixture *fixture, const char *text, struct affine *value)
{
    char copy[2000];
    (void)snprintf(copy, sizeof copy, "%s", text);
    const struct node node = {
        .kind = NODE_SCALAR, .place = {7, 5}, .text = copy, .literal = true};
    return expression_evaluate(&fixture->symbols, &node, true, value);
}

static void assert_value(struct fixture *fixture, const char *text, double want,
                         struct dimension dimension)
{
    struct affine value;
    if (!evaluate(fixture, text, &value))
        fail_msg("%s: %s", text, fixture->messages.items[0].text);
    assert_close(value.constant.value, want, ROUNDING, 0);
    assert_true(dimension_equal(value.constant.dimension, dimension));
    assert_true(affine_is_constant(&value));
}

/* The expression is refused at a column with a message that holds `part`. */
static void assert_mistake(struct fixture *fixture, const char *text, int column,
                           const char *part)
{
    struct affine value;
    size_t count = fixture->messages.count;
    if (evaluate(fixture, text, &value))
        fail_msg("%s was accepted", text);
    assert_int_equal(fixture->messages.count, count + 1);
    const struct message *message = &fixture->messages.items[count];
    if (strstr(message->text, part) == NULL)
        fail_msg("%s: \"%s\" does not hold \"%s\"", text, message->text, part);
    assert_int_equal(message->place.line, 7);
    assert_int_equal(message->place.column, 4 + column);
    assert_true(affine_is_bare_zero(&value));
}

static void test_numbers_are_read_strictly(void **state)
{
    assert_value(*state, "4.25", 4.25, DIMENSION_NONE);
    assert_value(*state, " .5e-2 ", 5e-3, DIMENSION_NONE);
    assert_value(*state, "3.E+2", 300, DIMENSION_NONE);
    assert_mistake(*state, "0x10", 2, "unknown unit");
    assert_mistake(*state, "nan", 1, "unknown name");
    assert_mistake(*state, ".", 1, "expected a number");
    assert_mistake(*state, "4,5 mm", 2, "a decimal sign is a point");
}

static void test_operators_bind_as_on_paper(void **state)
{
    assert_value(*state, "2 + 3*4 - 6/4", 12.5, DIMENSION_NONE);
    assert_value(*state, "2 - 3 - 4", -5, DIMENSION_NONE);
    assert_value(*state, "24/4/3", 2, DIMENSION_NONE);
    assert_value(*state, "-3^2", -9, DIMENSION_NONE);
    assert_value(*state, "2*-3", -6, DIMENSION_NONE);
    assert_value(*state, "--(2 + 1)**-2", 1.0 / 9, DIMENSION_NONE);
}

static void test_units_belong_to_their_number(void **state)
{
    assert_value(*state, "4 mm", 4e-3, DIMENSION_LENGTH);
    assert_value(*state, "4mm", 4e-3, DIMENSION_LENGTH);
    assert_value(*state, "2.5 kV/mm", 2.5e6, DIMENSION_VOLT_PER_METRE);
    assert_value(*state, "2 m s^-1", 2, DIMENSION_SPEED);
    assert_value(*state, "1 e", ELEMENTARY_CHARGE, DIMENSION_CHARGE);
    assert_value(*state, "1e1 e", 10 * ELEMENTARY_CHARGE, DIMENSION_CHARGE);
    assert_value(*state, "100 V/4 mm", 25e3, DIMENSION_VOLT_PER_METRE);
    assert_value(*state, "(2 mm)^2/1 mm2", 4, DIMENSION_NONE);
    assert_value(*state, "1/2 m^-1", 0.5, DIMENSION_LENGTH);
}

static void test_names_win_over_units_off_a_number(void **state)
{
    assert_value(*state, "6 mm/s", 2, DIMENSION_NONE); /* s is a value of 3 mm */
    assert_value(*state, "s + 1 mm", 4e-3, DIMENSION_LENGTH);
    assert_value(*state, "2 s", 2, (struct dimension){0, 0, 1, 0, 0});
    assert_value(*state, "6 mm/min(2, 3)", 3e-3, DIMENSION_LENGTH);
    assert_mistake(*state, "mm", 1, "the unit \"mm\" stands alone");
    assert_mistake(*state, "2 ratio", 3, "2*ratio");
}

static void test_values_are_evaluated_in_any_order(void **state)
{
    assert_value(*state, "gap/2 + 4 mm", 14e-3, DIMENSION_LENGTH);
    assert_value(*state, "ratio*gap", 5e-3, DIMENSION_LENGTH);
    assert_mistake(*state, "gapp/2", 1, "did you mean \"gap\"?");
}

static void test_functions_check_their_arguments(void **state)
{
    assert_value(*state, "sqrt(9 mm^2)", 3e-3, DIMENSION_LENGTH);
    assert_value(*state, "abs(-gap)", 20e-3, DIMENSION_LENGTH);
    assert_value(*state, "min(4 mm, gap, 30 mm) + max(0, 1 mm)", 5e-3,
                 DIMENSION_LENGTH);
    assert_value(*state, "sin(30 deg)", 0.5, DIMENSION_NONE);
    assert_value(*state, "cos(pi) + tan(45 deg)^2 + 1", 1, DIMENSION_NONE);
    assert_mistake(*state, "sqrt(4 m)", 6, "unit of the result");
    assert_mistake(*state, "sin(gap)", 5, "needs an angle");
    assert_mistake(*state, "min(gap, 4 V)", 9, "a length beside a voltage");
    assert_mistake(*state, "sqrt 4", 6, "\"(\" behind a function");
    assert_mistake(*state, "sqrt(4, 5)", 7, "a comma");
}

static void test_sides_that_do_not_fit_are_named(void **state)
{
    assert_mistake(*state, "gap + 4 V", 5, "found a length plus a voltage");
    assert_mistake(*state, "4 A - 1", 5, "a current minus a number without a unit");
    assert_value(*state, "gap + 0", 20e-3, DIMENSION_LENGTH);
    assert_value(*state, "0 - gap", -20e-3, DIMENSION_LENGTH);
}

static void test_what_is_not_finite_is_refused(void **state)
{
    assert_mistake(*state, "1/0", 2, "not a finite number");
    assert_mistake(*state, "gap/(2 - 2)", 4, "not a finite number");
    assert_mistake(*state, "1e999", 1, "not a finite number");
    assert_mistake(*state, "1e300*1e300", 6, "not a finite number");
    assert_mistake(*state, "sqrt(-1)", 6, "not a finite number");
    assert_mistake(*state, "0^-1", 2, "not a finite number");
}

static void test_exponents_are_whole_numbers(void **state)
{
    assert_mistake(*state, "4^0.5", 2, "whole number");
    assert_mistake(*state, "4^(1 mm)", 2, "whole number");
    assert_mistake(*state, "2^100", 2, "whole number");
    assert_mistake(*state, "gap^90 * gap^20", 8, "unit of the result");
    assert_mistake(*state, "4 mm^x", 6, "power of a unit");
    assert_mistake(*state, "4 mm^10", 6, "power of a unit");
}

static void test_broken_text_is_located(void **state)
{
    assert_mistake(*state, "(gap + 1 mm", 12, "expected \")\"");
    assert_mistake(*state, "gap +", 6, "the end of the expression");
    assert_mistake(*state, "gap 2", 5, "an operator or the end");
    assert_mistake(*state, "gap * * 2", 7, "expected a number");
}

static void test_ampere_turns_get_a_hint(void **state)
{
    assert_mistake(*state, "3200 A turn", 8, "ampere-turns are written in A");
    assert_mistake(*state, "3200 At", 6, "ampere-turns are written in A");
    assert_value(*state, "0.25 turn", PI / 2, DIMENSION_NONE);
}

static void test_potentials_are_linear_in_supplies(void **state)
{
    struct affine value;
    assert_true(evaluate(*state, "-plates/2 + ratio*(plates + 8 V) + 5 V", &value));
    assert_close(value.constant.value, 7, ROUNDING, 0);
    assert_close(value.gain[0], -0.25, ROUNDING, 0);
    assert_true(dimension_equal(value.constant.dimension, DIMENSION_VOLT));
    assert_true(evaluate(*state, "coil*3", &value));
    assert_close(value.gain[0], 0, 0, 0);
    assert_close(value.gain[1], 3, ROUNDING, 0);
}

static void test_nonlinear_use_of_supplies_is_refused(void **state)
{
    const char *part = "linear in the supplies";
    assert_mistake(*state, "plates*plates", 7, part);
    assert_mistake(*state, "plates^2", 7, part);
    assert_mistake(*state, "1/plates", 2, part);
    assert_mistake(*state, "sqrt(plates)", 6, part);
    assert_mistake(*state, "abs(plates)", 5, part);
    assert_mistake(*state, "max(plates, 3 V)", 12, part);
    assert_mistake(*state, "plates + coil", 8, "a voltage plus a current");
}

static void test_supplies_are_refused_where_not_allowed(void **state)
{
    struct fixture *fixture = *state;
    struct affine value;
    char text[] = "2*plates";
    const struct node node = {
        .kind = NODE_SCALAR, .place = {7, 5}, .text = text, .literal = true};
    assert_false(expression_evaluate(&fixture->symbols, &node, false, &value));
    assert_non_null(strstr(fixture->messages.items[0].text, "\"plates\" is a supply"));
    assert_int_equal(fixture->messages.items[0].place.column, 7);
}

static void test_deep_or_long_expressions_are_refused(void **state)
{
    char text[1500];
    memset(text, '(', 200);
    text[200] = '\0';
    assert_mistake(*state, text, SYMBOLS_DEPTH_MAX + 2, "nested too deep");
    memset(text, '-', sizeof text - 1);
    text[sizeof text - 1] = '\0';
    assert_mistake(*state, text, 1, "too long");
}

static void test_missing_expression_is_told(void **state)
{
    struct fixture *fixture = *state;
    struct affine value;
    const struct node list = {.kind = NODE_SEQUENCE, .place = {7, 5}};
    assert_mistake(fixture, "", 1, "found nothing");
    assert_false(expression_evaluate(&fixture->symbols, &list, true, &value));
    assert_non_null(strstr(fixture->messages.items[1].text, "found a list"));
}

#define CASE(test) cmocka_unit_test_setup_teardown(test, set_up, tear_down)

int main(void)
{
    const struct CMUnitTest tests[] = {
        CASE(test_numbers_are_read_strictly),
        CASE(test_operators_bind_as_on_paper),
        CASE(test_units_belong_to_their_number),
        CASE(test_names_win_over_units_off_a_number),
        CASE(test_values_are_evaluated_in_any_order),
        CASE(test_functions_check_their_arguments),
        CASE(test_sides_that_do_not_fit_are_named),
        CASE(test_what_is_not_finite_is_refused),
        CASE(test_exponents_are_whole_numbers),
        CASE(test_broken_text_is_located),
        CASE(test_ampere_turns_get_a_hint),
        CASE(test_potentials_are_linear_in_supplies),
        CASE(test_nonlinear_use_of_supplies_is_refused),
        CASE(test_supplies_are_refused_where_not_allowed),
        CASE(test_deep_or_long_expressions_are_refused),
        CASE(test_missing_expression_is_told),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
