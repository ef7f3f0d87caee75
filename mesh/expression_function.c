/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Functions of expressions. Their arguments must not depend on supplies: only what is
 * linear may. */
#include <math.h>
#include <string.h>

#include "mesh/expression_internal.h"

static const char *const functions[] = {"sqrt", "abs", "min", "max",
                                        "sin",  "cos", "tan"};
enum function { SQRT, ABS, MIN, MAX, SIN, COS, TAN, FUNCTIONS };

int function_find(const char *word, size_t length)
{
    for (int k = 0; k < FUNCTIONS; k++)
        if (strlen(functions[k]) == length && strncmp(functions[k], word, length) == 0)
            return k;
    return -1;
}

bool expression_word_is_taken(const char *word)
{
    return function_find(word, strlen(word)) >= 0 || strcmp(word, "pi") == 0;
}

/* min and max take in one more argument; *value holds the result so far. */
static bool fold(struct scanner *scanner, const char *at, enum function function,
                 const struct affine *argument, struct affine *value)
{
    struct affine difference = *argument;
    if (!affine_is_constant(argument) || !affine_is_constant(value))
        return scanner_accept(scanner, at, AFFINE_NOT_LINEAR);
    enum affine_fault fault = affine_add(&difference, value, -1);
    if (fault == AFFINE_DIMENSION)
        return scanner_report_sides(scanner, at, "beside", value, argument);
    if (fault != AFFINE_FINE)
        return scanner_accept(scanner, at, fault);
    double d = difference.constant.value; /* its dimension is the common one */
    if (function == MIN ? d < 0 : d > 0)
        value->constant.value = argument->constant.value;
    value->constant.dimension = difference.constant.dimension;
    return true;
}

static bool apply(struct scanner *scanner, const char *at, enum function function,
                  struct affine *value)
{
    if (function == MIN || function == MAX)
        return true;
    if (function == SQRT)
        return scanner_accept(scanner, at, affine_sqrt(value));
    if (!affine_is_constant(value))
        return scanner_accept(scanner, at, AFFINE_NOT_LINEAR);
    double *x = &value->constant.value;
    if (function == ABS) {
        *x = fabs(*x);
        return true;
    }
    char words[WORDS_MAX];
    dimension_describe(value->constant.dimension, words, sizeof words);
    if (!dimension_equal(value->constant.dimension, DIMENSION_NONE))
        return mistakes_add(scanner->symbols->mistakes, scanner_place(scanner, at),
                            "\"%s\" needs an angle; expected one such as 30 deg; found "
                            "%s",
                            functions[function], words);
    *x = function == SIN ? sin(*x) : function == COS ? cos(*x) : tan(*x);
    return true;
}

static bool parse_arguments(struct scanner *scanner, enum function function,
                            struct affine *value)
{
    const char *start = scanner->at;
    if (!scanner_sum(scanner, value))
        return false;
    scanner_skip_space(scanner);
    while (*scanner->at == ',' && (function == MIN || function == MAX)) {
        scanner->at++;
        struct affine argument;
        const char *at = scanner->at;
        if (!scanner_sum(scanner, &argument) ||
            !fold(scanner, at, function, &argument, value))
            return false;
        scanner_skip_space(scanner);
    }
    return scanner_close(scanner) && apply(scanner, start, function, value);
}

bool scanner_function(struct scanner *scanner, size_t length, int function,
                      struct affine *value)
{
    scanner->at += length;
    scanner_skip_space(scanner);
    if (*scanner->at != '(')
        return scanner_report_unexpected(scanner, "\"(\" behind a function");
    scanner->at++;
    return scanner_enter(scanner) &&
           scanner_leave(scanner,
                         parse_arguments(scanner, (enum function)function, value));
}
