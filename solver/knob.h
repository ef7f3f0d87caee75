/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_KNOB_H
#define EVENGAP_SOLVER_KNOB_H

/* Where the error of the figures asked for comes from, measured: every plane is
 * solved once more on its two coarsest grids with one knob of the grid turned,
 * and what the figures, extrapolated over the two, move is booked to that knob.
 * The coarsest grid alone would not do: what it is off by is mostly what
 * extrapolation removes (the flat length of the bench filter moved by 5e-3 on
 * one grid, by 4e-6 extrapolated over two). */

#include <stdint.h>

#include "shared/attributes.h"
#include "shared/status.h"
#include "solver/aim.h"
#include "solver/measure.h"
#include "solver/solve.h"

/* All lines of a plane instead of those near a part. */
#define KNOB_ALL_LINES SIZE_MAX

/* Order with which an extrapolated figure gets better. */
#define KNOB_ORDER 3.0

struct knob {
    enum plane_kind plane;
    size_t part;   /* the first of the parts alike that share it, or KNOB_ALL_LINES */
    double cost;   /* unknowns of a coarse grid that belong to its lines */
    double *error; /* [aims] error that comes from its lines, over the size of the
                    aim */
    double turn;   /* factor its lines are to be multiplied by; 1: not at all */
};

/* Caller-owned; zeroed is empty. */
struct knobs {
    struct knob *items; /* [count] by plane: all lines first, then the parts */
    size_t count, capacity;
};

/** Tries all knobs of the planes in `planes` (bits). A knob whose trial fails
 * is left out, and so is one that has no lines. STATUS_MEMORY. */
enum status knobs_try(const struct solve *solve, const struct measure *measure,
                      const struct aims *aims, unsigned planes,
                      const struct progress *progress, struct knobs *knobs) MUST_CHECK;

/** The first part of the plane that is alike: of the same kind and size, as
 * twins are. */
size_t knob_leader(const struct plane *plane, size_t part);

/** Multiplies the lines of one knob of a plane. */
void knob_turn(const struct plane *plane, size_t part, double factor,
               struct plane_knobs *knobs);

/** Empties; safe on zeroed and twice. */
void knobs_free(struct knobs *knobs);

#endif
