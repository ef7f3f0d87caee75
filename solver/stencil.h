/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_STENCIL_H
#define EVENGAP_SOLVER_STENCIL_H

/* The 5-point difference equation of a node on graded lines, and the unit-free boundary
 * values it is driven by. The equation of free node P is
 *     sum over legs of weight * (potential at the leg's end - potential at P) = 0. */

#include "mesh/grid.h"

/* Fixed values of one problem; the stages above know whether they are volts, amperes or
 * units. Sides run linearly from their low to their high end. */
struct drive {
    double *part; /* [part_count] value of every part */
    double side_from[SIDE_COUNT];
    double side_to[SIDE_COUNT];
};

struct stencil {
    int node[LEG_COUNT];      /* node the leg ends on; -1 if it ends on a part between
                                 the nodes or does not exist */
    int part[LEG_COUNT];      /* part a cut leg ends on; -1 otherwise */
    double length[LEG_COUNT]; /* m, true length; 0 where the region ends */
    double weight[LEG_COUNT]; /* dimensionless; 0 where the region ends */
};

/** Equation of a free node: unequal arms (Shortley-Weller) where legs are cut, scaled
 *  so that links between uncut nodes are symmetric and conserve flux. Mirror sides have
 *  half cells.
 *  Order   2 in the potential, also at cut legs; second-order gradients there.
 *  Source  Shortley and Weller, J. Appl. Phys. 9, 334 (1938); Forsythe and Wasow,
 *          Finite-Difference Methods for PDEs (1960), sec. 20 (from memory). */
void stencil_at(const struct grid *grid, int node, struct stencil *stencil);

/** Conductance of the uncut link from node to its east (LEG_EAST) or north (LEG_NORTH)
 *  neighbour: dual face over spacing; the neighbour must exist. */
double stencil_link(const struct grid *grid, int node, enum leg leg);

/** Fixed value at a node whose owner is a part or a side. */
double drive_value(const struct grid *grid, const struct drive *drive, int node);

#endif
