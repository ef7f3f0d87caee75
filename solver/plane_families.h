/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_PLANE_FAMILIES_H
#define EVENGAP_SOLVER_PLANE_FAMILIES_H

/* Solves all planes of a geometry on all grids of their families, several at the same
 * time. No solve depends on another, so the result does not depend on the number of
 * threads. */

#include "shared/attributes.h"
#include "shared/message.h"
#include "shared/status.h"
#include "solver/plane_solution.h"
#include "solver/result.h"

/* What to solve and how. */
struct family_order {
    const struct geometry *geometry;
    double fineness;
    int levels;
    int threads; /* 0: one per processor */
    void (*progress)(void *context, const char *stage, double fraction); /* may be NULL */
    void *context;
};

/** Solves level l of plane k into solutions[l][k] for every plane that is present. The
 *  messages of the planes are added in the order of the planes. On failure the status is
 *  that of the first plane that failed; what was solved stays and must be freed by the
 *  caller (plane_solution_free) in either case. */
enum status plane_families_solve(
    const struct family_order *order,
    struct plane_solution solutions[RESULT_LEVELS_MAX][PLANE_KINDS],
    struct messages *messages) MUST_CHECK;

#endif
