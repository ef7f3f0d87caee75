/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Kinds of nodes and cut legs. Every grid line asks every part for its solid stretches
 * on that line (shape_spans): nodes inside a stretch belong to the part, and a stretch
 * that begins between two nodes cuts the leg there at its exact place. */

#include "mesh/grid_internal.h"

#include <math.h>
#include <stdlib.h>

#include "shared/mem.h"

struct span_buffer {
    struct span *items;
    size_t capacity;
    size_t count;
};

struct cut_list {
    struct cut *items; /* [count] */
    size_t count;
    size_t capacity;
};

/* One grid line seen as a one-dimensional row of nodes. */
struct row {
    const double *lines; /* [count] coordinates of the nodes along the row */
    int count;
    int first;  /* index of the first node in the plane's arrays */
    int stride; /* from one node of the row to the next */
    enum leg backward, forward;
};

static struct row row_of(const struct grid *grid, int axis, int k)
{
    if (axis == 0)
        return (struct row){grid->a, grid->na, k * grid->na, 1, LEG_WEST, LEG_EAST};
    return (struct row){grid->b, grid->nb, k, grid->na, LEG_SOUTH, LEG_NORTH};
}

static enum status spans_of_row(const struct grid *grid, const struct part *part,
                                int axis, int k, struct span_buffer *buffer)
{
    double at = axis == 0 ? grid->b[k] : grid->a[k];
    return shape_spans(&part->shape, axis, at, GRID_TOLERANCE * grid_scale(grid),
                       &buffer->items, &buffer->capacity, &buffer->count);
}

static void own_span(struct grid *grid, const struct row *row, struct span span,
                     int part)
{
    const double tolerance = 10.0 * GRID_TOLERANCE * grid_scale(grid);
    int k = grid_interval(row->lines, row->count, span.low - tolerance);
    for (; k < row->count && row->lines[k] <= span.high + tolerance; k++) {
        int *owner = &grid->owner[row->first + k * row->stride];
        if (row->lines[k] >= span.low - tolerance && *owner < 0)
            *owner = part;
    }
}

static enum status cut_append(struct cut_list *list, struct cut cut)
{
    void *array = list->items;
    enum status status =
        mem_grow(&array, &list->capacity, list->count + 1, sizeof *list->items);
    list->items = array;
    if (status == STATUS_OK)
        list->items[list->count++] = cut;
    return status;
}

/* Cuts made by the two ends of one solid stretch. */
static enum status cut_span(const struct grid *grid, const struct row *row,
                            struct span span, int part, struct cut_list *cuts)
{
    enum status status = STATUS_OK;
    int k = grid_interval(row->lines, row->count, span.low);
    int node = row->first + k * row->stride;
    if (span.low > row->lines[0] && grid->owner[node] == OWNER_FREE &&
        span.low < row->lines[k + 1])
        status = cut_append(
            cuts, (struct cut){node, row->forward, part, span.low - row->lines[k]});

    k = grid_interval(row->lines, row->count, span.high) + 1;
    node = row->first + k * row->stride;
    if (status == STATUS_OK && span.high < row->lines[row->count - 1] &&
        grid->owner[node] == OWNER_FREE && span.high > row->lines[k - 1])
        status = cut_append(
            cuts, (struct cut){node, row->backward, part, row->lines[k] - span.high});
    return status;
}

enum pass { PASS_OWN, PASS_CUT };

/* One sweep over all lines of one axis and all parts. */
static enum status sweep(struct grid *grid, int axis, enum pass pass,
                         struct span_buffer *buffer, struct cut_list *cuts)
{
    const struct plane *plane = grid->plane;
    const int rows = axis == 0 ? grid->nb : grid->na;
    enum status status = STATUS_OK;
    for (int k = 0; k < rows && status == STATUS_OK; k++) {
        const struct row row = row_of(grid, axis, k);
        for (size_t p = 0; p < plane->part_count && status == STATUS_OK; p++) {
            if (!part_is_conductor(&plane->parts[p]))
                continue;
            status = spans_of_row(grid, &plane->parts[p], axis, k, buffer);
            for (size_t s = 0; s < buffer->count && status == STATUS_OK; s++) {
                if (pass == PASS_OWN)
                    own_span(grid, &row, buffer->items[s], (int)p);
                else
                    status = cut_span(grid, &row, buffer->items[s], (int)p, cuts);
            }
        }
    }
    return status;
}

