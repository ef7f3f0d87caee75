/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_TESTS_HONESTY_MAP_H
#define EVENGAP_TESTS_HONESTY_MAP_H

/* Conformal maps of half a gap onto the upper half of the t plane. The gap is the unit of
 * length, x = 0 the plate's (or pole's) first corner, x outward, y = 0 the mid plane
 * (t > 0); deep inside the gap t = 0. With G(t) the product of (t + at_k)^power_k
 *     dz/dt = A G(t)/t,  A = 1/(2 pi G(0)),
 *     complex potential = (1/2 pi) [ln t - ln(1 + t) if there is a conductor at 0 for
 *     t < -1], potential 0 on the mid plane and 1/2 on the plate. */

#include <complex.h>
#include <math.h>
#include <stdbool.h>

#include "shared/vec2.h"

/* re + i im; not every library has CMPLX. */
static inline double complex complex_of(double re, double im)
{
    return re + im * (double complex)I;
}

/* exp(i angle). */
static inline double complex turn_by(double angle)
{
    return complex_of(cos(angle), sin(angle));
}

struct half_gap {
    int factors;
    double at[3], power[3];
    double corner;  /* t = -corner is at x = 0, corner > 0 */
    bool has_clamp; /* the conductor at 0 */
};

/** Edge of thin plates (Maxwell), of a square pole (Schwarz-Christoffel). */
struct half_gap half_gap_thin_edge(void);
struct half_gap half_gap_square_edge(void);

/** Square end facing a thick clamp, thin end facing a thin clamp; distance and aperture
 *  in gaps. */
struct half_gap half_gap_thick_clamp(double distance, double aperture);
struct half_gap half_gap_thin_clamp(double distance, double aperture);

/** Thin plate between the mid plane and an earthed plane at y = height (> 1/2). */
struct half_gap half_gap_between_planes(double height);

/** A gap that widens at a step from half height 1/2 to `height` (> 1/2); the far side
 *  goes on with the plate's potential. */
struct half_gap half_gap_step(double height);

/** x on the mid plane at t > 0, and back. */
double half_gap_x(const struct half_gap *map, double t);
double half_gap_t(const struct half_gap *map, double x);

struct map_point {
    struct vec2 at;    /* gaps */
    double potential;  /* of the full voltage V across the gap */
    struct vec2 field; /* of V/gap */
};

/** Point with parameter t (imaginary part >= 0). */
struct map_point half_gap_point(const struct half_gap *map, double complex t);

/** |field| on the mid plane over its value deep inside. */
double half_gap_field(const struct half_gap *map, double t);

/** Flux through the mid plane between two parameters, per V. */
double half_gap_flux(const struct half_gap *map, double from, double to);

/** Integrals of F and of F (1 - F) over x between two parameters, F = field over its
 *  value at t = from. */
double half_gap_length(const struct half_gap *map, double from, double to);
double half_gap_fringe(const struct half_gap *map, double from, double to);

#endif
