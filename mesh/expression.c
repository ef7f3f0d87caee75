/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Recursive descent: sum, term, power, operand. Values are affine in the supplies
 * (affine.h), so what is not linear is refused where it is written. The first mistake
 * ends an expression; its place is the operator or word to blame. */
#include "mesh/expression.h"

#include <ctype.h>
#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "mesh/expression_internal.h"
#include "shared/constants.h"

#define NUMBER_LENGTH_MAX 400
#define LENGTH_MAX        1000 /* letters of an expression */
#define WORD_SHOWN        64   /* letters of a name in a message */

bool expression_number(const char **at, double *value)
{
    const char *c = *at;
    size_t digits = 0;
    for (; isdigit((unsigned char)*c); c++)
        digits++;
    if (*c == '.')
        for (c++; isdigit((unsigned char)*c); c++)
            digits++;
    if (digits == 0)
        return false;
    if (*c == 'e' || *c == 'E') { /* only with digits behind it: "1 e" is a charge */
        const char *exponent = c + 1;
        if (*exponent == '+' || *exponent == '-')
            exponent++;
        if (isdigit((unsigned char)*exponent))
            for (c = exponent; isdigit((unsigned char)*c); c++)
                ;
    }
    char text[NUMBER_LENGTH_MAX];
    size_t length = (size_t)(c - *at);
    if (length >= sizeof text)
        return false;
    memcpy(text, *at, length);
    text[length] = '\0';
    *value = strtod(text, NULL);
    *at = c;
    return true;
}

static bool parse_number(struct scanner *scanner, struct affine *value)
{
    const char *start = scanner->at;
    struct quantity number = {0, DIMENSION_NONE};
    if (!expression_number(&scanner->at, &number.value))
        return scanner_report_unexpected(scanner, "a number, a name or \"(\"");
    if (!scanner_unit(scanner, &number))
        return false;
    *value = affine_number(number.value, number.dimension);
    return isfinite(number.value) || scanner_accept(scanner, start, AFFINE_NOT_FINITE);
}

static bool report_unknown_name(const struct scanner *scanner, const char *at,
                                int length)
{
    const struct symbols *symbols = scanner->symbols;
    char word[WORD_SHOWN];
    struct quantity unit;
    (void)snprintf(word, sizeof word, "%.*s", length, at);
    const char *nearest = NULL;
    for (size_t k = 0; k < symbols->count && nearest == NULL; k++)
        nearest = nearest_word(word, &symbols->items[k].name, 1);
    if (nearest != NULL)
        return mistakes_add(symbols->mistakes, scanner_place(scanner, at),
                            "unknown name \"%s\"; expected a value or supply of this "
                            "file; did you mean \"%s\"?",
                            word, nearest);
    if (units_lookup(symbols->units, word, &unit) == STATUS_OK)
        return mistakes_add(symbols->mistakes, scanner_place(scanner, at),
                            "the unit \"%s\" stands alone; expected a number in front, "
                            "as in \"1 %s\"",
                            word, word);
    return mistakes_add(symbols->mistakes, scanner_place(scanner, at),
                        "unknown name \"%s\"; expected a value or supply of this file",
                        word);
}

static bool use_supply(const struct scanner *scanner, const char *at,
                       const struct symbol *symbol, struct affine *value)
{
    if (!scanner->supplies_allowed)
        return mistakes_add(scanner->symbols->mistakes, scanner_place(scanner, at),
                            "\"%s\" is a supply; expected only numbers and values "
                            "here, as supplies may be used in potentials alone",
                            symbol->name);
    *value = affine_supply(symbol->supply, symbol->value.dimension);
    return symbol->state == SYMBOL_KNOWN;
}

static bool parse_name(struct scanner *scanner, size_t length, struct affine *value)
{
    const char *start = scanner->at;
    struct symbols *symbols = scanner->symbols;
    scanner->at += length;
    if (length == 2 && strncmp(start, "pi", 2) == 0) {
        *value = affine_number(PI, DIMENSION_NONE);
        return true;
    }
    struct symbol *symbol = symbols_find(symbols, start, length);
    if (symbol == NULL)
        return report_unknown_name(scanner, start, (int)length);
    if (symbol->supply >= 0)
        return use_supply(scanner, start, symbol, value);
    if (!scanner_enter(scanner) ||
        !scanner_leave(
            scanner, symbols_evaluate(symbols, symbol, scanner_place(scanner, start))))
        return false;
    *value = affine_number(symbol->value.value, symbol->value.dimension);
    return true;
}

