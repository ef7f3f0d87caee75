/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_MESH_GRID_CROP_H
#define EVENGAP_MESH_GRID_CROP_H

/* The part of a grid within the region as drawn. Behind open sides a grid goes on to far
 * away; what lies there is no use to a reader of maps. */

#include "mesh/grid.h"

/* Nodes (first_a + i, first_b + j) of a grid, 0 <= i < na, 0 <= j < nb. */
struct grid_window {
    int first_a, first_b;
    int na, nb;
};

/** The window of the region as drawn, its borders included; the whole grid where no side
 *  is open. */
struct grid_window grid_drawn(const struct grid *grid);

/** Keeps the window only: lines, owners, cuts within it, media. The faces are dropped,
 *  so the grid can be shown but no longer solved on. */
void grid_crop(struct grid *grid, struct grid_window window);

/** The same, in place, for values[nb*na] over the nodes of the grid before its crop; the
 *  first window.nb*window.na are left. */
void grid_crop_nodes(const struct grid *grid, struct grid_window window,
                     double *values);

#endif
