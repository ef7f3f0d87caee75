/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Where grid lines must lie and how they crowd: every key point of a part gives a key
 * line to each axis it asks for, with the power of its corner. */

#include "mesh/grid_internal.h"

#include <math.h>

#include "mesh/gap.h"
#include "mesh/lines.h"
#include "shared/constants.h"
#include "shared/mem.h"

/* At fineness 1, level 0: lines per gap at one gap's distance from a corner, and lines
 * per smaller side of the region where nothing asks for more. With three levels the
 * model plates of the benchmark come out at about 0.1 million unknowns. */
#define LINES_PER_GAP  5.5
#define LINES_PER_SIDE 10.0
/* Power at round surfaces: between a corner and none (measured with the model
 * plates). */
#define ROUND_POWER 0.6
/* Softening of the distance there, in radii. */
#define ROUND_SOFTENING 0.5
/* A part is thin below this share of the gap. */
#define THIN_SHARE 0.1

struct key_list {
    struct key_line *items; /* [count] */
    size_t count;
    size_t capacity;
};

static enum status key_append(struct key_list *list, struct key_line key)
{
    void *array = list->items;
    enum status status =
        mem_grow(&array, &list->capacity, list->count + 1, sizeof *list->items);
    list->items = array;
    if (status == STATUS_OK)
        list->items[list->count++] = key;
    return status;
}

/* The two corners of a thin edge act as one edge on all but the smallest scales: they
 * get its power. Cracks and inner corners keep their own. */
static double corner_power(double free_angle, bool thin)
{
    return lines_corner_power(thin && free_angle > PI ? 2.0 * PI : free_angle);
}

static bool is_thin(const struct part *part, double gap)
{
    struct vec2 low, high;
    shape_bounds(&part->shape, &low, &high);
    return fmin(high.a - low.a, high.b - low.b) < THIN_SHARE * gap;
}

static struct key_line key_of_point(const struct key_point *point, double at, bool thin)
{
    struct key_line key = {at, 0.0, 0.0};
    if (point->radius == 0.0) {
        key.power = corner_power(point->free_angle, thin);
    } else if (isfinite(point->radius)) {
        key.power = ROUND_POWER;
        key.softening = ROUND_SOFTENING * point->radius;
    }
    return key;
}

static enum status keys_of_part(const struct part *part, double gap,
                                struct key_list lists[2])
{
    const bool thin = is_thin(part, gap);
    struct key_point *points = NULL;
    size_t count = 0;
    enum status status = shape_key_points(&part->shape, &points, &count);
    for (size_t k = 0; k < count && status == STATUS_OK; k++) {
        const struct key_point *p = &points[k];
        if (p->snap_a)
            status = key_append(&lists[0], key_of_point(p, p->at.a, thin));
        if (p->snap_b && status == STATUS_OK)
            status = key_append(&lists[1], key_of_point(p, p->at.b, thin));
    }
    mem_free(points);
    return status;
}

double grid_scale(const struct grid *grid)
{
    struct vec2 size = vec2_sub(grid->plane->high, grid->plane->low);
    return fmin(size.a, size.b);
}

/* Corners on the border of the region count too: plates often end there. */
static enum status keys_of_plane(const struct plane *plane, double gap,
                                 struct key_list lists[2])
{
    enum status status = STATUS_OK;
    for (size_t k = 0; k < plane->part_count && status == STATUS_OK; k++)
        status = keys_of_part(&plane->parts[k], gap, lists);
    return status;
}

/* The gap at the filter's centre along one axis; a missing half is taken to be like the
 * other. INFINITY if there is none or the centre is solid. */
static enum status gap_along(const struct plane *plane, int axis, double tolerance,
                             double *gap)
{
    double below, above;
    enum status status = gap_at(plane, axis, (struct vec2){0.0, 0.0}, &below, &above);
    const double half = fmin(above, -below);
    *gap = isfinite(half) && half > tolerance ? 2.0 * half : (double)INFINITY;
    return status;
}

/* The length that sets how fine the grid must be: the narrower gap at the centre, or half
 * the region where there is none. */
static enum status reference_length(const struct grid *grid, double *length)
{
    const double scale = grid_scale(grid), tolerance = GRID_TOLERANCE * scale;
    double gap_a, gap_b;
    enum status status = gap_along(grid->plane, 0, tolerance, &gap_a);
    if (status == STATUS_OK)
        status = gap_along(grid->plane, 1, tolerance, &gap_b);
    if (status == STATUS_OK)
        *length = fmin(fmin(gap_a, gap_b), 0.5 * scale);
    return status;
}

enum status grid_place_lines(struct grid *grid, double fineness, int level)
{
    const struct plane *plane = grid->plane;
    const double scale = grid_scale(grid), merge = GRID_MERGE * scale;
    struct key_list lists[2] = {{0}, {0}};
    double gap = scale;
    enum status status = reference_length(grid, &gap);
    const struct line_spacing spacing = {scale / (LINES_PER_SIDE * fineness),
                                         gap / (LINES_PER_GAP * fineness), gap};
    if (status == STATUS_OK)
        status = keys_of_plane(plane, gap, lists);
    if (status == STATUS_OK)
        status =
            lines_build(plane->low.a, plane->high.a, lists[0].items, lists[0].count,
                        spacing, merge, level, &grid->a, &grid->na);
    if (status == STATUS_OK)
        status =
            lines_build(plane->low.b, plane->high.b, lists[1].items, lists[1].count,
                        spacing, merge, level, &grid->b, &grid->nb);
    mem_free(lists[0].items);
    mem_free(lists[1].items);
    return status;
}
