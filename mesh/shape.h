/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_MESH_SHAPE_H
#define EVENGAP_MESH_SHAPE_H

/* A shape: one simple closed outline of straight lines and circular arcs (the body),
 * from which further outlines (cuts) are taken away. A cut may lie inside the body (a
 * bore) or reach over its edge (a notch). The shape is the closed set
 *     body minus the interior of every cut,
 * so a point on any remaining surface belongs to it; a film without thickness, left
 * where faces of cuts coincide with each other or with the body's, does not. Curves are
 * kept exact: a rounded corner is an arc, not a chain of chords. */

#include <stdbool.h>
#include <stddef.h>

#include "shared/attributes.h"
#include "shared/status.h"
#include "shared/vec2.h"

/* One piece of an outline. A straight line when radius == 0, else an arc about centre,
 * from `start` to `end` turning through `sweep` (rad, positive anticlockwise). */
struct edge {
    struct vec2 start;
    struct vec2 end;
    struct vec2 centre; /* arcs only */
    double radius;      /* m; 0 for a straight line */
    double sweep;       /* rad; 0 for a straight line; +-2 pi for a full circle */
};

/* A simple closed outline, anticlockwise: the inside is on the left of every edge. */
struct outline {
    struct edge *edges; /* [count], edge k ends where edge k+1 starts */
    size_t count;
};

/* Caller-owned; zeroed is empty; outlines[0] is the body, the others are cuts. */
struct shape {
    struct outline *outlines; /* [count] */
    size_t count;
};

/* A solid stretch on a grid line: all points with low <= coordinate <= high. */
struct span {
    double low;
    double high;
};

/* A place that asks for grid lines: a corner, or the point where a round surface is
 * parallel to an axis. */
struct key_point {
    struct vec2 at;
    double free_angle; /* rad: angle of the free space at a sharp corner (3 pi / 2 for
                          a square solid corner, 2 pi for a thin edge); pi where the
                          surface is smooth */
    double radius;     /* m: radius of curvature there; 0 for a sharp corner,
                          INFINITY on a flat face */
    bool snap_a;       /* the line a = at.a must be a grid line */
    bool snap_b;       /* the line b = at.b must be a grid line */
};

/* A point of the surface, for surface fields. */
struct surface_point {
    struct vec2 at;
    struct vec2 normal;     /* unit, pointing out of the solid */
    double radius;          /* m: radius of curvature of the surface, INFINITY if flat;
                              positive also for hollow surfaces */
    double corner_distance; /* m: distance to the nearest sharp corner of the shape
                               that stands out into free space; INFINITY if none */
    struct vec2 corner;     /* m: that corner; 0 if none */
    double bend;            /* 1/m: curvature of the surface's own piece, positive where
                               it stands out; 0 on straight edges, chords included */
    double reach;           /* m: the point stands for the surface up to this far along
                               it on either side; such stretches fill the surface. 0 on
                               chords of a smooth curve */
};

/** Box with sides parallel to the axes, corners rounded by `rounding` (m, 0 = sharp,
 *  at most half of the shorter side: STATUS_SIZE otherwise or if a side is not
 *  positive). */
enum status shape_init_box(struct shape *shape, struct vec2 low, struct vec2 high,
                           double rounding) MUST_CHECK;

/** Disc of the given radius (m, positive, else STATUS_SIZE). */
enum status shape_init_disc(struct shape *shape, struct vec2 centre,
                            double radius) MUST_CHECK;

/** Outline through points[count], closed by itself, either sense of rotation; every
 *  corner is rounded by `rounding` (m). STATUS_SIZE: fewer than 3 points, two
 *  neighbours equal, the outline crosses itself or has no area, or a rounding does not
 *  fit its corner. On STATUS_SIZE *bad (may be NULL) is the index of the point to
 *  blame. */
enum status shape_init_polygon(struct shape *shape, const struct vec2 *points,
                               size_t count, double rounding, size_t *bad) MUST_CHECK;

/** Takes the body of `cut` away from `shape` (cut is copied and must have no cuts
 *  itself: STATUS_SIZE). */
enum status shape_cut(struct shape *shape, const struct shape *cut) MUST_CHECK;

/** Deep copy. */
enum status shape_copy(struct shape *to, const struct shape *from) MUST_CHECK;

/** Mirror image: a -> -a and/or b -> -b. */
void shape_mirror(struct shape *shape, bool flip_a, bool flip_b);

/** Turns by angle (rad, anticlockwise from axis a to axis b) about a point. */
void shape_turn(struct shape *shape, double angle, struct vec2 about);

/** Corners of the bounding box of the body. */
void shape_bounds(const struct shape *shape, struct vec2 *low, struct vec2 *high);

/** True if p is in the shape or within tolerance (m) of its surface. */
bool shape_contains(const struct shape *shape, struct vec2 p, double tolerance);

/** Solid stretches of the line b = at (axis 0, coordinates along a) or a = at (axis 1,
 *  coordinates along b), sorted, disjoint. A face that lies on the line is solid (the
 *  shape is closed); positions are right within `tolerance` (m) measured normal to the
 *  surface. spans is an array of *capacity items owned by the caller that is grown
 *  with mem_resize when needed. */
enum status shape_spans(const struct shape *shape, int axis, double at,
                        double tolerance, struct span **spans, size_t *capacity,
                        size_t *count) MUST_CHECK;

/** Key points of the surface that remains after the cuts, crossings of cut and body
 *  included; *points is allocated. Vertices of an outline that turn by less than 20
 *  degrees are part of a smooth curve and give no key point. For arcs: the points
 *  where the surface is parallel to an axis, with snap for that axis only. */
enum status shape_key_points(const struct shape *shape, struct key_point **points,
                             size_t *count) MUST_CHECK;

/** Points of the remaining surface, at most `spacing` (m) apart along it, not on a
 *  sharp corner; the same points for the same arguments. *points is allocated. A chord
 *  of a smooth curve (vertices that turn by less than 20 degrees) has two points whatever
 *  its length, where the field on the chain is that on the curve to first order.
 *  STATUS_SIZE: spacing is not positive or asks for more than 1e8 points on an edge. */
enum status shape_surface(const struct shape *shape, double spacing,
                          struct surface_point **points, size_t *count) MUST_CHECK;

/** The place at arc length s (m, |s| <= reach; anticlockwise round the solid positive)
 *  from a point of the surface, exactly on its piece. */
struct vec2 surface_point_along(const struct surface_point *point, double s);

/** True if the two closed shapes have a point in common (touching within tolerance
 *  (m) counts); *where (may be NULL) is such a point. */
enum status shape_meets(const struct shape *p, const struct shape *q, double tolerance,
                        bool *meets, struct vec2 *where) MUST_CHECK;

/** Empties; safe on zeroed and twice. */
void shape_free(struct shape *shape);

#endif
