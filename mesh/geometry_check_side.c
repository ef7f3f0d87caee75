/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Parts against the sides of their region. A conductor on a side that holds a potential
 * must have that potential; no part may reach an open side, where the drawing ends but
 * space goes on. Potentials are compared as linear forms. */
#include <math.h>

#include "mesh/geometry_check_internal.h"
#include "shared/mem.h"

#define SAME_POTENTIAL 1e-12 /* relative: rounding of the arithmetic in the file */

bool same_potential(double p, double q)
{
    return fabs(p - q) <= SAME_POTENTIAL * fmax(fabs(p), fabs(q));
}

double linear_gain(const struct linear *p, size_t s)
{
    return p->gain != NULL ? p->gain[s] : 0;
}

/* Is the part at the potential that a side has at fraction t of its length? */
static bool matches_side(const struct check *check, const struct part *part,
                         const struct side *side, double t)
{
    const struct linear *p = &part->potential;
    bool same =
        same_potential(p->constant, side->from.constant +
                                        t * (side->to.constant - side->from.constant));
    for (size_t s = 0; s < check->geometry->supply_count; s++) {
        double from = linear_gain(&side->from, s), to = linear_gain(&side->to, s);
        same = same && same_potential(linear_gain(p, s), from + t * (to - from));
    }
    return same;
}

/* Solid stretches of a part on side s (coordinates along the side). */
static bool spans_on_side(struct check *check, const struct plane *plane, int s,
                          const struct part *part, struct span **spans, size_t *count)
{
    struct vec2 low, high;
    size_t capacity = 0;
    double tolerance = plane_tolerance(plane);
    shape_bounds(&part->shape, &low, &high);
    const double reach[] = {low.a - plane->low.a, plane->high.a - high.a,
                            low.b - plane->low.b, plane->high.b - high.b};
    const double face[] = {low.a, high.a, low.b, high.b};
    const double side[] = {plane->low.a, plane->high.a, plane->low.b, plane->high.b};
    *spans = NULL;
    *count = 0;
    if (reach[s] > tolerance)
        return true;
    /* A face within the tolerance of the side, but not on it, is looked at itself. */
    double at = fabs(reach[s]) <= tolerance ? face[s] : side[s];
    int axis = s == SIDE_A_LOW || s == SIDE_A_HIGH ? 1 : 0;
    return check_status(
        check, shape_spans(&part->shape, axis, at, tolerance, spans, &capacity, count));
}

static void report_side(struct check *check, const struct plane *plane, int s,
                        const struct part *part, const char *expected,
                        const char *found)
{
    static const char *const ends[] = {"low", "high"};
    (void)mistakes_add(
        &check->mistakes, part->place,
        "the part \"%.60s\" touches the %s%s at the %s end of %s in \"%s\"; "
        "expected %s; found %s",
        part->name, side_kind_key(plane->sides[s].kind),
        plane->sides[s].kind == SIDE_OPEN ? " side" : "", ends[s % 2],
        axis_key(plane_kind_axis(plane->kind, s / 2)), plane_kind_key(plane->kind),
        expected, found);
}

/* A part that touches a side which holds a potential. */
static void check_touch(struct check *check, const struct plane *plane, int s,
                        const struct part *part, const struct span *spans, size_t count)
{
    const struct side *side = &plane->sides[s];
    const bool along_b = s == SIDE_A_LOW || s == SIDE_A_HIGH;
    const double start = along_b ? plane->low.b : plane->low.a;
    const double length = (along_b ? plane->high.b : plane->high.a) - start;
    bool matches = true;
    for (size_t k = 0; k < count; k++)
        matches = matches &&
                  matches_side(check, part, side,
                               fmin(fmax((spans[k].low - start) / length, 0), 1)) &&
                  matches_side(check, part, side,
                               fmin(fmax((spans[k].high - start) / length, 0), 1));
    if (!matches)
        report_side(check, plane, s, part,
                    side->kind == SIDE_WALL
                        ? "a gap, or the potential of the wall there"
                        : "a gap, or a potential of 0",
                    "another potential");
}

void check_side(struct check *check, const struct plane *plane, int s,
                const struct part *part)
{
    const enum side_kind kind = plane->sides[s].kind;
    struct span *spans = NULL;
    size_t count = 0;
    if (kind == SIDE_MIRROR || (kind != SIDE_OPEN && !part_is_conductor(part)))
        return;
    if (spans_on_side(check, plane, s, part, &spans, &count) && count > 0) {
        if (kind == SIDE_OPEN)
            report_side(check, plane, s, part,
                        "free space between them; draw the region larger", "none");
        else if (part->kind == PART_FLOATING)
            report_side(check, plane, s, part, "a gap, as the part floats",
                        "it at the potential of that side");
        else
            check_touch(check, plane, s, part, spans, count);
    }
    mem_free(spans);
}
