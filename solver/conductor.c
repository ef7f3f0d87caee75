/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Every part starts as a group of its own; two parts that touch merge their groups. The
 * group number is the least index of its parts, so groups come out in order. */

#include "solver/conductor.h"

#include <math.h>
#include <string.h>

#include "shared/mem.h"

#define TOUCH 1e-9 /* of the longer side of the region */
#define REACH 1e-9 /* of the shorter side, for touching a side */

static bool boxes_apart(const struct shape *p, const struct shape *q, double tolerance)
{
    struct vec2 p_low, p_high, q_low, q_high;
    shape_bounds(p, &p_low, &p_high);
    shape_bounds(q, &q_low, &q_high);
    return p_low.a > q_high.a + tolerance || q_low.a > p_high.a + tolerance ||
           p_low.b > q_high.b + tolerance || q_low.b > p_high.b + tolerance;
}

static bool may_join(const struct plane *plane, const struct part *p,
                     const struct part *q)
{
    return part_is_conductor(p) && part_is_conductor(q) && p->kind != PART_FLOATING &&
           q->kind != PART_FLOATING &&
           linear_equal(&p->potential, &q->potential, plane->supply_count);
}

static enum status do_join(const struct plane *plane, const struct part *p,
                           const struct part *q, bool *join)
{
    const double tolerance =
        TOUCH * fmax(plane->high.a - plane->low.a, plane->high.b - plane->low.b);
    *join = false;
    if (!may_join(plane, p, q) || boxes_apart(&p->shape, &q->shape, tolerance))
        return STATUS_OK;
    return shape_meets(&p->shape, &q->shape, tolerance, join, NULL);
}

static void merge(size_t *group, size_t parts, size_t p, size_t q)
{
    const size_t keep = group[p] < group[q] ? group[p] : group[q];
    const size_t lose = group[p] < group[q] ? group[q] : group[p];
    for (size_t k = 0; k < parts; k++)
        if (group[k] == lose)
            group[k] = keep;
}

static enum status group_parts(const struct plane *plane, size_t *group)
{
    enum status status = STATUS_OK;
    bool join;
    for (size_t q = 0; q < plane->part_count; q++)
        group[q] = q;
    for (size_t q = 1; q < plane->part_count; q++)
        for (size_t p = 0; p < q && status == STATUS_OK; p++) {
            if (group[p] == group[q])
                continue;
            status = do_join(plane, &plane->parts[p], &plane->parts[q], &join);
            if (status == STATUS_OK && join)
                merge(group, plane->part_count, p, q);
        }
    return status;
}

/* What the sides that a part touches say of its conductor. */
static void meet_sides(const struct plane *plane, const struct part *part,
                       struct conductor *conductor)
{
    struct vec2 low, high;
    shape_bounds(&part->shape, &low, &high);
    const double slack =
        REACH * fmin(plane->high.a - plane->low.a, plane->high.b - plane->low.b);
    const bool at[SIDE_COUNT] = {
        low.a <= plane->low.a + slack, high.a >= plane->high.a - slack,
        low.b <= plane->low.b + slack, high.b >= plane->high.b - slack};
    for (int s = 0; s < SIDE_COUNT; s++) {
        const enum side_kind kind = plane->sides[s].kind;
        const bool axis = s == SIDE_B_LOW && plane_kind_is_turned(plane->kind);
        if (at[s] && (kind == SIDE_WALL || kind == SIDE_ANTIMIRROR))
            conductor->held = true;
        if (at[s] && kind == SIDE_MIRROR && !axis)
            conductor->cut[s / 2] = true;
    }
}

/* Turns group numbers into indices of conductors. */
static void list_groups(const struct plane *plane, struct conductors *c)
{
    for (size_t p = 0; p < plane->part_count; p++) {
        const bool conducts = part_is_conductor(&plane->parts[p]);
        if (conducts && c->of_part[p] == p) {
            c->items[c->count] = (struct conductor){.first = p};
            c->of_part[p] = c->count++;
        } else if (conducts) {
            c->of_part[p] = c->of_part[c->of_part[p]]; /* an earlier part */
        }
    }
    for (size_t p = 0; p < plane->part_count; p++) {
        if (!part_is_conductor(&plane->parts[p])) {
            c->of_part[p] = c->count;
            continue;
        }
        struct conductor *conductor = &c->items[c->of_part[p]];
        conductor->parts++;
        meet_sides(plane, &plane->parts[p], conductor);
    }
}

enum status conductors_find(const struct plane *plane, struct conductors *conductors)
{
    memset(conductors, 0, sizeof *conductors);
    conductors->items = MEM_NEW(plane->part_count, struct conductor);
    conductors->of_part = MEM_NEW(plane->part_count, size_t);
    enum status status = conductors->items != NULL && conductors->of_part != NULL
                             ? STATUS_OK
                             : STATUS_MEMORY;
    if (status == STATUS_OK)
        status = group_parts(plane, conductors->of_part);
    if (status == STATUS_OK)
        list_groups(plane, conductors);
    else
        conductors_free(conductors);
    return status;
}

void conductors_free(struct conductors *conductors)
{
    mem_free(conductors->items);
    mem_free(conductors->of_part);
    memset(conductors, 0, sizeof *conductors);
}
