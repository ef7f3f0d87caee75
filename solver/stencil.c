/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Both axes are treated alike: the second difference along an axis with true arms
 * l1, l2 is 2/(l1 + l2) (...), multiplied by the area of the node's whole cell. Without
 * cuts that is the finite-volume form with conductance face/length. */

#include "solver/stencil.h"

/* Whole spacing before and after line k; 0 beyond the ends. */
static double gap_before(const double *lines, int k)
{
    return k > 0 ? lines[k] - lines[k - 1] : 0.0;
}

static double gap_after(const double *lines, int count, int k)
{
    return k + 1 < count ? lines[k + 1] - lines[k] : 0.0;
}

static void leg_fill(const struct grid *grid, int node, enum leg leg, double whole,
                     int neighbour, struct stencil *stencil)
{
    const struct cut *cut = whole > 0.0 ? grid_cut(grid, node, leg) : NULL;
    stencil->node[leg] = whole > 0.0 && cut == NULL ? neighbour : -1;
    stencil->part[leg] = cut != NULL ? cut->part : -1;
    stencil->length[leg] = cut != NULL ? cut->length : whole;
}

/* Weights of the two legs of one axis; face is the width of the cell across it. */
static void axis_weights(struct stencil *stencil, enum leg back, double whole,
                         double face)
{
    const enum leg front = (enum leg)(back + 1);
    const double arms = stencil->length[back] + stencil->length[front];
    const double scale = face * whole / arms;
    for (int leg = (int)back; leg <= (int)front; leg++) {
        const double length = stencil->length[leg];
        stencil->weight[leg] = length > 0.0 ? scale / length : 0.0;
    }
}

void stencil_at(const struct grid *grid, int node, struct stencil *stencil)
{
    const int i = node % grid->na, j = node / grid->na;
    const double west = gap_before(grid->a, i), east = gap_after(grid->a, grid->na, i);
    const double south = gap_before(grid->b, j);
    const double north = gap_after(grid->b, grid->nb, j);
    leg_fill(grid, node, LEG_WEST, west, node - 1, stencil);
    leg_fill(grid, node, LEG_EAST, east, node + 1, stencil);
    leg_fill(grid, node, LEG_SOUTH, south, node - grid->na, stencil);
    leg_fill(grid, node, LEG_NORTH, north, node + grid->na, stencil);
    axis_weights(stencil, LEG_WEST, west + east, 0.5 * (south + north));
    axis_weights(stencil, LEG_SOUTH, south + north, 0.5 * (west + east));
}

double stencil_link(const struct grid *grid, int node, enum leg leg)
{
    const int i = node % grid->na, j = node / grid->na;
    if (leg == LEG_EAST)
        return 0.5 * (gap_before(grid->b, j) + gap_after(grid->b, grid->nb, j)) /
               gap_after(grid->a, grid->na, i);
    return 0.5 * (gap_before(grid->a, i) + gap_after(grid->a, grid->na, i)) /
           gap_after(grid->b, grid->nb, j);
}

double drive_value(const struct grid *grid, const struct drive *drive, int node)
{
    const int owner = grid->owner[node];
    if (owner >= 0)
        return drive->part[owner];
    const int side = OWNER_SIDE - owner;
    const bool along_b = side == SIDE_A_LOW || side == SIDE_A_HIGH;
    const double *lines = along_b ? grid->b : grid->a;
    const int last = (along_b ? grid->nb : grid->na) - 1;
    const int k = along_b ? node / grid->na : node % grid->na;
    const double t = (lines[k] - lines[0]) / (lines[last] - lines[0]);
    return (1.0 - t) * drive->side_from[side] + t * drive->side_to[side];
}
