/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_VERDICT_H
#define EVENGAP_SOLVER_VERDICT_H

/* Judges the limits of the file against the figures. */

#include "shared/attributes.h"
#include "shared/status.h"
#include "solver/result.h"

/** Fills result->verdict from its figures. A limit is met only if the figure holds with
 *  its uncertainty on the bad side; a missing or unsettled figure does not meet it. Of
 *  several figures (surface fields) the worst one is judged. */
enum status verdict_judge(struct result *result) MUST_CHECK;

/** Name of the figure (or of all the figures) that a limit refers to. */
const char *verdict_figure_name(enum limit_kind kind);

void verdict_free(struct verdict *verdict);

#endif
