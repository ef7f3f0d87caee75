/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_FAMILY_H
#define EVENGAP_SOLVER_FAMILY_H

/* Combines what the levels of a grid family say: lists of figures and arrays. */

#include "shared/attributes.h"
#include "shared/status.h"
#include "solver/figure.h"

/** Combines the lists of levels[count] (coarse to fine, 2 or 3, same names in the same
 *  order) into one with extrapolated values and uncertainties. A figure missing on any
 *  level is missing, with that level's note; other notes are those of the finest level. */
enum status family_figures(const struct figures *levels, int count,
                           struct figures *combined) MUST_CHECK;

/** Combines arrays levels[count][n] element by element into value[n] and, unless NULL,
 *  uncertainty[n]; scale as in extrapolate. */
void family_array(const double *const *levels, int count, size_t n, double scale,
                  double *value, double *uncertainty);

#endif
