/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "solver/surface_field.h"

#include <math.h>

#include "shared/mem.h"

/* Points round a part, about. */
#define SURFACE_POINTS 600.0
/* Distance kept from sharp corners where the file gives no edge radius. */
#define EDGE_RADIUS_DEFAULT 0.5e-3
/* ... but never more than this share of the part's smaller side. */
#define EDGE_SHARE 0.2

static double edge_radius_of(const struct part *part)
{
    struct vec2 low, high;
    if (part->edge_radius > 0.0)
        return part->edge_radius;
    shape_bounds(&part->shape, &low, &high);
    return fmin(EDGE_RADIUS_DEFAULT, EDGE_SHARE * fmin(high.a - low.a, high.b - low.b));
}

static double spacing_of(const struct part *part)
{
    struct vec2 low, high;
    shape_bounds(&part->shape, &low, &high);
    return 2.0 * (high.a - low.a + high.b - low.b) / SURFACE_POINTS;
}

/* Points inside another part or on the border of the region see no free space. */
static bool point_is_free(const struct plane *plane, size_t part, struct vec2 at)
{
    const double slack =
        1e-9 * fmin(plane->high.a - plane->low.a, plane->high.b - plane->low.b);
    if (at.a <= plane->low.a + slack || at.a >= plane->high.a - slack ||
        at.b <= plane->low.b + slack || at.b >= plane->high.b - slack)
        return false;
    for (size_t p = 0; p < plane->part_count; p++)
        if (p != part && shape_contains(&plane->parts[p].shape, at, slack))
            return false;
    return true;
}

static enum status look_at(const struct plane_solution *plane,
                           const struct surface_point *point, struct surface_peak *peak)
{
    struct field_value value;
    enum status status = field_at_surface(plane->field, point->at, &value);
    if (status == STATUS_SIZE) /* a crevice that no free node sees */
        return STATUS_OK;
    const double field =
        fabs(plane_field_factor(plane->plane->kind)) * vec2_length(value.gradient);
    if (status == STATUS_OK && (!peak->found || field > peak->field)) {
        peak->found = true;
        peak->field = field;
        peak->at = point->at;
        peak->radius = point->radius;
    }
    return status;
}

enum status surface_field_peak(const struct plane_solution *plane, size_t part,
                               struct surface_peak *peak)
{
    const struct part *p = &plane->plane->parts[part];
    const double edge = edge_radius_of(p);
    struct surface_point *points = NULL;
    size_t count = 0;
    *peak = (struct surface_peak){0};
    enum status status = shape_surface(&p->shape, spacing_of(p), &points, &count);
    for (size_t k = 0; k < count && status == STATUS_OK; k++) {
        if (isfinite(points[k].corner_distance))
            peak->corner_distance = edge;
        if (points[k].corner_distance >= edge &&
            point_is_free(plane->plane, part, points[k].at))
            status = look_at(plane, &points[k], peak);
    }
    mem_free(points);
    return status;
}
