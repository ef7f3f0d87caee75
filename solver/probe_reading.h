/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_PROBE_READING_H
#define EVENGAP_SOLVER_PROBE_READING_H

/* Readings of the probes, extrapolated over the family. */

#include "shared/attributes.h"
#include "shared/status.h"
#include "solver/result.h"
#include "solver/view.h"

/** Reads every probe in every plane it belongs to: the named plane, or all planes that
 *  hold it (across planes only if the probe stands at the reference z or gives none).
 *  views[count], coarse to fine. *readings is allocated. */
enum status probes_read(const struct view *views, int count,
                        struct probe_reading **readings,
                        size_t *reading_count) MUST_CHECK;

#endif
