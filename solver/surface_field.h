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
    bool at_corner;  /* the peak lies where the look at the surface ends beside a sharp
                        corner: it grows without limit as the distance shrinks */
    bool edge_given; /* the distance is the edge radius that the file gives */
};

/** Peak over a conductor's surface inside the region. Points a share of the outline apart
 *  find the peaks, the highest are followed along the surface to the maximum of the
 *  interpolated field (relative 1e-10); of peaks equal within 1e-9 the first along the
 *  outline is taken. The points do not depend on the grid.
 *  Order  2 on flat faces, with rounded corners and on round parts (see
 *         tests/solver/convergence_surface.c). */
enum status surface_field_peak(const struct plane_solution *plane, size_t part,
                               struct surface_peak *peak) MUST_CHECK;

/** The same for the field along the surface (tangential) of an insulator, where it
 *  borders on vacuum. */
enum status surface_field_creep(const struct plane_solution *plane, size_t part,
                                struct surface_peak *peak) MUST_CHECK;

#endif
