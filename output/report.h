/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_OUTPUT_REPORT_H
#define EVENGAP_OUTPUT_REPORT_H

/* report.html: verdict, figures, plots and cautions on one page that can be sent as a
 * single file; the pictures are inside it. */

#include "output/folder.h"
#include "solver/result.h"

/** Writes the report into the folder, with every *.svg the folder has so far.
 *  STATUS_WRITE with a message, STATUS_MEMORY. */
enum status report_write(struct folder *folder, const struct result *result,
                         struct messages *messages) MUST_CHECK;

#endif
