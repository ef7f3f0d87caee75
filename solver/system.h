/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_SYSTEM_H
#define EVENGAP_SOLVER_SYSTEM_H

/* The linear system of one grid: assembled and factored once, then solved for any
 * number of drives. */

#include "mesh/grid.h"
#include "shared/attributes.h"
#include "shared/status.h"
#include "solver/stencil.h"

/* Opaque: matrix, ordering and factors. */
struct system;

/* What a factorisation says of itself. */
struct system_facts {
    int unknowns;
    double rcond;  /* rough reciprocal condition: min |U_ii| / max |U_ii| after row
                      scaling */
    double memory; /* bytes, peak of the factorisation */
};

/** Assembles and factors the system of a grid (borrowed until system_destroy).
 *  STATUS_SINGULAR: no unique answer; STATUS_MEMORY; STATUS_SIZE: no free node. */
enum status system_create(const struct grid *grid, struct system **system,
                          struct system_facts *facts) MUST_CHECK;

/** Potential at all nodes, phi[nb*na] in the unit of the drive, fixed nodes included.
 *  After the solve the equations of nodes with cut legs are corrected once (cut_defect.h).
 *  residual: max over rows of |b - A x| / (|A||x| + |b|), 0 for a zero drive; NULL
 *  leaves out the iterative refinement (residual then about 1e-13 instead of 3e-16). STATUS_UNTRUSTED: a value is not finite. */
enum status system_solve(const struct system *system, const struct drive *drive,
                         double *phi, double *residual) MUST_CHECK;

/** Frees and nulls. */
void system_destroy(struct system **system);

#endif
