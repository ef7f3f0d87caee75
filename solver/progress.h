/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_PROGRESS_H
#define EVENGAP_SOLVER_PROGRESS_H

/* Tells how far a run has got. Every stage owns a window of the whole and
 * speaks of fractions of it, so that what is told only grows. */

#include "shared/attributes.h"

struct progress {
    void (*call)(void *context, const char *stage, double fraction); /* NULL: silence */
    void *context;
    int round;         /* of refinement; 0 before the first */
    double from, done; /* the window of the stage, 0 <= from <= done <= 1 */
};

/** The share [from, done] of a window, itself a window. */
struct progress progress_part(const struct progress *whole, double from, double done);

/** Tells a stage (printf-style) at its start: `fraction` of the window. */
void progress_tell(const struct progress *progress, double fraction, const char *format,
                   ...) PRINTF_LIKE(3, 4);

#endif
