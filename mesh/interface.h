/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_MESH_INTERFACE_H
#define EVENGAP_MESH_INTERFACE_H

/* The potential next to the smooth interface of two media. About a point of the
 * interface it is written as one quadratic polynomial on each side; both obey the
 * equation, and at the interface the potential and the normal flux are continuous up to
 * second and first order. That leaves INTERFACE_TERMS free numbers: the local solutions
 * for which difference formulas are made exact. */

#include <stdbool.h>

#include "mesh/geometry.h"

enum { INTERFACE_TERMS = 5 };

/* Local frame: n along `normal`, t along it turned by a right angle; the interface is
 * n = curvature t^2 / 2. Side 0 lies against the normal, side 1 along it. */
struct interface {
    struct vec2 origin;
    struct vec2 normal;
    double curvature; /* 1/m; positive if it bends towards the normal */
    double coefficient[2];
    double scale;  /* m, size of the neighbourhood; makes the terms of order one */
    double radius; /* m: r of a turned plane at the origin; 0 in planar planes */
};

/** The nearest point of an interface between two media to `at`, with its frame. False if
 *  there is none within `reach` (m), if it does not stay smooth over that reach, or if it
 *  touches a conductor there. media[2] are those of side 0 and side 1. */
bool interface_find(const struct plane *plane, struct vec2 at, double reach,
                    struct interface *interface, int media[2]);

/** The terms at a point taken to lie on `side`: value[INTERFACE_TERMS]. */
void interface_values(const struct interface *interface, struct vec2 at, int side,
                      double *value);

/** Integral of coefficient * weight * (normal slope) of every term over the straight
 *  face from p to q, the normal of the face being its direction turned clockwise (from
 *  south to north: to the east). weight is 1, or r in turned planes. */
void interface_fluxes(const struct interface *interface, struct vec2 p, struct vec2 q,
                      double *flux);

#endif
