/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_TESTS_MESH_TEST_SHAPE_CASES_H
#define EVENGAP_TESTS_MESH_TEST_SHAPE_CASES_H

/* Shapes the tests share, in metres, with coordinates that are not round numbers. */

#include "mesh/shape.h"
#include "shared/constants.h"
#include "shared/mem.h"
#include "tests/support/assert_close.h"

#define TOLERANCE 1e-11 /* m, as a grid of a few centimetres would use */

static inline struct vec2 at(double a, double b)
{
    return (struct vec2){a, b};
}

static inline struct shape box(double a0, double b0, double a1, double b1, double r)
{
    struct shape shape;

    assert_int_equal(shape_init_box(&shape, at(a0, b0), at(a1, b1), r), STATUS_OK);
    return shape;
}

static inline struct shape disc(double a, double b, double radius)
{
    struct shape shape;

    assert_int_equal(shape_init_disc(&shape, at(a, b), radius), STATUS_OK);
    return shape;
}

static inline struct shape polygon(const struct vec2 *points, size_t n, double r)
{
    struct shape shape;

    assert_int_equal(shape_init_polygon(&shape, points, n, r, NULL), STATUS_OK);
    return shape;
}

/* Takes cut away from body and frees it. */
static inline void take(struct shape *body, struct shape cut)
{
    assert_int_equal(shape_cut(body, &cut), STATUS_OK);
    shape_free(&cut);
}

/* A ring about (0.0031, -0.0017), radii 0.0123 and 0.0077. */
static inline struct shape ring(void)
{
    struct shape shape = disc(0.0031, -0.0017, 0.0123);

    take(&shape, disc(0.0031, -0.0017, 0.0077));
    return shape;
}

/* A box of 20 mm by 10 mm with a notch of 6 mm by 4 mm in its top face. */
static inline struct shape notched_box(void)
{
    struct shape shape = box(0, 0, 0.020, 0.010, 0);

    take(&shape, box(0.007, 0.006, 0.013, 0.015, 0));
    return shape;
}

#define L_COUNT 6
static const struct vec2 l_points[L_COUNT] = {
    {0, 0}, {0.012, 0}, {0.012, 0.005}, {0.0047, 0.005}, {0.0047, 0.011}, {0, 0.011}};

/* An L, its corners rounded with radius r, the inner one hollow. */
static inline struct shape l_shape(double r)
{
    return polygon(l_points, L_COUNT, r);
}

#define SOLID(shape, a, b) shape_contains(&(shape), at((a), (b)), TOLERANCE)

/* Every edge must start bit for bit where the one before ended. */
static inline void assert_closed(const struct shape *shape)
{
    for (size_t o = 0; o < shape->count; o++)
        for (size_t k = 0; k < shape->outlines[o].count; k++) {
            const struct outline *outline = &shape->outlines[o];
            struct vec2 end = outline->edges[k].end;
            struct vec2 start = outline->edges[(k + 1) % outline->count].start;
            assert_true(end.a == start.a && end.b == start.b);
        }
}

/* The arcs' ends lie on their circles, sweep apart. */
static inline void assert_arcs_consistent(const struct shape *shape)
{
    for (size_t o = 0; o < shape->count; o++)
        for (size_t k = 0; k < shape->outlines[o].count; k++) {
            const struct edge *edge = &shape->outlines[o].edges[k];
            struct vec2 from = vec2_sub(edge->start, edge->centre);
            struct vec2 to = vec2_sub(edge->end, edge->centre);
            if (edge->radius == 0)
                continue;
            assert_close(vec2_length(from), edge->radius, 0, 1e-16);
            assert_close(vec2_length(to), edge->radius, 0, 1e-16);
            assert_close(atan2(vec2_cross(from, to), vec2_dot(from, to)), edge->sweep,
                         0, 1e-12);
        }
}

static inline double outline_length(const struct outline *outline)
{
    double length = 0;

    for (size_t k = 0; k < outline->count; k++) {
        const struct edge *edge = &outline->edges[k];
        length += edge->radius > 0 ? edge->radius * fabs(edge->sweep)
                                   : vec2_length(vec2_sub(edge->end, edge->start));
    }
    return length;
}

/* A plain generator: the same numbers everywhere. */
static inline double random_between(unsigned *state, double low, double high)
{
    *state = *state * 1664525u + 1013904223u;
    return low + (high - low) * (double)(*state >> 8) / 16777216.0;
}

#endif
