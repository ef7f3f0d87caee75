/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_FLOATING_H
#define EVENGAP_SOLVER_FLOATING_H

/* Floating conductors: their charge is given, their potential found. By superposition:
 * the potential with all of them at zero, plus each one's unit potential (that part at
 * 1, all else at 0) times the potential it takes. */

#include <stdbool.h>
#include <stddef.h>

#include "mesh/grid.h"
#include "shared/attributes.h"
#include "shared/message.h"
#include "shared/status.h"
#include "solver/system.h"

/* Caller-owned; zeroed is empty. */
struct floating {
    size_t count;
    size_t *part;   /* [count] indices in the plane, rising */
    double **unit;  /* [count][nb*na] unit potentials */
    double *factor; /* [count*count] LU factors of the fluxes out of part i with part j
                       at 1, column-major */
    int *pivots;    /* [count] */
    double *flux;   /* [part_count] scratch */
    double *found;  /* [count] scratch */
};

/** Unit potentials of the floating parts of a plane and the factors of their fluxes;
 *  empty if there are none. residual is raised to the largest of their solves.
 *  STATUS_SINGULAR with a message that names the part if nothing of fixed potential
 *  can be seen from it (or from it and other floating parts together); STATUS_MEMORY;
 *  as system_solve. */
enum status floating_prepare(const struct grid *grid, const struct system *system,
                             double *residual, struct floating *floating,
                             struct messages *messages) MUST_CHECK;

/** True if the file gives a floating part a charge. */
bool floating_is_charged(const struct floating *floating, const struct plane *plane);

/** Lets the parts float in a potential found with all of them at 0.
 *
 *  charged      in      they carry the charges of the file, else none
 *  phi          in/out  [nb*na] potential at the nodes
 *  part_value   out     [part_count] potential of the floating parts; others untouched
 */
enum status floating_settle(const struct floating *floating, const struct grid *grid,
                            bool charged, double *phi, double *part_value) MUST_CHECK;

/** The unit potential of a part; NULL if it does not float. */
const double *floating_unit(const struct floating *floating, size_t part);

/** Empties; safe on zeroed and twice. */
void floating_free(struct floating *floating);

#endif
