/* SPDX-License-Identifier: GPL-3.0-or-later */

/* A shape as a value: memory, copies, motions, bounds and membership. Membership is
 * decided by signed distances to the outlines. Where two outlines run within tolerance
 * of each other (a cut flush with a face, two cuts side by side) the distances cannot
 * tell a corner from a film without thickness; there the neighbourhood is looked at,
 * and a film counts as free. */

#include "mesh/shape.h"

#include "mesh/shape_internal.h"
#include "shared/constants.h"
#include "shared/mem.h"

#define RING 64 /* directions looked at around a doubtful point */

enum status shape_new(struct shape *shape, size_t edges)
{
    *shape = (struct shape){0};
    shape->outlines = MEM_NEW(1, struct outline);
    if (!shape->outlines)
        return STATUS_MEMORY;
    shape->count = 1;
    shape->outlines[0].edges = MEM_NEW(edges, struct edge);
    if (!shape->outlines[0].edges) {
        shape_free(shape);
        return STATUS_MEMORY;
    }
    return STATUS_OK;
}

void shape_free(struct shape *shape)
{
    for (size_t o = 0; o < shape->count; o++)
        mem_free(shape->outlines[o].edges);
    mem_free(shape->outlines);
    *shape = (struct shape){0};
}

static enum status outline_copy(struct outline *to, const struct outline *from)
{
    *to = (struct outline){MEM_NEW(from->count, struct edge), from->count};
    if (!to->edges) {
        to->count = 0;
        return STATUS_MEMORY;
    }
    for (size_t k = 0; k < from->count; k++)
        to->edges[k] = from->edges[k];
    return STATUS_OK;
}

enum status shape_copy(struct shape *to, const struct shape *from)
{
    *to = (struct shape){0};
    if (from->count == 0)
        return STATUS_OK;
    to->outlines = MEM_NEW(from->count, struct outline);
    if (!to->outlines)
        return STATUS_MEMORY;
    to->count = from->count;
    for (size_t o = 0; o < from->count; o++)
        if (outline_copy(&to->outlines[o], &from->outlines[o]) != STATUS_OK) {
            shape_free(to);
            return STATUS_MEMORY;
        }
    return STATUS_OK;
}

enum status shape_cut(struct shape *shape, const struct shape *cut)
{
    struct outline copy;
    struct outline *grown;

    if (shape->count == 0 || cut->count != 1)
        return STATUS_SIZE;
    if (outline_copy(&copy, &cut->outlines[0]) != STATUS_OK)
        return STATUS_MEMORY;
    grown = mem_resize(shape->outlines, shape->count + 1, sizeof *grown);
    if (!grown) {
        mem_free(copy.edges);
        return STATUS_MEMORY;
    }
    shape->outlines = grown;
    shape->outlines[shape->count++] = copy;
    return STATUS_OK;
}

/* 0 - x rather than -x: no negative zeros. */
static struct vec2 mirrored(struct vec2 p, bool flip_a, bool flip_b)
{
    return (struct vec2){flip_a ? 0 - p.a : p.a, flip_b ? 0 - p.b : p.b};
}

/* Mirroring turns the sense of rotation and walking backwards turns it again, so the
 * sweep of an arc stays. */
static void outline_reverse(struct outline *outline)
{
    size_t n = outline->count;

    for (size_t k = 0; k < n / 2; k++) {
        struct edge swap = outline->edges[k];
        outline->edges[k] = outline->edges[n - 1 - k];
        outline->edges[n - 1 - k] = swap;
    }
    for (size_t k = 0; k < n; k++) {
        struct vec2 swap = outline->edges[k].start;
        outline->edges[k].start = outline->edges[k].end;
        outline->edges[k].end = swap;
    }
}

void shape_mirror(struct shape *shape, bool flip_a, bool flip_b)
{
    for (size_t o = 0; o < shape->count; o++) {
        struct outline *outline = &shape->outlines[o];
        for (size_t k = 0; k < outline->count; k++) {
            struct edge *edge = &outline->edges[k];
            edge->start = mirrored(edge->start, flip_a, flip_b);
            edge->end = mirrored(edge->end, flip_a, flip_b);
            edge->centre = mirrored(edge->centre, flip_a, flip_b);
        }
        if (flip_a != flip_b)
            outline_reverse(outline);
    }
}

static struct vec2 turned(struct vec2 p, double c, double s, struct vec2 about)
{
    struct vec2 d = vec2_sub(p, about);

    return (struct vec2){about.a + (c * d.a - s * d.b), about.b + (s * d.a + c * d.b)};
}

