/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_TRACK_H
#define EVENGAP_SOLVER_TRACK_H

/* One particle followed through the mid plane y = 0 of both along planes, from the start
 * of the path to its end: E_x, E_z of electric_along and B_y of magnetic_along (uniform
 * along x). Relativistic; the coordinate z is the independent variable. */

#include "shared/attributes.h"
#include "shared/status.h"
#include "solver/view.h"

struct particle {
    double mass;   /* kg */
    double charge; /* C, signed */
    double speed;  /* m/s, along z at the start */
};

struct exit_state {
    double x;       /* m, sideways place at the end of the path */
    double slope;   /* dx/dz there */
    bool lost;      /* it hit a part, left the region or turned back before the end */
    double lost_at; /* m, z where that happened */
};

/** Follows the particle from (from, x = 0) along z to `to` in `steps` equal steps of the
 *  classical Runge-Kutta method (order 4). Both along planes must be in the view.
 *  Losing the particle is no error. */
enum status track_particle(const struct view *view, const struct particle *particle,
                           double from, double to, int steps,
                           struct exit_state *exit) MUST_CHECK;

#endif
