/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_MESH_GEOMETRY_CHECK_INTERNAL_H
#define EVENGAP_MESH_GEOMETRY_CHECK_INTERNAL_H

/* Shared by geometry_check*.c only. */

#include "mesh/geometry_check.h"
#include "mesh/mistakes.h"

struct check {
    const struct geometry *geometry;
    struct mistakes mistakes;
    bool out_of_memory;
};

/* An interval of one axis (m). */
struct interval {
    double low;
    double high;
};

/** Length below which two places of a plane are the same (m): 1e-9 of its size. */
double plane_tolerance(const struct plane *plane);

/** Interval of axis a (which = 0) or b (1) where a plane knows the field: its region,
 *  doubled by a mirror or antimirror that lies at coordinate 0. */
struct interval plane_extent(const struct plane *plane, int which);

/** True if the interval (or point, low == high) is inside that extent. */
bool plane_covers(const struct plane *plane, int which, struct interval wanted);

/** The interval as seen in the region itself: what lies beyond a mirror or antimirror
 *  at 0 is folded back. */
struct interval plane_fold(const struct plane *plane, int which,
                           struct interval wanted);

/** "z 12 mm, x 4 mm", always NUL-terminated. */
void describe_point(const struct plane *plane, struct vec2 p, char *text, size_t size);

/** Notes that memory ran out if status says so; true if status is STATUS_OK. */
bool check_status(struct check *check, enum status status);

/** True if two numbers differ by no more than the rounding of the file's arithmetic. */
bool same_potential(double p, double q);

/** gain[s]; 0 where there is no gain array. */
double linear_gain(const struct linear *p, size_t s);

/** A part that lies in the region against its side s (enum side_index). */
void check_side(struct check *check, const struct plane *plane, int s,
                const struct part *part);

/** Region, parts, walls and driving potential of one plane that is present. */
void check_plane(struct check *check, const struct plane *plane);

/** Path, footprint, probes, reference point and lattice against the planes. */
void check_extent(struct check *check);

#endif
