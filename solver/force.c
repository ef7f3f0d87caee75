/* SPDX-License-Identifier: GPL-3.0-or-later */

/* The integral is a sum over cells with differences about their centres. Differences of
 * g, not its derivative, add up to exactly 1 across any gap: a uniform field gives the
 * exact force on any grid. A cell that a surface cuts is summed by its free corners
 * instead, with slopes over true legs; it counts on grids only that are coarse against
 * the gap, as g is constant next to surfaces. */

#include "solver/force.h"

#include <math.h>
#include <stdbool.h>

#include "mesh/medium.h"
#include "solver/stencil.h"

#define STEP_LOW  0.2 /* of the unit potential, below: g = 0 */
#define STEP_HIGH 0.8 /* above: g = 1 */

/* g, with two continuous derivatives; *slope: its derivative by the unit potential. */
static double step_of(double unit, double *slope)
{
    const double t = (unit - STEP_LOW) / (STEP_HIGH - STEP_LOW);
    *slope = 0.0;
    if (t <= 0.0)
        return 0.0;
    if (t >= 1.0)
        return 1.0;
    *slope = 30.0 * t * t * (1.0 - t) * (1.0 - t) / (STEP_HIGH - STEP_LOW);
    return t * t * t * (10.0 + t * (6.0 * t - 15.0));
}

/* Everything the sum runs over. */
struct ring {
    const struct grid *grid;
    struct force_field field;
    struct force_field unit;
    struct force *force;
};

static void add_share(struct force *force, struct vec2 share)
{
    force->value = vec2_add(force->value, share);
    force->gross += fabs(share.a) + fabs(share.b);
}

/* -T grad(g) times weight; e: the gradient of the potential. */
static void add_stress(struct force *force, struct vec2 e, struct vec2 g, double weight)
{
    const double taa = 0.5 * (e.a * e.a - e.b * e.b), tab = e.a * e.b;
    add_share(force, (struct vec2){-weight * (taa * g.a + tab * g.b),
                                   -weight * (tab * g.a - taa * g.b)});
}

/* The weight of the plane at b: 1, or r. */
static double turning(const struct grid *grid, double b)
{
    return plane_kind_is_turned(grid->plane->kind) ? b : 1.0;
}

static double leg_value(const struct stencil *s, enum leg leg, struct force_field field)
{
    return s->part[leg] >= 0 ? field.part_value[s->part[leg]] : field.phi[s->node[leg]];
}

/* Slope along one axis at a free node, from the parabola over its legs; 0 across a
 * mirror. */
static double leg_slope(const struct stencil *s, enum leg back, double here,
                        struct force_field field)
{
    const enum leg front = (enum leg)(back + 1);
    const double h1 = s->length[back], h2 = s->length[front];
    if (h1 == 0.0 || h2 == 0.0)
        return 0.0;
    const double before = (here - leg_value(s, back, field)) / h1;
    const double after = (leg_value(s, front, field) - here) / h2;
    return (after * h1 + before * h2) / (h1 + h2);
}

static struct vec2 node_slope(const struct grid *grid, int node,
                              struct force_field field)
{
    struct stencil s;
    stencil_at(grid, node, &s);
    return (struct vec2){leg_slope(&s, LEG_WEST, field.phi[node], field),
                         leg_slope(&s, LEG_SOUTH, field.phi[node], field)};
}

static bool edge_is_cut(const struct grid *grid, int from, enum leg leg, int to)
{
    const enum leg back = (enum leg)(leg - 1); /* of an east or north leg */
    return grid_cut(grid, from, leg) != NULL || grid_cut(grid, to, back) != NULL;
}

/* node: corners south-west, south-east, north-west, north-east. */
static bool cell_is_cut(const struct grid *grid, const int node[4])
{
    return edge_is_cut(grid, node[0], LEG_EAST, node[1]) ||
           edge_is_cut(grid, node[2], LEG_EAST, node[3]) ||
           edge_is_cut(grid, node[0], LEG_NORTH, node[2]) ||
           edge_is_cut(grid, node[1], LEG_NORTH, node[3]);
}

/* A quarter of a cut cell, by the slopes at its free corner. */
static void add_corner(const struct ring *ring, int node, double area)
{
    const struct grid *grid = ring->grid;
    double by_unit;
    (void)step_of(ring->unit.phi[node], &by_unit);
    if (grid->owner[node] != OWNER_FREE || by_unit == 0.0)
        return;
    const struct vec2 g = vec2_scale(node_slope(grid, node, ring->unit), by_unit);
    add_stress(ring->force, node_slope(grid, node, ring->field), g,
               0.25 * area * turning(grid, grid->b[node / grid->na]));
}

