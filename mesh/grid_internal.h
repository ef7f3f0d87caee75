/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_MESH_GRID_INTERNAL_H
#define EVENGAP_MESH_GRID_INTERNAL_H

/* The steps of grid_build, one file each. */

#include "mesh/grid.h"

/* Positions on surfaces are right to this fraction of the region's smaller side. */
#define GRID_TOLERANCE 1e-11
/* Key lines closer than this fraction of the smaller side become one line. */
#define GRID_MERGE 1e-7

/** Graded lines of both axes from the key points of the parts (grid_keys.c). */
enum status grid_place_lines(struct grid *grid,
                             const struct grid_request *request) MUST_CHECK;

/** Owner of every node and all cuts (grid_nodes.c). */
enum status grid_classify(struct grid *grid) MUST_CHECK;

/** Media of the cells and the faces beside interfaces; nothing without insulators
 *  (grid_media.c, grid_faces.c). */
enum status grid_fill_media(struct grid *grid) MUST_CHECK;
enum status grid_find_faces(struct grid *grid) MUST_CHECK;

/** Gaps too thin for the grid and free spaces without a fixed potential
 *  (grid_check.c). */
enum status grid_judge(const struct grid *grid, struct messages *messages) MUST_CHECK;

/** The smaller side of the region (m). */
double grid_scale(const struct grid *grid);

#endif
