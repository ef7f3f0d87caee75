/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Both axes are treated alike: the second difference along an axis with true arms
 * l1, l2 is 2/(l1 + l2) (...), multiplied by the area of the node's whole cell. Without
 * cuts that is the finite-volume form with conductance face/length. In a turned plane
 * faces and volumes carry the weight r: the equation is that of a ring, per radian. */

#include "solver/stencil.h"

#include <math.h>
#include <string.h>

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

/* Relative permittivity of a cell; 0 beyond the region. */
static double coefficient_of(const struct grid *grid, int i, int j)
{
    if (i < 0 || j < 0 || i >= grid->na - 1 || j >= grid->nb - 1)
        return 0.0;
    return grid->coefficient != NULL ? grid->coefficient[j * (grid->na - 1) + i] : 1.0;
}

/* Integral of coefficient and weight (1, or r) over the dual face that crosses the link
 * from column i to column i + 1 in row j. */
static double east_face(const struct grid *grid, int i, int j)
{
    const double south = gap_before(grid->b, j);
    const double north = gap_after(grid->b, grid->nb, j);
    const bool turned = plane_kind_is_turned(grid->plane->kind);
    const double r_south = turned ? grid->b[j] - 0.25 * south : 1.0;
    const double r_north = turned ? grid->b[j] + 0.25 * north : 1.0;
    return 0.5 * (south * r_south * coefficient_of(grid, i, j - 1) +
                  north * r_north * coefficient_of(grid, i, j));
}

/* The same across the link from row j to row j + 1 in column i, with r at `r`. */
static double north_face(const struct grid *grid, int i, int j, double r)
{
    const double west = gap_before(grid->a, i), east = gap_after(grid->a, grid->na, i);
    const double weight = plane_kind_is_turned(grid->plane->kind) ? r : 1.0;
    return 0.5 * weight *
           (west * coefficient_of(grid, i - 1, j) + east * coefficient_of(grid, i, j));
}

/* Factor of unequal arms: whole cell over the sum of the arms; 1 where none is cut. */
static double arm_factor(const struct stencil *s, enum leg back, double whole)
{
    return whole / (s->length[back] + s->length[back + 1]);
}

static double leg_weight(double face, double length, double factor)
{
    return length > 0.0 ? factor * face / length : 0.0;
}

/* Adds the patch of a special face to the equation of `node`, one end of its link. */
static void add_face(const struct grid *grid, const struct face *face, int node,
                     double factor, struct stencil *stencil)
{
    const double scale = face->node == node ? factor : -factor;
    for (int k = 0; k < FACE_PATCH; k++) {
        const int at = face_patch(grid, face, k);
        if (at < 0 || at == node)
            continue;
        const int di = at % grid->na - node % grid->na;
        const int dj = at / grid->na - node / grid->na;
        if (dj == 0)
            stencil->weight[di < 0 ? LEG_WEST : LEG_EAST] += scale * face->weight[k];
        else if (di == 0)
            stencil->weight[dj < 0 ? LEG_SOUTH : LEG_NORTH] += scale * face->weight[k];
        else
            stencil->corner[(dj > 0 ? 2 : 0) + (di > 0)] += scale * face->weight[k];
    }
}

/* Beside interfaces the flux of a whole leg comes from a patch of nodes. */
static void exchange_faces(const struct grid *grid, int node,
                           const double factor[LEG_COUNT], struct stencil *stencil)
{
    const struct face *faces[LEG_COUNT] = {NULL};
    for (int leg = 0; leg < LEG_COUNT; leg++) {
        if (stencil->node[leg] < 0)
            continue;
        const bool back = leg == LEG_WEST || leg == LEG_SOUTH;
        const enum leg forward = back ? (enum leg)(leg + 1) : (enum leg)leg;
        faces[leg] = grid_face(grid, back ? stencil->node[leg] : node, forward);
        if (faces[leg] != NULL)
            stencil->weight[leg] = 0.0;
    }
    for (int leg = 0; leg < LEG_COUNT; leg++)
        if (faces[leg] != NULL)
            add_face(grid, faces[leg], node, factor[leg], stencil);
}

