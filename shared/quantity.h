/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SHARED_QUANTITY_H
#define EVENGAP_SHARED_QUANTITY_H

/* Quantities: a number in SI units with its dimension. Conversion of unit names is
 * done by UDUNITS-2; dimensions are exponents of the base units, so arithmetic can be
 * checked. Angles are dimensionless (rad = 1). */

#include <stdbool.h>

#include "shared/attributes.h"
#include "shared/status.h"

/* Exponents of the SI base units that occur here. */
struct dimension {
    signed char metre, kilogram, second, ampere, kelvin;
};

struct quantity {
    double value; /* in coherent SI units */
    struct dimension dimension;
};

#define DIMENSION_NONE           ((struct dimension){0, 0, 0, 0, 0})
#define DIMENSION_LENGTH         ((struct dimension){1, 0, 0, 0, 0})
#define DIMENSION_MASS           ((struct dimension){0, 1, 0, 0, 0})
#define DIMENSION_CHARGE         ((struct dimension){0, 0, 1, 1, 0})
#define DIMENSION_ENERGY         ((struct dimension){2, 1, -2, 0, 0})
#define DIMENSION_SPEED          ((struct dimension){1, 0, -1, 0, 0})
#define DIMENSION_VOLT           ((struct dimension){2, 1, -3, -1, 0})
#define DIMENSION_AMPERE         ((struct dimension){0, 0, 0, 1, 0})
#define DIMENSION_VOLT_PER_METRE ((struct dimension){1, 1, -3, -1, 0})
#define DIMENSION_TEMPERATURE    ((struct dimension){0, 0, 0, 0, 1})

bool dimension_equal(struct dimension p, struct dimension q);

/** Multiplies *p by q to the power (exponents are added). False, with *p untouched, if
 *  an exponent would leave -100..100. */
bool dimension_multiply(struct dimension *p, struct dimension q, int power);

/** Words for a dimension: "a length", "a voltage", "a current", "a number without a
 *  unit", or its SI unit ("kg m2 s-3"); always NUL-terminated in text[size]. */
void dimension_describe(struct dimension dimension, char *text, int size);

/** The unit table (parsed once from the UDUNITS-2 database, with u, e and eV added
 *  where the database lacks them). Opaque. */
struct units;

/** Opens the table; STATUS_INPUT if the database cannot be read (reason is a static
 *  text), STATUS_MEMORY. */
enum status units_create(struct units **units, const char **reason) MUST_CHECK;

/** Frees the table and nulls the pointer. */
void units_destroy(struct units **units);

/** SI factor and dimension of one unit written by the user ("mm", "kV/mm", "m s-1").
 *  STATUS_INPUT if the unit is unknown, has an offset (degC) or has a dimension
 *  beyond those above. */
enum status units_lookup(const struct units *units, const char *text,
                         struct quantity *unit) MUST_CHECK;

#endif
