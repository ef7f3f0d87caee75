/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Boxes and discs. Their coordinates are written down rather than computed by turning,
 * so faces and the tops of round corners lie exactly where the user put them. */

#include "mesh/shape.h"

#include "mesh/shape_internal.h"
#include "shared/constants.h"

static bool is_finite(struct vec2 p)
{
    return isfinite(p.a) && isfinite(p.b);
}

static void add_line(struct outline *outline, struct vec2 from, struct vec2 to)
{
    if (from.a != to.a || from.b != to.b)
        outline->edges[outline->count++] = (struct edge){from, to, {0, 0}, 0, 0};
}

static void add_quarter(struct outline *outline, struct vec2 from, struct vec2 to,
                        struct vec2 centre, double radius)
{
    if (radius > 0)
        outline->edges[outline->count++] =
            (struct edge){from, to, centre, radius, PI / 2};
}

/* low and high of the box, and of the box between the centres of its corners. */
static void lay_box(struct outline *outline, struct vec2 low, struct vec2 high,
                    struct vec2 in_low, struct vec2 in_high, double r)
{
    struct vec2 bottom[2] = {{in_low.a, low.b}, {in_high.a, low.b}};
    struct vec2 right[2] = {{high.a, in_low.b}, {high.a, in_high.b}};
    struct vec2 top[2] = {{in_high.a, high.b}, {in_low.a, high.b}};
    struct vec2 left[2] = {{low.a, in_high.b}, {low.a, in_low.b}};

    add_line(outline, bottom[0], bottom[1]);
    add_quarter(outline, bottom[1], right[0], (struct vec2){in_high.a, in_low.b}, r);
    add_line(outline, right[0], right[1]);
    add_quarter(outline, right[1], top[0], in_high, r);
    add_line(outline, top[0], top[1]);
    add_quarter(outline, top[1], left[0], (struct vec2){in_low.a, in_high.b}, r);
    add_line(outline, left[0], left[1]);
    add_quarter(outline, left[1], bottom[0], in_low, r);
}

enum status shape_init_box(struct shape *shape, struct vec2 low, struct vec2 high,
                           double rounding)
{
    struct vec2 size = vec2_sub(high, low);
    struct vec2 in_low = {low.a + rounding, low.b + rounding};
    struct vec2 in_high = {high.a - rounding, high.b - rounding};

    *shape = (struct shape){0};
    if (!is_finite(low) || !is_finite(high) || !is_finite(size) ||
        !(size.a > 0 && size.b > 0))
        return STATUS_SIZE;
    /* "half of the side" as the user computes it may be an ulp too much */
    if (!(rounding >= 0 && rounding <= 0.5 * fmin(size.a, size.b) * (1 + FUZZ)))
        return STATUS_SIZE;
    if (size.a - 2 * rounding <= FUZZ * size.a)
        in_low.a = in_high.a = 0.5 * (low.a + high.a);
    if (size.b - 2 * rounding <= FUZZ * size.b)
        in_low.b = in_high.b = 0.5 * (low.b + high.b);
    if (shape_new(shape, 8) != STATUS_OK)
        return STATUS_MEMORY;
    lay_box(&shape->outlines[0], low, high, in_low, in_high, rounding);
    return STATUS_OK;
}

enum status shape_init_disc(struct shape *shape, struct vec2 centre, double radius)
{
    struct vec2 low = {centre.a - radius, centre.b - radius};
    struct vec2 high = {centre.a + radius, centre.b + radius};

    *shape = (struct shape){0};
    if (!is_finite(low) || !is_finite(high) || !(radius > 0) ||
        !(low.a < centre.a && low.b < centre.b))
        return STATUS_SIZE;
    if (shape_new(shape, 4) != STATUS_OK)
        return STATUS_MEMORY;
    lay_box(&shape->outlines[0], low, high, centre, centre, radius);
    return STATUS_OK;
}
