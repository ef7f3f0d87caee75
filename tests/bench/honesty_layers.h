/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_TESTS_HONESTY_LAYERS_H
#define EVENGAP_TESTS_HONESTY_LAYERS_H

/* Conductors, insulators and floating conductors one within the other, all bounded by
 * surfaces on which one harmonic function u is constant: coaxal circles, coaxial tubes,
 * concentric spheres. The potential is then a function of u alone and all is exact:
 * k dV/du = -strength is constant from one floating conductor to the next. */

#include "shared/vec2.h"
#include "tests/bench/honesty_case.h"

enum { LAYERS = 6 };

struct layers {
    int count;
    double bound[LAYERS + 1];    /* u, rising */
    double permittivity[LAYERS]; /* of layer k, bound[k] to bound[k+1]; INFINITY: a
                                     floating conductor */
    double charge[LAYERS];       /* of floating conductors, as a step of the strength */
    double first, last;          /* V at bound[0] and at bound[count] */
    double strength[LAYERS]; /* V per unit of u; charge inside over eps0 and the flux
                                     of u */
    double potential[LAYERS + 1]; /* V at the bounds */
};

/* u and its gradient at a point. */
typedef double (*harmonic_function)(const void *context, struct vec2 at,
                                    struct vec2 *gradient);

/** Fills strength and potential from the rest. */
void layers_solve(struct layers *layers);

/** Potential at u in layer k. */
double layers_potential(const struct layers *layers, int k, double u);

/** Adds potential and field at a point of layer k. */
void layers_expect_point(struct honesty_case *c, const struct layers *layers, int k,
                         harmonic_function u, const void *context, struct vec2 at);

/** ln b and -1/|at - (z, 0)| (context: double z) in a turned plane: coaxial tubes and
 *  concentric spheres. The flux of their gradients per radian is the length, and 2. */
double tube_u(const void *context, struct vec2 at, struct vec2 *gradient);
double sphere_u(const void *context, struct vec2 at, struct vec2 *gradient);

#endif
