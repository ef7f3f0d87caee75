/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "tests/bench/honesty_layers.h"

static double drop_per_strength(const struct layers *l, int k)
{
    return (l->bound[k + 1] - l->bound[k]) / l->permittivity[k];
}

/* The strength of the first layer from the voltage across all of them. */
void layers_solve(struct layers *l)
{
    double per_strength = 0.0, by_charges = 0.0, charge = 0.0;
    for (int k = 0; k < l->count; k++) {
        per_strength += drop_per_strength(l, k);
        by_charges += charge * drop_per_strength(l, k);
        charge += l->charge[k];
    }
    l->strength[0] = (l->first - l->last - by_charges) / per_strength;
    l->potential[0] = l->first;
    for (int k = 0; k < l->count; k++) {
        if (k > 0)
            l->strength[k] = l->strength[k - 1] + l->charge[k - 1];
        l->potential[k + 1] =
            l->potential[k] - l->strength[k] * drop_per_strength(l, k);
    }
}

double layers_potential(const struct layers *l, int k, double u)
{
    return l->potential[k] - l->strength[k] * (u - l->bound[k]) / l->permittivity[k];
}

void layers_expect_point(struct honesty_case *c, const struct layers *l, int k,
                         harmonic_function u, const void *context, struct vec2 at)
{
    struct vec2 gradient;
    const double here = u(context, at, &gradient);
    honesty_expect_point(c, at, layers_potential(l, k, here),
                         vec2_scale(gradient, l->strength[k] / l->permittivity[k]));
}

double tube_u(const void *context, struct vec2 at, struct vec2 *gradient)
{
    (void)context;
    *gradient = (struct vec2){0.0, 1.0 / at.b};
    return log(at.b);
}

double sphere_u(const void *context, struct vec2 at, struct vec2 *gradient)
{
    const struct vec2 away = {at.a - *(const double *)context, at.b};
    const double r = vec2_length(away);
    *gradient = vec2_scale(away, 1.0 / (r * r * r));
    return -1.0 / r;
}
