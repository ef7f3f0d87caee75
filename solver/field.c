/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Every node a point needs gets its fit when first asked for (field_window.h,
 * local_fit.h); the corners of the point's cell that see it are blended. */

#include "solver/field.h"

#include <math.h>

#include "mesh/medium.h"
#include "shared/mem.h"
#include "solver/field_sight.h"
#include "solver/field_window.h"
#include "solver/local_fit.h"

enum { SEARCH = 4 }; /* how far to look for a free node */

struct field {
    const struct grid *grid;
    const double *phi;
    const double *part_value;
    int *fit_of;            /* [nb*na] index into fits, -1 not made yet */
    struct local_fit *fits; /* [fit_count] */
    int fit_count;
    size_t fit_capacity;
    double *work;                 /* scratch of local_fit_make */
    struct turned_radial *radial; /* NULL in a planar plane */
    struct field_sight sight;
};

static enum status fits_grow(struct field *field)
{
    void *array = field->fits;
    enum status status = mem_grow(&array, &field->fit_capacity,
                                  (size_t)field->fit_count + 1, sizeof *field->fits);
    field->fits = array;
    return status;
}

/* The fit of a node, made when first asked for. */
static enum status fit_of_node(struct field *field, int node,
                               const struct local_fit **fit)
{
    *fit = NULL;
    if (field->fit_of[node] < 0) {
        struct field_window window;
        enum status status = fits_grow(field);
        if (status != STATUS_OK)
            return status;
        field_window_collect(field->grid, field->phi, field->part_value, node, &window);
        /* The term that is not harmonic pays beside surfaces only: in the open it costs
         * accuracy where cells are large (five times on the axis of the model plates). */
        const bool exact = window.mixed || !window.bounded;
        status =
            local_fit_make(field->radial, window.points, window.count, window.centre,
                           exact, field->work, &field->fits[field->fit_count]);
        if (status != STATUS_OK)
            return status;
        field->fit_of[node] = field->fit_count++;
    }
    *fit = &field->fits[field->fit_of[node]];
    return STATUS_OK;
}

/* Blending weight 1 at t = 0, 0 at t = 1, with two continuous derivatives. */
static double fade(double t, double *slope)
{
    *slope = -30.0 * t * t * (1.0 - t) * (1.0 - t);
    return 1.0 - t * t * t * (10.0 + t * (6.0 * t - 15.0));
}

struct blend {
    double weight; /* sum of the weights */
    struct vec2 weight_slope;
    double value; /* weighted sum */
    struct vec2 value_slope;
};

static void blend_add(struct blend *blend, const struct local_fit *fit, struct vec2 at,
                      double weight, struct vec2 slope)
{
    struct vec2 gradient;
    const double value = local_fit_value(fit, at, &gradient);
    blend->weight += weight;
    blend->weight_slope = vec2_add(blend->weight_slope, slope);
    blend->value += weight * value;
    blend->value_slope.a += slope.a * value + weight * gradient.a;
    blend->value_slope.b += slope.b * value + weight * gradient.b;
}

/* Adds corner (ci, cj) of cell (i, j). On a surface the gradients alone are blended: where
 * it runs close to a fixed node the slopes of the weights have no bound. */
static enum status blend_corner(struct field *field, struct vec2 at, int i, int j,
                                int ci, int cj, bool surface, struct blend *blend)
{
    const struct grid *grid = field->grid;
    const int node = (j + cj) * grid->na + i + ci;
    const struct local_fit *fit;
    enum status status = fit_of_node(field, node, &fit);
    if (status != STATUS_OK)
        return status;
    const double ha = grid->a[i + 1] - grid->a[i], hb = grid->b[j + 1] - grid->b[j];
    double da, db;
    const double ta = (at.a - grid->a[i]) / ha, tb = (at.b - grid->b[j]) / hb;
    const double wa = fade(ci ? 1.0 - ta : ta, &da), wb = fade(cj ? 1.0 - tb : tb, &db);
    const struct vec2 slope = {(ci ? -da : da) / ha * wb, (cj ? -db : db) / hb * wa};
    blend_add(blend, fit, at, wa * wb, surface ? (struct vec2){0.0, 0.0} : slope);
    return STATUS_OK;
}

/* Medium of a point in cell (i, j): MEDIUM_MIXED if any may speak for it. */
static int medium_of(const struct grid *grid, struct vec2 at, int i, int j)
{
    if (grid->medium == NULL)
        return MEDIUM_MIXED;
    const int cell = grid->medium[j * (grid->na - 1) + i];
    if (cell != MEDIUM_MIXED)
        return cell == MEDIUM_CONDUCTOR ? MEDIUM_MIXED : cell;
    const int medium = plane_medium_at(grid->plane, at);
    return medium == MEDIUM_CONDUCTOR ? MEDIUM_MIXED : medium;
}

