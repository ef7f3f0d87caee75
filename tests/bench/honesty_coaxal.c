/* SPDX-License-Identifier: GPL-3.0-or-later */

/* (w - near)/(1 - inverse_far w) = exp(u + iv) maps the pencil onto circles about 0. */

#include "tests/bench/honesty_coaxal.h"

#include "tests/bench/honesty_map.h"
#include "tests/support/scene.h"

/* The charges are images of each other in both circles: near * far = shell^2 and near +
 * far = (shell^2 + shift^2 - core^2)/shift. */
struct coaxal coaxal_within(double core, double shell, double shift, double angle)
{
    const double b2 = shell * shell, sum = b2 + shift * shift - core * core;
    const double near =
        2.0 * b2 * shift / (sum + sqrt(sum * sum - 4.0 * b2 * shift * shift));
    return (struct coaxal){near, near / b2, angle, {0.0, 0.0}};
}

struct coaxal coaxal_beside(double half, double angle)
{
    return (struct coaxal){half, -1.0 / half, angle, {0.0, 0.0}};
}

static struct vec2 to_plane(const struct coaxal *c, double complex w)
{
    w *= turn_by(c->angle);
    return (struct vec2){c->origin.a + creal(w), c->origin.b + cimag(w)};
}

static double complex unmapped(const struct coaxal *c, double complex zeta)
{
    return (zeta + c->near) / (1.0 + zeta * c->inverse_far);
}

struct vec2 coaxal_circle(const struct coaxal *c, double u, double *radius)
{
    const double complex p = unmapped(c, exp(u)), q = unmapped(c, -exp(u));
    *radius = 0.5 * cabs(p - q);
    return to_plane(c, 0.5 * (p + q));
}

struct part *coaxal_disc(struct plane *plane, const char *name, double gain,
                         const struct coaxal *c, double u)
{
    double radius;
    const struct vec2 centre = coaxal_circle(c, u, &radius);
    return scene_disc(plane, name, gain, centre.a, centre.b, radius);
}

void coaxal_cut(struct part *part, const struct coaxal *c, double u)
{
    double radius;
    const struct vec2 centre = coaxal_circle(c, u, &radius);
    scene_cut_disc(part, centre.a, centre.b, radius);
}

struct vec2 coaxal_point(const struct coaxal *c, double u, double v)
{
    return to_plane(c, unmapped(c, exp(u) * turn_by(v)));
}

double coaxal_u(const void *coaxal, struct vec2 at, struct vec2 *gradient)
{
    const struct coaxal *c = coaxal;
    const struct vec2 from = vec2_sub(at, c->origin);
    const double complex w = complex_of(from.a, from.b) * turn_by(-c->angle);
    const double complex p = w - c->near, q = 1.0 - w * c->inverse_far;
    const double complex up = conj(1.0 / p + c->inverse_far / q) * turn_by(c->angle);
    *gradient = (struct vec2){creal(up), cimag(up)};
    return log(cabs(p)) - log(cabs(q));
}
