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
/* Softening of the distance there, in radii. Against 0.5 it takes a tenth more unknowns on
 * the bench filter and leaves a sixth of the uncertainty of kick and detuning. */
#define ROUND_SOFTENING 0.25
/* A part is thin below this share of the gap. */
#define THIN_SHARE 0.1
/* Open sides: the far wall stands at least this many larger sides of the region behind
 * them. Its influence falls as 1/R^2 where the parts carry no charge together: on the
 * charge of a wire pair 2e-4 at 10 sides, 2e-6 at 100, 2e-8 at 1000 (measured). */
#define OPEN_DISTANCE 1000.0
/* Growth of the intervals on the way there at fineness 1, level 0: a factor of two in
 * two lines, 6.6 lines per factor of ten, for which what is near still sets the error
 * (3.3 lines per factor of ten: up to four times the error at the border; 10: no less). */
#define OPEN_GROWTH 0.34657359027997264

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

/* A corner of a flat end on the axis of a turned plane is none: the face goes on beyond. */
static bool is_flat_on_axis(const struct plane *plane, const struct key_point *point)
{
    return plane_kind_is_turned(plane->kind) && plane->low.b == 0.0 &&
           point->at.b == 0.0 && point->free_angle <= 1.5 * PI * (1.0 + 1e-6);
}

static struct key_line key_of_point(const struct plane *plane,
                                    const struct key_point *point, double at, bool thin,
                                    double crowding)
{
    struct key_line key = {at, 0.0, 0.0, crowding};
    if (point->radius == 0.0) {
        if (!is_flat_on_axis(plane, point))
            key.power = corner_power(point->free_angle, thin);
    } else if (isfinite(point->radius)) {
        key.power = ROUND_POWER;
        key.softening = ROUND_SOFTENING * point->radius;
    }
    return key;
}

static enum status keys_of_part(const struct plane *plane, const struct part *part,
                                double gap, double crowding, struct key_list lists[2])
{
    const bool thin = part_is_conductor(part) && is_thin(part, gap);
    struct key_point *points = NULL;
    size_t count = 0;
    enum status status = shape_key_points(&part->shape, &points, &count);
    for (size_t k = 0; k < count && status == STATUS_OK; k++) {
        const struct key_point *p = &points[k];
        if (p->snap_a)
            status =
                key_append(&lists[0], key_of_point(plane, p, p->at.a, thin, crowding));
        if (p->snap_b && status == STATUS_OK)
            status =
                key_append(&lists[1], key_of_point(plane, p, p->at.b, thin, crowding));
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
static enum status keys_of_plane(const struct plane *plane, const double *crowding,
                                 double gap, struct key_list lists[2])
{
    enum status status = STATUS_OK;
    for (size_t k = 0; k < plane->part_count && status == STATUS_OK; k++)
        status = keys_of_part(plane, &plane->parts[k], gap,
                              crowding != NULL ? crowding[k] : 1.0, lists);
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

/* Lines beyond the open ends of one axis. */
static enum status extend_axis(struct grid *grid, int axis,
                               const struct grid_request *request)
{
    const struct plane *plane = grid->plane;
    const struct vec2 size = vec2_sub(plane->high, plane->low);
    const struct line_tail tail = {OPEN_GROWTH / request->fineness,
                                   OPEN_DISTANCE * fmax(size.a, size.b),
                                   request->reach > 0.0 ? request->reach : 1.0};
    double **lines = axis == 0 ? &grid->a : &grid->b;
    int *count = axis == 0 ? &grid->na : &grid->nb;
    enum status status = STATUS_OK;
    for (int high = 0; high < 2 && status == STATUS_OK; high++)
        if (plane->sides[2 * axis + high].kind == SIDE_OPEN)
            status = lines_extend(lines, count, high == 1, tail, request->level);
    return status;
}

static enum status place_axis(struct grid *grid, int axis, const struct key_list *keys,
                              struct line_spacing spacing,
                              const struct grid_request *request)
{
    const struct plane *plane = grid->plane;
    const double merge = GRID_MERGE * grid_scale(grid);
    const bool first = axis == 0;
    enum status status = lines_build(
        first ? plane->low.a : plane->low.b, first ? plane->high.a : plane->high.b,
        keys->items, keys->count, spacing, merge, request->level,
        first ? &grid->a : &grid->b, first ? &grid->na : &grid->nb);
    return status == STATUS_OK ? extend_axis(grid, axis, request) : status;
}

enum status grid_place_lines(struct grid *grid, const struct grid_request *request)
{
    const double scale = grid_scale(grid), fineness = request->fineness;
    struct key_list lists[2] = {{0}, {0}};
    double gap = scale;
    enum status status = reference_length(grid, &gap);
    const struct line_spacing spacing = {scale / (LINES_PER_SIDE * fineness),
                                         gap / (LINES_PER_GAP * fineness), gap};
    if (status == STATUS_OK)
        status = keys_of_plane(grid->plane, request->crowding, gap, lists);
    for (int axis = 0; axis < 2 && status == STATUS_OK; axis++)
        status = place_axis(grid, axis, &lists[axis], spacing, request);
    mem_free(lists[0].items);
    mem_free(lists[1].items);
    return status;
}
