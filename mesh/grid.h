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

/* A dual face that is not in one medium on either side of its link, beside the interface of
 * two media. The flux across it into `node` from its east (LEG_EAST) or north (LEG_NORTH)
 * neighbour is the sum of weight[k] times the potential at patch node k, see
 * face_patch; the weights sum to zero. */
enum { FACE_PATCH = 6 };
struct face {
    int node;
    enum leg leg;
    double weight[FACE_PATCH]; /* dimensionless, in a turned plane m (times r) */
};

/* Caller-owned; zeroed is empty. Cells lie between lines: cell (i, j) is j*(na-1) + i, to
 * the north-east of node (i, j). Arrays over nodes are [nb*na], row-major, a fastest:
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
    int *medium;    /* [(nb-1)*(na-1)] what fills a cell (medium.h), MEDIUM_MIXED where
                       an interface runs through it; NULL without insulators */
    int *node_medium;    /* [nb*na] medium at a node, or MEDIUM_BORDER; NULL without */
    double *coefficient; /* [(nb-1)*(na-1)] relative permittivity of the cell, its mean
                            where mixed; NULL without insulators */
    struct face *faces;  /* [face_count] sorted by node, then leg */
    size_t face_count;
    int *first_face; /* [nb+1] index of the first face of row j; NULL without */
};

/* What is asked of a grid. Zeroed and with a fineness it is the plain grid. */
struct grid_request {
    double fineness;        /* scales the number of lines per axis; 1 is the default */
    int level;              /* halves all intervals `level` times */
    double memory_budget;   /* bytes the solve may need; 0: no bound */
    double reach;           /* factor on the distance of open sides; 0 counts as 1 */
    const double *crowding; /* [part_count] factor on the number of lines near every
                               part; NULL: 1 for all */
};

/** Builds the grid of a plane. Too fine a grid for the memory budget is STATUS_INPUT
 *  with a message before anything large is allocated. STATUS_INPUT also for a gap between parts (or a part and a side) at
 *  different potential with fewer than MIN_GAP_INTERVALS intervals, and for a free
 *  space that touches no fixed potential; both are named and located. STATUS_MEMORY.
 *  Source: grading by a power of the distance to corners, the power from the
 *  singularity of the potential there (Raugel 1978; Babuska, Kellogg and Pitkaranta
 *  1979; recalled). */
enum status grid_build(const struct plane *plane, const struct grid_request *request,
                       struct grid *grid, struct messages *messages) MUST_CHECK;

/** Bytes that the solve on such a grid is held to take, from the number of its nodes: what
 *  grid_build compares with the memory budget. STATUS_SIZE if the lines are too many to
 *  count, STATUS_MEMORY. */
enum status grid_estimate(const struct plane *plane, const struct grid_request *request,
                          double *bytes) MUST_CHECK;

/** The cut of a leg of node, or NULL if the leg is whole. */
const struct cut *grid_cut(const struct grid *grid, int node, enum leg leg);

/** The special face of a link, or NULL if its flux is that of the two cells beside it. */
const struct face *grid_face(const struct grid *grid, int node, enum leg leg);

/** Node k of the patch of a face; -1 beyond the region (its weight is 0). */
int face_patch(const struct grid *grid, const struct face *face, int k);

/** Index of the interval of lines[count] that holds x (clamped to the ends). */
int grid_interval(const double *lines, int count, double x);

/** Empties; safe on zeroed and twice. */
void grid_free(struct grid *grid);

#endif
