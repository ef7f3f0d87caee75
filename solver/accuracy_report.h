/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_ACCURACY_REPORT_H
#define EVENGAP_SOLVER_ACCURACY_REPORT_H

/* What the refinement ended with, in words for the result. */

#include "shared/attributes.h"
#include "shared/status.h"
#include "solver/aim.h"
#include "solver/result.h"
#include "solver/solve.h"

/** Fills result->accuracy; the count of rounds in it stays. STATUS_MEMORY. */
enum status accuracy_report(const struct aims *aims, enum accuracy_state state,
                            double within, const struct solve *solve,
                            struct result *result) MUST_CHECK;

#endif
