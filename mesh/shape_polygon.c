/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Outlines through points. The points are first put into anticlockwise order; each
 * corner is then replaced by the arc that touches both of its edges, set back from the
 * corner by radius * tan(turn / 2), and the edges between the arcs are what is left of
 * the straight lines. The finished outline is checked against itself. */

#include "mesh/shape.h"

#include "mesh/shape_internal.h"
#include "shared/constants.h"
#include "shared/mem.h"

#define STRAIGHT 1e-9  /* rad: a turn below this needs no arc */
#define TOUCHING 1e-14 /* relative: an outline this close to itself crosses itself */

/* One point of the polygon, in anticlockwise order. */
struct corner {
    struct vec2 at;
    struct vec2 along; /* unit direction to the next corner */
    double length;     /* m, to the next corner */
    double turn;       /* rad, positive to the left */
    double setback;    /* m, from the corner to the ends of its arc */
    size_t index;      /* in the caller's list */
};

struct polygon {
    struct corner *corners; /* [count] */
    size_t count;
    size_t *owner; /* [2 * count] corner each edge starts from or rounds */
    double scale;  /* m, largest absolute coordinate */
    size_t bad;    /* index of the caller's point to blame */
};

static enum status blame(struct polygon *polygon, size_t corner)
{
    polygon->bad = polygon->corners[corner].index;
    return STATUS_SIZE;
}

static size_t before(const struct polygon *polygon, size_t k)
{
    return (k > 0 ? k : polygon->count) - 1;
}

static size_t after(const struct polygon *polygon, size_t k)
{
    return k + 1 < polygon->count ? k + 1 : 0;
}

static double points_area(const struct vec2 *points, size_t count)
{
    double twice = 0;

    for (size_t k = 1; k + 1 < count; k++)
        twice += vec2_cross(vec2_sub(points[k], points[0]),
                            vec2_sub(points[k + 1], points[0]));
    return 0.5 * twice;
}

/* Copies the points in anticlockwise order. */
static enum status take_points(struct polygon *polygon, const struct vec2 *points)
{
    size_t n = polygon->count;
    double area = points_area(points, n);

    for (size_t k = 0; k < n; k++) {
        size_t index = area < 0 ? n - 1 - k : k;
        polygon->corners[k] = (struct corner){.at = points[index], .index = index};
        polygon->scale =
            fmax(polygon->scale, fmax(fabs(points[index].a), fabs(points[index].b)));
        if (!isfinite(points[index].a) || !isfinite(points[index].b))
            return blame(polygon, k);
    }
    return STATUS_OK;
}

static enum status measure_lengths(struct polygon *polygon)
{
    for (size_t k = 0; k < polygon->count; k++) {
        struct corner *corner = &polygon->corners[k];
        const struct corner *next = &polygon->corners[after(polygon, k)];
        struct vec2 d = vec2_sub(next->at, corner->at);
        corner->length = vec2_length(d);
        if (!(corner->length > FUZZ * polygon->scale) || !isfinite(corner->length))
            return blame(polygon, corner->index > next->index ? k : after(polygon, k));
        corner->along = vec2_scale(d, 1 / corner->length);
    }
    return STATUS_OK;
}

/* tan(turn / 2) = |sin| / (1 + cos), which is exactly 1 for a square corner. */
static enum status measure_turns(struct polygon *polygon, double rounding)
{
    for (size_t k = 0; k < polygon->count; k++) {
        struct corner *corner = &polygon->corners[k];
        struct vec2 in = polygon->corners[before(polygon, k)].along;
        double sine = vec2_cross(in, corner->along);
        double cosine = vec2_dot(in, corner->along);
        corner->turn = atan2(sine, cosine);
        if (PI - fabs(corner->turn) < STRAIGHT) /* doubles back on itself */
            return blame(polygon, k);
        if (fabs(corner->turn) > STRAIGHT)
            corner->setback = rounding * fabs(sine) / (1 + cosine);
    }
    return STATUS_OK;
}

static enum status check_roundings(struct polygon *polygon)
{
    for (size_t k = 0; k < polygon->count; k++) {
        size_t next = after(polygon, k);
        double here = polygon->corners[k].setback;
        double there = polygon->corners[next].setback;
        if (here + there > polygon->corners[k].length * (1 + FUZZ))
            return blame(polygon, here >= there ? k : next);
    }
    return STATUS_OK;
}