/* True if the fit of a node may speak for a point in a medium. */
static bool speaks(const struct grid *grid, int node, int medium)
{
    return window_passes(grid, node) &&
           (medium == MEDIUM_MIXED || grid->node_medium[node] == medium);
}

/* The free node nearest to a point whose cell has no free corner; -1 if none is near. */
static int nearest_free(const struct grid *grid, struct vec2 at, int i, int j,
                        int medium)
{
    int best = -1;
    double shortest = (double)INFINITY;
    for (int dj = -SEARCH; dj <= SEARCH + 1; dj++)
        for (int di = -SEARCH; di <= SEARCH + 1; di++) {
            const int p = i + di, q = j + dj;
            if (p < 0 || q < 0 || p >= grid->na || q >= grid->nb ||
                !speaks(grid, q * grid->na + p, medium))
                continue;
            double d = hypot(grid->a[p] - at.a, grid->b[q] - at.b);
            if (d < shortest) {
                shortest = d;
                best = q * grid->na + p;
            }
        }
    return best;
}

/* Weights below this are those of a corner at the far end of the cell. */
#define WEIGHT_FLOOR 1e-12

static enum status blend_cell(struct field *field, struct vec2 at, int i, int j,
                              bool surface, struct field_value *value)
{
    struct blend blend = {0};
    bool use[4];
    const int medium = medium_of(field->grid, at, i, j);
    enum status status = field_sight_corners(&field->sight, field->grid, at, i, j, use);
    for (int c = 0; c < 4 && status == STATUS_OK; c++)
        if (use[c] &&
            speaks(field->grid, (j + (c >> 1)) * field->grid->na + i + (c & 1), medium))
            status = blend_corner(field, at, i, j, c & 1, c >> 1, surface, &blend);
    if (status != STATUS_OK)
        return status;
    if (blend.weight < WEIGHT_FLOOR) {
        const int node = nearest_free(field->grid, at, i, j, medium);
        const struct local_fit *fit = NULL;
        if (node < 0)
            return STATUS_SIZE;
        status = fit_of_node(field, node, &fit);
        if (status == STATUS_OK)
            value->potential = local_fit_value(fit, at, &value->gradient);
        return status;
    }
    value->potential = blend.value / blend.weight;
    value->gradient = vec2_scale(
        vec2_sub(blend.value_slope, vec2_scale(blend.weight_slope, value->potential)),
        1.0 / blend.weight);
    return STATUS_OK;
}

/* Conductor the point lies in, -1 if none; only cells with a conductor are looked at. */
static int part_at(const struct field *field, struct vec2 at, int i, int j)
{
    const struct grid *grid = field->grid;
    bool near = false;
    for (int c = 0; c < 4 && !near; c++) {
        const int node = (j + (c >> 1)) * grid->na + i + (c & 1);
        near = grid->owner[node] >= 0;
        for (int leg = 0; leg < LEG_COUNT && !near; leg++)
            near = grid_cut(grid, node, (enum leg)leg) != NULL;
    }
    if (!near)
        return -1;
    for (size_t p = 0; p < grid->plane->part_count; p++)
        if (part_is_conductor(&grid->plane->parts[p]) &&
            shape_contains(&grid->plane->parts[p].shape, at, 0.0))
            return (int)p;
    return -1;
}

/* Folds a point into the region; signs of the potential and of its slopes. */
static bool fold_point(const struct grid *grid, struct vec2 *at, struct vec2 *flip,
                       double *sign)
{
    const struct plane *plane = grid->plane;
    double *coordinate[2] = {&at->a, &at->b}, *mirrored[2] = {&flip->a, &flip->b};
    const double low[2] = {grid->a[0], grid->b[0]};
    const double high[2] = {grid->a[grid->na - 1], grid->b[grid->nb - 1]};
    *flip = (struct vec2){1.0, 1.0};
    *sign = 1.0;
    for (int axis = 0; axis < 2; axis++) {
        double *x = coordinate[axis];
        const double slack = 1e-9 * (high[axis] - low[axis]);
        const bool below = *x<low[axis], above = *x> high[axis];
        if (!below && !above)
            continue;
        const double edge = below ? low[axis] : high[axis];
        const enum side_index side = (enum side_index)(2 * axis + (above ? 1 : 0));
        if (fabs(*x - edge) <= slack) {
            *x = edge;
        } else if (window_side_reflects(grid, side) &&
                   fabs(*x - edge) <= high[axis] - low[axis]) {
            *x = 2.0 * edge - *x;
            *mirrored[axis] = -1.0;
            if (plane->sides[side].kind == SIDE_ANTIMIRROR)
                *sign = -*sign;
        } else {
            return false;
        }
    }
    return isfinite(at->a) && isfinite(at->b);
}

