/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Do two shapes have a point in common? If they do, the common region has a boundary
 * made of edges of both, and that boundary has a vertex: an end of an edge, or a place
 * where two edges meet (edges of the two shapes, or of two outlines of the same one).
 * So it is enough to try those places, each against both shapes. Arcs are never full
 * circles without ends, so discs inside discs are found as well. */

#include "mesh/shape.h"

#include "mesh/shape_internal.h"

struct search {
    const struct shape *p;
    const struct shape *q;
    double tolerance;
    struct vec2 low; /* corners of what the two bounding boxes share */
    struct vec2 high;
    bool found;
    struct vec2 where;
};

static bool is_shared(const struct search *search, struct vec2 x)
{
    double t = search->tolerance;

    return x.a >= search->low.a - t && x.a <= search->high.a + t &&
           x.b >= search->low.b - t && x.b <= search->high.b + t;
}

static void try_point(struct search *search, struct vec2 x)
{
    if (!search->found && is_shared(search, x) &&
        shape_contains(search->p, x, search->tolerance) &&
        shape_contains(search->q, x, search->tolerance)) {
        search->found = true;
        search->where = x;
    }
}

static void try_ends(struct search *search, const struct shape *shape)
{
    for (size_t o = 0; o < shape->count; o++)
        for (size_t k = 0; k < shape->outlines[o].count && !search->found; k++)
            try_point(search, shape->outlines[o].edges[k].start);
}

static void try_outlines(struct search *search, const struct outline *e,
                         const struct outline *f)
{
    struct vec2 points[MEETINGS_MAX];

    for (size_t i = 0; i < e->count; i++) {
        if (!edge_reaches(&e->edges[i], search->low, search->high, search->tolerance))
            continue;
        for (size_t j = 0; j < f->count && !search->found; j++) {
            int n =
                edge_meetings(&e->edges[i], &f->edges[j], search->tolerance, points);
            for (int k = 0; k < n; k++)
                try_point(search, points[k]);
        }
    }
}

static void try_between(struct search *search)
{
    for (size_t i = 0; i < search->p->count; i++)
        for (size_t j = 0; j < search->q->count; j++)
            try_outlines(search, &search->p->outlines[i], &search->q->outlines[j]);
}

static void try_within(struct search *search, const struct shape *shape)
{
    for (size_t i = 0; i < shape->count; i++)
        for (size_t j = i + 1; j < shape->count; j++)
            try_outlines(search, &shape->outlines[i], &shape->outlines[j]);
}

/* Finds what the bounding boxes share; false if there is a gap between them. */
static bool share_bounds(struct search *search)
{
    struct vec2 low[2];
    struct vec2 high[2];

    shape_bounds(search->p, &low[0], &high[0]);
    shape_bounds(search->q, &low[1], &high[1]);
    search->low = (struct vec2){fmax(low[0].a, low[1].a), fmax(low[0].b, low[1].b)};
    search->high =
        (struct vec2){fmin(high[0].a, high[1].a), fmin(high[0].b, high[1].b)};
    return search->low.a <= search->high.a + search->tolerance &&
           search->low.b <= search->high.b + search->tolerance;
}

enum status shape_meets(const struct shape *p, const struct shape *q, double tolerance,
                        bool *meets, struct vec2 *where)
{
    struct search search = {.p = p, .q = q, .tolerance = tolerance};

    *meets = false;
    if (where)
        *where = search.where;
    if (!(tolerance >= 0) || !isfinite(tolerance))
        return STATUS_SIZE;
    if (p->count == 0 || q->count == 0 || !share_bounds(&search))
        return STATUS_OK;
    try_ends(&search, p);
    try_ends(&search, q);
    try_between(&search);
    try_within(&search, p);
    try_within(&search, q);
    *meets = search.found;
    if (where)
        *where = search.where;
    return STATUS_OK;
}
