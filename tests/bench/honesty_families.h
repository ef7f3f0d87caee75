/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_TESTS_HONESTY_FAMILIES_H
#define EVENGAP_TESTS_HONESTY_FAMILIES_H

/* The cases of the honesty benchmark, by kind of exact solution. */

#include "tests/bench/honesty_case.h"

/** Concentric and eccentric cylinders (all surfaces are cut legs). */
void honesty_round(struct honesty_tally *tally);

/** Closed boxes: square lines, straight and turned, side walls, slots, uniform fields. */
void honesty_boxes(struct honesty_tally *tally);

/** Ends of plates and poles without clamps, plates between planes, steps. */
void honesty_edges(struct honesty_tally *tally);

/** Plates and poles that face clamps, with effective edges and fringe integrals. */
void honesty_clamps(struct honesty_tally *tally);

/** Turned planes: coaxial tubes, spheres within each other, cans. */
void honesty_turned(struct honesty_tally *tally);

/** Insulators: rods and shells in a lattice, layered lines, spheres and cans, interfaces
 *  along field lines. */
void honesty_insulators(struct honesty_tally *tally);

/** Floating conductors with and without a charge. */
void honesty_floating(struct honesty_tally *tally);

/** Capacitance matrices and forces. */
void honesty_conductors(struct honesty_tally *tally);

/** Open sides: wires, spheres and discs in free space. */
void honesty_open(struct honesty_tally *tally);

#endif
