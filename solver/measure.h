/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_MEASURE_H
#define EVENGAP_SOLVER_MEASURE_H

/* What is read off the solved planes: figures and probes, with the
 * uncertainties that the family and the doubling test of open sides give; then
 * profile, maps and lattice. */

#include "shared/attributes.h"
#include "shared/status.h"
#include "solver/figure.h"
#include "solver/path.h"
#include "solver/result.h"
#include "solver/solve.h"

/* Readings of every view, before they are combined. Caller-owned; zeroed is
 * empty. */
struct measure {
    struct path paths[SOLVE_SLOTS];
    struct figures figures[SOLVE_SLOTS];
};

/** Samples the path and forms all figures of one view. */
enum status measure_view(const struct view *view, struct path *path,
                         struct figures *figures) MUST_CHECK;

/** Figures, probes and open tests of the result; what was there before is
 * freed. */
enum status measure_figures(const struct solve *solve, struct measure *measure,
                            struct result *result) MUST_CHECK;

/** Profile, section map and lattice of the result, after measure_figures. */
enum status measure_maps(const struct solve *solve, const struct measure *measure,
                         struct result *result) MUST_CHECK;

/** Empties; safe on zeroed and twice. */
void measure_free(struct measure *measure);

#endif
