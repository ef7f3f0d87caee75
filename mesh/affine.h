/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_MESH_AFFINE_H
#define EVENGAP_MESH_AFFINE_H

/* What an expression evaluates to: a quantity that is linear in the supplies,
 *     constant + sum over s of gain[s] * setting[s],
 * all terms of one dimension. Arithmetic refuses what is not linear, does not fit in
 * dimension or is not finite. */

#include <stdbool.h>

#include "shared/quantity.h"

#define SUPPLIES_MAX 64 /* supplies of a geometry file */

struct affine {
    struct quantity constant;  /* its dimension is that of the whole */
    double gain[SUPPLIES_MAX]; /* SI */
    int supplies;              /* leading gains that may differ from 0 */
};

/* Why an operation was refused. */
enum affine_fault {
    AFFINE_FINE,
    AFFINE_DIMENSION,  /* the sides do not fit together, or the unit cannot be had */
    AFFINE_NOT_LINEAR, /* supplies multiplied, divided by, or inside a function */
    AFFINE_NOT_FINITE  /* division by zero, overflow, root of a negative number */
};

struct affine affine_number(double value, struct dimension dimension);

/** One supply: gain 1 at index s, of the given dimension. */
struct affine affine_supply(int s, struct dimension dimension);

/** True if no supply has an influence. */
bool affine_is_constant(const struct affine *p);

/** True for an exact 0 without a unit, which fits where any dimension is wanted. */
bool affine_is_bare_zero(const struct affine *p);

/** p = p + sign * q, sign +1 or -1. A bare zero takes the dimension of the other. */
enum affine_fault affine_add(struct affine *p, const struct affine *q, int sign);

/** p = p * q: one of them must be constant. */
enum affine_fault affine_multiply(struct affine *p, const struct affine *q);

/** p = p / q: q must be constant and not zero. */
enum affine_fault affine_divide(struct affine *p, const struct affine *q);

/** p = p^n; a p that depends on supplies allows n = 0 and 1 only. */
enum affine_fault affine_power(struct affine *p, int n);

/** p = square root of p, which must be constant, not negative, and of a dimension with
 *  even exponents. */
enum affine_fault affine_sqrt(struct affine *p);

#endif
