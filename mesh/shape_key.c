/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Key points. Wherever a sharp corner may be (a vertex, a place where two outlines
 * meet) the directions in which edges leave are sorted around the point, and each
 * sector between two of them is looked at: solid or free. The widest run of free
 * sectors is the angle of the free space. One rule thus serves for corners of the
 * body, of cuts, and for crossings, whatever coincides there. */

#include "mesh/shape.h"

#include <stdlib.h>

#include "mesh/shape_internal.h"
#include "shared/constants.h"
#include "shared/mem.h"

/* Two directions for each outline through a point; corners where more outlines meet
 * do not occur in practice and lose the surplus. */
#define DIRECTIONS_MAX 64

#define THIN_SECTOR 1e-6 /* rad: edges leaving together */

struct keys {
    const struct shape *shape;
    double fuzz;             /* m */
    double probe;            /* m */
    struct key_point *items; /* [capacity] */
    size_t capacity;
    size_t count;
};

struct fan {
    double angles[DIRECTIONS_MAX];
    int count;
};

static bool near(struct vec2 p, struct vec2 q, double distance)
{
    return vec2_length(vec2_sub(p, q)) <= distance;
}

static enum status add_key(struct keys *keys, struct key_point key)
{
    void *array = keys->items;
    enum status status;

    for (size_t i = 0; i < keys->count; i++)
        if (near(keys->items[i].at, key.at, 4 * keys->fuzz))
            return STATUS_OK;
    status = mem_grow(&array, &keys->capacity, keys->count + 1, sizeof *keys->items);
    keys->items = array;
    if (status == STATUS_OK)
        keys->items[keys->count++] = key;
    return status;
}

static void fan_add(struct fan *fan, struct vec2 direction)
{
    if (fan->count < DIRECTIONS_MAX)
        fan->angles[fan->count++] = atan2(direction.b, direction.a);
}

/* The directions in which an edge through p leaves it. */
static void fan_add_edge(struct fan *fan, const struct edge *edge, struct vec2 p,
                         double fuzz)
{
    double t = edge_fraction(edge, p);
    bool at_start = near(edge->start, p, fuzz);
    bool at_end = near(edge->end, p, fuzz);

    if (!at_end)
        fan_add(fan, edge_direction(edge, at_start ? 0 : t));
    if (!at_start)
        fan_add(fan, vec2_scale(edge_direction(edge, at_end ? 1 : t), -1));
}

static int compare_angles(const void *p, const void *q)
{
    double x = *(const double *)p;
    double y = *(const double *)q;

    return (x > y) - (x < y);
}

static struct fan fan_at(const struct keys *keys, struct vec2 p)
{
    struct fan fan = {.count = 0};

    for (size_t o = 0; o < keys->shape->count; o++) {
        const struct outline *outline = &keys->shape->outlines[o];
        for (size_t k = 0; k < outline->count; k++) {
            const struct edge *edge = &outline->edges[k];
            if (near(edge_nearest(edge, p), p, keys->fuzz))
                fan_add_edge(&fan, edge, p, keys->fuzz);
        }
    }
    if (fan.count > 0)
        qsort(fan.angles, (size_t)fan.count, sizeof fan.angles[0], compare_angles);
    return fan;
}

static double sector(const struct fan *fan, int i)
{
    int k = i % fan->count;

    if (k + 1 < fan->count)
        return fan->angles[k + 1] - fan->angles[k];
    return fan->angles[0] + 2 * PI - fan->angles[k];
}

static bool sector_is_solid(const struct keys *keys, const struct fan *fan, int i,
                            struct vec2 p)
{
    double angle = fan->angles[i % fan->count] + 0.5 * sector(fan, i);
    struct vec2 step = {keys->probe * cos(angle), keys->probe * sin(angle)};

    return shape_solid(keys->shape, vec2_add(p, step));
}

/* Widest free angle at p; 0 if p is buried, 2 pi if there is nothing solid (or only a
 * cusp). Going round twice joins the run across the start. */
static double free_angle(const struct keys *keys, struct vec2 p)
{
    struct fan fan = fan_at(keys, p);
    double widest = 0;
    double run = 0;

    for (int i = 0; i < 2 * fan.count; i++) {
        bool thin = sector(&fan, i) < THIN_SECTOR;
        bool solid = !thin && sector_is_solid(keys, &fan, i, p);
        run = solid ? 0 : run + sector(&fan, i);
        widest = fmax(widest, run);
    }
    return fmin(widest, 2 * PI);
}

static enum status offer_corner(struct keys *keys, struct vec2 p)
{
    double free = free_angle(keys, p);

    if (free < THIN_SECTOR || free > 2 * PI - THIN_SECTOR ||
        fabs(free - PI) < SMOOTH_TURN)
        return STATUS_OK;
    return add_key(keys, (struct key_point){p, free, 0, true, true});
}

