/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_OUTPUT_SHEET_CONDUCTORS_H
#define EVENGAP_OUTPUT_SHEET_CONDUCTORS_H

/* Tables of the conductors of electric planes: forces and capacitance matrices. */

#include <stdbool.h>

#include "output/sink.h"
#include "solver/figure.h"

/** True for a figure that these tables show. */
bool sheet_is_conductor_figure(const struct figure *figure);

/** The tables of all planes; nothing where there are none. */
void sheet_conductors(struct sink *sink, const struct figures *figures);

#endif
