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

static double solve_bytes(const struct grid *grid)
{
    return (double)grid->na * grid->nb * SOLVE_BYTES_PER_NODE;
}

static enum status check_size(const struct grid *grid, double budget,
                              struct messages *messages)
{
    const double nodes = (double)grid->na * grid->nb, bytes = solve_bytes(grid);
    if ((budget > 0.0 && !(bytes <= budget)) || nodes > INT_MAX / 8)
        return too_large(grid, messages, bytes, budget);
    return STATUS_OK;
}

enum status grid_build(const struct plane *plane, const struct grid_request *request,
                       struct grid *grid, struct messages *messages)
{
    memset(grid, 0, sizeof *grid);
    grid->plane = plane;
    enum status status = grid_place_lines(grid, request);
    if (status == STATUS_SIZE) {
        messages_add(messages, SEVERITY_ERROR, plane->place,
                     "%s: a grid of fineness %g does not fit this region",
                     plane_kind_key(plane->kind), request->fineness);
        status = STATUS_INPUT;
    }
    if (status == STATUS_OK)
        status = check_size(grid, request->memory_budget, messages);
    if (status == STATUS_OK)
        status = grid_classify(grid);
    if (status == STATUS_OK)
        status = grid_fill_media(grid);
    if (status == STATUS_OK && grid->medium != NULL)
        status = grid_find_faces(grid);
    if (status == STATUS_OK)
        status = grid_judge(grid, messages);
    if (status == STATUS_MEMORY)
        messages_add(messages, SEVERITY_ERROR, NOWHERE,
                     "%s: not enough memory for the grid", plane_kind_key(plane->kind));
    if (status != STATUS_OK)
        grid_free(grid);
    return status;
}

enum status grid_estimate(const struct plane *plane, const struct grid_request *request,
                          double *bytes)
{
    struct grid grid = {.plane = plane};
    enum status status = grid_place_lines(&grid, request);
    *bytes = status == STATUS_OK ? solve_bytes(&grid) : 0.0;
    grid_free(&grid);
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

const struct face *grid_face(const struct grid *grid, int node, enum leg leg)
{
    if (grid->first_face == NULL)
        return NULL;
    const int row = node / grid->na;
    int low = grid->first_face[row], high = grid->first_face[row + 1];
    while (low < high) {
        const int middle = (low + high) / 2;
        const struct face *face = &grid->faces[middle];
        if (face->node == node && face->leg == leg)
            return face;
        if (face->node < node || (face->node == node && face->leg < leg))
            low = middle + 1;
        else
            high = middle;
    }
    return NULL;
}

/* Patch nodes run first along the link, then across it from low to high. */
int face_patch(const struct grid *grid, const struct face *face, int k)
{
    const bool east = face->leg == LEG_EAST;
    const int along = k % 2, across = k / 2 - 1;
    const int i = face->node % grid->na + (east ? along : across);
    const int j = face->node / grid->na + (east ? across : along);
    return i >= 0 && j >= 0 && i < grid->na && j < grid->nb ? j * grid->na + i : -1;
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
    mem_free(grid->medium);
    mem_free(grid->node_medium);
    mem_free(grid->coefficient);
    mem_free(grid->faces);
    mem_free(grid->first_face);
    memset(grid, 0, sizeof *grid);
}
