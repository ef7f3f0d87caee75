/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_OUTPUT_PATH_CSV_H
#define EVENGAP_OUTPUT_PATH_CSV_H

/* Fields and ratio along the axis as a table (RFC 4180: comma, CRLF, one header row).
 * The unit is part of each column's name. */

#include "output/sink.h"
#include "solver/result.h"

/** Columns: z_m, E_x_V_per_m, E_x_uncertainty_V_per_m, B_y_T, B_y_uncertainty_T,
 *  ratio_error, ratio_error_uncertainty, footprint_lowest_ratio_error,
 *  footprint_highest_ratio_error, force_imbalance. A cell is empty where its plane is
 *  missing, and the ratio cells also where the fields are too weak to divide.
 *  force_imbalance is (E_x - u_ref B_y) / E_x(reference). */
void path_csv_write(struct sink *sink, const struct profile *profile);

#endif
