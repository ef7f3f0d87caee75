/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_DOUBLING_H
#define EVENGAP_SOLVER_DOUBLING_H

/* The doubling test of open sides: the planes that have any are solved once more with the
 * earth that stands far away moved (at least) twice as far, on a grid that holds all
 * lines of the first. What changes is due to the distance alone.
 *
 * An error that falls as R^-n is change / (1 - 2^-n): at most twice the change for n >= 1,
 * which covers all turned planes (n = 1 where the parts together carry a charge) and
 * planar ones without net charge (n >= 2). With net charge the potential of a planar plane
 * grows as ln R; a figure v + A / ln(R/s) is off by change * log2(2 R/s), s the size of
 * what is charged. The larger of the two factors a plane can need times the change is
 * added to every uncertainty, and a figure for which that is more than DOUBLING_SHARE of
 * its scale is unsettled. */

#include "mesh/geometry.h"
#include "shared/attributes.h"
#include "shared/status.h"
#include "solver/figure.h"
#include "solver/path.h"
#include "solver/plane_solution.h"
#include "solver/result.h"

#define DOUBLING_SHARE 1e-3

/** True if the plane is there and has an open side. */
bool doubling_needed(const struct plane *plane);

/** Distance and factor of a plane on the given level; the rest of the test is zeroed. */
struct open_test doubling_begin(const struct plane_solution *near, int level);

/** Widens the figures that use planes whose test is done (planes[PLANE_KINDS], also
 *  updated) by what `near` and `far` say: the figures of one level before and after.
 *  STATUS_UNTRUSTED if the lists do not match, STATUS_MEMORY. */
enum status doubling_figures(const struct figures *near, const struct figures *far,
                             struct plane_result *planes,
                             struct figures *figures) MUST_CHECK;

/** The same for the uncertainties of the profile along the axis. */
void doubling_profile(const struct path *near, const struct path *far,
                      const struct plane_result *planes, struct profile *profile);

/** The same for the probes: moved[count] are the readings extrapolated over the pair
 *  near, far, whose uncertainties are their change. */
void doubling_probes(const struct probe_reading *moved, size_t count,
                     const struct plane_result *planes, struct probe_reading *probes);

#endif
