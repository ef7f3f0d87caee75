/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_TESTS_LATTICE_OF_RODS_H
#define EVENGAP_TESTS_LATTICE_OF_RODS_H

/* A square lattice of round rods in a mean field of 1: exact to round-off. One cell of it,
 * with mirrors along the field and walls across it, is a rod in a box.
 *  Source  Rayleigh, Phil. Mag. 34, 481 (1892); Perrins, McKenzie and McPhedran, Proc. R.
 *          Soc. A 369, 207 (1979) (from memory; derived anew in the source file). */

#include "shared/vec2.h"

/* A rod with a core of another permittivity; core_radius 0: without one. Radii in units of
 * the lattice constant, radius below 1/2. */
struct rod {
    double radius, permittivity;
    double core_radius, core_permittivity;
};

enum { LATTICE_TERMS = 32 };

struct lattice_of_rods {
    double effective; /* permittivity of the lattice */
    double centre;    /* field on the axis of a rod, mean field 1 */
    struct rod rod;
    double
        core[LATTICE_TERMS]; /* shares of the potential on the axis, cos t, cos 3t, ...,
                                   continued to the radius */
};

struct lattice_of_rods lattice_of_rods(struct rod rod);

/** Potential, rising along a, and its gradient at a point of the cell round a rod, not its
 *  axis; mean field 1, lengths in units of the lattice constant. Within 0.56 of the axis
 *  to 1e-11 for radii up to 0.41; less and less towards the corners of the cell. */
double lattice_of_rods_at(const struct lattice_of_rods *lattice, struct vec2 at,
                          struct vec2 *gradient);

#endif
