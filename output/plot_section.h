/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_OUTPUT_PLOT_SECTION_H
#define EVENGAP_OUTPUT_PLOT_SECTION_H

/* ratio_map.svg: how even the pass speed is over the cross-section. */

#include "output/folder.h"
#include "solver/result.h"

/** Map of the ratio error over the footprint with contour lines, the limit where there
 *  is one, and the circle of the figure even_radius where there is one. Nothing is
 *  drawn without both across planes. Errors as plot_end. */
enum status plot_section(struct folder *folder, const struct result *result,
                         bool *drawn, struct messages *messages) MUST_CHECK;

#endif
