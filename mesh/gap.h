/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_MESH_GAP_H
#define EVENGAP_MESH_GAP_H

/* The free stretch of a grid-parallel line through a point of a plane: the gap a beam
 * sees. */

#include "mesh/geometry.h"
#include "shared/attributes.h"
#include "shared/status.h"

/** Nearest surfaces of conductors below and above the point along an axis (0: a, 1: b), as
 *  coordinates; -INFINITY and INFINITY where there is none. A symmetry side on which the
 *  point lies reflects the other surface. A conductor that covers the point itself gives
 *  below = above = its coordinate. STATUS_MEMORY. */
enum status gap_at(const struct plane *plane, int axis, struct vec2 at, double *below,
                   double *above) MUST_CHECK;

#endif
