/* SPDX-License-Identifier: GPL-3.0-or-later */
/* UDUNITS-2 parses unit names; its unit objects are then walked once to get the SI
 * factor and the exponents of the base units, so that nothing else in the program
 * needs the library. The experimental units (u, e, eV) in its database are older than
 * the constants used here; they are mapped anew so that every number agrees. */
#include "shared/quantity.h"

#include <stdio.h>
#include <string.h>

#include <udunits2.h>

#include "shared/constants.h"
#include "shared/mem.h"

#define EXPONENT_MAX 100 /* keeps exponents well inside signed char */

struct units {
    ut_system *system;
};

bool dimension_equal(struct dimension p, struct dimension q)
{
    return p.metre == q.metre && p.kilogram == q.kilogram && p.second == q.second &&
           p.ampere == q.ampere && p.kelvin == q.kelvin;
}

static bool add_exponent(signed char *to, signed char exponent, int power)
{
    int sum = *to + exponent * power;
    if (sum < -EXPONENT_MAX || sum > EXPONENT_MAX)
        return false;
    *to = (signed char)sum;
    return true;
}

bool dimension_multiply(struct dimension *p, struct dimension q, int power)
{
    if (power < -EXPONENT_MAX || power > EXPONENT_MAX)
        return dimension_equal(q, DIMENSION_NONE);
    struct dimension r = *p;
    if (!add_exponent(&r.metre, q.metre, power) ||
        !add_exponent(&r.kilogram, q.kilogram, power) ||
        !add_exponent(&r.second, q.second, power) ||
        !add_exponent(&r.ampere, q.ampere, power) ||
        !add_exponent(&r.kelvin, q.kelvin, power))
        return false;
    *p = r;
    return true;
}

/* Words for the dimensions that turn up in geometry files. */
static const char *dimension_words(struct dimension dimension)
{
    static const struct {
        struct dimension dimension;
        const char *words;
    } known[] = {
        {{0, 0, 0, 0, 0}, "a number without a unit"},
        {{1, 0, 0, 0, 0}, "a length"},
        {{2, 0, 0, 0, 0}, "an area"},
        {{3, 0, 0, 0, 0}, "a volume"},
        {{0, 1, 0, 0, 0}, "a mass"},
        {{0, 0, 1, 0, 0}, "a time"},
        {{0, 0, 0, 1, 0}, "a current"},
        {{0, 0, 0, 0, 1}, "a temperature"},
        {{1, 0, -1, 0, 0}, "a speed"},
        {{0, 0, 1, 1, 0}, "a charge"},
        {{2, 1, -2, 0, 0}, "an energy"},
        {{1, 1, -2, 0, 0}, "a force"},
        {{2, 1, -3, -1, 0}, "a voltage"},
        {{1, 1, -3, -1, 0}, "an electric field"},
        {{0, 1, -2, -1, 0}, "a magnetic flux density"},
        {{-1, 0, 0, 1, 0}, "a magnetic field"},
    };
    for (size_t k = 0; k < sizeof known / sizeof known[0]; k++)
        if (dimension_equal(known[k].dimension, dimension))
            return known[k].words;
    return NULL;
}

void dimension_describe(struct dimension dimension, char *text, int size)
{
    const char *words = dimension_words(dimension);
    if (size <= 0)
        return;
    if (words != NULL) {
        (void)snprintf(text, (size_t)size, "%s", words);
        return;
    }
    const int powers[] = {dimension.kilogram, dimension.metre, dimension.second,
                          dimension.ampere, dimension.kelvin};
    const char *const symbols[] = {"kg", "m", "s", "A", "K"};
    int used = 0;
    text[0] = '\0';
    for (int k = 0; k < 5 && used < size; k++) {
        if (powers[k] == 0)
            continue;
        const char *space = used > 0 ? " " : "";
        size_t room = (size_t)(size - used);
        used += powers[k] == 1 ? snprintf(text + used, room, "%s%s", space, symbols[k])
                               : snprintf(text + used, room, "%s%s%d", space,
                                          symbols[k], powers[k]);
    }
}

/* Maps a symbol to factor * base, replacing what the database says. */
static bool map_symbol(ut_system *system, const char *symbol, double factor,
                       const char *base)
{
    ut_unit *unit = ut_parse(system, base, UT_UTF8);
    ut_unit *scaled = unit != NULL ? ut_scale(factor, unit) : NULL;
    (void)ut_unmap_symbol_to_unit(system, symbol, UT_UTF8); /* may not be there */
    bool ok =
        scaled != NULL && ut_map_symbol_to_unit(symbol, UT_UTF8, scaled) == UT_SUCCESS;
    ut_free(unit);
    ut_free(scaled);
    return ok;
}

