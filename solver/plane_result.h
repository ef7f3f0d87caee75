/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_PLANE_RESULT_H
#define EVENGAP_SOLVER_PLANE_RESULT_H

/* What is kept of the solved planes for the writers. */

#include "shared/attributes.h"
#include "shared/status.h"
#include "solver/result.h"
#include "solver/solve.h"

/** Moves the node arrays of the finest grids into planes[PLANE_KINDS]; the
 * solutions cannot be read after that. STATUS_MEMORY. */
enum status plane_results_keep(struct solve *solve,
                               struct plane_result *planes) MUST_CHECK;

#endif
