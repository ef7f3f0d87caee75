/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_TESTS_HONESTY_CASE_H
#define EVENGAP_TESTS_HONESTY_CASE_H

/* A case of the honesty benchmark: a geometry with an exact solution, the figures to be
 * looked at with their exact values, and the tally of how printed uncertainties compare
 * with true errors. Failures abort: a benchmark has nobody to report to. */

#include <stdbool.h>
#include <stdio.h>

#include "mesh/geometry.h"

enum { HONESTY_FIGURES = 64, HONESTY_NAME = 80 };

enum honesty_kind {
    HONESTY_POTENTIAL, /* at a point */
    HONESTY_FIELD_A,   /* V/m or T at a point, along a or b */
    HONESTY_FIELD_B,
    HONESTY_FLUX,    /* out of a part, over eps0 or mu0 */
    HONESTY_SELF,    /* out of a part at 1 with all else at 0: capacitance over eps0 */
    HONESTY_PEAK,    /* highest field on a part */
    HONESTY_LENGTH,  /* m, effective length of the path */
    HONESTY_EXIT,    /* m, effective exit edge */
    HONESTY_FRINGE_K /* fringe integral of the exit */
};

struct honesty_figure {
    enum honesty_kind kind;
    struct vec2 at; /* m, of points */
    size_t part;
    double scale; /* as figure.scale of the program */
    double exact;
    double values[3]; /* coarse to fine */
};

struct honesty_case {
    char name[HONESTY_NAME];
    enum plane_kind kind;
    struct geometry geometry;
    double gap; /* m, divides the fringe integral */
    struct honesty_figure figures[HONESTY_FIGURES];
    int count;
};

struct honesty_tally {
    struct honesty_result *results; /* [count] every figure so far */
    size_t count, capacity;
    int cases;
    double fineness; /* of the grids */
    FILE *raw;       /* CSV of the values of every grid; NULL for none */
};

/** A case with one supply of the given setting (V, or A in magnetic planes) and an empty
 *  region with walls at 0. */
struct plane *honesty_begin(struct honesty_case *c, const char *name,
                            enum plane_kind kind, double setting, struct vec2 low,
                            struct vec2 high);

/** Adds one figure with its exact value. */
void honesty_expect(struct honesty_case *c, struct honesty_figure figure);

/** Adds potential and field at a point; a component below 1e-6 of the field is left out,
 *  as it vanishes by symmetry. */
void honesty_expect_point(struct honesty_case *c, struct vec2 at, double potential,
                          struct vec2 field);

/** Adds the flux out of a part, with the scale the program gives it. */
void honesty_expect_flux(struct honesty_case *c, size_t part, double exact);

/** Solves the family of grids, prints and tallies every figure, empties the case. */
void honesty_run(struct honesty_case *c, struct honesty_tally *tally);

/** Prints the summary; true if the targets are met. */
bool honesty_summary(const struct honesty_tally *tally);

void honesty_tally_free(struct honesty_tally *tally);

#endif
