/* SPDX-License-Identifier: GPL-3.0-or-later */

/* A flood fill from the centre over an unfolded index plane: node indices may run over a
 * symmetry side, they are folded back. */

#include "solver/field_window.h"

#include "mesh/medium.h"

/* Rows next to the axis of a turned plane whose windows expand about the axis whatever
 * their shape. Further out an expansion about the node itself is as good as in a planar
 * plane (measured with the potential of a ring: both reach 3e-5 of the gradient ten lines
 * from it, an expansion about the axis 7e-5 in the second row, 2e-4 in the third); where
 * cells are long along the axis the two are equal. */
enum { AXIS_ROWS = 1 };

/* A node of the region or of one of its reflections. */
struct folded {
    int node; /* -1 outside */
    double a, b;
    double sign; /* of the potential */
};

bool window_side_reflects(const struct grid *grid, enum side_index side)
{
    const enum side_kind kind = grid->plane->sides[side].kind;
    return kind == SIDE_MIRROR || kind == SIDE_ANTIMIRROR;
}

bool window_passes(const struct grid *grid, int node)
{
    const int owner = grid->owner[node];
    return owner == OWNER_FREE ||
           (owner < OWNER_FREE &&
            grid->plane->sides[OWNER_SIDE - owner].kind == SIDE_ANTIMIRROR);
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
    if (!window_side_reflects(grid, side) || mirrored < 0 || mirrored > last)
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

struct flood {
    const struct grid *grid;
    const double *phi;
    const double *part_value;
    int i, j;   /* centre */
    int medium; /* of the centre */
    char seen[WINDOW_NODES];
    int stack[WINDOW_NODES];
    int depth;
    struct field_window *window;
};

static void add_point(struct field_window *window, double a, double b, double value,
                      int di, int dj)
{
    const double weight = 1.0 / (1.0 + di * di + dj * dj);
    window->points[window->count++] = (struct fit_point){{a, b}, value, weight};
}

static void flood_push(struct flood *flood, int di, int dj)
{
    const int slot = (dj + WINDOW_REACH) * WINDOW_SIDE + di + WINDOW_REACH;
    if (di < -WINDOW_REACH || di > WINDOW_REACH || dj < -WINDOW_REACH ||
        dj > WINDOW_REACH || flood->seen[slot])
        return;
    flood->seen[slot] = 1;
    flood->stack[flood->depth++] = slot;
}

/* A node on an interface: its value counts on both sides, the window ends there. */
static bool is_border(const struct grid *grid, int node)
{
    return grid->node_medium != NULL && grid->node_medium[node] == MEDIUM_BORDER;
}

/* A free node in another medium than the centre: nothing is seen of it. */
static bool is_foreign(const struct flood *flood, int node)
{
    const struct grid *grid = flood->grid;
    return grid->node_medium != NULL && window_passes(grid, node) &&
           grid->node_medium[node] != MEDIUM_BORDER &&
           grid->node_medium[node] != flood->medium;
}

/* The leg of a reached node, seen in the direction (si, sj) of the unfolded plane. In a
 * reflected part of the plane the leg of the folded node points the other way. */
static void follow_leg(struct flood *flood, const struct folded *from, int di, int dj,
                       int si, int sj)
{
    static const enum leg legs[2][2] = {{LEG_WEST, LEG_EAST}, {LEG_SOUTH, LEG_NORTH}};
    const struct grid *grid = flood->grid;
    const int ti = di + si, tj = dj + sj;
    const struct folded to = fold_node(grid, flood->i + ti, flood->j + tj);
    if (to.node < 0)
        return;
    const enum leg leg = legs[sj != 0][to.node > from->node];
    const struct cut *cut = grid_cut(grid, from->node, leg);
    if (cut == NULL && (is_foreign(flood, to.node) || is_border(grid, to.node)))
        flood->window->mixed = true;
    if (cut != NULL) {
        flood->window->bounded = true;
        add_point(flood->window, from->a + si * cut->length, from->b + sj * cut->length,
                  from->sign * flood->part_value[cut->part], ti, tj);
    } else if (is_foreign(flood, to.node)) {
        return;
    } else if (window_passes(grid, to.node) && !is_border(grid, to.node)) {
        flood_push(flood, ti, tj);
    } else {
        flood->window->bounded |= !is_border(grid, to.node);
        add_point(flood->window, to.a, to.b, to.sign * flood->phi[to.node], ti, tj);
    }
}

/* Whether a node is so near the axis that its window may expand about it. */
static bool axis_is_near(const struct grid *grid, int i, int j)
{
    const int west = i > 0 ? i - 1 : i, east = i + 1 < grid->na ? i + 1 : i;
    const double spacing = (grid->a[east] - grid->a[west]) / (east - west);
    return j <= AXIS_ROWS || (j <= WINDOW_REACH && grid->b[j] <= spacing);
}

/* Whether a window expands about the axis: if the free space in the cells beside its node
 * reaches it. It does in front of a tip too, whose own node on the axis is fixed; along
 * a rod it does not. */
static bool axis_is_seen(const struct flood *flood)
{
    const struct grid *grid = flood->grid;
    if (!plane_kind_is_turned(grid->plane->kind) || grid->b[0] > 0.0 ||
        !axis_is_near(grid, flood->i, flood->j))
        return false;
    const int middle = (WINDOW_REACH - flood->j) * WINDOW_SIDE + WINDOW_REACH;
    return flood->seen[middle - 1] || flood->seen[middle] || flood->seen[middle + 1];
}

void field_window_collect(const struct grid *grid, const double *phi,
                          const double *part_value, int node,
                          struct field_window *window)
{
    struct flood flood = {.grid = grid,
                          .phi = phi,
                          .part_value = part_value,
                          .i = node % grid->na,
                          .j = node / grid->na,
                          .window = window};
    if (grid->node_medium != NULL)
        flood.medium = grid->node_medium[node];
    window->count = 0;
    window->mixed = is_border(grid, node);
    window->bounded = false;
    window->centre = (struct vec2){grid->a[flood.i], grid->b[flood.j]};
    flood_push(&flood, 0, 0);
    while (flood.depth > 0) {
        const int slot = flood.stack[--flood.depth];
        const int di = slot % WINDOW_SIDE - WINDOW_REACH;
        const int dj = slot / WINDOW_SIDE - WINDOW_REACH;
        const struct folded at = fold_node(grid, flood.i + di, flood.j + dj);
        add_point(window, at.a, at.b, at.sign * phi[at.node], di, dj);
        follow_leg(&flood, &at, di, dj, -1, 0);
        follow_leg(&flood, &at, di, dj, 1, 0);
        follow_leg(&flood, &at, di, dj, 0, -1);
        follow_leg(&flood, &at, di, dj, 0, 1);
    }
    if (axis_is_seen(&flood))
        window->centre.b = 0.0;
}