static void own_side(struct grid *grid, enum side_index side)
{
    if (grid->plane->sides[side].kind == SIDE_MIRROR)
        return;
    const bool along_b = side == SIDE_A_LOW || side == SIDE_A_HIGH;
    const int count = along_b ? grid->nb : grid->na;
    const int fixed = side == SIDE_A_HIGH   ? grid->na - 1
                      : side == SIDE_B_HIGH ? grid->nb - 1
                                            : 0;
    for (int k = 0; k < count; k++) {
        int node = along_b ? k * grid->na + fixed : fixed * grid->na + k;
        if (grid->owner[node] == OWNER_FREE)
            grid->owner[node] = OWNER_SIDE - (int)side;
    }
}

static int compare_cuts(const void *p, const void *q)
{
    const struct cut *a = p, *b = q;
    if (a->node != b->node)
        return a->node < b->node ? -1 : 1;
    if (a->leg != b->leg)
        return a->leg < b->leg ? -1 : 1;
    return (a->length > b->length) - (a->length < b->length);
}

/* Sorts and keeps the shortest cut of every leg. */
static void cuts_tidy(struct cut_list *cuts)
{
    if (cuts->count == 0)
        return;
    qsort(cuts->items, cuts->count, sizeof *cuts->items, compare_cuts);
    size_t kept = 1;
    for (size_t k = 1; k < cuts->count; k++) {
        const struct cut *last = &cuts->items[kept - 1];
        if (cuts->items[k].node != last->node || cuts->items[k].leg != last->leg)
            cuts->items[kept++] = cuts->items[k];
    }
    cuts->count = kept;
}

static enum status index_cuts(struct grid *grid)
{
    grid->first_cut = MEM_NEW((size_t)grid->nb + 1, int);
    if (grid->first_cut == NULL)
        return STATUS_MEMORY;
    size_t k = 0;
    for (int j = 0; j <= grid->nb; j++) {
        while (k < grid->cut_count && grid->cuts[k].node < j * grid->na)
            k++;
        grid->first_cut[j] = (int)k;
    }
    return STATUS_OK;
}

enum status grid_classify(struct grid *grid)
{
    const int nodes = grid->na * grid->nb;
    struct span_buffer buffer = {0};
    struct cut_list cuts = {0};
    grid->owner = MEM_NEW((size_t)nodes, int);
    enum status status = grid->owner != NULL ? STATUS_OK : STATUS_MEMORY;
    for (int n = 0; n < nodes && status == STATUS_OK; n++)
        grid->owner[n] = OWNER_FREE;
    for (int axis = 0; axis < 2 && status == STATUS_OK; axis++)
        status = sweep(grid, axis, PASS_OWN, &buffer, &cuts);
    for (int side = 0; side < SIDE_COUNT && status == STATUS_OK; side++)
        own_side(grid, (enum side_index)side);
    for (int axis = 0; axis < 2 && status == STATUS_OK; axis++)
        status = sweep(grid, axis, PASS_CUT, &buffer, &cuts);
    cuts_tidy(&cuts);
    grid->cuts = cuts.items; /* takes ownership */
    grid->cut_count = cuts.count;
    if (status == STATUS_OK)
        status = index_cuts(grid);
    for (int n = 0; n < nodes && status == STATUS_OK; n++)
        grid->free_count += grid->owner[n] == OWNER_FREE;
    mem_free(buffer.items);
    return status;
}
