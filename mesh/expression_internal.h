/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_MESH_EXPRESSION_INTERNAL_H
#define EVENGAP_MESH_EXPRESSION_INTERNAL_H

/* Shared by expression*.c only. Functions that return bool give false after a mistake
 * has been reported. */

#include "mesh/expression.h"

#define WORDS_MAX 64 /* characters of a description of a dimension */

/* An expression being read. */
struct scanner {
    struct symbols *symbols;
    const struct node *node;
    const char *at; /* next character of node->text */
    bool supplies_allowed;
};

/** Place in the file of a character of the expression. */
struct place scanner_place(const struct scanner *scanner, const char *at);

void scanner_skip_space(struct scanner *scanner);

/** Length of the word of letters, digits and _ at `at` (0: none starts here). */
size_t word_length(const char *at);

/** Reads the unit behind a number, if there is one, and multiplies it into *number.
 *  False after a mistake has been reported. */
bool scanner_unit(struct scanner *scanner, struct quantity *number);

/** Sum of terms: the whole expression, an argument, or what parentheses hold. */
bool scanner_sum(struct scanner *scanner, struct affine *value);

/** Index of a function, -1 if the word (length letters) is none. */
int function_find(const char *word, size_t length);

/** Name of a function at the scanner, with its arguments. */
bool scanner_function(struct scanner *scanner, size_t length, int function,
                      struct affine *value);

/** Closing parenthesis. */
bool scanner_close(struct scanner *scanner);

/** One level of parentheses or values deeper; leaving passes ok on. */
bool scanner_enter(struct scanner *scanner);
bool scanner_leave(struct scanner *scanner, bool ok);

/** Reports a refused operation at a place of the text; true if it was fine. */
bool scanner_accept(const struct scanner *scanner, const char *at,
                    enum affine_fault fault);

/** Reports two sides of an operator that do not fit ("a length plus a voltage"). */
bool scanner_report_sides(const struct scanner *scanner, const char *at,
                          const char *join, const struct affine *left,
                          const struct affine *right);

/** Reports what stands at the scanner instead of what was expected. */
bool scanner_report_unexpected(const struct scanner *scanner, const char *expected);

#endif
