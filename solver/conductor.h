/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_CONDUCTOR_H
#define EVENGAP_SOLVER_CONDUCTOR_H

/* The conductors of a plane: parts at the same potential that touch each other are one.
 * A matter of the geometry alone, so their order is the same on every grid. */

#include <stdbool.h>
#include <stddef.h>

#include "mesh/geometry.h"
#include "shared/attributes.h"
#include "shared/status.h"

struct conductor {
    size_t first; /* its first part, which it is named after */
    size_t parts; /* number of its parts */
    bool held;    /* it touches a wall or an antimirror: it is one conductor with that
                     side and has no capacitance of its own */
    bool cut[2];  /* it touches a mirror across a, across b: only a half of it lies in
                     the region. The axis of a turned plane is no such mirror */
};

/* Caller-owned; zeroed is empty. */
struct conductors {
    struct conductor *items; /* [count] by their first parts */
    size_t count;
    size_t *of_part; /* [part_count] the conductor of a part; count for an insulator */
};

/** Groups the parts of a plane. Floating parts stand alone. STATUS_MEMORY. */
enum status conductors_find(const struct plane *plane,
                            struct conductors *conductors) MUST_CHECK;

/** Empties; safe on zeroed and twice. */
void conductors_free(struct conductors *conductors);

#endif
