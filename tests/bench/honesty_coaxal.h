/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_TESTS_HONESTY_COAXAL_H
#define EVENGAP_TESTS_HONESTY_COAXAL_H

/* Coaxal circles: the lines of constant potential of two opposite line charges. A core
 * shifted within a shell, two wires beside each other, and whatever lies between two
 * circles of the pencil (Smythe, Static and Dynamic Electricity, sec. 4.14; from memory).
 * In the frame of the pencil, charges at `near` and 1/inverse_far on the real axis,
 *     u = ln|w - near| - ln|1 - inverse_far w|,
 * of flux 2 pi; the frame is turned by `angle` and moved to `origin` in the plane. */

#include "mesh/geometry.h"

struct coaxal {
    double near, inverse_far; /* m, 1/m; 0: concentric circles about `near` */
    double angle;             /* rad */
    struct vec2 origin;       /* m */
};

/** A core of radius `core`, its centre `shift` along the angle from that of the shell, the
 *  origin. */
struct coaxal coaxal_within(double core, double shell, double shift, double angle);

/** Lines of charge at +-half along the angle: wires beside each other. u rises from -inf
 *  in the one at +half to +inf in the other and is ln(half) far away. */
struct coaxal coaxal_beside(double half, double angle);

/** The circle of constant u: its centre in the plane and radius. */
struct vec2 coaxal_circle(const struct coaxal *c, double u, double *radius);

/** A part bounded by that circle; what is inside it cut out of a part. */
struct part *coaxal_disc(struct plane *plane, const char *name, double gain,
                         const struct coaxal *c, double u);
void coaxal_cut(struct part *part, const struct coaxal *c, double u);

/** The point with parameters u and v, the angle at which it lies seen along the circle. */
struct vec2 coaxal_point(const struct coaxal *c, double u, double v);

/** u at a point of the plane and its gradient (a harmonic_function). */
double coaxal_u(const void *coaxal, struct vec2 at, struct vec2 *gradient);

#endif
