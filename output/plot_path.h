/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_OUTPUT_PLOT_PATH_H
#define EVENGAP_OUTPUT_PLOT_PATH_H

/* path.svg: what the particle meets on its way. */

#include "output/folder.h"
#include "solver/result.h"

/** Panels over one z axis: extents of the parts; E_x and B_y relative to their values
 *  at the reference point; force imbalance; ratio error with the footprint's range and
 *  the limit. Panels without data are left out; nothing is drawn without a profile.
 *  Errors as plot_end. */
enum status plot_path(struct folder *folder, const struct result *result, bool *drawn,
                      struct messages *messages) MUST_CHECK;

#endif