static enum status find_vertices(struct keys *keys, const struct outline *outline)
{
    enum status status = STATUS_OK;

    for (size_t k = 0; k < outline->count && status == STATUS_OK; k++)
        if (fabs(outline_turn(outline, k)) >= SMOOTH_TURN)
            status = offer_corner(keys, outline->edges[k].end);
    return status;
}

static enum status find_edge_crossings(struct keys *keys, const struct edge *edge,
                                       const struct outline *other)
{
    struct vec2 points[MEETINGS_MAX];
    enum status status = STATUS_OK;

    for (size_t k = 0; k < other->count; k++) {
        int n = edge_meetings(edge, &other->edges[k], keys->fuzz, points);
        for (int i = 0; i < n && status == STATUS_OK; i++)
            status = offer_corner(keys, points[i]);
    }
    return status;
}

/* Crossings of outline o with those after it. */
static enum status find_crossings(struct keys *keys, size_t o)
{
    const struct outline *outline = &keys->shape->outlines[o];
    enum status status = STATUS_OK;

    for (size_t other = o + 1; other < keys->shape->count; other++)
        for (size_t k = 0; k < outline->count && status == STATUS_OK; k++)
            status = find_edge_crossings(keys, &outline->edges[k],
                                         &keys->shape->outlines[other]);
    return status;
}

/* Where an arc of outline o runs parallel to an axis. Ends count: a rounded corner of
 * a box begins and ends there. */
static enum status find_round(struct keys *keys, size_t o, const struct edge *arc)
{
    static const struct vec2 axes[4] = {{1, 0}, {0, 1}, {-1, 0}, {0, -1}};
    enum status status = STATUS_OK;

    for (int k = 0; k < 4 && status == STATUS_OK; k++) {
        struct vec2 p = vec2_add(arc->centre, vec2_scale(axes[k], arc->radius));
        bool outwards = (arc->sweep > 0) == (o == 0);
        struct vec2 normal = vec2_scale(axes[k], outwards ? 1 : -1);
        bool snap_a = axes[k].b == 0;
        if (!near(edge_nearest(arc, p), p, 4 * keys->fuzz) ||
            !shape_is_surface(keys->shape, p, normal))
            continue;
        status = add_key(keys, (struct key_point){p, PI, arc->radius, snap_a, !snap_a});
    }
    return status;
}

/* The middle of what is left of a straight edge parallel to an axis. */
static enum status find_flat(struct keys *keys, struct pieces *pieces, size_t o,
                             size_t k)
{
    const struct edge *edge = &keys->shape->outlines[o].edges[k];
    struct vec2 d = vec2_sub(edge->end, edge->start);
    bool snap_a = fabs(d.a) <= keys->fuzz;
    enum status status;

    if (!snap_a && fabs(d.b) > keys->fuzz)
        return STATUS_OK;
    status = pieces_find(pieces, keys->shape, o, k);
    for (size_t i = 0; i < pieces->count && status == STATUS_OK; i++) {
        double middle = 0.5 * (pieces->items[i].from + pieces->items[i].to);
        status = add_key(keys, (struct key_point){edge_point(edge, middle), PI,
                                                  (double)INFINITY, snap_a, !snap_a});
    }
    return status;
}

static enum status find_smooth(struct keys *keys, struct pieces *pieces, size_t o)
{
    const struct outline *outline = &keys->shape->outlines[o];
    enum status status = STATUS_OK;

    for (size_t k = 0; k < outline->count && status == STATUS_OK; k++)
        if (outline->edges[k].radius > 0)
            status = find_round(keys, o, &outline->edges[k]);
        else
            status = find_flat(keys, pieces, o, k);
    return status;
}

enum status shape_key_points(const struct shape *shape, struct key_point **points,
                             size_t *count)
{
    double scale = shape_scale(shape);
    struct keys keys = {shape, FUZZ * scale, PROBE * scale, NULL, 0, 0};
    struct pieces pieces = {0};
    enum status status = STATUS_OK;

    *points = NULL;
    *count = 0;
    /* sharp corners first: where a smooth key point falls on one, the corner stays */
    for (size_t o = 0; o < shape->count && status == STATUS_OK; o++)
        status = find_vertices(&keys, &shape->outlines[o]);
    for (size_t o = 0; o < shape->count && status == STATUS_OK; o++)
        status = find_crossings(&keys, o);
    for (size_t o = 0; o < shape->count && status == STATUS_OK; o++)
        status = find_smooth(&keys, &pieces, o);
    pieces_free(&pieces);
    if (status != STATUS_OK) {
        mem_free(keys.items);
        return status;
    }
    *points = keys.items;
    *count = keys.count;
    return STATUS_OK;
}
