/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "tests/bench/honesty_spheres.h"

#include <stdbool.h>

/* Images smaller than this share of the first are left out. */
#define LEAST 1e-18

static void add(struct images *images, double at, double charge, bool inside)
{
    images->at[images->count] = at;
    images->charge[images->count++] = charge;
    images->inside += inside ? charge : 0.0;
}

static bool has_room(const struct images *images)
{
    return images->count + 2 <= IMAGES;
}

void images_in_shell(double ball, double shell, double shift, struct images *images)
{
    double charge = ball, at = shift;
    images->count = 0;
    images->inside = 0.0;
    while (has_room(images) && charge > LEAST * ball) {
        add(images, at, charge, true);
        const double outer = -charge * shell / at, place = shell * shell / at;
        add(images, place, outer, false);
        charge = -outer * ball / (place - shift);
        at = shift + ball * ball / (place - shift);
    }
}

void images_at_plane(double ball, double height, struct images *images)
{
    double charge = ball, at = height;
    images->count = 0;
    images->inside = 0.0;
    while (has_room(images) && charge > LEAST * ball) {
        add(images, at, charge, true);
        add(images, -at, -charge, false);
        charge = charge * ball / (height + at);
        at = height - ball * ball / (height + at);
    }
}

double images_at(const struct images *images, struct vec2 at, struct vec2 *field)
{
    double potential = 0.0;
    *field = (struct vec2){0.0, 0.0};
    for (int k = images->count - 1; k >= 0; k--) {
        const struct vec2 from = {at.a - images->at[k], at.b};
        const double d = vec2_length(from), share = images->charge[k] / d;
        potential += share;
        *field = vec2_add(*field, vec2_scale(from, share / (d * d)));
    }
    return potential;
}

double images_flux(const struct images *images)
{
    return 2.0 * images->inside;
}
