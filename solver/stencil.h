/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_STENCIL_H
#define EVENGAP_SOLVER_STENCIL_H

/* The difference equation of a node on graded lines, and the unit-free boundary values it
 * is driven by. The equation of free node P is
 *     sum over legs (and corners) of weight * (potential there - potential at P) = 0;
 * corners take part only beside the interface of two media. */

#include "mesh/grid.h"

/* Fixed values of one problem; the stages above know whether they are volts, amperes or
 * units. Sides run linearly from their low to their high end. */
struct drive {
    double *part; /* [part_count] value of every part */
    double side_from[SIDE_COUNT];
    double side_to[SIDE_COUNT];
};

/* Nodes across the corners of the four cells round a node. */
enum corner {
    CORNER_SOUTH_WEST,
    CORNER_SOUTH_EAST,
    CORNER_NORTH_WEST,
    CORNER_NORTH_EAST,
    CORNER_COUNT
};

/* Weights are dimensionless, in a turned plane in m (times r). */
struct stencil {
    int node[LEG_COUNT];      /* node the leg ends on; -1 if it ends on a part between
                                    the nodes or does not exist */
    int part[LEG_COUNT];      /* part a cut leg ends on; -1 otherwise */
    double length[LEG_COUNT]; /* m, true length; 0 where the region ends */
    double weight[LEG_COUNT]; /* 0 where the region ends */
    double corner[CORNER_COUNT]; /* not zero only beside interfaces */
};

/** Equation of a free node: unequal arms (Shortley-Weller) where legs are cut, scaled
 *  so that links between uncut nodes conserve flux; they are symmetric except beside
 *  interfaces. Mirror sides, and the axis of a turned plane, have half cells.
 *  Order   2 in the potential, also at cut legs; second-order gradients there.
 *  Source  Shortley and Weller, J. Appl. Phys. 9, 334 (1938); Forsythe and Wasow,
 *          Finite-Difference Methods for PDEs (1960), sec. 20 (from memory). */
void stencil_at(const struct grid *grid, int node, struct stencil *stencil);

/** Node across a corner of a node; it must exist (its weight is not zero). */
int stencil_corner(const struct grid *grid, int node, enum corner corner);

/** Flux over the uncut link from node to its east (LEG_EAST) or north (LEG_NORTH)
 *  neighbour, which must exist: minus the slope of phi times coefficient and weight,
 *  integrated over the dual face. */
double stencil_flux(const struct grid *grid, const double *phi, int node, enum leg leg);

/** Fixed value at a node whose owner is a part or a side. */
double drive_value(const struct grid *grid, const struct drive *drive, int node);

#endif
