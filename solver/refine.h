/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_REFINE_H
#define EVENGAP_SOLVER_REFINE_H

/* Refines where the error of the figures asked for comes from until they have
 * the accuracy asked for, the memory budget is spent, or it no longer helps. */

#include "shared/attributes.h"
#include "shared/status.h"
#include "solver/measure.h"
#include "solver/progress.h"
#include "solver/result.h"
#include "solver/solve.h"

enum { REFINE_ROUNDS = 6 };

/** Refines what is solved and measured until the figures asked for are within
 * `within` (relative); result->accuracy tells what came of it. Planes that need
 * nothing are not solved again. A round that cannot be solved ends it with what
 * was there before. STATUS_MEMORY, or what measure_figures returns. */
enum status refine(struct solve *solve, struct measure *measure, double within,
                   const struct progress *progress, struct result *result) MUST_CHECK;

#endif
