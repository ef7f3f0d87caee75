/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_BLAME_H
#define EVENGAP_SOLVER_BLAME_H

/* Which free space is to blame when a system has no trustworthy answer: the one that
 * fixed potentials hold least. */

#include "mesh/grid.h"
#include "shared/attributes.h"
#include "shared/status.h"

struct blame {
    struct vec2 at; /* m, a node of the space */
    int nodes;      /* of that space */
    double hold;    /* sum of the weights of its legs that end on fixed potentials over
                       the sum of all its weights; 0 if it floats */
};

/** The free space of the grid with the smallest hold. STATUS_MEMORY; STATUS_SIZE if
 *  there is no free node. */
enum status blame_space(const struct grid *grid, struct blame *blame) MUST_CHECK;

#endif
