/* SPDX-License-Identifier: GPL-3.0-or-later */

/* What the grid cannot take, found before anything is solved: two conductors at
 * different potential with no free node between them, and a free space that touches no
 * fixed potential. */

#include "mesh/grid_internal.h"

#include "shared/mem.h"

static const char *owner_name(const struct grid *grid, int owner)
{
    static const char *const sides[SIDE_COUNT] = {
        "the low side of the first axis", "the high side of the first axis",
        "the low side of the second axis", "the high side of the second axis"};
    if (owner >= 0)
        return grid->plane->parts[owner].name;
    return sides[OWNER_SIDE - owner];
}

/* Two owners may face each other across one interval if they are the same conductor
 * or stand at the same potential. */
static bool may_touch(const struct grid *grid, int p, int q)
{
    const struct plane *plane = grid->plane;
    if (p == q || (p < 0 && q < 0))
        return true;
    if (p < 0 || q < 0) { /* a part and a side: walls are judged by geometry_check */
        int part = p < 0 ? q : p, side = OWNER_SIDE - (p < 0 ? p : q);
        const struct side *s = &plane->sides[side];
        const struct linear *potential = &plane->parts[part].potential;
        return s->kind != SIDE_WALL ||
               linear_equal(&s->from, potential, plane->supply_count) ||
               !linear_equal(&s->from, &s->to, plane->supply_count);
    }
    return linear_equal(&plane->parts[p].potential, &plane->parts[q].potential,
                        plane->supply_count);
}

static void report_gap(const struct grid *grid, int p, int q, int i, int j,
                       struct messages *messages)
{
    const struct plane *plane = grid->plane;
    const int part = p >= 0 ? p : q;
    messages_add(messages, SEVERITY_ERROR, plane->parts[part].place,
                 "the gap between \"%s\" and \"%s\" near (%.6g, %.6g) mm in %s is too "
                 "thin for the grid: expected at least one free node between them, "
                 "found none; raise the fineness or widen the gap",
                 owner_name(grid, p), owner_name(grid, q), grid->a[i] * 1e3,
                 grid->b[j] * 1e3, plane_kind_key(plane->kind));
}

/* What the leg from node towards its neighbour ends on, as seen from node. */
static int leg_end(const struct grid *grid, int node, enum leg leg, int neighbour)
{
    if (grid->owner[node] != OWNER_FREE)
        return grid->owner[node];
    const struct cut *cut = grid_cut(grid, node, leg);
    return cut != NULL ? cut->part : grid->owner[neighbour];
}

static bool leg_is_blocked(const struct grid *grid, int node, int i, int j,
                           enum leg leg, struct messages *messages)
{
    const bool east = leg == LEG_EAST;
    const int neighbour = east ? node + 1 : node + grid->na;
    const int here = leg_end(grid, node, leg, neighbour);
    const int there = leg_end(grid, neighbour, east ? LEG_WEST : LEG_SOUTH, node);
    if (here == OWNER_FREE || there == OWNER_FREE || may_touch(grid, here, there))
        return false;
    report_gap(grid, here, there, i, j, messages);
    return true;
}

static enum status judge_gaps(const struct grid *grid, struct messages *messages)
{
    enum { MOST = 3 };
    int found = 0;
    for (int j = 0; j < grid->nb && found < MOST; j++)
        for (int i = 0; i < grid->na && found < MOST; i++) {
            int node = j * grid->na + i;
            if (i + 1 < grid->na)
                found += leg_is_blocked(grid, node, i, j, LEG_EAST, messages);
            if (j + 1 < grid->nb)
                found += leg_is_blocked(grid, node, i, j, LEG_NORTH, messages);
        }
    return found > 0 ? STATUS_INPUT : STATUS_OK;
}

/* Neighbour of a node, or -1 beyond the region. */
static int neighbour_of(const struct grid *grid, int node, enum leg leg)
{
    const int i = node % grid->na, j = node / grid->na;
    switch (leg) {
    case LEG_WEST:
        return i > 0 ? node - 1 : -1;
    case LEG_EAST:
        return i + 1 < grid->na ? node + 1 : -1;
    case LEG_SOUTH:
        return j > 0 ? node - grid->na : -1;
    case LEG_NORTH:
    case LEG_COUNT:
        break;
    }
    return j + 1 < grid->nb ? node + grid->na : -1;
}

/* Visits the free space that holds `start`; true if it touches a fixed potential. */
static bool space_is_fixed(const struct grid *grid, int start, char *seen, int *stack)
{
    bool fixed = false;
    int depth = 0;
    stack[depth++] = start;
    seen[start] = 1;
    while (depth > 0) {
        const int node = stack[--depth];
        for (int leg = 0; leg < LEG_COUNT; leg++) {
            const int next = neighbour_of(grid, node, (enum leg)leg);
            if (next < 0)
                continue;
            if (grid_cut(grid, node, (enum leg)leg) != NULL ||
                grid->owner[next] != OWNER_FREE) {
                fixed = true;
            } else if (!seen[next]) {
                seen[next] = 1;
                stack[depth++] = next;
            }
        }
    }
    return fixed;
}

static enum status judge_spaces(const struct grid *grid, struct messages *messages)
{
    const int nodes = grid->na * grid->nb;
    enum status status = STATUS_OK;
    char *seen = MEM_NEW((size_t)nodes, char);
    int *stack = MEM_NEW((size_t)nodes, int);
    if (seen == NULL || stack == NULL)
        status = STATUS_MEMORY;
    for (int n = 0; n < nodes && status == STATUS_OK; n++) {
        if (grid->owner[n] != OWNER_FREE || seen[n] ||
            space_is_fixed(grid, n, seen, stack))
            continue;
        messages_add(
            messages, SEVERITY_ERROR, grid->plane->place,
            "the free space round (%.6g, %.6g) mm in %s touches no fixed "
            "potential, so its potential is undetermined; expected a part or a "
            "wall on its border",
            grid->a[n % grid->na] * 1e3, grid->b[n / grid->na] * 1e3,
            plane_kind_key(grid->plane->kind));
        status = STATUS_INPUT;
    }
    if (status == STATUS_OK && grid->free_count == 0) {
        messages_add(messages, SEVERITY_ERROR, grid->plane->place,
                     "%s has no free space: its parts fill the region",
                     plane_kind_key(grid->plane->kind));
        status = STATUS_INPUT;
    }
    mem_free(seen);
    mem_free(stack);
    return status;
}

enum status grid_judge(const struct grid *grid, struct messages *messages)
{
    enum status status = judge_gaps(grid, messages);
    return status == STATUS_OK ? judge_spaces(grid, messages) : status;
}
