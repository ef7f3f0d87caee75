/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_TESTS_HONESTY_TALLY_H
#define EVENGAP_TESTS_HONESTY_TALLY_H

/* How printed uncertainties compare with true errors: over all figures, by kind of figure
 * and by family of cases. */

#include <stdbool.h>
#include <stdio.h>

#include "shared/status.h"
#include "shared/vec2.h"

enum { HONESTY_NAME = 80, HONESTY_FAMILIES = 16 };

enum honesty_kind {
    HONESTY_POTENTIAL, /* V or A at a point */
    HONESTY_FIELD_A,   /* V/m or T at a point, along a or b */
    HONESTY_FIELD_B,
    HONESTY_CHARGE, /* of a part; in magnetic planes its flux */
    HONESTY_CAPACITANCE,
    HONESTY_MATRIX, /* entry of the capacitance matrix */
    HONESTY_FOUND,  /* potential of a floating part */
    HONESTY_PEAK,   /* highest field on a conductor */
    HONESTY_CREEP,  /* highest field along the surface of an insulator */
    HONESTY_FORCE_A,
    HONESTY_FORCE_B,
    HONESTY_LENGTH,   /* m, effective length of the path */
    HONESTY_EXIT,     /* m, effective exit edge */
    HONESTY_FRINGE_K, /* fringe integral of the exit */
    HONESTY_KINDS
};

/* One figure as it was printed. */
struct honesty_result {
    char case_name[HONESTY_NAME];
    int family;
    enum honesty_kind kind;
    struct vec2 at; /* m, of points */
    double exact, value, uncertainty;
    bool settled;
};

struct honesty_tally {
    struct honesty_result *results; /* [count] every figure so far */
    size_t count, capacity;
    int cases;                              /* so far */
    const char *families[HONESTY_FAMILIES]; /* [family_count], static texts */
    int family_cases[HONESTY_FAMILIES];
    int family_count;
    double fineness; /* of the grids */
    int levels;      /* grids of a family */
    FILE *raw;       /* CSV of the values of every grid; NULL for none */
};

/** Ends the benchmark with a message unless status is STATUS_OK. */
void honesty_must(enum status status, const char *what);

/** The cases that follow belong to this family (static text). */
void honesty_family(struct honesty_tally *tally, const char *name);

/** Short name of a kind. */
const char *honesty_kind_name(enum honesty_kind kind);

/** Counts a case of the present family. */
void honesty_count_case(struct honesty_tally *tally);

/** Prints one figure and adds it. */
void honesty_add(struct honesty_tally *tally, const struct honesty_result *result);

/** Prints the summary; true if the targets are met. */
bool honesty_summary(const struct honesty_tally *tally);

void honesty_tally_free(struct honesty_tally *tally);

#endif
