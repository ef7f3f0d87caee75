/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_RATIO_H
#define EVENGAP_SOLVER_RATIO_H

/* The evenness of E/B along the path, from sampled fields. u = E_x/B_y is looked at only
 * where both fields are strong enough for a ratio to mean something; the force imbalance
 * E_x - u_ref B_y is meaningful everywhere. */

#include "solver/path.h"

/* Shares of the centre field: below the floor no ratio is given at all; peak and rms of
 * the ratio error are taken where both fields are at least the zone share. */
#define RATIO_FLOOR 0.01
#define RATIO_ZONE  0.5

/** True if both fields are on the path and not zero at the reference point. */
bool ratio_is_available(const struct path *path);

/** u_ref = E/B at the reference point (m/s); 0 if not available. */
double ratio_reference(const struct path *path);

/** True if both fields of line `line` at sample k are at least `share` of the centre
 *  fields and have their signs. */
bool ratio_is_defined(const struct path *path, int line_e, int line_b, int k,
                      double share);

/** u/u_ref - 1 for E on line line_e and B on line line_b at sample k. */
double ratio_error(const struct path *path, int line_e, int line_b, int k);

/* Evenness on the axis. */
struct ratio_summary {
    double peak;      /* largest |ratio error| in the zone */
    double peak_z;    /* m */
    double rms;       /* over the zone */
    double zone_from; /* m, first and last sample of the zone */
    double zone_to;
    double bundle_peak; /* largest |ratio error| in the zone over all lines */
    double flat_from;   /* m, stretch round the reference point with |error| <= bound */
    double flat_to;
    double imbalance;   /* largest |E_x - u_ref B_y| / |E_centre| on the whole path */
    double imbalance_z; /* m */
};

/** Fills the summary; bound is the ratio error that limits the flat stretch. The path
 *  must have both fields (ratio_is_available). The ends of the flat stretch are found
 *  between samples by linear interpolation. */
void ratio_summarise(const struct path *path, double reference_z, double bound,
                     struct ratio_summary *summary);

#endif