void stencil_at(const struct grid *grid, int node, struct stencil *stencil)
{
    const int i = node % grid->na, j = node / grid->na;
    const double west = gap_before(grid->a, i), east = gap_after(grid->a, grid->na, i);
    const double south = gap_before(grid->b, j);
    const double north = gap_after(grid->b, grid->nb, j);
    double *length = stencil->length, *weight = stencil->weight;
    memset(stencil->corner, 0, sizeof stencil->corner);
    leg_fill(grid, node, LEG_WEST, west, node - 1, stencil);
    leg_fill(grid, node, LEG_EAST, east, node + 1, stencil);
    leg_fill(grid, node, LEG_SOUTH, south, node - grid->na, stencil);
    leg_fill(grid, node, LEG_NORTH, north, node + grid->na, stencil);
    const double along = arm_factor(stencil, LEG_WEST, west + east);
    const double across = arm_factor(stencil, LEG_SOUTH, south + north);
    weight[LEG_WEST] = leg_weight(east_face(grid, i - 1, j), length[LEG_WEST], along);
    weight[LEG_EAST] = leg_weight(east_face(grid, i, j), length[LEG_EAST], along);
    /* Legs along r of a turned plane cross their face at their own middle. */
    weight[LEG_SOUTH] =
        leg_weight(north_face(grid, i, j - 1, grid->b[j] - 0.5 * length[LEG_SOUTH]),
                   length[LEG_SOUTH], across);
    weight[LEG_NORTH] =
        leg_weight(north_face(grid, i, j, grid->b[j] + 0.5 * length[LEG_NORTH]),
                   length[LEG_NORTH], across);
    if (plane_kind_is_turned(grid->plane->kind) && grid->b[j] == 0.0 && south == 0.0)
        weight[LEG_NORTH] *= north / length[LEG_NORTH]; /* 2 u_rr on the axis */
    if (grid->faces != NULL)
        exchange_faces(grid, node, (const double[]){along, along, across, across},
                       stencil);
}

int stencil_corner(const struct grid *grid, int node, enum corner corner)
{
    const bool north = corner == CORNER_NORTH_WEST || corner == CORNER_NORTH_EAST;
    const bool east = corner == CORNER_SOUTH_EAST || corner == CORNER_NORTH_EAST;
    return node + (north ? grid->na : -grid->na) + (east ? 1 : -1);
}

double stencil_flux(const struct grid *grid, const double *phi, int node, enum leg leg)
{
    const int i = node % grid->na, j = node / grid->na;
    const struct face *face = grid_face(grid, node, leg);
    if (face != NULL) {
        double sum = 0.0;
        for (int k = 0; k < FACE_PATCH; k++) {
            const int at = face_patch(grid, face, k);
            sum -= at >= 0 ? face->weight[k] * phi[at] : 0.0;
        }
        return sum;
    }
    if (leg == LEG_EAST)
        return east_face(grid, i, j) / gap_after(grid->a, grid->na, i) *
               (phi[node] - phi[node + 1]);
    const double length = gap_after(grid->b, grid->nb, j);
    return north_face(grid, i, j, grid->b[j] + 0.5 * length) / length *
           (phi[node] - phi[node + grid->na]);
}

double drive_value(const struct grid *grid, const struct drive *drive, int node)
{
    const int owner = grid->owner[node];
    if (owner >= 0)
        return drive->part[owner];
    const int side = OWNER_SIDE - owner;
    const bool along_b = side == SIDE_A_LOW || side == SIDE_A_HIGH;
    const struct plane *plane = grid->plane;
    const double low = along_b ? plane->low.b : plane->low.a;
    const double high = along_b ? plane->high.b : plane->high.a;
    const double at = along_b ? grid->b[node / grid->na] : grid->a[node % grid->na];
    /* Beside an open side a wall goes on beyond the region with its value at the end. */
    const double t = fmin(fmax((at - low) / (high - low), 0.0), 1.0);
    return (1.0 - t) * drive->side_from[side] + t * drive->side_to[side];
}
