/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_FIGURE_H
#define EVENGAP_SOLVER_FIGURE_H

/* A figure: one number the program stands for, with its unit, its uncertainty and the
 * planes it came from. The same list is made on every grid of a family and then
 * combined (family.h), so names and order must not depend on the grid. */

#include <stdbool.h>
#include <stddef.h>

#include "mesh/geometry.h"
#include "shared/attributes.h"
#include "shared/status.h"

enum figure_group {
    FIGURE_BEAM,     /* from the beam alone */
    FIGURE_ALONG,    /* along the path */
    FIGURE_ACROSS,   /* over the cross-section */
    FIGURE_HARDWARE, /* of parts and supplies */
    FIGURE_GROUPS
};

enum figure_state {
    FIGURE_GOOD,      /* value and uncertainty stand */
    FIGURE_UNSETTLED, /* the grids do not converge on it; note says what is known */
    FIGURE_MISSING    /* cannot be had; note says why (a plane is missing, ...) */
};

enum { FIGURE_GRIDS_MAX = 3 };

struct figure {
    const char *name;  /* stable key, snake_case, static text */
    const char *title; /* the same in words for people, static text */
    const char *unit;  /* SI unit, static text; "1" for a pure number */
    char *subject;     /* part, supply or term it belongs to; NULL if none */
    char *note;        /* limits, leftover, place, reason; NULL if none */
    enum figure_group group;
    enum figure_state state;
    unsigned planes;    /* bit (1u << enum plane_kind) for every plane used */
    double value;       /* SI; 0 when missing */
    double uncertainty; /* SI, absolute, >= 0; 0 when exact (from input alone) */
    double scale;       /* SI: size against which changes from grid to grid are judged;
                           0: the value itself */
    int grid_count;     /* of grids; 0 when missing or from the input alone */
    double grids[FIGURE_GRIDS_MAX]; /* SI, values on the grids of the family, coarse to
                                       fine, before they were combined */
};

/* Caller-owned list; zeroed is empty. */
struct figures {
    struct figure *items; /* [count] */
    size_t count;
    size_t capacity;
};

/** Appends a copy; subject and note are copied (may be NULL). */
enum status figures_add(struct figures *figures, const struct figure *figure,
                        const char *subject, const char *note) MUST_CHECK;

/** First figure of that name (and subject, unless NULL); NULL if there is none. */
const struct figure *figures_find(const struct figures *figures, const char *name,
                                  const char *subject);

/** Empties; safe on zeroed and twice. */
void figures_free(struct figures *figures);

#endif
