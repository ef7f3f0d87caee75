/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_FRINGE_H
#define EVENGAP_SOLVER_FRINGE_H

/* The ends of one field along the path: F(z) = field/centre field. */

#include "mesh/geometry.h"
#include "solver/path.h"

#define FRINGE_INSIDE 0.01

struct fringe {
    double length;   /* m, effective length: integral F dz over the path */
    double entrance; /* m, z of the effective edges of an equal hard-edge field */
    double exit;
    double leftover_from; /* |F| at the two ends of the path */
    double leftover_to;
    double tail_from; /* m, what the field beyond each end would add to the length: |F|
                         times its decay length there; 0 inside the field */
    double tail_to;
    bool inside_from; /* the end lies inside the field: F within FRINGE_INSIDE of 1 */
    bool inside_to;
    double k_entrance; /* integral F (1 - F) dz over each half, divided by the gap */
    double k_exit;
};

/** Fringe of samples f[PATH_POINTS] with the given centre value (not 0), split at
 *  reference_z; gap (m) divides the fringe integrals, 0 leaves them 0.
 *  The decay length at an end is that of the last hundredth of the path, at most the
 *  distance from the reference point: exact for a field that falls exponentially; one
 *  that falls as 1/x adds as much again with every e-fold of x, and has no length.
 *  Order  4 in the step of the path. */
struct fringe fringe_of(const struct path *path, const double *f, double centre,
                        double reference_z, double gap);

/** Full gap (m) of an along plane at a point: distance between the part surfaces above
 *  and below it along b; a symmetry side on which the point lies counts as the middle.
 *  False if a surface is missing on one side. */
bool fringe_gap(const struct plane *plane, double a, double b, double *gap);

#endif
