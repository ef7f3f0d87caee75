/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_LEAST_SQUARES_H
#define EVENGAP_SOLVER_LEAST_SQUARES_H

/* Linear least squares whose columns may differ by many orders of magnitude: they are
 * scaled to unit length before the rank is judged. */

#include "shared/attributes.h"
#include "shared/status.h"

enum { LEAST_SQUARES_TERMS = 16 }; /* most columns */

/** Solves matrix * solution = right in the sense of least squares.
 *
 *  matrix    column-major, [terms][rows]; overwritten
 *  right     [max(rows, terms)], rows of it filled; overwritten by the solution [terms]
 *
 *  Directions less certain than 1e-10 of the most certain one are left out (minimum
 *  norm). STATUS_SIZE if terms > LEAST_SQUARES_TERMS; STATUS_UNTRUSTED if the
 *  decomposition failed or a value is not finite. */
enum status least_squares(double *matrix, int rows, int terms,
                          double *right) MUST_CHECK;

#endif
