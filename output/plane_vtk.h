/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_OUTPUT_PLANE_VTK_H
#define EVENGAP_OUTPUT_PLANE_VTK_H

/* One plane as a legacy VTK text file. */

#include "output/sink.h"
#include "solver/result.h"

/** Writes a plane on its finest grid as RECTILINEAR_GRID, file coordinates (x, y, z) =
 *  plane axes (a, b, 0), metres, with point data
 *      potential   double, V or A
 *      part        int, index of the part, -1 free space, -2 .. -5 a wall (low a, high
 *                  a, low b, high b)
 *      electric_field (V/m) or magnetic_flux_density (T), three doubles along (a, b),
 *                  the third 0; zero inside parts
 *  Axes and units stand in the title line. The caller closes the sink.
 *  STATUS_UNTRUSTED with a message, before anything is written, if a value is not
 *  finite.
 *  Source: file format of the Visualization Toolkit, legacy version 3.0. */
enum status plane_vtk_write(struct sink *sink, enum plane_kind kind,
                            const struct plane_result *plane,
                            struct messages *messages) MUST_CHECK;

#endif
