/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_FORCE_H
#define EVENGAP_SOLVER_FORCE_H

/* Force of the field on a conductor, from the stress in the free space round it. */

#include <stdbool.h>

#include "mesh/grid.h"
#include "shared/vec2.h"

/* A potential on a grid. */
struct force_field {
    const double *phi;        /* [nb*na] */
    const double *part_value; /* [part_count] of every part, for cut legs */
};

struct force {
    bool blocked; /* an insulator lies in the field round the conductor: no value */
    struct vec2 value; /* along a and b; times the permittivity it is a force per metre
                          (N/m). In a turned plane only that along a has a meaning: it
                          is the force per radian */
    double gross;      /* sum of the absolute shares: what sizes are judged against */
};

/** Force on the part of a conductor that lies inside the region.
 *
 *  field  in  the potential
 *  unit   in  potential with the conductor at 1 and all else at 0
 *
 *  Maxwell's stress T = eps (E E - 1 E^2/2) has no divergence in free space, so the
 *  force is minus the integral of T grad(g) over it for any smooth g that is 1 on the
 *  conductor and 0 on all others, plus that of g T n over sides where g does not vanish
 *  (mirrors). g is a step of the unit potential between 0.2 and 0.8, so that no surface
 *  and no corner enters. Insulators wholly within the stretch where g is 1 move with the
 *  conductor.
 *
 *  Order   2; exact in a uniform field.
 *  Source  stress: Jackson, Classical Electrodynamics, sec. 6.7; the volume form is
 *          common practice (both from memory).
 *
 *  1) Across a mirror that the conductor touches, the force on its half depends on g: the
 *     caller leaves that component out.
 */
void force_measure(const struct grid *grid, struct force_field field,
                   struct force_field unit, struct force *force);

#endif