bool field_covers(const struct grid *grid, struct vec2 at)
{
    struct vec2 flip;
    double sign;
    return fold_point(grid, &at, &flip, &sign);
}

static enum status evaluate(struct field *field, struct vec2 at, bool surface,
                            struct field_value *value)
{
    const struct grid *grid = field->grid;
    struct vec2 flip;
    double sign;
    *value = (struct field_value){0.0, {0.0, 0.0}, -1};
    if (!fold_point(grid, &at, &flip, &sign))
        return STATUS_SIZE;
    const int i = grid_interval(grid->a, grid->na, at.a);
    const int j = grid_interval(grid->b, grid->nb, at.b);
    const int part = surface ? -1 : part_at(field, at, i, j);
    if (part >= 0) {
        value->part = part;
        value->potential = sign * field->part_value[part];
        return STATUS_OK;
    }
    enum status status = blend_cell(field, at, i, j, surface, value);
    value->potential *= sign;
    value->gradient.a *= sign * flip.a;
    value->gradient.b *= sign * flip.b;
    return status;
}

enum status field_at(struct field *field, struct vec2 at, struct field_value *value)
{
    return evaluate(field, at, false, value);
}

enum status field_at_surface(struct field *field, struct vec2 at,
                             struct field_value *value)
{
    return evaluate(field, at, true, value);
}

/* True if the three-point slopes of a node may reach across an interface. */
static bool beside_interface(const struct grid *grid, int node)
{
    const int i = node % grid->na, j = node / grid->na;
    const int own = grid->node_medium[node];
    return own == MEDIUM_BORDER || (i > 0 && grid->node_medium[node - 1] != own) ||
           (i + 1 < grid->na && grid->node_medium[node + 1] != own) ||
           (j > 0 && grid->node_medium[node - grid->na] != own) ||
           (j + 1 < grid->nb && grid->node_medium[node + grid->na] != own);
}

enum status field_mend_nodes(struct field *field, double *gradient_a,
                             double *gradient_b)
{
    const struct grid *grid = field->grid;
    enum status status = STATUS_OK;
    for (int n = 0;
         grid->node_medium != NULL && n < grid->na * grid->nb && status == STATUS_OK;
         n++) {
        struct field_value value;
        const struct vec2 at = {grid->a[n % grid->na], grid->b[n / grid->na]};
        if (grid->owner[n] != OWNER_FREE || !beside_interface(grid, n))
            continue;
        status = field_at(field, at, &value);
        if (status == STATUS_SIZE) { /* a sliver that no node of its medium sees */
            status = STATUS_OK;
            continue;
        }
        gradient_a[n] = value.gradient.a;
        gradient_b[n] = value.gradient.b;
    }
    return status;
}

static enum status allocate(struct field *field)
{
    const size_t nodes = (size_t)field->grid->na * (size_t)field->grid->nb;
    field->fit_of = MEM_NEW(nodes, int);
    field->work = MEM_NEW(local_fit_work(WINDOW_POINTS), double);
    if (field->fit_of == NULL || field->work == NULL)
        return STATUS_MEMORY;
    for (size_t n = 0; n < nodes; n++)
        field->fit_of[n] = -1;
    if (!plane_kind_is_turned(field->grid->plane->kind))
        return STATUS_OK;
    field->radial = MEM_NEW(1, struct turned_radial);
    if (field->radial == NULL)
        return STATUS_MEMORY;
    turned_radial_init(field->radial);
    return STATUS_OK;
}

enum status field_create(const struct grid *grid, const double *phi,
                         const double *part_value, struct field **field)
{
    *field = NULL;
    struct field *made = MEM_NEW(1, struct field);
    if (made == NULL)
        return STATUS_MEMORY;
    made->grid = grid;
    made->phi = phi;
    made->part_value = part_value;
    enum status status = allocate(made);
    if (status != STATUS_OK)
        field_destroy(&made);
    *field = made;
    return status;
}

void field_destroy(struct field **field)
{
    struct field *f = *field;
    if (f == NULL)
        return;
    mem_free(f->fit_of);
    mem_free(f->fits);
    mem_free(f->work);
    mem_free(f->radial);
    field_sight_free(&f->sight);
    mem_free(f);
    *field = NULL;
}
