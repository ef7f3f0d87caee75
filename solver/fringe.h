/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_FRINGE_H
#define EVENGAP_SOLVER_FRINGE_H

/* The ends of one field along the path: F(z) = field/centre field. */

#include "mesh/geometry.h"
#include "solver/path.h"

struct fringe {
    double length;   /* m, effective length: integral F dz over the path */
    double entrance; /* m, z of the effective edges of an equal hard-edge field */
    double exit;
    double leftover_from; /* |F| at the two ends of the path */
    double leftover_to;
    double k_entrance; /* integral F (1 - F) dz over each half, divided by the gap */
    double k_exit;
};

/** Fringe of samples f[PATH_POINTS] with the given centre value (not 0), split at
 *  reference_z; gap (m) divides the fringe integrals, 0 leaves them 0.
 *  Order  4 in the step of the path. */
struct fringe fringe_of(const struct path *path, const double *f, double centre,
                        double reference_z, double gap);

/** Full gap (m) of an along plane at a point: distance between the part surfaces above
 *  and below it along b; a symmetry side on which the point lies counts as the middle.
 *  False if a surface is missing on one side. */
bool fringe_gap(const struct plane *plane, double a, double b, double *gap);

#endif