/* Gradient at the centre of a cell from the values at its corners. */
static struct vec2 centre_slope(const double value[4], double width, double height)
{
    return (struct vec2){0.5 * (value[1] - value[0] + value[3] - value[2]) / width,
                         0.5 * (value[2] - value[0] + value[3] - value[1]) / height};
}

static void add_cell(const struct ring *ring, int i, int j)
{
    const struct grid *grid = ring->grid;
    const int node[4] = {j * grid->na + i, j * grid->na + i + 1, (j + 1) * grid->na + i,
                         (j + 1) * grid->na + i + 1};
    double value[4], step[4], unused;
    for (int c = 0; c < 4; c++) {
        value[c] = ring->field.phi[node[c]];
        step[c] = step_of(ring->unit.phi[node[c]], &unused);
    }
    if (step[0] == step[1] && step[0] == step[2] && step[0] == step[3])
        return;
    if (grid->medium != NULL && grid->medium[j * (grid->na - 1) + i] != MEDIUM_VACUUM)
        ring->force->blocked = true;
    const double width = grid->a[i + 1] - grid->a[i];
    const double height = grid->b[j + 1] - grid->b[j];
    if (cell_is_cut(grid, node)) {
        for (int c = 0; c < 4; c++)
            add_corner(ring, node[c], width * height);
        return;
    }
    const double middle = 0.5 * (grid->b[j] + grid->b[j + 1]);
    add_stress(ring->force, centre_slope(value, width, height),
               centre_slope(step, width, height),
               width * height * turning(grid, middle));
}

/* One interval of a mirror between nodes: there E runs along it and T n = -n E^2/2 with
 * n out of the region. Returns the share of the force into the region. */
static double interval_share(const struct ring *ring, enum leg leg, int from, int to,
                             double length)
{
    const struct grid *grid = ring->grid;
    const int node[2] = {from, to};
    double unused, share = 0.0;
    if (!edge_is_cut(grid, from, leg, to)) {
        const double e = (ring->field.phi[to] - ring->field.phi[from]) / length;
        return 0.25 * length * e * e *
               (step_of(ring->unit.phi[from], &unused) +
                step_of(ring->unit.phi[to], &unused));
    }
    for (int k = 0; k < 2; k++) {
        if (grid->owner[node[k]] != OWNER_FREE)
            continue;
        const struct vec2 slope = node_slope(grid, node[k], ring->field);
        const double e = leg == LEG_NORTH ? slope.b : slope.a;
        share += 0.25 * length * e * e * step_of(ring->unit.phi[node[k]], &unused);
    }
    return share;
}

static void add_mirror(const struct ring *ring, enum side_index side)
{
    const struct grid *grid = ring->grid;
    const bool along_b = side == SIDE_A_LOW || side == SIDE_A_HIGH;
    const bool high = side == SIDE_A_HIGH || side == SIDE_B_HIGH;
    const int count = along_b ? grid->nb : grid->na;
    const int stride = along_b ? grid->na : 1;
    const int last = along_b ? grid->na - 1 : (grid->nb - 1) * grid->na;
    const double *lines = along_b ? grid->b : grid->a;
    for (int k = 0; k + 1 < count; k++) {
        const int from = (high ? last : 0) + k * stride;
        const double middle = 0.5 * (lines[k] + lines[k + 1]);
        const double share = (high ? -1.0 : 1.0) *
                             (along_b ? turning(grid, middle) : 1.0) *
                             interval_share(ring, along_b ? LEG_NORTH : LEG_EAST, from,
                                            from + stride, lines[k + 1] - lines[k]);
        add_share(ring->force,
                  along_b ? (struct vec2){share, 0.0} : (struct vec2){0.0, share});
    }
}

void force_measure(const struct grid *grid, struct force_field field,
                   struct force_field unit, struct force *force)
{
    const struct ring ring = {grid, field, unit, force};
    *force = (struct force){0};
    for (int j = 0; j + 1 < grid->nb; j++)
        for (int i = 0; i + 1 < grid->na; i++)
            add_cell(&ring, i, j);
    for (int s = 0; s < SIDE_COUNT; s++) {
        /* In a turned plane the sides across r push towards the axis only. */
        const bool radial = plane_kind_is_turned(grid->plane->kind) &&
                            (s == SIDE_B_LOW || s == SIDE_B_HIGH);
        if (grid->plane->sides[s].kind == SIDE_MIRROR && !radial)
            add_mirror(&ring, (enum side_index)s);
    }
}
