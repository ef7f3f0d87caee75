/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_TESTS_SCENE_H
#define EVENGAP_TESTS_SCENE_H

/* Geometries made in a few lines of C, for tests and benchmarks. Failures of allocation
 * abort: tests that provoke them do not use this. */

#include "mesh/geometry.h"

/** Empties *geometry and gives it one supply of the given setting (V, or A if current),
 *  fineness 1 and a large memory budget. Free with geometry_free. */
void scene_begin(struct geometry *geometry, double setting, bool is_current);

/** A plane with all sides walls at 0. */
struct plane *scene_plane(struct geometry *geometry, enum plane_kind kind, double a_low,
                          double a_high, double b_low, double b_high);

/** A turned plane (z, r) with mirror sides at both ends in z and at r_low if that is the
 *  axis; the other sides are walls at 0. */
struct plane *scene_turned(struct geometry *geometry, double z_low, double z_high,
                           double r_low, double r_high);

/** Parts at gain times the supply. The pointer is valid until the next part. */
struct part *scene_box(struct plane *plane, const char *name, double gain, double a_low,
                       double a_high, double b_low, double b_high, double rounding);
struct part *scene_disc(struct plane *plane, const char *name, double gain, double a,
                        double b, double radius);
struct part *scene_polygon(struct plane *plane, const char *name, double gain,
                           const struct vec2 *points, size_t count);

/** Cuts a disc out of a part. */
void scene_cut_disc(struct part *part, double a, double b, double radius);

/** A wall whose potential runs from one multiple of the supply to another. */
void scene_wall(struct plane *plane, enum side_index side, double from, double to);

#endif
