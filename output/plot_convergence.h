/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_OUTPUT_PLOT_CONVERGENCE_H
#define EVENGAP_OUTPUT_PLOT_CONVERGENCE_H

/* convergence.svg: how the main figures settle as the grids of the family get finer. */

#include <stdbool.h>

#include "output/folder.h"
#include "solver/result.h"

enum { CONVERGENCE_MOST = 8 };

/** The figures to show, at most CONVERGENCE_MOST: those that limits refer to, then speeds,
 *  effective lengths, the highest surface field, centre fields and a capacitance; one of
 *  each kind. Left out is what is missing or the same on all grids within 1e-10 of its
 *  size. Returns their number. */
size_t convergence_choose(const struct result *result,
                          const struct figure *chosen[CONVERGENCE_MOST]);

/** The size a figure is compared with: its scale, or where that is 0 its value, or its
 *  largest value on a grid. */
double convergence_size(const struct figure *figure);

/** Distance of the value on grid k of the figure from its final value, over its size. */
double convergence_departure(const struct figure *figure, int k);

/** Departures over the relative line spacing, both axes logarithmic, one line per figure,
 *  a thin line of slope 2, and the uncertainty of each at the left; dashed where the grids
 *  do not converge. Nothing is drawn if there is no such figure. Errors as plot_end. */
enum status plot_convergence(struct folder *folder, const struct result *result,
                             bool *drawn, struct messages *messages) MUST_CHECK;

#endif
