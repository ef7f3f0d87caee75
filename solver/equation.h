/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_EQUATION_H
#define EVENGAP_SOLVER_EQUATION_H

/* The equation of a free node as a list of terms, a row of the system:
 *     sum over its terms of weight * (value there - value at the node) = 0. */

#include "mesh/grid.h"
#include "solver/stencil.h"

enum { EQUATION_TERMS = LEG_COUNT + CORNER_COUNT };

struct equation_term {
    int node;      /* free or fixed node; -1 for a surface point of a part */
    int part;      /* the part of a surface point; -1 for nodes */
    double weight; /* as in struct stencil */
};

struct equation {
    struct equation_term terms[EQUATION_TERMS]; /* [count] */
    int count;
};

/** The terms of the difference equation of a free node (stencil_at). */
void equation_at(const struct grid *grid, int node, struct equation *equation);

#endif
