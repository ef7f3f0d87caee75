/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_TESTS_HONESTY_CAN_H
#define EVENGAP_TESTS_HONESTY_CAN_H

/* Turned planes by separation of variables: a can with one end at 1 V, and a tube whose
 * potential runs along it. */

#include <stdbool.h>

#include "shared/vec2.h"

/* The end z = 0 is at 1 V, the mantle at 0, the far end at 0 or a mirror. An insulator of
 * the given permittivity lies on the first end. */
struct can {
    double radius, length; /* m */
    double layer;          /* m, thickness of the insulator, below the length */
    double permittivity;
    bool mirror;
};

/** Potential and field at (z, r), z from a quarter of the radius on: a series of J0.
 *  Source  Jackson, Classical Electrodynamics, sec. 3.7 (from memory). */
double can_at(const struct can *can, struct vec2 at, struct vec2 *field);

/** The same in a tube with mirror ends whose mantle is at z/length: a series of I0. */
double ramp_at(double radius, double length, struct vec2 at, struct vec2 *field);

#endif
