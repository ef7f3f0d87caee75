/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "mesh/gap.h"

#include <math.h>

#include "shared/mem.h"

/* Narrows (*below, *above) round x by the solid stretches of one part. */
static enum status narrow(const struct part *part, int axis, double line, double x,
                          double tolerance, double *below, double *above)
{
    struct span *spans = NULL;
    size_t capacity = 0, count = 0;
    enum status status =
        shape_spans(&part->shape, axis, line, tolerance, &spans, &capacity, &count);
    for (size_t k = 0; k < count && status == STATUS_OK; k++) {
        if (spans[k].low <= x)
            *below = fmax(*below, fmin(spans[k].high, x));
        if (spans[k].high >= x)
            *above = fmin(*above, fmax(spans[k].low, x));
    }
    mem_free(spans);
    return status;
}

static bool reflects(const struct plane *plane, enum side_index side, double edge,
                     double x, double slack)
{
    const enum side_kind kind = plane->sides[side].kind;
    return (kind == SIDE_MIRROR || kind == SIDE_ANTIMIRROR) && fabs(x - edge) <= slack;
}

enum status gap_at(const struct plane *plane, int axis, struct vec2 at, double *below,
                   double *above)
{
    const bool second = axis == 1;
    const double low = second ? plane->low.b : plane->low.a;
    const double high = second ? plane->high.b : plane->high.a;
    const double x = second ? at.b : at.a, line = second ? at.a : at.b;
    enum status status = STATUS_OK;
    *below = -(double)INFINITY;
    *above = (double)INFINITY;
    for (size_t p = 0; p < plane->part_count && status == STATUS_OK; p++)
        if (part_is_conductor(&plane->parts[p]))
            status = narrow(&plane->parts[p], axis, line, x, 1e-11 * (high - low),
                            below, above);
    const double slack = 1e-9 * (high - low);
    if (reflects(plane, second ? SIDE_B_LOW : SIDE_A_LOW, low, x, slack))
        *below = 2.0 * x - *above;
    if (reflects(plane, second ? SIDE_B_HIGH : SIDE_A_HIGH, high, x, slack))
        *above = 2.0 * x - *below;
    return status;
}
