/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_OUTPUT_RESULT_FOLDER_H
#define EVENGAP_OUTPUT_RESULT_FOLDER_H

/* All files of a result, put in place together. */

#include "shared/attributes.h"
#include "shared/message.h"
#include "shared/status.h"
#include "solver/result.h"

#define RESULT_KIND  "summary"
#define DRAWING_KIND "drawing"

/** Writes the result folder at `path`: <plane>.vtk and <plane>.svg for every plane,
 *  path.csv and path.svg, ratio_map.svg, convergence.svg, lattice.vtk and lattice.csv
 *  (each where there is something to write), sheet.txt, report.html, summary.json. On any
 *  failure a previous folder is left as it was. STATUS_WRITE or STATUS_UNTRUSTED with a message,
 *  STATUS_MEMORY. */
enum status result_folder_write(const struct result *result, const char *path,
                                struct messages *messages) MUST_CHECK;

/** Writes the folder of a drawing: <plane>.svg with parts and grid for every plane that
 *  is present, and summary.json. grids[PLANE_KINDS]. Without gnuplot there is nothing
 *  to show: STATUS_WRITE. Other errors as above. */
enum status result_folder_write_drawing(const struct geometry *geometry,
                                        const struct grid *grids, const char *path,
                                        struct messages *messages) MUST_CHECK;

#endif
