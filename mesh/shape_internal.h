/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_MESH_SHAPE_INTERNAL_H
#define EVENGAP_MESH_SHAPE_INTERNAL_H

/* What the shape files share among themselves: the geometry of a single edge, the
 * places where two edges meet, and membership of points in general position. */

#include "mesh/shape.h"

/* Relative to the largest coordinate of a shape: two places closer than FUZZ are one
 * place; PROBE is how far from a surface its two sides are looked at. */
#define FUZZ  1e-12
#define PROBE 1e-9

#define SMOOTH_TURN 0.349065850398865915 /* rad, 20 degrees */

/* A stretch of an edge on which b runs one way. side: 0 a straight line, +1 the right
 * half of a circle, -1 its left half. */
struct rise {
    double a0, b0; /* where it begins, in the direction of travel */
    double a1, b1; /* where it ends */
    double centre_a, centre_b, radius;
    int side;
};

#define RISES_MAX 3

/** Splits an edge into stretches monotone in b; returns their number. */
int edge_rises(const struct edge *edge, struct rise rises[RISES_MAX]);

/** True if the stretch crosses the line b = at. Half open (the upper end belongs to
 *  the stretch above), so a closed outline is always crossed an even number of times. */
static inline bool rise_crosses(const struct rise *rise, double at)
{
    return (rise->b0 <= at) != (rise->b1 <= at);
}

/** Coordinate a of the stretch at b = at, at clamped to the stretch. */
double rise_position(const struct rise *rise, double at);

/** The same edge with the axes exchanged (this turns the sense of rotation). */
struct edge edge_transposed(const struct edge *edge);

double edge_length(const struct edge *edge);

/** Point and unit direction of travel at fraction t of the edge, 0 <= t <= 1. */
struct vec2 edge_point(const struct edge *edge, double t);
struct vec2 edge_direction(const struct edge *edge, double t);

/** Fraction t of the point of the edge nearest to p, and that point. */
double edge_fraction(const struct edge *edge, struct vec2 p);
struct vec2 edge_nearest(const struct edge *edge, struct vec2 p);

/** True if the ray from the centre of an arc along d meets the arc (ends included). */
bool arc_covers(const struct edge *arc, struct vec2 d);

/** Bounding box of one edge. */
void edge_bounds(const struct edge *edge, struct vec2 *low, struct vec2 *high);

/** True if the edge may come within tolerance of the box; an arc is taken for its full
 *  circle. */
bool edge_reaches(const struct edge *edge, struct vec2 low, struct vec2 high,
                  double tolerance);

/** The same for the bounding box of another edge. */
bool edges_near(const struct edge *e, const struct edge *f, double tolerance);

#define MEETINGS_MAX 10

/** Points that lie within tolerance of both edges: crossings, closest approaches and
 *  ends. Of two edges that run on top of each other, the ends of the common stretch.
 *  A point may be listed twice. Returns the number. */
int edge_meetings(const struct edge *e, const struct edge *f, double tolerance,
                  struct vec2 points[MEETINGS_MAX]);

/** Direction change (rad, positive to the left) at the end of edge k. */
double outline_turn(const struct outline *outline, size_t k);

/** Index of the edge after edge k. */
static inline size_t outline_next(const struct outline *outline, size_t k)
{
    return k + 1 < outline->count ? k + 1 : 0;
}

/** Signed area (m2), positive for an anticlockwise outline. */
double outline_area(const struct outline *outline);

/** True if p is inside, by counting crossings; either answer on the outline itself. */
bool outline_inside(const struct outline *outline, struct vec2 p);

/** Distance from p to the outline (m), positive inside, negative outside. */
double outline_depth(const struct outline *outline, struct vec2 p);

/** One zeroed outline with room for `edges` edges. */
enum status shape_new(struct shape *shape, size_t edges) MUST_CHECK;

/** True if p, not on any outline, is solid. */
bool shape_solid(const struct shape *shape, struct vec2 p);

/** Largest absolute coordinate of the body (m), the scale of FUZZ and PROBE. */
double shape_scale(const struct shape *shape);

/* A stretch of an edge that is still surface after the cuts, as fractions of it. */
struct piece {
    double from;
    double to;
};

struct pieces {
    struct piece *items; /* [capacity] */
    size_t capacity;
    size_t count;
    double *marks; /* [mark_capacity] scratch */
    size_t mark_capacity;
};

/** Surface pieces of edge k of outline o, in order, without those that lie on an
 *  outline before o; reuses the arrays. */
enum status pieces_find(struct pieces *pieces, const struct shape *shape, size_t o,
                        size_t k) MUST_CHECK;
void pieces_free(struct pieces *pieces);

/** Outward unit normal of the solid at fraction t of edge k of outline o. */
struct vec2 shape_normal(const struct shape *shape, size_t o, size_t k, double t);

/** True if p on an outline is a place where solid (against normal) and free space
 *  (along normal) meet. */
bool shape_is_surface(const struct shape *shape, struct vec2 p, struct vec2 normal);

#endif
