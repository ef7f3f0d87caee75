/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_OUTPUT_SHEET_FIGURES_H
#define EVENGAP_OUTPUT_SHEET_FIGURES_H

/* The figures as the sheet shows them: one line each, but expansions and the figures of
 * the parts as tables, and figures that are missing for the same reason in one entry. */

#include "output/sink.h"
#include "solver/figure.h"

/** Prints all groups of figures with their headings. */
void sheet_figures(struct sink *sink, const struct figures *figures);

#endif
