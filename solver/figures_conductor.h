/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_FIGURES_CONDUCTOR_H
#define EVENGAP_SOLVER_FIGURES_CONDUCTOR_H

/* Figures of the conductors of an electric plane (conductor.h), and how to find the
 * capacitance matrix again in a list of figures. */

#include <stdbool.h>
#include <stddef.h>

#include "solver/figure_maker.h"

/* Conductors up to which the matrix is given. */
enum { MATRIX_CONDUCTORS = 8 };

/** Appends "capacitance_matrix", subject "first, second", rows of the upper half one
 *  after the other: the charge on one conductor per volt on the other with all else
 *  earthed, mean of both orders. Held conductors have no row. Nothing where there are
 *  fewer than two rows; missing once, with the number, where there are more than
 *  MATRIX_CONDUCTORS. */
void figures_matrix(struct maker *maker, const struct plane_solution *plane);

/** Appends "force_x", "force_y", "force_z" of every conductor that is not held: along both
 *  axes, in a turned plane along z. */
void figures_force(struct maker *maker, const struct plane_solution *plane);

/* The matrix of one plane in a list of figures. */
struct matrix_view {
    const struct figure *first; /* borrowed */
    size_t count;               /* conductors */
};

/** False if the list has no matrix of that plane. */
bool matrix_find(const struct figures *figures, enum plane_kind kind,
                 struct matrix_view *view);

/** Entry i, j, in either order; i, j < count. */
const struct figure *matrix_entry(const struct matrix_view *view, size_t i, size_t j);

/** Name of conductor i, cut to fit text[size]. */
void matrix_name(const struct matrix_view *view, size_t i, char *text, size_t size);

#endif
