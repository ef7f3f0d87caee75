/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_CAPACITANCE_H
#define EVENGAP_SOLVER_CAPACITANCE_H

/* What the unit potentials of the conductors of a plane (one conductor at 1, all else at
 * 0) tell: the capacitance matrix, and the forces in the field at the settings. */

#include "mesh/grid.h"
#include "shared/attributes.h"
#include "shared/status.h"
#include "solver/conductor.h"
#include "solver/floating.h"
#include "solver/force.h"
#include "solver/system.h"

/* Caller-owned; zeroed is empty. Rows, columns and forces of held conductors are 0. */
struct capacitance {
    struct conductors conductors;
    double *flux;        /* [count*count] flux of -grad phi out of conductor i with j at
                            1, all else at 0, at i*count + j. Times eps0 it is the
                            capacitance per metre (turned planes: per radian, F) */
    struct force *force; /* [count] */
    double reciprocity;  /* largest |C_ij - C_ji| over the largest |C| */
    double row_sum;      /* largest |sum of a column, sides and held parts included|
                            over the largest |C| */
};

/** Solves the unit potential of every conductor that is not held and measures it.
 *
 *  floating   in   unit potentials that are there already
 *  field      in   the potential at the settings, for the forces
 *
 *  STATUS_MEMORY; as system_solve.
 *  Order   2, as the flux. C_ij and C_ji differ by its error where surfaces cut legs.
 */
enum status capacitance_measure(const struct grid *grid, const struct system *system,
                                const struct floating *floating,
                                struct force_field field,
                                struct capacitance *capacitance) MUST_CHECK;

/** Empties; safe on zeroed and twice. */
void capacitance_free(struct capacitance *capacitance);

#endif
