/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_FIGURES_SURFACE_H
#define EVENGAP_SOLVER_FIGURES_SURFACE_H

/* Fields at the surfaces of the parts of an electric plane. */

#include "solver/figure_maker.h"

/** `surface_field` of a conductor. Where the highest field lies beside a sharp corner and
 *  the file gives no edge radius for the part, the figure is unsettled: it has no limit,
 *  and the note says from which distance on it was looked at. */
void figures_conductor_surface(struct maker *maker, const struct plane_solution *plane,
                               size_t part);

/** `insulator_field` of every insulator: the highest field along its surface. */
void figures_insulator_surfaces(struct maker *maker,
                                const struct plane_solution *plane);

#endif
