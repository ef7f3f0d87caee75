/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Points of the surface. Each piece of surface is divided into equal steps and gets a
 * point in the middle of each, so no point sits on a corner and the same arguments
 * always give the same points. */

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

/* Distance to the nearest sharp corner that stands out. */
static double corner_distance(const struct sampler *sampler, struct vec2 p)
{
    double nearest = (double)INFINITY;

    for (size_t i = 0; i < sampler->key_count; i++) {
        const struct key_point *key = &sampler->keys[i];
        if (key->radius == 0 && key->free_angle > PI + SMOOTH_TURN)
            nearest = fmin(nearest, vec2_length(vec2_sub(p, key->at)));
    }
    return nearest;
}

static enum status add_point(struct sampler *sampler, struct surface_point point)
{
    void *array = sampler->items;
    enum status status;

    point.corner_distance = corner_distance(sampler, point.at);
    status = mem_grow(&array, &sampler->capacity, sampler->count + 1,
                      sizeof *sampler->items);
    sampler->items = array;
    if (status == STATUS_OK)
        sampler->items[sampler->count++] = point;
    return status;
}

static enum status sample_piece(struct sampler *sampler, size_t o, size_t k,
                                struct piece piece)
{
    const struct outline *outline = &sampler->shape->outlines[o];
    const struct edge *edge = &outline->edges[k];
    double steps = ceil(edge_length(edge) * (piece.to - piece.from) / sampler->spacing);
    double radius = edge_curve_radius(outline, k);
    enum status status = STATUS_OK;

    if (!(steps <= STEPS_MAX))
        return STATUS_SIZE;
    for (long i = 0; i < (long)steps && status == STATUS_OK; i++) {
        double t = piece.from + (piece.to - piece.from) * ((double)i + 0.5) / steps;
        struct surface_point point = {edge_point(edge, t),
                                      shape_normal(sampler->shape, o, k, t), radius, 0};
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
