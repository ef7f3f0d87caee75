/* SPDX-License-Identifier: GPL-3.0-or-later */

/* The surface is divided into short stretches, each with a point in its middle. A stretch
 * whose middle is not below its neighbours' holds a local peak; those within reach of the
 * highest are searched by golden section (Kiefer, Proc. Amer. Math. Soc. 4, 502, 1953;
 * from memory). The interpolated field is smooth along a stretch, so what is found is its
 * true maximum, and the value depends on the grid through the field alone: that is what
 * makes it fit for extrapolation. */

#include "solver/surface_field.h"

#include <math.h>

#include "shared/mem.h"

/* Stretches round a part, about. */
#define SURFACE_POINTS 600.0
/* Distance kept from sharp corners where the file gives no edge radius. */
#define EDGE_RADIUS_DEFAULT 0.5e-3
/* ... but never more than this share of the part's smaller side. */
#define EDGE_SHARE 0.2
/* Local peaks at or above this share of the highest middle are followed: from the middle
 * of a stretch to its highest point the field grows by less than the rest. */
#define FOLLOW_SHARE 0.8
/* Peaks that differ by less are equal, and the first one is taken. */
#define SAME_PEAK 1e-9

/* Of the golden section: the place to 1e-6 of a stretch, the field to its square. */
#define GOLDEN 0.61803398874989485
enum { SECTIONS = 29, HALVINGS = 50 };

/* One stretch: the part of the surface from low to high about its middle point. */
struct stretch {
    struct surface_point point;
    double low, high; /* m along the surface; beside a sharp corner cut short */
    bool low_at_corner, high_at_corner; /* ... there */
    bool has_corner;                    /* the nearest sharp corner stands out */
    bool is_open;                       /* not all of it too near to a corner */
    bool is_peak;                       /* no neighbour is higher */
    double field;                       /* at the best place known */
    double place;                       /* m along the surface, of that */
};

struct look {
    const struct plane_solution *plane;
    size_t part;
    bool creep;    /* the field along the surface, else its magnitude */
    double corner; /* m, kept from sharp corners */
    struct stretch *stretches;
    size_t count;
    enum status status; /* of the first field that failed */
};

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

static double slack_of(const struct plane *plane)
{
    return 1e-9 * fmin(plane->high.a - plane->low.a, plane->high.b - plane->low.b);
}

static bool lies_inside(const struct plane *plane, struct vec2 at)
{
    const double slack = slack_of(plane);
    return at.a > plane->low.a + slack && at.a < plane->high.a - slack &&
           at.b > plane->low.b + slack && at.b < plane->high.b - slack;
}

/* A corner on the border of the region is cut or continued there: it does not stand out. */
static bool has_corner(const struct plane *plane, const struct surface_point *point)
{
    return isfinite(point->corner_distance) && lies_inside(plane, point->corner);
}

/* Points inside another part or on the border of the region see no free space. */
static bool point_is_free(const struct plane *plane, size_t part, struct vec2 at)
{
    const double slack = slack_of(plane);
    if (!lies_inside(plane, at))
        return false;
    for (size_t p = 0; p < plane->part_count; p++)
        if (p != part && shape_contains(&plane->parts[p].shape, at, slack))
            return false;
    return true;
}

/* Field at a place of a stretch; 0 where the surface is not free, and in a crevice that
 * no free node sees. */
static double field_on(struct look *look, const struct stretch *stretch, double place)
{
    const struct vec2 at = surface_point_along(&stretch->point, place);
    struct field_value value;
    if (!point_is_free(look->plane->plane, look->part, at))
        return 0.0;
    enum status status = field_at_surface(look->plane->field, at, &value);
    if (status == STATUS_SIZE)
        return 0.0;
    if (look->status == STATUS_OK)
        look->status = status;
    const double turn = stretch->point.bend * place;
    const struct vec2 n = stretch->point.normal;
    const struct vec2 along = {-n.b * cos(turn) - n.a * sin(turn),
                               n.a * cos(turn) - n.b * sin(turn)};
    const double size = look->creep ? fabs(vec2_dot(value.gradient, along))
                                    : vec2_length(value.gradient);
    return fabs(plane_field_factor(look->plane->plane->kind)) * size;
}

static double distance_at(const struct stretch *stretch, double place)
{
    return vec2_length(
        vec2_sub(surface_point_along(&stretch->point, place), stretch->point.corner));
}

/* Where between `far` and `near` the distance to the corner falls to `least`. */
static double place_at_distance(const struct stretch *stretch, double far, double near,
                                double least)
{
    for (int k = 0; k < HALVINGS; k++) {
        const double middle = 0.5 * (far + near);
        if (distance_at(stretch, middle) >= least)
            far = middle;
        else
            near = middle;
    }
    return far;
}

/* Takes from a stretch what lies too near to its corner; false if nothing is left. */
static bool keep_from_corner(struct stretch *s, double least)
{
    if (!s->has_corner)
        return true;
    const bool low = distance_at(s, s->low) >= least;
    const bool high = distance_at(s, s->high) >= least;
    if (!low && !high)
        return false;
    if (!low) {
        s->low = place_at_distance(s, s->high, s->low, least);
        s->low_at_corner = true;
    }
    if (!high) {
        s->high = place_at_distance(s, s->low, s->high, least);
        s->high_at_corner = true;
    }
    return true;
}

