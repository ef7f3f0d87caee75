/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_FIELD_WINDOW_H
#define EVENGAP_SOLVER_FIELD_WINDOW_H

/* What a node sees: the nodes it can reach along whole legs within a window of a few
 * lines, and the surface points where those legs end; what lies behind a thin part is
 * not seen, nor what lies in another medium. The window runs over symmetry sides: what lies beyond is the reflection,
 * with the sign of the symmetry. */

#include <stdbool.h>

#include "mesh/grid.h"
#include "solver/harmonic_fit.h"

enum {
    WINDOW_REACH = 3, /* lines seen to each side */
    WINDOW_SIDE = 2 * WINDOW_REACH + 1,
    WINDOW_NODES = WINDOW_SIDE * WINDOW_SIDE,
    WINDOW_POINTS = WINDOW_NODES * LEG_COUNT + 1 /* nodes and the ends of their legs */
};

struct field_window {
    struct fit_point points[WINDOW_POINTS]; /* [count] */
    int count;
    bool mixed;         /* it ends at an interface of two media */
    bool bounded;       /* it ends at a conductor or a wall */
    struct vec2 centre; /* m, what to expand about: the node, or in a turned plane the
                           point of the axis below it where the axis is at hand */
};

/** Fills the window of a node that window_passes. phi[nb*na], part_value[part_count]. */
void field_window_collect(const struct grid *grid, const double *phi,
                          const double *part_value, int node,
                          struct field_window *window);

/** True for the nodes a window may be centred on and runs through: free ones, and those
 *  of an antimirror side, behind which the field goes on. */
bool window_passes(const struct grid *grid, int node);

/** True if the potential is continued by reflection beyond a side. */
bool window_side_reflects(const struct grid *grid, enum side_index side);

#endif
