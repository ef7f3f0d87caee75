/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_SURFACE_FIELD_H
#define EVENGAP_SOLVER_SURFACE_FIELD_H

/* The highest field on the surface of a part, with its place and the radius it was found
 * on. A sharp corner has no highest field: there the surface is looked at only from a
 * stated distance (the edge radius) on. */

#include "shared/attributes.h"
#include "shared/status.h"
#include "solver/plane_solution.h"

struct surface_peak {
    bool found;             /* the part has surface in free space */
    double field;           /* V/m or T, magnitude */
    struct vec2 at;         /* m */
    double radius;          /* m, of the surface there; INFINITY on a flat face */
    double corner_distance; /* m, kept from sharp corners; 0 if the part has none */
};

/** Peak over the part's surface inside the region. The points looked at do not depend on
 *  the grid.
 *  Order  2 on flat faces; 1.8 measured on a round one (coaxial core, four grids). The
 *         highest of the points looked at falls short of the true peak by about 2e-5. */
enum status surface_field_peak(const struct plane_solution *plane, size_t part,
                               struct surface_peak *peak) MUST_CHECK;

#endif
