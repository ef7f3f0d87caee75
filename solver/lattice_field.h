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

void lattice_free(struct lattice_field *lattice);

#endif
