/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_FLUX_H
#define EVENGAP_SOLVER_FLUX_H

/* Flux of the potential's gradient out of every part and side, by Gauss's theorem on
 * contours that cross uncut links only. Per metre of depth; times eps0 it is a charge
 * per metre, times mu0 a flux per metre. */

#include "mesh/grid.h"
#include "shared/attributes.h"
#include "shared/status.h"
#include "solver/stencil.h"

/** part[part_count] and side[SIDE_COUNT]: outward flux of -grad phi (unit of phi) out of
 *  each; imbalance: |sum| / sum of the absolute fluxes of all links counted (net fluxes
 *  may all vanish by symmetry), 0 without any flux. Symmetry sides of kind mirror have
 *  none. STATUS_MEMORY.
 *  Order  2 on graded grids (the contour's distance from the surface does not matter:
 *         the difference equation of uncut nodes conserves flux exactly). Between two
 *         parts with a single free node between them the contour runs through that node
 *         and the order drops to 1. */
enum status flux_measure(const struct grid *grid, const double *phi, double *part,
                         double side[SIDE_COUNT], double *imbalance) MUST_CHECK;

#endif
