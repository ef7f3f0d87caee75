/* SPDX-License-Identifier: GPL-3.0-or-later */

/* A fit sees the nodes it can reach from its own node along whole legs within a window
 * of a few lines, and the surface points where those legs end; what lies behind a thin
 * part is not seen. Node indices may run over a symmetry side: they are folded back,
 * with the sign of the symmetry. */

#include "solver/field.h"

#include <math.h>
#include <string.h>

#include "shared/mem.h"
#include "solver/harmonic_fit.h"
#include "solver/stencil.h"

enum {
    WINDOW = 3, /* lines seen to each side */
    WINDOW_SIDE = 2 * WINDOW + 1,
    WINDOW_NODES = WINDOW_SIDE * WINDOW_SIDE,
    POINTS_MAX = WINDOW_NODES * LEG_COUNT + 1, /* nodes and the ends of their legs */
    SEARCH = 4                                 /* how far to look for a free node */
};

struct field {
    const struct grid *grid;
    const double *phi;
    const double *part_value;
    int *fit_of;           /* [nb*na] index into fits, -1 not made yet */
    struct harmonic *fits; /* [fit_count] */
    int fit_count;
    size_t fit_capacity;
    double *work;       /* scratch of harmonic_fit */
    struct span *spans; /* scratch of line_is_clear */
    size_t span_capacity;
};

/* A node of the region or of one of its reflections. */
struct folded {
    int node; /* -1 outside */
    double a, b;
    double sign; /* of the potential */
};

static bool side_reflects(const struct grid *grid, enum side_index side)
{
    return grid->plane->sides[side].kind != SIDE_WALL;
}

/* Folds index k of an axis; *at becomes its coordinate. False outside the region. */
static bool fold_axis(const struct grid *grid, bool second, int *k, double *at,
                      double *sign)
{
    const double *lines = second ? grid->b : grid->a;
    const int last = (second ? grid->nb : grid->na) - 1;
    const enum side_index low = second ? SIDE_B_LOW : SIDE_A_LOW;
    const enum side_index high = second ? SIDE_B_HIGH : SIDE_A_HIGH;
    if (*k >= 0 && *k <= last) {
        *at = lines[*k];
        return true;
    }
    const enum side_index side = *k < 0 ? low : high;
    const int mirrored = *k < 0 ? -*k : 2 * last - *k;
    if (!side_reflects(grid, side) || mirrored < 0 || mirrored > last)
        return false;
    const double axis = lines[*k < 0 ? 0 : last];
    *at = 2.0 * axis - lines[mirrored];
    if (grid->plane->sides[side].kind == SIDE_ANTIMIRROR)
        *sign = -*sign;
    *k = mirrored;
    return true;
}

static struct folded fold_node(const struct grid *grid, int i, int j)
{
    struct folded f = {-1, 0.0, 0.0, 1.0};
    if (fold_axis(grid, false, &i, &f.a, &f.sign) &&
        fold_axis(grid, true, &j, &f.b, &f.sign))
        f.node = j * grid->na + i;
    return f;
}

/* Free nodes, and nodes of an antimirror side: the field goes on behind it. */
static bool passable(const struct grid *grid, int node)
{
    const int owner = grid->owner[node];
    return owner == OWNER_FREE ||
           (owner < OWNER_FREE &&
            grid->plane->sides[OWNER_SIDE - owner].kind == SIDE_ANTIMIRROR);
}

/* Window round a node: which nodes are reached, and the points collected. */
struct view {
    const struct field *field;
    int i, j; /* centre */
    char seen[WINDOW_NODES];
    int stack[WINDOW_NODES];
    int depth;
    struct fit_point points[POINTS_MAX];
    int count;
};

static double weight_of(int di, int dj)
{
    return 1.0 / (1.0 + di * di + dj * dj);
}

static void view_add(struct view *view, double a, double b, double value, double weight)
{
    view->points[view->count++] = (struct fit_point){{a, b}, value, weight};
}

static void view_push(struct view *view, int di, int dj)
{
    const int slot = (dj + WINDOW) * WINDOW_SIDE + di + WINDOW;
    if (di < -WINDOW || di > WINDOW || dj < -WINDOW || dj > WINDOW || view->seen[slot])
        return;
    view->seen[slot] = 1;
    view->stack[view->depth++] = slot;
}

/* The leg of a reached node, seen in the direction (si, sj) of the unfolded plane. In a
 * reflected part of the plane the leg of the folded node points the other way. */
