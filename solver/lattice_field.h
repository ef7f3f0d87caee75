/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_LATTICE_FIELD_H
#define EVENGAP_SOLVER_LATTICE_FIELD_H

/* E and B on the lattice for trajectory programs, extrapolated over the family. */

#include "shared/attributes.h"
#include "shared/status.h"
#include "solver/result.h"
#include "solver/view.h"

/** Fills the lattice of the geometry from views[count], coarse to fine; present stays
 *  false without a lattice. STATUS_SIZE if a point lies outside the region of the plane
 *  used (geometry_check reports that before). */
enum status lattice_fill(const struct view *views, int count,
                         struct lattice_field *lattice) MUST_CHECK;

/** Adds to the uncertainties what the doubling test of open sides says: for planes whose
 *  test is done (planes[PLANE_KINDS]) its factor times the change of the field from
 *  pair[0] to pair[1]. STATUS_MEMORY. */
enum status lattice_widen(const struct view pair[2], const struct plane_result *planes,
                          struct lattice_field *lattice) MUST_CHECK;

/** Index of the lattice point k[3] (along x, y, z) in the uncertainties of a plane. */
size_t lattice_sheet_index(const struct lattice_field *lattice, enum plane_kind kind,
                           const int k[3]);

/** Empties; safe on zeroed and twice. */
void lattice_free(struct lattice_field *lattice);

#endif
