/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Which stretches of an edge are still surface after the cuts. The edge is divided
 * wherever another outline meets it; between two such marks nothing changes, so one
 * look at both sides of the middle tells whether solid and free space meet there. What
 * two outlines share is a piece of the first one only. */

#include "mesh/shape_internal.h"

#include <stdlib.h>

#include "shared/mem.h"

struct vec2 shape_normal(const struct shape *shape, size_t o, size_t k, double t)
{
    struct vec2 d = edge_direction(&shape->outlines[o].edges[k], t);

    /* the solid is on the left of the body's edges, on the right of a cut's */
    return o == 0 ? (struct vec2){d.b, -d.a} : (struct vec2){-d.b, d.a};
}

bool shape_is_surface(const struct shape *shape, struct vec2 p, struct vec2 normal)
{
    struct vec2 step = vec2_scale(normal, PROBE * shape_scale(shape));

    return shape_solid(shape, vec2_sub(p, step)) &&
           !shape_solid(shape, vec2_add(p, step));
}

static enum status add_mark(struct pieces *pieces, size_t *count, double mark)
{
    void *array = pieces->marks;
    enum status status =
        mem_grow(&array, &pieces->mark_capacity, *count + 1, sizeof *pieces->marks);

    pieces->marks = array;
    if (status == STATUS_OK)
        pieces->marks[(*count)++] = mark;
    return status;
}

static enum status add_piece(struct pieces *pieces, double from, double to)
{
    void *array = pieces->items;
    enum status status =
        mem_grow(&array, &pieces->capacity, pieces->count + 1, sizeof *pieces->items);

    pieces->items = array;
    if (status == STATUS_OK)
        pieces->items[pieces->count++] = (struct piece){from, to};
    return status;
}

/* Marks on `edge` where an outline meets it. */
static enum status mark_outline(struct pieces *pieces, size_t *count,
                                const struct edge *edge, const struct outline *outline,
                                double fuzz)
{
    struct vec2 points[MEETINGS_MAX];
    enum status status = STATUS_OK;

    for (size_t k = 0; k < outline->count; k++) {
        int n = edge_meetings(edge, &outline->edges[k], fuzz, points);
        for (int i = 0; i < n && status == STATUS_OK; i++)
            status = add_mark(pieces, count, edge_fraction(edge, points[i]));
    }
    return status;
}

static int compare_marks(const void *p, const void *q)
{
    double x = *(const double *)p;
    double y = *(const double *)q;

    return (x > y) - (x < y);
}

/* True if p also lies on an outline before o, whose surface it then is. */
static bool is_taken(const struct shape *shape, size_t o, struct vec2 p, double fuzz)
{
    for (size_t other = 0; other < o; other++)
        for (size_t k = 0; k < shape->outlines[other].count; k++) {
            struct vec2 q = edge_nearest(&shape->outlines[other].edges[k], p);
            if (vec2_length(vec2_sub(p, q)) <= fuzz)
                return true;
        }
    return false;
}

/* Keeps the stretches between marks that are surface, joining neighbours. */
static enum status keep_surface(struct pieces *pieces, size_t marks,
                                const struct shape *shape, size_t o, size_t k)
{
    const struct edge *edge = &shape->outlines[o].edges[k];
    double fuzz = FUZZ * shape_scale(shape);
    enum status status = STATUS_OK;
    double from = 0;

    for (size_t i = 1; i < marks && status == STATUS_OK; i++) {
        double to = pieces->marks[i];
        double middle = 0.5 * (from + to);
        struct vec2 p = edge_point(edge, middle);
        size_t n = pieces->count;
        if ((to - from) * edge_length(edge) <= fuzz)
            continue;
        if (shape_is_surface(shape, p, shape_normal(shape, o, k, middle)) &&
            !is_taken(shape, o, p, fuzz)) {
            if (n > 0 && pieces->items[n - 1].to == from)
                pieces->items[n - 1].to = to;
            else
                status = add_piece(pieces, from, to);
        }
        from = to;
    }
    return status;
}

enum status pieces_find(struct pieces *pieces, const struct shape *shape, size_t o,
                        size_t k)
{
    const struct edge *edge = &shape->outlines[o].edges[k];
    double fuzz = FUZZ * shape_scale(shape);
    enum status status;
    size_t marks = 0;

    pieces->count = 0;
    if (shape->count == 1)
        return add_piece(pieces, 0, 1);
    status = add_mark(pieces, &marks, 0);
    if (status == STATUS_OK)
        status = add_mark(pieces, &marks, 1);
    for (size_t other = 0; other < shape->count && status == STATUS_OK; other++)
        if (other != o)
            status = mark_outline(pieces, &marks, edge, &shape->outlines[other], fuzz);
    if (status != STATUS_OK)
        return status;
    qsort(pieces->marks, marks, sizeof *pieces->marks, compare_marks);
    return keep_surface(pieces, marks, shape, o, k);
}

void pieces_free(struct pieces *pieces)
{
    mem_free(pieces->items);
    mem_free(pieces->marks);
    *pieces = (struct pieces){0};
}
