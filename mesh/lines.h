/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_MESH_LINES_H
#define EVENGAP_MESH_LINES_H

/* Graded grid lines along one axis. Key lines are kept; between them lines crowd
 * towards key lines that carry a singularity, by a power of the distance to it. The
 * lines are images of equal steps of a mapped coordinate, so halving all steps gives a
 * nested grid whose error is a clean series in the step. Behind an end that is open the
 * lines go on in steps that grow with the distance. */

#include <stdbool.h>
#include <stddef.h>

#include "shared/attributes.h"
#include "shared/status.h"

struct key_line {
    double at;        /* m */
    double power;     /* exponent of the distance: 0 no crowding, < 1 */
    double softening; /* m, added to the distance: about a radius where round */
    double crowding;  /* factor on the number of lines it asks for up to about the
                         reference distance; 0 counts as 1 */
};

/* Spacing at x: the smooth minimum of `coarsest` and, over the key lines, of
 * at_reference / crowding * ((distance + softening)/reference)^power. */
struct line_spacing {
    double coarsest;     /* m, never more than this */
    double at_reference; /* m, at the distance `reference` from a key */
    double reference;    /* m */
};

/** Lines from low to high. The key lines within (low, high) are lines of the grid; keys
 *  closer together than `merge` (m) become one. Every stretch between key lines has at
 *  least two intervals at level 0; level k halves all of them k times. *lines is
 *  allocated, increasing, lines[0] = low and lines[count-1] = high exactly.
 *  Returns STATUS_SIZE if more than INT_MAX/2 lines would be needed or the input is not
 *  finite, STATUS_MEMORY.
 *  Source: power of the distance mu = 1 - 2 lambda/3 for a potential ~ r^lambda at the
 *  corner: measured optimum for second order in the energy (cf. Raugel 1978; from
 *  memory). */
enum status lines_build(double low, double high, const struct key_line *keys,
                        size_t key_count, struct line_spacing spacing, double merge,
                        int level, double **lines, int *count) MUST_CHECK;

/* Lines behind an open end: the spacing at the distance d from the end is that of the
 * last interval before it plus growth * d. */
struct line_tail {
    double growth;   /* of the spacing with d; exp(growth) from line to line far out */
    double distance; /* m, the last line stands at least that far */
    double reach;    /* factor on the distance so reached */
};

/** Lines beyond one end of lines[*count] (which end: see high), at the distances
 *      first/growth * (exp(growth k) - 1), k = 1, 2, ...,
 *  first the last interval at level 0, with 2^level steps to each k.
 *  The lines that are there stay as they are, those added do not depend on reach, and
 *  levels nest: a larger reach only adds lines behind.
 *  Returns STATUS_SIZE (more than INT_MAX/2 lines, or the input is not positive and
 *  finite, or there are less than 2^level intervals) or STATUS_MEMORY, with the lines
 *  as they were. */
enum status lines_extend(double **lines, int *count, bool high, struct line_tail tail,
                         int level) MUST_CHECK;

/** Exponent for a sharp corner whose free space spans free_angle (rad): 1 - 2 lambda/3
 *  with lambda = pi/free_angle, 0 where the potential is smooth (lambda >= 3/2). */
double lines_corner_power(double free_angle);

#endif