static void view_leg(struct view *view, const struct folded *from, int di, int dj,
                     int si, int sj)
{
    static const enum leg legs[2][2] = {{LEG_WEST, LEG_EAST}, {LEG_SOUTH, LEG_NORTH}};
    const struct grid *grid = view->field->grid;
    const struct folded to = fold_node(grid, view->i + di + si, view->j + dj + sj);
    if (to.node < 0)
        return;
    const int axis = sj != 0;
    const int step = to.node - from->node;
    const enum leg leg = legs[axis][step > 0];
    const double weight = weight_of(di + si, dj + sj);
    const struct cut *cut = grid_cut(grid, from->node, leg);
    if (cut != NULL) {
        view_add(view, from->a + si * cut->length, from->b + sj * cut->length,
                 from->sign * view->field->part_value[cut->part], weight);
    } else if (passable(grid, to.node)) {
        view_push(view, di + si, dj + sj);
    } else {
        view_add(view, to.a, to.b, to.sign * view->field->phi[to.node], weight);
    }
}

static void view_collect(struct view *view)
{
    const struct field *field = view->field;
    view_push(view, 0, 0);
    while (view->depth > 0) {
        const int slot = view->stack[--view->depth];
        const int di = slot % WINDOW_SIDE - WINDOW, dj = slot / WINDOW_SIDE - WINDOW;
        const struct folded at = fold_node(field->grid, view->i + di, view->j + dj);
        view_add(view, at.a, at.b, at.sign * field->phi[at.node], weight_of(di, dj));
        view_leg(view, &at, di, dj, -1, 0);
        view_leg(view, &at, di, dj, 1, 0);
        view_leg(view, &at, di, dj, 0, -1);
        view_leg(view, &at, di, dj, 0, 1);
    }
}

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
                               const struct harmonic **fit)
{
    const struct grid *grid = field->grid;
    *fit = NULL;
    if (field->fit_of[node] < 0) {
        struct view view = {.field = field, .i = node % grid->na, .j = node / grid->na};
        enum status status = fits_grow(field);
        if (status != STATUS_OK)
            return status;
        view_collect(&view);
        const struct vec2 centre = {grid->a[view.i], grid->b[view.j]};
        status = harmonic_fit(view.points, view.count, centre, field->work,
                              &field->fits[field->fit_count]);
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

static void blend_add(struct blend *blend, const struct harmonic *fit, struct vec2 at,
                      double weight, struct vec2 slope)
{
    struct vec2 gradient;
    const double value = harmonic_value(fit, at, &gradient);
    blend->weight += weight;
    blend->weight_slope = vec2_add(blend->weight_slope, slope);
    blend->value += weight * value;
    blend->value_slope.a += slope.a * value + weight * gradient.a;
    blend->value_slope.b += slope.b * value + weight * gradient.b;
}

/* True if no part lies on the grid-parallel stretch from t0 to t1 of the line b = at
 * (axis 0) or a = at (axis 1). */
static enum status line_is_clear(struct field *field, int axis, double at, double t0,
                                 double t1, bool *clear)
{
    const struct plane *plane = field->grid->plane;
    const double low = fmin(t0, t1), high = fmax(t0, t1);
    const double size = vec2_length(vec2_sub(plane->high, plane->low));
    enum status status = STATUS_OK;
    *clear = true;
    for (size_t p = 0; p < plane->part_count && *clear && status == STATUS_OK; p++) {
        size_t count = 0;
        status = shape_spans(&plane->parts[p].shape, axis, at, 1e-11 * size,
                             &field->spans, &field->span_capacity, &count);
        for (size_t k = 0; k < count && *clear; k++)
            *clear = field->spans[k].low > high || field->spans[k].high < low;
    }
    return status;
}

/* True if a corner sees the point along one of the two grid-parallel ways round. */
static enum status corner_sees(struct field *field, struct vec2 corner, struct vec2 at,
                               bool *sees)
{
    bool first, second = false;
    enum status status = line_is_clear(field, 0, corner.b, corner.a, at.a, &first);
    if (status == STATUS_OK && first)
        status = line_is_clear(field, 1, at.a, corner.b, at.b, &second);
    *sees = first && second;
    if (status != STATUS_OK || *sees)
        return status;
    status = line_is_clear(field, 1, corner.a, corner.b, at.b, &first);
    if (status == STATUS_OK && first)
        status = line_is_clear(field, 0, at.b, corner.a, at.a, &second);
    *sees = first && second;
    return status;
}

/* Free corners of cell (i, j) that are joined by whole edges of the cell carry the same
 * group number; group[c] is -1 at fixed corners. Returns the number of groups. */
static int corner_groups(const struct grid *grid, int i, int j, int group[4])
{
    static const int edges[4][2] = {{0, 1}, {2, 3}, {0, 2}, {1, 3}};
    static const enum leg legs[4] = {LEG_EAST, LEG_EAST, LEG_NORTH, LEG_NORTH};
    int node[4], count = 0;
    for (int c = 0; c < 4; c++) {
        node[c] = (j + (c >> 1)) * grid->na + i + (c & 1);
        group[c] = passable(grid, node[c]) ? c : -1;
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

/* Which corners of a cell speak for a point: all free ones, or, where a thin part runs
 * through the cell, those that see the point. */
static enum status choose_corners(struct field *field, struct vec2 at, int i, int j,
                                  bool use[4])
{
    const struct grid *grid = field->grid;
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
            use[c] ? corner_sees(field, corner, at, &sees[c]) : STATUS_OK;
        if (status != STATUS_OK)
            return status;
        any = any || sees[c];
    }
    for (int c = 0; c < 4 && any; c++)
        use[c] = sees[c];
    return STATUS_OK;
}

/* Adds corner (ci, cj) of cell (i, j). */
static enum status blend_corner(struct field *field, struct vec2 at, int i, int j,
                                int ci, int cj, struct blend *blend)
{
    const struct grid *grid = field->grid;
    const int node = (j + cj) * grid->na + i + ci;
    const struct harmonic *fit;
    enum status status = fit_of_node(field, node, &fit);
    if (status != STATUS_OK)
        return status;
    const double ha = grid->a[i + 1] - grid->a[i], hb = grid->b[j + 1] - grid->b[j];
    double da, db;
    const double ta = (at.a - grid->a[i]) / ha, tb = (at.b - grid->b[j]) / hb;
    const double wa = fade(ci ? 1.0 - ta : ta, &da), wb = fade(cj ? 1.0 - tb : tb, &db);
    const struct vec2 slope = {(ci ? -da : da) / ha * wb, (cj ? -db : db) / hb * wa};
    blend_add(blend, fit, at, wa * wb, slope);
    return STATUS_OK;
}

/* The free node nearest to a point whose cell has no free corner; -1 if none is near. */
static int nearest_free(const struct grid *grid, struct vec2 at, int i, int j)
{
    int best = -1;
    double shortest = (double)INFINITY;
    for (int dj = -SEARCH; dj <= SEARCH + 1; dj++)
        for (int di = -SEARCH; di <= SEARCH + 1; di++) {
            const int p = i + di, q = j + dj;
            if (p < 0 || q < 0 || p >= grid->na || q >= grid->nb ||
                !passable(grid, q * grid->na + p))
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
                              struct field_value *value)
{
    struct blend blend = {0};
    bool use[4];
    enum status status = choose_corners(field, at, i, j, use);
    for (int c = 0; c < 4 && status == STATUS_OK; c++)
        if (use[c])
            status = blend_corner(field, at, i, j, c & 1, c >> 1, &blend);
    if (status != STATUS_OK)
        return status;
    if (blend.weight < WEIGHT_FLOOR) {
        const int node = nearest_free(field->grid, at, i, j);
        const struct harmonic *fit = NULL;
        if (node < 0)
            return STATUS_SIZE;
        status = fit_of_node(field, node, &fit);
        if (status == STATUS_OK)
            value->potential = harmonic_value(fit, at, &value->gradient);
        return status;
    }
    value->potential = blend.value / blend.weight;
    value->gradient = vec2_scale(
        vec2_sub(blend.value_slope, vec2_scale(blend.weight_slope, value->potential)),
        1.0 / blend.weight);
    return STATUS_OK;
}

/* Part the point lies in, -1 if none; only cells with a conductor are looked at. */
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
        if (shape_contains(&grid->plane->parts[p].shape, at, 0.0))
            return (int)p;
    return -1;
}

/* Folds a point into the region; signs of the potential and of its slopes. */
static bool fold_point(const struct grid *grid, struct vec2 *at, struct vec2 *flip,
                       double *sign)
{
    const struct plane *plane = grid->plane;
    double *coordinate[2] = {&at->a, &at->b}, *mirrored[2] = {&flip->a, &flip->b};
    const double low[2] = {plane->low.a, plane->low.b};
    const double high[2] = {plane->high.a, plane->high.b};
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
        } else if (side_reflects(grid, side) &&
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
    enum status status = blend_cell(field, at, i, j, value);
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

enum status field_create(const struct grid *grid, const double *phi,
                         const double *part_value, struct field **field)
{
    const size_t nodes = (size_t)grid->na * (size_t)grid->nb;
    *field = NULL;
    struct field *made = MEM_NEW(1, struct field);
    if (made == NULL)
        return STATUS_MEMORY;
    made->grid = grid;
    made->phi = phi;
    made->part_value = part_value;
    made->fit_of = MEM_NEW(nodes, int);
    made->work = MEM_NEW((size_t)POINTS_MAX * (HARMONIC_TERMS + 1), double);
    if (made->fit_of == NULL || made->work == NULL) {
        field_destroy(&made);
        return STATUS_MEMORY;
    }
    for (size_t n = 0; n < nodes; n++)
        made->fit_of[n] = -1;
    *field = made;
    return STATUS_OK;
}

void field_destroy(struct field **field)
{
    struct field *f = *field;
    if (f == NULL)
        return;
    mem_free(f->fit_of);
    mem_free(f->fits);
    mem_free(f->work);
    mem_free(f->spans);
    mem_free(f);
    *field = NULL;
}