static void stretch_try(struct look *look, struct stretch *stretch, double place)
{
    const double field = field_on(look, stretch, place);
    if (field > stretch->field) {
        stretch->field = field;
        stretch->place = place;
    }
}

static enum status look_around(struct look *look)
{
    const struct part *part = &look->plane->plane->parts[look->part];
    struct surface_point *points = NULL;
    enum status status =
        shape_surface(&part->shape, spacing_of(part), &points, &look->count);
    if (status == STATUS_OK)
        look->stretches = MEM_NEW(look->count, struct stretch);
    if (status == STATUS_OK && look->stretches == NULL)
        status = STATUS_MEMORY;
    for (size_t k = 0; k < look->count && status == STATUS_OK; k++) {
        struct stretch *s = &look->stretches[k];
        s->point = points[k];
        s->low = -points[k].reach;
        s->high = points[k].reach;
        s->has_corner = has_corner(look->plane->plane, &points[k]);
        s->is_open = keep_from_corner(s, look->corner);
        if (!s->is_open)
            continue;
        stretch_try(look, s, 0.5 * (s->low + s->high));
        if (s->low_at_corner)
            stretch_try(look, s, s->low);
        if (s->high_at_corner)
            stretch_try(look, s, s->high);
        status = look->status;
    }
    mem_free(points);
    return status;
}

/* Golden section between the ends of a stretch. */
static void search(struct look *look, struct stretch *s)
{
    double low = s->low, high = s->high;
    double p = high - GOLDEN * (high - low), q = low + GOLDEN * (high - low);
    double at_p = field_on(look, s, p), at_q = field_on(look, s, q);
    for (int k = 0; k < SECTIONS; k++) {
        if (at_p >= at_q) {
            high = q;
            q = p;
            at_q = at_p;
            p = high - GOLDEN * (high - low);
            at_p = field_on(look, s, p);
        } else {
            low = p;
            p = q;
            at_p = at_q;
            q = low + GOLDEN * (high - low);
            at_q = field_on(look, s, q);
        }
    }
    stretch_try(look, s, at_p >= at_q ? p : q);
}

/* Stretches that follow each other in the list do so on the surface, except where one
 * outline ends and the next begins. */
static bool is_below(const struct stretch *s, const struct stretch *neighbour)
{
    const double apart = vec2_length(vec2_sub(s->point.at, neighbour->point.at));
    return apart <= 1.001 * (s->point.reach + neighbour->point.reach) &&
           s->field < neighbour->field;
}

/* A local peak high enough to be followed. */
static bool is_peak(const struct look *look, size_t k, double highest)
{
    const struct stretch *s = &look->stretches[k];
    return s->field > 0.0 && s->field >= FOLLOW_SHARE * highest &&
           !(k > 0 && is_below(s, s - 1)) &&
           !(k + 1 < look->count && is_below(s, s + 1));
}

/* Searches the local peaks and their neighbours: a peak may lie just beyond the end of
 * the stretch with the highest middle. */
static void follow(struct look *look)
{
    double highest = 0.0;
    for (size_t k = 0; k < look->count; k++)
        highest = fmax(highest, look->stretches[k].field);
    for (size_t k = 0; k < look->count; k++)
        look->stretches[k].is_peak = is_peak(look, k, highest);
    for (size_t k = 0; k < look->count; k++)
        if (look->stretches[k].is_open && look->stretches[k].point.reach > 0.0 &&
            (look->stretches[k].is_peak || (k > 0 && look->stretches[k - 1].is_peak) ||
             (k + 1 < look->count && look->stretches[k + 1].is_peak)))
            search(look, &look->stretches[k]);
}

static void choose(const struct look *look, struct surface_peak *peak)
{
    for (size_t k = 0; k < look->count; k++) {
        const struct stretch *s = &look->stretches[k];
        if (s->has_corner)
            peak->corner_distance = look->corner;
        if (!(s->field > peak->field * (1.0 + SAME_PEAK)))
            continue;
        peak->found = true;
        peak->field = s->field;
        peak->at = surface_point_along(&s->point, s->place);
        peak->radius = s->point.radius;
        peak->at_corner = (s->low_at_corner && s->place == s->low) ||
                          (s->high_at_corner && s->place == s->high);
    }
}

static enum status find_peak(const struct plane_solution *plane, size_t part,
                             bool creep, struct surface_peak *peak)
{
    const struct part *p = &plane->plane->parts[part];
    struct look look = {
        .plane = plane, .part = part, .creep = creep, .corner = edge_radius_of(p)};
    *peak = (struct surface_peak){.edge_given = p->edge_radius > 0.0};
    enum status status = look_around(&look);
    if (status == STATUS_OK) {
        follow(&look);
        status = look.status;
    }
    if (status == STATUS_OK)
        choose(&look, peak);
    mem_free(look.stretches);
    return status;
}

enum status surface_field_peak(const struct plane_solution *plane, size_t part,
                               struct surface_peak *peak)
{
    return find_peak(plane, part, false, peak);
}

enum status surface_field_creep(const struct plane_solution *plane, size_t part,
                                struct surface_peak *peak)
{
    return find_peak(plane, part, true, peak);
}
