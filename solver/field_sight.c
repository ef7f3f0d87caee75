/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Corners joined by whole edges of the cell form groups. One group speaks as a whole;
 * where there are more, a corner sees a point if one of the two ways to it along the
 * axes is clear of conductors. */

#include "solver/field_sight.h"

#include <math.h>

#include "shared/mem.h"
#include "solver/field_window.h"

/* True if no conductor lies on the grid-parallel stretch from t0 to t1 of the line
 * b = at (axis 0) or a = at (axis 1). */
static enum status line_is_clear(struct field_sight *sight, const struct plane *plane,
                                 int axis, double at, double t0, double t1, bool *clear)
{
    const double low = fmin(t0, t1), high = fmax(t0, t1);
    const double size = vec2_length(vec2_sub(plane->high, plane->low));
    enum status status = STATUS_OK;
    *clear = true;
    for (size_t p = 0; p < plane->part_count && *clear && status == STATUS_OK; p++) {
        size_t count = 0;
        if (!part_is_conductor(&plane->parts[p]))
            continue;
        status = shape_spans(&plane->parts[p].shape, axis, at, 1e-11 * size,
                             &sight->spans, &sight->span_capacity, &count);
        for (size_t k = 0; k < count && *clear; k++)
            *clear = sight->spans[k].low > high || sight->spans[k].high < low;
    }
    return status;
}

/* True if a corner sees the point along one of the two grid-parallel ways round. */
static enum status corner_sees(struct field_sight *sight, const struct plane *plane,
                               struct vec2 corner, struct vec2 at, bool *sees)
{
    bool first, second = false;
    enum status status =
        line_is_clear(sight, plane, 0, corner.b, corner.a, at.a, &first);
    if (status == STATUS_OK && first)
        status = line_is_clear(sight, plane, 1, at.a, corner.b, at.b, &second);
    *sees = first && second;
    if (status != STATUS_OK || *sees)
        return status;
    status = line_is_clear(sight, plane, 1, corner.a, corner.b, at.b, &first);
    if (status == STATUS_OK && first)
        status = line_is_clear(sight, plane, 0, at.b, corner.a, at.a, &second);
    *sees = first && second;
    return status;
}

/* Corners of cell (i, j) that are joined by whole edges of the cell carry the same
 * group number; group[c] is -1 at fixed corners. Returns the number of groups. */
static int corner_groups(const struct grid *grid, int i, int j, int group[4])
{
    static const int edges[4][2] = {{0, 1}, {2, 3}, {0, 2}, {1, 3}};
    static const enum leg legs[4] = {LEG_EAST, LEG_EAST, LEG_NORTH, LEG_NORTH};
    int node[4], count = 0;
    for (int c = 0; c < 4; c++) {
        node[c] = (j + (c >> 1)) * grid->na + i + (c & 1);
        group[c] = window_passes(grid, node[c]) ? c : -1;
    }
    for (int pass = 0; pass < 2; pass++)
        for (int e = 0; e < 4; e++) {
            const int p = edges[e][0], q = edges[e][1];
            if (group[p] < 0 || group[q] < 0 ||
                grid_cut(grid, node[p], legs[e]) != NULL)
                continue;
            const int least = group[p] < group[q] ? group[p] : group[q];
            group[p] = group[q] = least;
        }
    for (int c = 0; c < 4; c++)
        count += group[c] == c;
    return count;
}

enum status field_sight_corners(struct field_sight *sight, const struct grid *grid,
                                struct vec2 at, int i, int j, bool use[4])
{
    int group[4];
    const int groups = corner_groups(grid, i, j, group);
    bool any = false;
    for (int c = 0; c < 4; c++)
        use[c] = group[c] >= 0;
    if (groups < 2)
        return STATUS_OK;
    bool sees[4] = {false, false, false, false};
    for (int c = 0; c < 4; c++) {
        const struct vec2 corner = {grid->a[i + (c & 1)], grid->b[j + (c >> 1)]};
        enum status status =
            use[c] ? corner_sees(sight, grid->plane, corner, at, &sees[c]) : STATUS_OK;
        if (status != STATUS_OK)
            return status;
        any = any || sees[c];
    }
    for (int c = 0; c < 4 && any; c++)
        use[c] = sees[c];
    return STATUS_OK;
}

void field_sight_free(struct field_sight *sight)
{
    mem_free(sight->spans);
    *sight = (struct field_sight){0};
}
