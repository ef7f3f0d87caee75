/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_FIELD_H
#define EVENGAP_SOLVER_FIELD_H

/* Potential and gradient between nodes, from one interpolant: round every node a sum of
 * exact solutions (harmonic polynomials, in a turned plane their counterparts there) is
 * fitted to the nodes and surface points it can see, and the fits of the four corners of
 * a cell are blended by weights with two continuous derivatives. The gradient is the
 * exact gradient of the interpolated potential, so maps are free of kinks and consistent
 * with energy. Beyond mirror and antimirror sides the field is continued by reflection.
 * In a turned plane it is regular on the axis. */

#include "mesh/grid.h"
#include "shared/attributes.h"
#include "shared/status.h"
#include "shared/vec2.h"

/* Opaque: fits made on demand and kept. Not for use by two threads at once. */
struct field;

struct field_value {
    double potential;
    struct vec2 gradient; /* of the potential, per metre */
    int part;             /* conductor the point lies in, -1 if none */
};

/** A field over a solved potential. phi[nb*na] and part_value[part_count] (potential of
 *  every part) are borrowed until field_destroy. */
enum status field_create(const struct grid *grid, const double *phi,
                         const double *part_value, struct field **field) MUST_CHECK;

/** Value at a point of the region, of what lies behind its open sides, or of its
 *  reflections. Inside a conductor: its potential, zero gradient, its index.
 *  STATUS_SIZE: outside; STATUS_MEMORY; STATUS_UNTRUSTED: a fit failed.
 *  Order  that of the nodal potential; the fit itself is of degree 6 (error of the
 *         gradient ~ h^6 where the potential is smooth on the scale of the grid).
 *  Source harmonic least-squares fits: common practice for measured fields. */
enum status field_at(struct field *field, struct vec2 at,
                     struct field_value *value) MUST_CHECK;

/** As field_at, for points on the surface of a conductor: taken from the free space next
 *  to it, never from inside. The gradient is a mean of those of the fits: bounded and
 *  continuous, not the exact gradient of the interpolated potential. */
enum status field_at_surface(struct field *field, struct vec2 at,
                             struct field_value *value) MUST_CHECK;

/** True if the point lies in the region or one of its reflections. */
bool field_covers(const struct grid *grid, struct vec2 at);

/** Gradient of the potential at every node from three-point differences on true legs
 *  (order 2 up to cut surfaces); on a surface from the free side; 0 inside parts.
 *  gradient_a, gradient_b [nb*na]. */
void field_at_nodes(const struct grid *grid, const double *phi,
                    const double *part_value, double *gradient_a, double *gradient_b);

/** Puts the gradient of the interpolant in the place of that of field_at_nodes at the nodes
 *  beside an interface of two media, where differences would reach across it; on an
 *  interface that of the insulator. STATUS_MEMORY, STATUS_UNTRUSTED as field_at. */
enum status field_mend_nodes(struct field *field, double *gradient_a,
                             double *gradient_b) MUST_CHECK;

/** Frees and nulls. */
void field_destroy(struct field **field);

#endif
