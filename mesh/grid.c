/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Building a grid reads top to bottom: lines, size, nodes and cuts, judgement. */

#include "mesh/grid_internal.h"

#include <limits.h>
#include <math.h>
#include <string.h>

#include "shared/mem.h"

/* Bytes per node a direct solve of the plane takes: 1450 measured at one million
 * unknowns, less below. */
#define SOLVE_BYTES_PER_NODE 1500.0

static const struct place NOWHERE = {0, 0};

static enum status too_large(const struct grid *grid, struct messages *messages,
                             double bytes, double budget)
{
    messages_add(messages, SEVERITY_ERROR, grid->plane->place,
                 "%s: the grid would have %d by %d nodes and its solve take about "
                 "%.1f GB; expected at most %.1f GB (grid: {memory: ...}); lower the "
                 "fineness or check the sizes of the parts",
                 plane_kind_key(grid->plane->kind), grid->na, grid->nb, bytes / 1e9,
                 budget / 1e9);
    return STATUS_INPUT;
}

static enum status check_size(const struct grid *grid, double budget,
                              struct messages *messages)
{
    double nodes = (double)grid->na * grid->nb;
    double bytes = nodes * SOLVE_BYTES_PER_NODE;
    if (!(bytes <= budget) || nodes > INT_MAX / 8)
        return too_large(grid, messages, bytes, budget);
    return STATUS_OK;
}

enum status grid_build(const struct plane *plane, double fineness, int level,
                       double memory_budget, struct grid *grid,
                       struct messages *messages)
{
    memset(grid, 0, sizeof *grid);
    grid->plane = plane;
    enum status status = grid_place_lines(grid, fineness, level);
    if (status == STATUS_SIZE) {
        messages_add(messages, SEVERITY_ERROR, plane->place,
                     "%s: a grid of fineness %g does not fit this region",
                     plane_kind_key(plane->kind), fineness);
        status = STATUS_INPUT;
    }
    if (status == STATUS_OK)
        status = check_size(grid, memory_budget, messages);
    if (status == STATUS_OK)
        status = grid_classify(grid);
    if (status == STATUS_OK)
        status = grid_judge(grid, messages);
    if (status == STATUS_MEMORY)
        messages_add(messages, SEVERITY_ERROR, NOWHERE,
                     "%s: not enough memory for the grid", plane_kind_key(plane->kind));
    if (status != STATUS_OK)
        grid_free(grid);
    return status;
}

const struct cut *grid_cut(const struct grid *grid, int node, enum leg leg)
{
    int row = node / grid->na;
    int low = grid->first_cut[row], high = grid->first_cut[row + 1];
    while (low < high) {
        int middle = (low + high) / 2;
        const struct cut *cut = &grid->cuts[middle];
        if (cut->node < node || (cut->node == node && cut->leg < leg))
            low = middle + 1;
        else
            high = middle;
    }
    if (low == grid->first_cut[row + 1])
        return NULL;
    const struct cut *cut = &grid->cuts[low];
    return cut->node == node && cut->leg == leg ? cut : NULL;
}

int grid_interval(const double *lines, int count, double x)
{
    int low = 0, high = count - 1;
    while (high - low > 1) {
        int middle = (low + high) / 2;
        if (lines[middle] <= x)
            low = middle;
        else
            high = middle;
    }
    return low;
}

void grid_free(struct grid *grid)
{
    mem_free(grid->a);
    mem_free(grid->b);
    mem_free(grid->owner);
    mem_free(grid->cuts);
    mem_free(grid->first_cut);
    memset(grid, 0, sizeof *grid);
}
