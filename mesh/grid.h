/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_MESH_GRID_H
#define EVENGAP_MESH_GRID_H

/* The grid of one plane: a tensor product of graded lines (lines.h), the kind of every
 * node, and the grid legs that a conductor surface cuts. Levels nest: level k+1 halves
 * every interval of level k and keeps its nodes. */

#include <stdbool.h>
#include <stddef.h>

#include "mesh/geometry.h"
#include "shared/attributes.h"
#include "shared/message.h"
#include "shared/status.h"

/* The four legs of a node. */
enum leg { LEG_WEST, LEG_EAST, LEG_SOUTH, LEG_NORTH, LEG_COUNT };

/* Owner of a node: >= 0 a part of the plane, else one of these. */
enum { OWNER_FREE = -1, OWNER_SIDE = -2 /* OWNER_SIDE - s is side s */ };

/* A leg of a free node that ends on a part before it reaches the next node. */
struct cut {
    int node; /* index j*na + i of the free node */
    enum leg leg;
    int part;      /* the part it ends on */
    double length; /* m, positive, shorter than the full leg */
};

/* Caller-owned; zeroed is empty. Arrays over nodes are [nb*na], row-major, a fastest:
 * node (i, j) is j*na + i. */
struct grid {
    const struct plane *plane; /* borrowed */
    int na, nb;
    double *a;        /* [na] line coordinates (m), increasing */
    double *b;        /* [nb] */
    int *owner;       /* [nb*na] part index, OWNER_FREE, or OWNER_SIDE - side */
    struct cut *cuts; /* [cut_count], sorted by node, then leg */
    size_t cut_count;
    int *first_cut; /* [nb+1] index of the first cut of row j, for quick look-up */
    int free_count; /* nodes with OWNER_FREE */
};

/** Builds the grid of a plane. fineness scales the number of lines per axis; level
 *  halves all intervals `level` times. memory_budget (bytes) bounds what the solve may
 *  need: too fine a grid is STATUS_INPUT with a message before anything large is
 *  allocated. STATUS_INPUT also for a gap between parts (or a part and a side) at
 *  different potential with fewer than MIN_GAP_INTERVALS intervals, and for a free
 *  space that touches no fixed potential; both are named and located. STATUS_MEMORY.
 *  Source: grading by a power of the distance to corners, the power from the
 *  singularity of the potential there (Raugel 1978; Babuska, Kellogg and Pitkaranta
 *  1979; recalled). */
enum status grid_build(const struct plane *plane, double fineness, int level,
                       double memory_budget, struct grid *grid,
                       struct messages *messages) MUST_CHECK;

/** The cut of a leg of node, or NULL if the leg is whole. */
const struct cut *grid_cut(const struct grid *grid, int node, enum leg leg);

/** Index of the interval of lines[count] that holds x (clamped to the ends). */
int grid_interval(const double *lines, int count, double x);

/** Empties; safe on zeroed and twice. */
void grid_free(struct grid *grid);

#endif
