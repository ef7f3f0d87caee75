/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_MESH_EXPRESSION_H
#define EVENGAP_MESH_EXPRESSION_H

/* Arithmetic with units and names, as written in the geometry file:
 *
 *     + - * /   and ( ), ^ or ** with a whole exponent, a sign in front
 *     sqrt abs min max sin cos tan, pi
 *
 * A unit stands directly behind a number and belongs to it before anything else is
 * done: 1/2 mm is 1/(2 mm). Several units in a row are multiplied (8 kg m); a power is
 * part of the unit (4 mm^2 or 4 mm2); "/" goes on with the unit if the word behind it is
 * a unit and no value or supply of the file has that name (2.5 kV/mm). Everywhere else a
 * word is a name, so a value may share its name with a unit. A bare 0 fits any unit. */

#include <stdbool.h>

#include "mesh/affine.h"
#include "mesh/document.h"
#include "mesh/symbols.h"

/** Evaluates the text of a scalar. False after a mistake has been reported (result is
 *  then a bare zero); also for a node that is no scalar or is empty. Supplies may be
 *  used only where supplies_allowed. */
bool expression_evaluate(struct symbols *symbols, const struct node *node,
                         bool supplies_allowed, struct affine *result);

/** True if the word means something in every expression (a function or pi). */
bool expression_word_is_taken(const char *word);

/** Reads a number (digits, optional point and exponent) at *at and moves *at behind it.
 *  False, with *at untouched, if there is none; *value may be infinite. */
bool expression_number(const char **at, double *value);

#endif
