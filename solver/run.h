/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_RUN_H
#define EVENGAP_SOLVER_RUN_H

/* The main job as one line per step: solves, figures, refinement, maps,
 * verdict. */

#include "solver/result.h"

struct run_options {
    double fineness; /* 0: take the geometry's */
    int levels;      /* grids in a family, 2 or 3; 0: the default, 3 */
    double within;   /* relative accuracy asked for (accuracy.h); 0: none */
    /* Called before each stage with a short text and the done fraction 0..1; NULL
   * for silence. */
    void (*progress)(void *context, const char *stage, double fraction);
    void *context;
};

/** Runs the main job on a checked geometry. result is filled as far as it got
 * and must be freed by the caller in every case. Returns STATUS_OK (verdict
 * inside the result; a message warns if an accuracy that was asked for is not
 * met), STATUS_INPUT (grid found a gap or a free space it cannot take),
 *  STATUS_SINGULAR or STATUS_UNTRUSTED (messages say which plane and space),
 *  STATUS_MEMORY. */
enum status run_geometry(const struct geometry *geometry,
                         const struct run_options *options, struct result *result,
                         struct messages *messages) MUST_CHECK;

#endif
