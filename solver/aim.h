/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_AIM_H
#define EVENGAP_SOLVER_AIM_H

/* What an accuracy is asked of: the figures that limits refer to; in a file
 * without limits the main figures that stand, and the probes. */

#include <stdbool.h>
#include <stddef.h>

#include "shared/attributes.h"
#include "shared/status.h"
#include "shared/vec2.h"
#include "solver/figure.h"
#include "solver/result.h"
#include "solver/view.h"

/* One of them, found again by its index in the list of figures or probes. */
struct aim {
    bool is_probe; /* the field there, as a vector */
    size_t index;
    unsigned planes; /* bits, as figure.planes */
    double allowed;  /* SI: of the limit; 0 without */
    double size;     /* SI: the larger of |value| and the limit */
    double reached;  /* uncertainty over size */
    bool of_limit;   /* the limit is the larger */
    bool stands;     /* neither missing nor unsettled */
    bool stood; /* at least once; what stood once may stand again on a finer grid */
};

/* Caller-owned; zeroed is empty. */
struct aims {
    struct aim *items; /* [count] */
    size_t count, capacity;
    bool of_limits;
};

/** Chooses from a measured result. STATUS_MEMORY. */
enum status aims_choose(const struct result *result, struct aims *aims) MUST_CHECK;

/** How all stand in a result of the same geometry, measured anew. */
void aims_update(struct aims *aims, const struct result *result);

/** True if the aim is not within `within` but may get there. */
bool aim_is_open(const struct aim *aim, double within);

/** The largest `reached` of those that stand; 0 if none does. */
double aims_worst(const struct aims *aims);

/** Values of all aims in one view, whose figures are given: values[count], of a
 * figure its value and 0; NaN if it is missing. */
enum status aims_read(const struct aims *aims, const struct view *view,
                      const struct figures *figures, struct vec2 *values) MUST_CHECK;

/** Name of an aim for people; caller frees, NULL if memory ran out. */
char *aim_name(const struct aim *aim, const struct result *result);

/** Empties; safe on zeroed and twice. */
void aims_free(struct aims *aims);

#endif
