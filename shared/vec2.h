/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SHARED_VEC2_H
#define EVENGAP_SHARED_VEC2_H

/* Points and vectors of a plane: a is the plane's first axis, b its second. */

#include <math.h>

struct vec2 {
    double a;
    double b;
};

static inline struct vec2 vec2_add(struct vec2 p, struct vec2 q)
{
    return (struct vec2){p.a + q.a, p.b + q.b};
}

static inline struct vec2 vec2_sub(struct vec2 p, struct vec2 q)
{
    return (struct vec2){p.a - q.a, p.b - q.b};
}

static inline struct vec2 vec2_scale(struct vec2 p, double k)
{
    return (struct vec2){k * p.a, k * p.b};
}

static inline double vec2_dot(struct vec2 p, struct vec2 q)
{
    return p.a * q.a + p.b * q.b;
}

static inline double vec2_cross(struct vec2 p, struct vec2 q)
{
    return p.a * q.b - p.b * q.a;
}

static inline double vec2_length(struct vec2 p)
{
    return hypot(p.a, p.b);
}

#endif
