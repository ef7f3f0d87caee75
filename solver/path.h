/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_PATH_H
#define EVENGAP_SOLVER_PATH_H

/* Fields along the beam path: on the axis and on lines displaced over the footprint, at
 * equal steps that do not depend on the grid. */

#include "shared/attributes.h"
#include "shared/status.h"
#include "solver/view.h"

enum {
    PATH_POINTS = 1201, /* odd, for Simpson's rule */
    PATH_LINES = 5      /* axis, then -1, -1/2, 1/2, 1 of the half width */
};

/* Caller-owned; zeroed is empty. */
struct path {
    bool present;            /* a range was there and an along plane covers it */
    double z[PATH_POINTS];   /* m */
    double step;             /* m */
    int lines;               /* PATH_LINES with a footprint, else 1 */
    double *e_x[PATH_LINES]; /* [PATH_POINTS] V/m on line k; all NULL without plane */
    double *b_y[PATH_LINES]; /* [PATH_POINTS] T */
    double e_centre;         /* V/m at the reference point; 0 without plane */
    double b_centre;         /* T */
};

/** Range of the path: the file's, or the common z range of the along planes. False if
 *  there is neither. */
bool path_range(const struct geometry *geometry, double *from, double *to);

/** Offset of line k in units of the half width: 0, -1, -1/2, 1/2, 1. */
double path_line_offset(int k);

/** Samples the path. Planes that are missing leave NULL arrays. */
enum status path_sample(const struct view *view, struct path *path) MUST_CHECK;

/** Integral over the samples from index i to j (i <= j) of f dz by Simpson's rule, the
 *  first three intervals by the 3/8 rule if j - i is odd. Order 4 (a single interval: the
 *  trapezoid rule, order 2). */
double path_integral(const struct path *path, const double *f, int i, int j);

/** Empties; safe on zeroed and twice. */
void path_free(struct path *path);

#endif
