/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_OUTPUT_SHEET_H
#define EVENGAP_OUTPUT_SHEET_H

/* The result as plain text, at most 88 columns: verdict first, then every figure, then
 * how far the numbers can be trusted and what they take for granted. */

#include "output/sink.h"
#include "solver/result.h"

/** Prints the sheet. The caller closes the sink. */
void sheet_write(struct sink *sink, const struct result *result);

#endif
