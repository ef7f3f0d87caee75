/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Superposition needs potentials that are linear in the supplies, so linearity is
 * tracked through the arithmetic itself: every value carries its gains, and an
 * operation that would leave the linear form is refused there and then. */
#include "mesh/affine.h"

#include <math.h>

struct affine affine_number(double value, struct dimension dimension)
{
    return (struct affine){.constant = {value, dimension}};
}

struct affine affine_supply(int s, struct dimension dimension)
{
    struct affine p = {.constant = {0, dimension}, .supplies = s + 1};
    p.gain[s] = 1;
    return p;
}

bool affine_is_constant(const struct affine *p)
{
    for (int s = 0; s < p->supplies; s++)
        if (p->gain[s] != 0)
            return false;
    return true;
}

bool affine_is_bare_zero(const struct affine *p)
{
    return p->constant.value == 0 && affine_is_constant(p) &&
           dimension_equal(p->constant.dimension, DIMENSION_NONE);
}

static enum affine_fault check_finite(const struct affine *p)
{
    bool finite = isfinite(p->constant.value);
    for (int s = 0; s < p->supplies; s++)
        finite = finite && isfinite(p->gain[s]);
    return finite ? AFFINE_FINE : AFFINE_NOT_FINITE;
}

static void scale(struct affine *p, double factor)
{
    p->constant.value *= factor;
    for (int s = 0; s < p->supplies; s++)
        p->gain[s] *= factor;
}

enum affine_fault affine_add(struct affine *p, const struct affine *q, int sign)
{
    if (affine_is_bare_zero(p))
        p->constant.dimension = q->constant.dimension;
    if (!affine_is_bare_zero(q) &&
        !dimension_equal(p->constant.dimension, q->constant.dimension))
        return AFFINE_DIMENSION;
    p->constant.value += sign * q->constant.value;
    if (p->supplies < q->supplies)
        p->supplies = q->supplies;
    for (int s = 0; s < q->supplies; s++)
        p->gain[s] += sign * q->gain[s];
    return check_finite(p);
}

enum affine_fault affine_multiply(struct affine *p, const struct affine *q)
{
    bool p_constant = affine_is_constant(p);
    if (!p_constant && !affine_is_constant(q))
        return AFFINE_NOT_LINEAR;
    struct affine product = p_constant ? *q : *p;
    struct quantity factor = p_constant ? p->constant : q->constant;
    if (!dimension_multiply(&product.constant.dimension, factor.dimension, 1))
        return AFFINE_DIMENSION;
    scale(&product, factor.value);
    *p = product;
    return check_finite(p);
}

enum affine_fault affine_divide(struct affine *p, const struct affine *q)
{
    if (!affine_is_constant(q))
        return AFFINE_NOT_LINEAR;
    if (q->constant.value == 0)
        return AFFINE_NOT_FINITE;
    if (!dimension_multiply(&p->constant.dimension, q->constant.dimension, -1))
        return AFFINE_DIMENSION;
    p->constant.value /= q->constant.value;
    for (int s = 0; s < p->supplies; s++)
        p->gain[s] /= q->constant.value;
    return check_finite(p);
}

enum affine_fault affine_power(struct affine *p, int n)
{
    if (n == 1)
        return AFFINE_FINE;
    if (n != 0 && !affine_is_constant(p))
        return AFFINE_NOT_LINEAR;
    if (n < 0 && p->constant.value == 0)
        return AFFINE_NOT_FINITE;
    struct affine result = affine_number(pow(p->constant.value, n), DIMENSION_NONE);
    if (!dimension_multiply(&result.constant.dimension, p->constant.dimension, n))
        return AFFINE_DIMENSION;
    *p = result;
    return check_finite(p);
}

static bool halve(signed char *exponent)
{
    bool even = *exponent % 2 == 0;
    *exponent = (signed char)(*exponent / 2);
    return even;
}

enum affine_fault affine_sqrt(struct affine *p)
{
    if (!affine_is_constant(p))
        return AFFINE_NOT_LINEAR;
    if (p->constant.value < 0)
        return AFFINE_NOT_FINITE;
    struct dimension *d = &p->constant.dimension;
    if (!halve(&d->metre) || !halve(&d->kilogram) || !halve(&d->second) ||
        !halve(&d->ampere) || !halve(&d->kelvin))
        return AFFINE_DIMENSION;
    *p = affine_number(sqrt(p->constant.value), *d);
    return AFFINE_FINE;
}
