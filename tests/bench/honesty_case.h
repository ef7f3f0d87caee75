/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_TESTS_HONESTY_CASE_H
#define EVENGAP_TESTS_HONESTY_CASE_H

/* A case of the honesty benchmark: a geometry with an exact solution and the figures to
 * be looked at with their exact values. It is run as the program runs a file, and what is
 * tallied is what the program prints: figures and probe readings with their
 * uncertainties. Failures abort: a benchmark has nobody to report to. */

#include "mesh/geometry.h"
#include "tests/bench/honesty_tally.h"

enum { HONESTY_FIGURES = 64 };

/* Values are in SI units. */
struct honesty_figure {
    enum honesty_kind kind;
    struct vec2 at;     /* m, of points */
    size_t part, other; /* other: the column of HONESTY_MATRIX */
    double exact;
};

struct honesty_case {
    char name[HONESTY_NAME];
    enum plane_kind kind;
    struct geometry geometry;
    double gap; /* m, divides the fringe integral */
    struct honesty_figure figures[HONESTY_FIGURES];
    int count;
};

/** A case with one supply of the given setting (V, or A in magnetic planes) and an empty
 *  region with walls at 0. */
struct plane *honesty_begin(struct honesty_case *c, const char *name,
                            enum plane_kind kind, double setting, struct vec2 low,
                            struct vec2 high);

/** Gives sides[0..count) of the plane another kind. */
void honesty_sides(struct plane *plane, const enum side_index *sides, size_t count,
                   enum side_kind kind);

/** Makes an insulator, a floating conductor of a part. */
struct part *honesty_insulate(struct part *part, double permittivity);
struct part *honesty_float(struct part *part, double charge);

/** Adds one figure with its exact value. */
void honesty_expect(struct honesty_case *c, struct honesty_figure figure);

/** Adds potential and field at a point; a component below 1e-6 of the field is left out,
 *  as it vanishes by symmetry, and so is a potential of 0. */
void honesty_expect_point(struct honesty_case *c, struct vec2 at, double potential,
                          struct vec2 field);

/** Adds figures of the solver's units: fluxes out of a part, at the settings, at 1 V with
 *  all else at 0, and out of one part with another at 1 V; the force on a part, per eps0 (a
 *  component of 0 is left out). In turned planes per radian. */
void honesty_expect_flux(struct honesty_case *c, size_t part, double exact);
void honesty_expect_capacitance(struct honesty_case *c, size_t part, double exact);
void honesty_expect_matrix(struct honesty_case *c, size_t part, size_t other,
                           double exact);
void honesty_expect_force(struct honesty_case *c, size_t part, struct vec2 exact);

/** Runs the case, prints and tallies every figure, empties the case. */
void honesty_run(struct honesty_case *c, struct honesty_tally *tally);

#endif
