/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Solid stretches of a grid line. Faces, corners and tops that lie exactly on the line
 * make "inside or outside" ambiguous there, so the shape is looked at a tolerance above
 * and below, and the union is taken: that closes the shape. Which edges bound a
 * stretch is decided on the shifted line, but where they bound it is computed on the
 * line itself (or at the end of the edge, if it does not get there), so positions do
 * not suffer from the shift. */

#include "mesh/shape.h"

#include <stdlib.h>

#include "mesh/shape_internal.h"
#include "shared/mem.h"

/* Of the tolerance: a solid stretch narrower than this on the shifted line is a film
 * without thickness, left between faces that coincide. */
#define FILM 1e-3

/* One outline crossing the shifted line, seen going along it. */
struct crossing {
    double shifted; /* position on the shifted line */
    double exact;   /* position on the line itself */
    int enters;     /* +1 into the outline, -1 out of it */
    bool is_cut;
};

struct crossings {
    struct crossing *items; /* [capacity] */
    size_t capacity;
    size_t count;
};

struct scan {
    const struct shape *shape;
    int axis;
    double at;
    double tolerance;
    struct crossings crossings;
    struct span *spans; /* [capacity], the caller's */
    size_t capacity;
    size_t count;
};

static enum status cross_edge(struct scan *scan, struct edge edge, bool is_cut,
                              double line)
{
    struct crossings *list = &scan->crossings;
    void *array = list->items;
    struct rise rises[RISES_MAX];
    enum status status;
    int n;

    if (scan->axis == 1)
        edge = edge_transposed(&edge);
    n = edge_rises(&edge, rises);
    status =
        mem_grow(&array, &list->capacity, list->count + RISES_MAX, sizeof *list->items);
    list->items = array;
    if (status != STATUS_OK)
        return status;
    for (int i = 0; i < n; i++) {
        bool down = rises[i].b1 < rises[i].b0;
        if (!rise_crosses(&rises[i], line))
            continue;
        /* anticlockwise: the inside is to the right of an edge that goes down */
        list->items[list->count++] = (struct crossing){
            rise_position(&rises[i], line), rise_position(&rises[i], scan->at),
            down == (scan->axis == 0) ? 1 : -1, is_cut};
    }
    return STATUS_OK;
}

static int compare_crossings(const void *p, const void *q)
{
    const struct crossing *c = p;
    const struct crossing *d = q;

    if (c->shifted != d->shifted)
        return c->shifted < d->shifted ? -1 : 1;
    return (c->exact > d->exact) - (c->exact < d->exact);
}

static enum status add_span(struct scan *scan, const struct crossing *from,
                            const struct crossing *to)
{
    void *array = scan->spans;
    struct span span = {from->exact, to->exact};
    enum status status;

    if (!(to->shifted - from->shifted > FILM * scan->tolerance) && scan->tolerance > 0)
        return STATUS_OK;
    if (span.low > span.high) /* gone before it reaches the line */
        span = (struct span){from->shifted, to->shifted};
    status = mem_grow(&array, &scan->capacity, scan->count + 1, sizeof *scan->spans);
    scan->spans = array;
    if (status == STATUS_OK)
        scan->spans[scan->count++] = span;
    return status;
}

/* Walks along the shifted line, counting how deep in the body and in cuts. */
static enum status walk(struct scan *scan)
{
    const struct crossing *items = scan->crossings.items;
    enum status status = STATUS_OK;
    int body = 0;
    int cut = 0;

    for (size_t i = 0; i + 1 < scan->crossings.count && status == STATUS_OK; i++) {
        body += items[i].is_cut ? 0 : items[i].enters;
        cut += items[i].is_cut ? items[i].enters : 0;
        if (body > 0 && cut <= 0)
            status = add_span(scan, &items[i], &items[i + 1]);
    }
    return status;
}

static enum status scan_line(struct scan *scan, double line)
{
    enum status status = STATUS_OK;

    scan->crossings.count = 0;
    for (size_t o = 0; o < scan->shape->count; o++) {
        const struct outline *outline = &scan->shape->outlines[o];
        for (size_t k = 0; k < outline->count && status == STATUS_OK; k++)
            status = cross_edge(scan, outline->edges[k], o > 0, line);
    }
    if (status != STATUS_OK || scan->crossings.count == 0)
        return status;
    qsort(scan->crossings.items, scan->crossings.count, sizeof *scan->crossings.items,
          compare_crossings);
    return walk(scan);
}

static int compare_spans(const void *p, const void *q)
{
    const struct span *s = p;
    const struct span *t = q;

    if (s->low != t->low)
        return s->low < t->low ? -1 : 1;
    return (s->high > t->high) - (s->high < t->high);
}

static size_t merge(struct span *spans, size_t count, double tolerance)
{
    size_t kept = 0;

    if (count > 0)
        qsort(spans, count, sizeof *spans, compare_spans);
    for (size_t i = 0; i < count; i++)
        if (kept > 0 && spans[i].low <= spans[kept - 1].high + tolerance)
            spans[kept - 1].high = fmax(spans[kept - 1].high, spans[i].high);
        else
            spans[kept++] = spans[i];
    return kept;
}

enum status shape_spans(const struct shape *shape, int axis, double at,
                        double tolerance, struct span **spans, size_t *capacity,
                        size_t *count)
{
    struct scan scan = {shape, axis, at, tolerance, {0}, *spans, *capacity, 0};
    enum status status;

    *count = 0;
    if ((axis != 0 && axis != 1) || !isfinite(at) ||
        !(tolerance >= 0 && isfinite(tolerance)))
        return STATUS_SIZE;
    status = scan_line(&scan, at - tolerance);
    if (status == STATUS_OK && tolerance > 0)
        status = scan_line(&scan, at + tolerance);
    *spans = scan.spans;
    *capacity = scan.capacity;
    if (status == STATUS_OK)
        *count = merge(scan.spans, scan.count, tolerance);
    mem_free(scan.crossings.items);
    return status;
}
