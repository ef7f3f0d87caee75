/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Points of the surface. Each piece of surface is divided into equal steps and gets a
 * point in the middle of each, so no point sits on a corner and the same arguments
 * always give the same points. Chords of a smooth curve are different: the field on a
 * regular polygon of n sides is that on a circle times |2 sin(n theta/2)|^(-2/n), theta
 * the angle on the circle it is mapped to (Schwarz-Christoffel map of its outside), and
 * that is 1 a sixth of a side from its ends. */

#include "mesh/shape.h"

#include "mesh/shape_internal.h"
#include "shared/constants.h"
#include "shared/mem.h"

#define STEPS_MAX 1e8  /* on one edge; more is a mistake in the spacing */
#define STRAIGHT  1e-9 /* rad: a turn below this is none */

/* A chord this much longer than its neighbour is a flat face that a curve joins. */
#define LONG_CHORD 4

struct sampler {
    const struct shape *shape;
    double spacing;
    struct key_point *keys; /* [key_count] */
    size_t key_count;
    struct surface_point *items; /* [capacity] */
    size_t capacity;
    size_t count;
};

/* Curvature (1/m) that the chords k and next stand for: that of the circle through
 * their three ends; 0 if they are not chords of a smooth curve. */
static double chord_curvature(const struct outline *outline, size_t k, bool for_next)
{
    const struct edge *e = &outline->edges[k];
    const struct edge *f = &outline->edges[outline_next(outline, k)];
    double turn = fabs(outline_turn(outline, k));
    double own = edge_length(for_next ? f : e);
    double other = edge_length(for_next ? e : f);

    if (e->radius > 0 || f->radius > 0 || turn < STRAIGHT || turn >= SMOOTH_TURN ||
        own > LONG_CHORD * other)
        return 0;
    return 2 * sin(turn) / vec2_length(vec2_sub(f->end, e->start));
}

static double edge_curve_radius(const struct outline *outline, size_t k)
{
    size_t previous = (k > 0 ? k : outline->count) - 1;
    double at_start = chord_curvature(outline, previous, true);
    double at_end = chord_curvature(outline, k, false);
    int n = (at_start > 0) + (at_end > 0);

    if (outline->edges[k].radius > 0)
        return outline->edges[k].radius;
    return n > 0 ? n / (at_start + at_end) : (double)INFINITY;
}

/* Fills in the nearest sharp corner that stands out. */
static void find_corner(const struct sampler *sampler, struct surface_point *point)
{
    point->corner_distance = (double)INFINITY;
    for (size_t i = 0; i < sampler->key_count; i++) {
        const struct key_point *key = &sampler->keys[i];
        double distance = vec2_length(vec2_sub(point->at, key->at));
        if (key->radius == 0 && key->free_angle > PI + SMOOTH_TURN &&
            distance < point->corner_distance) {
            point->corner_distance = distance;
            point->corner = key->at;
        }
    }
}

/* Curvature of an edge, positive where the surface stands out along the normal. */
static double edge_bend(const struct edge *edge, const struct surface_point *point)
{
    struct vec2 out = vec2_sub(point->at, edge->centre);

    if (!(edge->radius > 0))
        return 0;
    return (vec2_dot(out, point->normal) > 0 ? 1 : -1) / edge->radius;
}

struct vec2 surface_point_along(const struct surface_point *point, double s)
{
    struct vec2 along = {-point->normal.b, point->normal.a};
    double turn = point->bend * s;
    /* sin(x)/x and (1 - cos(x))/x without loss where the piece is straight */
    double half = sin(0.5 * turn);
    double forward = turn != 0 ? sin(turn) / point->bend : s;
    double down = turn != 0 ? 2 * half * half / point->bend : 0;
    struct vec2 step =
        vec2_sub(vec2_scale(along, forward), vec2_scale(point->normal, down));

    return vec2_add(point->at, step);
}

static enum status add_point(struct sampler *sampler, struct surface_point point)
{
    void *array = sampler->items;
    enum status status;

    find_corner(sampler, &point);
    status = mem_grow(&array, &sampler->capacity, sampler->count + 1,
                      sizeof *sampler->items);
    sampler->items = array;
    if (status == STATUS_OK)
        sampler->items[sampler->count++] = point;
    return status;
}

static struct surface_point point_of(const struct sampler *sampler, size_t o, size_t k,
                                     double t, double radius)
{
    const struct edge *edge = &sampler->shape->outlines[o].edges[k];
    struct surface_point point = {.at = edge_point(edge, t),
                                  .normal = shape_normal(sampler->shape, o, k, t),
                                  .radius = radius};

    point.bend = edge_bend(edge, &point);
    return point;
}

/* On a chord of a curve the field is lower in the middle than on the curve and grows
 * without bound towards the vertices, by the turn of the chain to first order. A sixth of
 * the chord from either end it is that of the curve. */
static enum status sample_chord(struct sampler *sampler, size_t o, size_t k,
                                struct piece piece, double radius)
{
    static const double sixths[2] = {1.0 / 6.0, 5.0 / 6.0};
    enum status status = STATUS_OK;

    for (int i = 0; i < 2 && status == STATUS_OK; i++) {
        double t = piece.from + (piece.to - piece.from) * sixths[i];
        status = add_point(sampler, point_of(sampler, o, k, t, radius));
    }
    return status;
}

static enum status sample_piece(struct sampler *sampler, size_t o, size_t k,
                                struct piece piece)
{
    const struct outline *outline = &sampler->shape->outlines[o];
    const struct edge *edge = &outline->edges[k];
    double length = edge_length(edge) * (piece.to - piece.from);
    double steps = ceil(length / sampler->spacing);
    double radius = edge_curve_radius(outline, k);
    enum status status = STATUS_OK;

    if (!(steps <= STEPS_MAX))
        return STATUS_SIZE;
    if (edge->radius == 0 && isfinite(radius))
        return sample_chord(sampler, o, k, piece, radius);
    for (long i = 0; i < (long)steps && status == STATUS_OK; i++) {
        double t = piece.from + (piece.to - piece.from) * ((double)i + 0.5) / steps;
        struct surface_point point = point_of(sampler, o, k, t, radius);
        point.reach = 0.5 * length / steps;
        status = add_point(sampler, point);
    }
    return status;
}

static enum status sample_outline(struct sampler *sampler, struct pieces *pieces,
                                  size_t o)
{
    enum status status = STATUS_OK;

    for (size_t k = 0; k < sampler->shape->outlines[o].count; k++) {
        if (status == STATUS_OK)
            status = pieces_find(pieces, sampler->shape, o, k);
        for (size_t i = 0; i < pieces->count && status == STATUS_OK; i++)
            status = sample_piece(sampler, o, k, pieces->items[i]);
    }
    return status;
}

enum status shape_surface(const struct shape *shape, double spacing,
                          struct surface_point **points, size_t *count)
{
    struct sampler sampler = {.shape = shape, .spacing = spacing};
    struct pieces pieces = {0};
    enum status status;

    *points = NULL;
    *count = 0;
    if (!(spacing > 0))
        return STATUS_SIZE;
    status = shape_key_points(shape, &sampler.keys, &sampler.key_count);
    for (size_t o = 0; o < shape->count && status == STATUS_OK; o++)
        status = sample_outline(&sampler, &pieces, o);
    pieces_free(&pieces);
    mem_free(sampler.keys);
    if (status != STATUS_OK) {
        mem_free(sampler.items);
        return status;
    }
    *points = sampler.items;
    *count = sampler.count;
    return STATUS_OK;
}
