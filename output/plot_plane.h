/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_OUTPUT_PLOT_PLANE_H
#define EVENGAP_OUTPUT_PLOT_PLANE_H

/* Pictures of one plane. */

#include "output/folder.h"
#include "solver/result.h"

/** <plane>.svg: the potential as a map with lines of equal potential and the parts.
 *  Errors as plot_end. */
enum status plot_plane_potential(struct folder *folder, enum plane_kind kind,
                                 const struct plane *plane,
                                 const struct plane_result *result, bool *drawn,
                                 struct messages *messages) MUST_CHECK;

/** <plane>.svg: the parts and the lines of the grid. Errors as plot_end. */
enum status plot_plane_grid(struct folder *folder, const struct plane *plane,
                            const struct grid *grid, bool *drawn,
                            struct messages *messages) MUST_CHECK;

/** Name of the picture of a plane: "electric_along.svg". */
const char *plot_plane_name(enum plane_kind kind);

#endif
