/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_VIEW_H
#define EVENGAP_SOLVER_VIEW_H

/* A view: all planes of a geometry on one level of their grid families. Figures are
 * made from a view; the family combines those of its levels. */

#include "mesh/geometry.h"
#include "solver/plane_solution.h"

struct view {
    const struct geometry *geometry;
    const struct plane_solution *planes[PLANE_KINDS]; /* NULL where missing */
};

/** Bit of a plane in figure.planes. */
static inline unsigned plane_bit(enum plane_kind kind)
{
    return 1u << (unsigned)kind;
}

#endif
