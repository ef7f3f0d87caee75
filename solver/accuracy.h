/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_ACCURACY_H
#define EVENGAP_SOLVER_ACCURACY_H

/* What came of a relative accuracy that was asked for: met or not and why, how
 * each figure stands, and what was refined. */

#include <stdbool.h>
#include <stddef.h>

#include "mesh/geometry.h"
#include "shared/attributes.h"

/* Range of what may be asked for. */
#define ACCURACY_LEAST 1e-12
#define ACCURACY_MOST  0.1

enum accuracy_state {
    ACCURACY_NOT_ASKED,
    ACCURACY_MET,
    ACCURACY_MEMORY,    /* the next grid would not fit the memory budget */
    ACCURACY_SLOW,      /* refining gained too little */
    ACCURACY_ROUNDS,    /* the rounds of refinement are used up */
    ACCURACY_UNSETTLED, /* what is left not met does not stand at all */
    ACCURACY_UNSOLVED,  /* a finer grid could not be solved */
    ACCURACY_NO_FIGURE  /* there is no figure to ask it of */
};

/* One figure or probe that the accuracy was asked of. */
struct accuracy_item {
    char *name;     /* title, with its subject in brackets */
    bool stands;    /* false: missing or unsettled, it cannot be met */
    bool of_limit;  /* the limit is the larger, so relative to it; else to the
                     value */
    double reached; /* uncertainty relative to limit or value */
    bool met;
};

/* How the lines near one part, or near several alike, were multiplied. */
struct accuracy_part {
    char *name;
    double factor;
};

struct accuracy_plane {
    double factor;               /* on all lines of the plane; 1: as they were */
    struct accuracy_part *parts; /* [part_count] only those that were refined */
    size_t part_count;
};

/* Caller-owned; zeroed is empty, "not asked". */
struct accuracy {
    enum accuracy_state state;
    double within;        /* as asked for */
    bool of_limits;       /* asked of the figures that limits refer to; else of the main
                     figures and the probes */
    int rounds;           /* of refinement */
    double memory_budget; /* bytes */
    struct accuracy_item *items; /* [count] in the order of limits, figures, probes */
    size_t count;
    struct accuracy_plane planes[PLANE_KINDS];
};

/** The item furthest from what was asked, those that do not stand first; NULL
 * if there is none. */
const struct accuracy_item *accuracy_worst(const struct accuracy *accuracy);

/** Key of a state for scripts: "met", "memory", ...; "not_asked". */
const char *accuracy_key(enum accuracy_state state);

/** What came of it in one sentence; text[size]. */
void accuracy_sentence(const struct accuracy *accuracy, char *text, size_t size);

/** What was refined in a plane: "upper plate x2, clamp x1.5; all lines x1.25";
 * "as the file says" if nothing was. text[size]. */
void accuracy_refined(const struct accuracy_plane *plane, char *text, size_t size);

/** Empties; safe on zeroed, half built and twice. */
void accuracy_free(struct accuracy *accuracy);

#endif
