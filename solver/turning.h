/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_TURNING_H
#define EVENGAP_SOLVER_TURNING_H

/* How far to turn each knob. Knob k accounts for the share s_k of the error of
 * a figure, which falls with the order p of its lines, and its lines cost c_k
 * unknowns, which grow with their square. The fewest unknowns for a given
 * error, min sum c_k F_k^2   with   sum s_k F_k^-p = target, are those of F_k =
 * lambda (s_k/c_k)^(1/(p+2)) (Lagrange), where that is above 1. Knobs that
 * matter little or cost much so stay as they are. */

#include "solver/knob.h"

/** Sets `turn` of all knobs to what the aims that are not within `within` ask
 * for, the largest over these. What all lines of a plane account for beyond its
 * parts is the share of that knob; its turn multiplies the lines near parts
 * too. */
enum status turning_choose(struct knobs *knobs, const struct aims *aims,
                           double within) MUST_CHECK;

#endif