void shape_turn(struct shape *shape, double angle, struct vec2 about)
{
    double c = cos(angle);
    double s = sin(angle);

    /* quarter turns must keep faces parallel to the axes */
    if (fabs(c) < 1e-15 || fabs(s) < 1e-15) {
        c = round(c);
        s = round(s);
    }
    for (size_t o = 0; o < shape->count; o++)
        for (size_t k = 0; k < shape->outlines[o].count; k++) {
            struct edge *edge = &shape->outlines[o].edges[k];
            edge->start = turned(edge->start, c, s, about);
            edge->end = turned(edge->end, c, s, about);
            if (edge->radius > 0)
                edge->centre = turned(edge->centre, c, s, about);
        }
}

void shape_bounds(const struct shape *shape, struct vec2 *low, struct vec2 *high)
{
    *low = *high = (struct vec2){0, 0};
    for (size_t k = 0; shape->count > 0 && k < shape->outlines[0].count; k++) {
        struct vec2 l;
        struct vec2 h;
        edge_bounds(&shape->outlines[0].edges[k], &l, &h);
        *low = k == 0 ? l : (struct vec2){fmin(low->a, l.a), fmin(low->b, l.b)};
        *high = k == 0 ? h : (struct vec2){fmax(high->a, h.a), fmax(high->b, h.b)};
    }
}

double shape_scale(const struct shape *shape)
{
    struct vec2 low;
    struct vec2 high;

    shape_bounds(shape, &low, &high);
    return fmax(fmax(fabs(low.a), fabs(high.a)), fmax(fabs(low.b), fabs(high.b)));
}

bool outline_inside(const struct outline *outline, struct vec2 p)
{
    bool inside = false;

    for (size_t k = 0; k < outline->count; k++) {
        struct rise rises[RISES_MAX];
        int n = edge_rises(&outline->edges[k], rises);
        for (int i = 0; i < n; i++)
            if (rise_crosses(&rises[i], p.b) && rise_position(&rises[i], p.b) > p.a)
                inside = !inside;
    }
    return inside;
}

double outline_depth(const struct outline *outline, struct vec2 p)
{
    double distance = (double)INFINITY;

    for (size_t k = 0; k < outline->count; k++) {
        struct vec2 d = vec2_sub(p, edge_nearest(&outline->edges[k], p));
        distance = fmin(distance, vec2_length(d));
    }
    return outline_inside(outline, p) ? distance : -distance;
}

double outline_turn(const struct outline *outline, size_t k)
{
    struct vec2 in = edge_direction(&outline->edges[k], 1);
    struct vec2 out = edge_direction(&outline->edges[outline_next(outline, k)], 0);

    return atan2(vec2_cross(in, out), vec2_dot(in, out));
}

/* Chords by the shoelace rule about the first point, plus the segment beyond each
 * chord. */
double outline_area(const struct outline *outline)
{
    double twice = 0;

    for (size_t k = 0; k < outline->count; k++) {
        const struct edge *edge = &outline->edges[k];
        twice += vec2_cross(vec2_sub(edge->start, outline->edges[0].start),
                            vec2_sub(edge->end, outline->edges[0].start));
        twice += edge->radius * edge->radius * (edge->sweep - sin(edge->sweep));
    }
    return 0.5 * twice;
}

bool shape_solid(const struct shape *shape, struct vec2 p)
{
    if (shape->count == 0 || !outline_inside(&shape->outlines[0], p))
        return false;
    for (size_t o = 1; o < shape->count; o++)
        if (outline_inside(&shape->outlines[o], p))
            return false;
    return true;
}

static bool solid_around(const struct shape *shape, struct vec2 p, double radius)
{
    for (int k = 0; k < RING; k++) {
        double angle = 2 * PI * (k + 0.5) / RING;
        struct vec2 d = {radius * cos(angle), radius * sin(angle)};
        if (shape_solid(shape, vec2_add(p, d)))
            return true;
    }
    return false;
}

bool shape_contains(const struct shape *shape, struct vec2 p, double tolerance)
{
    int touching = 0;

    if (!isfinite(p.a) || !isfinite(p.b))
        return false;
    for (size_t o = 0; o < shape->count; o++) {
        double depth = outline_depth(&shape->outlines[o], p);
        depth = o == 0 ? depth : -depth;
        if (!(depth >= -tolerance))
            return false;
        touching += depth <= tolerance;
    }
    if (touching >= 2 && tolerance > 0)
        return solid_around(shape, p, 2 * tolerance);
    return shape->count > 0;
}