static void add_edge(struct polygon *polygon, struct outline *outline, size_t corner,
                     struct edge edge)
{
    polygon->owner[outline->count] = corner;
    outline->edges[outline->count++] = edge;
}

static void add_corner(struct polygon *polygon, struct outline *outline, size_t k,
                       double rounding)
{
    const struct corner *corner = &polygon->corners[k];
    struct vec2 in = polygon->corners[before(polygon, k)].along;
    struct vec2 from = vec2_sub(corner->at, vec2_scale(in, corner->setback));
    struct vec2 to = vec2_add(corner->at, vec2_scale(corner->along, corner->setback));
    double r = corner->turn > 0 ? rounding : -rounding;
    struct vec2 centre = {from.a - r * in.b, from.b + r * in.a};

    if (corner->setback > 0)
        add_edge(polygon, outline, k,
                 (struct edge){from, to, centre, rounding, corner->turn});
}

/* What is left of the line from corner k to the next one. Below FUZZ it is dropped and
 * the neighbouring arcs are joined afterwards. */
static void add_side(struct polygon *polygon, struct outline *outline, size_t k)
{
    const struct corner *corner = &polygon->corners[k];
    const struct corner *next = &polygon->corners[after(polygon, k)];
    struct vec2 from = vec2_add(corner->at, vec2_scale(corner->along, corner->setback));
    struct vec2 to = vec2_sub(next->at, vec2_scale(corner->along, next->setback));

    if (corner->length - corner->setback - next->setback > FUZZ * polygon->scale)
        add_edge(polygon, outline, k, (struct edge){from, to, {0, 0}, 0, 0});
}

static void lay_edges(struct polygon *polygon, struct outline *outline, double rounding)
{
    for (size_t k = 0; k < polygon->count; k++) {
        add_corner(polygon, outline, k, rounding);
        add_side(polygon, outline, k);
    }
    for (size_t k = 0; k < outline->count; k++)
        outline->edges[outline_next(outline, k)].start = outline->edges[k].end;
}

static enum status check_crossings(struct polygon *polygon,
                                   const struct outline *outline)
{
    double tolerance = TOUCHING * polygon->scale;
    struct vec2 points[MEETINGS_MAX];
    size_t n = outline->count;

    for (size_t k = 0; k < n; k++)
        for (size_t m = k + 2; m < n; m++) {
            if (k == 0 && m == n - 1)
                continue; /* neighbours */
            if (edge_meetings(&outline->edges[k], &outline->edges[m], tolerance,
                              points) > 0)
                return blame(polygon, polygon->owner[m]);
        }
    return STATUS_OK;
}

static enum status build(struct polygon *polygon, struct outline *outline,
                         const struct vec2 *points, double rounding)
{
    enum status status = take_points(polygon, points);

    if (status == STATUS_OK)
        status = measure_lengths(polygon);
    if (status == STATUS_OK)
        status = measure_turns(polygon, rounding);
    if (status == STATUS_OK)
        status = check_roundings(polygon);
    if (status != STATUS_OK)
        return status;
    lay_edges(polygon, outline, rounding);
    status = check_crossings(polygon, outline);
    if (status == STATUS_OK && !(outline_area(outline) > 0))
        status = blame(polygon, 0);
    return status;
}

enum status shape_init_polygon(struct shape *shape, const struct vec2 *points,
                               size_t count, double rounding, size_t *bad)
{
    struct polygon polygon = {.count = count};
    enum status status;

    *shape = (struct shape){0};
    if (bad)
        *bad = 0;
    if (count < 3 || !(rounding >= 0) || !isfinite(rounding))
        return STATUS_SIZE;
    polygon.corners = MEM_NEW(count, struct corner);
    polygon.owner = MEM_NEW(2 * count, size_t);
    status =
        polygon.corners && polygon.owner ? shape_new(shape, 2 * count) : STATUS_MEMORY;
    if (status == STATUS_OK)
        status = build(&polygon, &shape->outlines[0], points, rounding);
    if (status != STATUS_OK)
        shape_free(shape);
    if (bad && status == STATUS_SIZE)
        *bad = polygon.bad;
    mem_free(polygon.corners);
    mem_free(polygon.owner);
    return status;
}
