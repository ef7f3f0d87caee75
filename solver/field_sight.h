/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_FIELD_SIGHT_H
#define EVENGAP_SOLVER_FIELD_SIGHT_H

/* Which corners of a cell speak for a point in it: all that windows may be centred on,
 * or, where a thin conductor runs through the cell, those that see the point. */

#include <stdbool.h>

#include "mesh/grid.h"

/* Scratch, kept from call to call; zeroed is empty. */
struct field_sight {
    struct span *spans;
    size_t span_capacity;
};

/** use[c] for the corners c = (i + (c & 1), j + (c >> 1)) of cell (i, j).
 *  STATUS_MEMORY. */
enum status field_sight_corners(struct field_sight *sight, const struct grid *grid,
                                struct vec2 at, int i, int j, bool use[4]) MUST_CHECK;

/** Empties; safe on zeroed and twice. */
void field_sight_free(struct field_sight *sight);

#endif
