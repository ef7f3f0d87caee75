/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_CUT_DEFECT_H
#define EVENGAP_SOLVER_CUT_DEFECT_H

/* What the equations of nodes with cut legs leave over when the true potential is put in,
 * against what those of whole legs would. Unequal arms are of first order only where the
 * arms differ; their left-over changes at random from node to node and from grid to grid,
 * and it is what the field at a round surface suffers from. */

#include "mesh/grid.h"
#include "shared/attributes.h"
#include "shared/status.h"

/** defect[nb*na]: 0 but at free nodes with a cut leg. There: the left-over of the node's
 *  equation, minus that of the equation with whole legs on the potential continued beyond
 *  the surface; both from the local fit of phi (field_window.h, local_fit.h). Nodes whose
 *  window ends at an interface of two media get 0. Linear in phi and part_value. STATUS_MEMORY;
 *  STATUS_UNTRUSTED: a fit failed.
 *  Source  deferred correction: Fox, Proc. R. Soc. A 190, 31 (1947); Pereyra, Numer.
 *          Math. 8, 376 (1966) (from memory). */
enum status cut_defect(const struct grid *grid, const double *phi,
                       const double *part_value, double *defect) MUST_CHECK;

#endif
