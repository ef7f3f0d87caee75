/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The unit behind a number: words with optional powers, joined by space or "/". Each
 * word is looked up on its own, so a mistake can be named exactly. */
#include <ctype.h>
#include <stdio.h>
#include <string.h>

#include "mesh/expression_internal.h"

#define UNIT_LENGTH_MAX 40
#define UNIT_POWER_MAX  9

/* Letters of units: ASCII letters, _, % and everything beyond ASCII (micro, degree). */
static bool is_unit_letter(char c)
{
    return isalpha((unsigned char)c) || c == '_' || c == '%' ||
           (unsigned char)c >= 0x80;
}

static size_t unit_length(const char *at)
{
    size_t n = 0;
    while (is_unit_letter(at[n]))
        n++;
    return n;
}

static bool look_up(const struct scanner *scanner, const char *at, size_t length,
                    struct quantity *unit)
{
    char word[UNIT_LENGTH_MAX + 1];
    if (length > UNIT_LENGTH_MAX)
        return false;
    memcpy(word, at, length);
    word[length] = '\0';
    return units_lookup(scanner->symbols->units, word, unit) == STATUS_OK;
}

static bool is_turn(const char *at, size_t length)
{
    static const char *const words[] = {"turn", "turns", "Turn", "Turns"};
    for (size_t k = 0; k < sizeof words / sizeof words[0]; k++)
        if (strlen(words[k]) == length && strncmp(at, words[k], length) == 0)
            return true;
    return false;
}

static bool is_ampere_turn(const char *at, size_t length)
{
    static const char *const words[] = {"At",          "AT",          "Aturn",
                                        "Aturns",      "ampereturn",  "ampereturns",
                                        "ampere_turn", "ampere_turns"};
    for (size_t k = 0; k < sizeof words / sizeof words[0]; k++)
        if (strlen(words[k]) == length && strncmp(at, words[k], length) == 0)
            return true;
    return false;
}

static bool report_ampere_turn(const struct scanner *scanner, const char *at)
{
    return mistakes_add(scanner->symbols->mistakes, scanner_place(scanner, at),
                        "ampere-turns are written in A, as a turn is an angle among "
                        "units; expected a current such as 3200 A; found \"%.80s\"",
                        scanner->node->text);
}

static bool report_unknown(const struct scanner *scanner, const char *at, size_t length)
{
    bool is_name = symbols_find(scanner->symbols, at, length) != NULL;
    return mistakes_add(
        scanner->symbols->mistakes, scanner_place(scanner, at),
        is_name
            ? "a name stands behind a number; expected an operator between them, as "
              "in \"2*%.*s\"; found \"%.*s\""
            : "unknown unit; expected one such as mm, V, A, keV, u or mrad instead "
              "of \"%.*s\"; found \"%.*s\"",
        (int)length, at, (int)length, at);
}

/* A power: "^2", "**-1" or digits right behind the word. 1 if there is none. */
static bool read_power(struct scanner *scanner, int *power)
{
    const char *at = scanner->at;
    while (*at == ' ')
        at++;
    bool sign_allowed = *at == '^' || (at[0] == '*' && at[1] == '*');
    if (sign_allowed)
        at += *at == '^' ? 1 : 2;
    else
        at = scanner->at;
    while (sign_allowed && *at == ' ')
        at++;
    int sign = sign_allowed && *at == '-' ? -1 : 1;
    if (sign_allowed && (*at == '-' || *at == '+'))
        at++;
    *power = 1;
    if (!isdigit((unsigned char)*at) && !sign_allowed)
        return true;
    *power = sign * (*at - '0');
    bool ok =
        isdigit((unsigned char)at[0]) && !isdigit((unsigned char)at[1]) && at[1] != '.';
    if (!ok)
        return mistakes_add(scanner->symbols->mistakes, scanner_place(scanner, at),
                            "the power of a unit is not a whole number up to %d",
                            UNIT_POWER_MAX);
    scanner->at = at + 1;
    return true;
}

/* One word and its power, multiplied into *number (sign -1: divided). */
static bool take_word(struct scanner *scanner, size_t length, int sign,
                      struct quantity *number)
{
    struct quantity unit;
    const char *word = scanner->at;
    bool current = dimension_equal(number->dimension, DIMENSION_AMPERE);
    if (is_ampere_turn(word, length) || (current && is_turn(word, length)))
        return report_ampere_turn(scanner, word);
    if (!look_up(scanner, word, length, &unit))
        return report_unknown(scanner, word, length);
    scanner->at += length;
    int power;
    if (!read_power(scanner, &power))
        return false;
    for (int k = 0; k < power || k < -power; k++)
        number->value = (power > 0) == (sign > 0) ? number->value * unit.value
                                                  : number->value / unit.value;
    if (!dimension_multiply(&number->dimension, unit.dimension, sign * power))
        return mistakes_add(scanner->symbols->mistakes, scanner_place(scanner, word),
                            "the power of a unit is too high");
    return true;
}

/* Does "/" at the scanner go on with the unit? Then *length is that of the word, and
 * the scanner is moved to it. */
static bool continues_with_divisor(struct scanner *scanner, size_t *length)
{
    const char *at = scanner->at;
    while (*at == ' ')
        at++;
    if (*at != '/')
        return false;
    at++;
    while (*at == ' ')
        at++;
    size_t name = word_length(at);
    struct quantity unit;
    *length = unit_length(at);
    if (*length == 0 || at[name] == '(' ||
        (name > 0 && symbols_find(scanner->symbols, at, name) != NULL) ||
        !look_up(scanner, at, *length, &unit))
        return false;
    scanner->at = at;
    return true;
}

bool scanner_unit(struct scanner *scanner, struct quantity *number)
{
    scanner_skip_space(scanner);
    size_t length = unit_length(scanner->at);
    int sign = 1;
    while (length > 0) {
        if (!take_word(scanner, length, sign, number))
            return false;
        if (continues_with_divisor(scanner, &length)) {
            sign = -1;
            continue;
        }
        sign = 1;
        scanner_skip_space(scanner);
        length = unit_length(scanner->at);
    }
    return true;
}