static bool map_symbols(ut_system *system)
{
    static const struct {
        const char *symbol;
        double factor;
        const char *base;
    } added[] = {
        {"u", ATOMIC_MASS, "kg"},
        {"Da", ATOMIC_MASS, "kg"},
        {"amu", ATOMIC_MASS, "kg"},
        {"e", ELEMENTARY_CHARGE, "C"},
        {"eV", ELEMENTARY_CHARGE, "J"},
        {"deg", PI / 180, "rad"},
        {"G", 1e-4, "T"},
    };
    /* Names win over symbols in the database, so the old names of the units replaced
     * here must go. */
    static const char *const stale[] = {"amu",
                                        "electronvolt",
                                        "electron_volt",
                                        "unified_atomic_mass_unit",
                                        "atomic_mass_unit",
                                        "atomicmassunit"};
    for (size_t k = 0; k < sizeof stale / sizeof stale[0]; k++)
        (void)ut_unmap_name_to_unit(system, stale[k], UT_UTF8);
    for (size_t k = 0; k < sizeof added / sizeof added[0]; k++)
        if (!map_symbol(system, added[k].symbol, added[k].factor, added[k].base))
            return false;
    return true;
}

enum status units_create(struct units **units, const char **reason)
{
    *units = NULL;
    *reason = NULL;
    struct units *made = MEM_NEW(1, struct units);
    if (made == NULL)
        return STATUS_MEMORY;
    ut_set_error_message_handler(ut_ignore); /* it would print to stderr */
    made->system = ut_read_xml(NULL);
    if (made->system == NULL || !map_symbols(made->system)) {
        *reason = made->system == NULL ? "the UDUNITS-2 database cannot be read"
                                       : "the UDUNITS-2 database lacks basic units";
        units_destroy(&made);
        return STATUS_INPUT;
    }
    *units = made;
    return STATUS_OK;
}

void units_destroy(struct units **units)
{
    if (*units == NULL)
        return;
    ut_free_system((*units)->system);
    mem_free(*units);
    *units = NULL;
}

/* The visitor below multiplies what it meets into a struct quantity. */

static bool multiply_base(struct quantity *unit, const ut_unit *base, int power)
{
    static const struct {
        const char *symbol;
        struct dimension dimension;
    } bases[] = {
        {"m", {1, 0, 0, 0, 0}}, {"kg", {0, 1, 0, 0, 0}}, {"s", {0, 0, 1, 0, 0}},
        {"A", {0, 0, 0, 1, 0}}, {"K", {0, 0, 0, 0, 1}},  {"rad", {0, 0, 0, 0, 0}},
    };
    const char *symbol = ut_get_symbol(base, UT_ASCII);
    for (size_t k = 0; symbol != NULL && k < sizeof bases / sizeof bases[0]; k++)
        if (strcmp(bases[k].symbol, symbol) == 0)
            return dimension_multiply(&unit->dimension, bases[k].dimension, power);
    return false; /* mol, cd and the like have no use here */
}

static ut_status visit_basic(const ut_unit *unit, void *result)
{
    return multiply_base(result, unit, 1) ? UT_SUCCESS : UT_BAD_ARG;
}

static ut_status visit_product(const ut_unit *unit, int count,
                               const ut_unit *const *bases, const int *powers,
                               void *result)
{
    (void)unit;
    for (int k = 0; k < count; k++)
        if (!multiply_base(result, bases[k], powers[k]))
            return UT_BAD_ARG;
    return UT_SUCCESS;
}

static ut_status visit_galilean(const ut_unit *unit, double scale,
                                const ut_unit *underlying, double offset, void *result);

static ut_status visit_timestamp(const ut_unit *unit, const ut_unit *time,
                                 double origin, void *result)
{
    (void)unit, (void)time, (void)origin, (void)result;
    return UT_BAD_ARG;
}

static ut_status visit_logarithmic(const ut_unit *unit, double base,
                                   const ut_unit *reference, void *result)
{
    (void)unit, (void)base, (void)reference, (void)result;
    return UT_BAD_ARG;
}

static const ut_visitor factor_visitor = {visit_basic, visit_product, visit_galilean,
                                          visit_timestamp, visit_logarithmic};

static ut_status visit_galilean(const ut_unit *unit, double scale,
                                const ut_unit *underlying, double offset, void *result)
{
    (void)unit;
    if (offset != 0) /* degC: a point on a scale, not a quantity */
        return UT_BAD_ARG;
    ((struct quantity *)result)->value *= scale;
    return ut_accept_visitor(underlying, &factor_visitor, result);
}

enum status units_lookup(const struct units *units, const char *text,
                         struct quantity *unit)
{
    struct quantity made = {1, DIMENSION_NONE};
    *unit = (struct quantity){0, DIMENSION_NONE};
    ut_unit *parsed = ut_parse(units->system, text, UT_UTF8);
    if (parsed == NULL)
        return STATUS_INPUT;
    bool ok = ut_accept_visitor(parsed, &factor_visitor, &made) == UT_SUCCESS;
    ut_free(parsed);
    if (!ok)
        return STATUS_INPUT;
    *unit = made;
    return STATUS_OK;
}