static bool parse_operand(struct scanner *scanner, struct affine *value)
{
    scanner_skip_space(scanner);
    if (*scanner->at == '(') {
        scanner->at++;
        return scanner_enter(scanner) &&
               scanner_leave(scanner,
                             scanner_sum(scanner, value) && scanner_close(scanner));
    }
    size_t length = word_length(scanner->at);
    if (length == 0)
        return parse_number(scanner, value);
    int function = function_find(scanner->at, length);
    return function >= 0 ? scanner_function(scanner, length, function, value)
                         : parse_name(scanner, length, value);
}

/* Signs in a row; false if there is an odd number of minus signs. */
static bool take_signs(struct scanner *scanner)
{
    bool positive = true;
    scanner_skip_space(scanner);
    while (*scanner->at == '-' || *scanner->at == '+') {
        positive = positive == (*scanner->at == '+');
        scanner->at++;
        scanner_skip_space(scanner);
    }
    return positive;
}

static bool parse_power(struct scanner *scanner, struct affine *value)
{
    if (!parse_operand(scanner, value))
        return false;
    scanner_skip_space(scanner);
    const char *at = scanner->at;
    if (*at != '^' && !(at[0] == '*' && at[1] == '*'))
        return true;
    scanner->at += *at == '^' ? 1 : 2;
    bool positive = take_signs(scanner);
    struct affine exponent;
    if (!parse_operand(scanner, &exponent))
        return false;
    double n = exponent.constant.value;
    if (!affine_is_constant(&exponent) || fabs(n) > 99 || n != floor(n) ||
        !dimension_equal(exponent.constant.dimension, DIMENSION_NONE))
        return mistakes_add(scanner->symbols->mistakes, scanner_place(scanner, at),
                            "the exponent does not fit; expected a whole number from "
                            "-99 to 99; found \"%.80s\"",
                            at);
    return scanner_accept(scanner, at,
                          affine_power(value, positive ? (int)n : -(int)n));
}

static bool parse_signed(struct scanner *scanner, struct affine *value)
{
    bool positive = take_signs(scanner);
    const char *at = scanner->at;
    const struct affine minus = affine_number(-1, DIMENSION_NONE);
    return parse_power(scanner, value) &&
           (positive || scanner_accept(scanner, at, affine_multiply(value, &minus)));
}

static bool parse_term(struct scanner *scanner, struct affine *value)
{
    if (!parse_signed(scanner, value))
        return false;
    for (;;) {
        scanner_skip_space(scanner);
        const char *at = scanner->at;
        struct affine factor;
        if (*at != '*' && *at != '/')
            return true;
        scanner->at++;
        if (!parse_signed(scanner, &factor) ||
            !scanner_accept(scanner, at,
                            *at == '*' ? affine_multiply(value, &factor)
                                       : affine_divide(value, &factor)))
            return false;
    }
}

bool scanner_sum(struct scanner *scanner, struct affine *value)
{
    if (!parse_term(scanner, value))
        return false;
    for (;;) {
        scanner_skip_space(scanner);
        const char *at = scanner->at;
        struct affine summand;
        if (*at != '+' && *at != '-')
            return true;
        scanner->at++;
        if (!parse_term(scanner, &summand))
            return false;
        struct affine left = *value;
        enum affine_fault fault = affine_add(value, &summand, *at == '+' ? 1 : -1);
        if (fault == AFFINE_DIMENSION)
            return scanner_report_sides(scanner, at, *at == '+' ? "plus" : "minus",
                                        &left, &summand);
        if (!scanner_accept(scanner, at, fault))
            return false;
    }
}

bool expression_evaluate(struct symbols *symbols, const struct node *node,
                         bool supplies_allowed, struct affine *result)
{
    *result = affine_number(0, DIMENSION_NONE);
    if (node->kind != NODE_SCALAR || node_is_empty(node))
        return mistakes_add(symbols->mistakes, node->place,
                            "a number or an expression is missing; expected one such "
                            "as 4 mm; found %s",
                            node->kind == NODE_SCALAR    ? "nothing"
                            : node->kind == NODE_MAPPING ? "keys with values"
                                                         : "a list");
    if (strlen(node->text) > LENGTH_MAX)
        return mistakes_add(symbols->mistakes, node->place,
                            "the expression is too long; expected at most %d letters; "
                            "found %zu",
                            LENGTH_MAX, strlen(node->text));
    struct scanner scanner = {symbols, node, node->text, supplies_allowed};
    struct affine value;
    bool ok = scanner_sum(&scanner, &value);
    if (ok && *scanner.at != '\0')
        ok = scanner_report_unexpected(&scanner, "an operator or the end");
    if (ok)
        *result = value;
    return ok;
}
