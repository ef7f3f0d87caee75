/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_TESTS_HONESTY_SPHERES_H
#define EVENGAP_TESTS_HONESTY_SPHERES_H

/* A ball at 1 V and an earthed sphere round it, or an earthed plane beside it: charges on
 * the axis by successive images (Maxwell, Treatise, ch. XI; from memory). Units: a charge
 * q has the potential q/distance. */

#include "shared/vec2.h"

enum { IMAGES = 400 };

struct images {
    double at[IMAGES], charge[IMAGES]; /* [count] m along the axis; V m */
    int count;
    double inside; /* sum of the charges inside the ball */
};

/** Ball of radius `ball`, its centre at z = shift > 0, in a sphere about z = 0. */
void images_in_shell(double ball, double shell, double shift, struct images *images);

/** Ball with its centre at z = height > ball before the plane z = 0. */
void images_at_plane(double ball, double height, struct images *images);

/** Potential and field at (z, r) outside the ball, on the earth's free side. */
double images_at(const struct images *images, struct vec2 at, struct vec2 *field);

/** Charge of the ball per radian, without eps0. */
double images_flux(const struct images *images);

#endif
