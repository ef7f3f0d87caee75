/* SPDX-License-Identifier: GPL-3.0-or-later */

/* An empty cell says "not known"; a zero would be a claim. */

#include "output/path_csv.h"

#include <math.h>

static void write_cell(struct sink *sink, const double *values, size_t k, bool shown)
{
    if (values && shown && isfinite(values[k]))
        sink_print(sink, ",%.12g", values[k] + 0.0);
    else
        sink_print(sink, ",");
}

static void write_row(struct sink *sink, const struct profile *profile, size_t k)
{
    bool ratio = profile->ratio_error && profile->defined && profile->defined[k];
    bool bundle = ratio && profile->has_bundle;
    sink_print(sink, "%.12g", profile->z[k] + 0.0);
    write_cell(sink, profile->e_x, k, true);
    write_cell(sink, profile->e_x_err, k, profile->e_x != NULL);
    write_cell(sink, profile->b_y, k, true);
    write_cell(sink, profile->b_y_err, k, profile->b_y != NULL);
    write_cell(sink, profile->ratio_error, k, ratio);
    write_cell(sink, profile->ratio_error_err, k, ratio);
    write_cell(sink, profile->bundle_low, k, bundle);
    write_cell(sink, profile->bundle_high, k, bundle);
    write_cell(sink, profile->imbalance, k, true);
    sink_print(sink, "\r\n");
}

void path_csv_write(struct sink *sink, const struct profile *profile)
{
    sink_print(sink, "z_m,E_x_V_per_m,E_x_uncertainty_V_per_m,B_y_T,B_y_uncertainty_T,"
                     "ratio_error,ratio_error_uncertainty,"
                     "footprint_lowest_ratio_error,footprint_highest_ratio_error,"
                     "force_imbalance\r\n");
    for (size_t k = 0; k < profile->count; k++)
        write_row(sink, profile, k);
}
