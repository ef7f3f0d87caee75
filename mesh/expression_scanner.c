/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What the parts of the expression reader share: places, depth, and the mistakes that
 * can occur anywhere. */
#include <ctype.h>
#include <stdio.h>
#include <string.h>

#include "mesh/expression_internal.h"

struct place scanner_place(const struct scanner *scanner, const char *at)
{
    struct place place = scanner->node->place;
    if (!scanner->node->literal)
        return place;
    for (const char *c = scanner->node->text; c < at; c++)
        if (((unsigned char)*c & 0xC0) != 0x80) /* characters, not bytes */
            place.column++;
    return place;
}

void scanner_skip_space(struct scanner *scanner)
{
    while (isspace((unsigned char)*scanner->at))
        scanner->at++;
}

size_t word_length(const char *at)
{
    size_t n = 0;
    if (isdigit((unsigned char)*at))
        return 0;
    while (isalnum((unsigned char)at[n]) || at[n] == '_')
        n++;
    return n;
}

bool scanner_report_sides(const struct scanner *scanner, const char *at,
                          const char *join, const struct affine *left,
                          const struct affine *right)
{
    char p[WORDS_MAX], q[WORDS_MAX];
    dimension_describe(left->constant.dimension, p, sizeof p);
    dimension_describe(right->constant.dimension, q, sizeof q);
    return mistakes_add(scanner->symbols->mistakes, scanner_place(scanner, at),
                        "the two sides do not fit; expected the same kind of quantity; "
                        "found %s %s %s",
                        p, join, q);
}

bool scanner_accept(const struct scanner *scanner, const char *at,
                    enum affine_fault fault)
{
    struct mistakes *mistakes = scanner->symbols->mistakes;
    if (fault == AFFINE_FINE)
        return true;
    struct place place = scanner_place(scanner, at);
    switch (fault) {
    case AFFINE_NOT_LINEAR:
        return mistakes_add(
            mistakes, place,
            "potentials must be linear in the supplies; expected a "
            "supply times or divided by a fixed number; found \"%.80s\"",
            scanner->node->text);
    case AFFINE_NOT_FINITE:
        return mistakes_add(mistakes, place,
                            "the result is not a finite number; expected no division "
                            "by zero, overflow or root of a negative number; found "
                            "\"%s\"",
                            scanner->node->text);
    default:
        break;
    }
    return mistakes_add(mistakes, place,
                        "the unit of the result cannot be had; expected whole and "
                        "small powers of units; found \"%.80s\"",
                        scanner->node->text);
}

bool scanner_report_unexpected(const struct scanner *scanner, const char *expected)
{
    const char *hint = strchr(scanner->at, ',') == scanner->at
                           ? "a comma (a decimal sign is a point)"
                       : *scanner->at == '\0' ? "the end of the expression"
                                              : scanner->at;
    return mistakes_add(scanner->symbols->mistakes, scanner_place(scanner, scanner->at),
                        "the expression cannot be read; expected %s; found %s%.80s%s",
                        expected, hint == scanner->at ? "\"" : "", hint,
                        hint == scanner->at ? "\"" : "");
}

bool scanner_enter(struct scanner *scanner)
{
    if (scanner->symbols->depth == SYMBOLS_DEPTH_MAX)
        return mistakes_add(scanner->symbols->mistakes,
                            scanner_place(scanner, scanner->at),
                            "the expression is nested too deep; expected at most %d "
                            "levels of parentheses and values",
                            SYMBOLS_DEPTH_MAX);
    scanner->symbols->depth++;
    return true;
}

bool scanner_leave(struct scanner *scanner, bool ok)
{
    scanner->symbols->depth--;
    return ok;
}

bool scanner_close(struct scanner *scanner)
{
    scanner_skip_space(scanner);
    if (*scanner->at != ')')
        return scanner_report_unexpected(
            scanner, "\")\" (inside [ ] or { } an expression with commas "
                     "needs quotes around it)");
    scanner->at++;
    return true;
}
