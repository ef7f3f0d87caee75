/* SPDX-License-Identifier: GPL-3.0-or-later */

/* State: x, momentum p_x, p_z. With velocity v = p/(gamma m),
 *     dx/dz = p_x/p_z,
 *     dp_x/dz = q (E_x/v_z - B_y),
 *     dp_z/dz = q (E_z/v_z + (p_x/p_z) B_y). */

#include "solver/track.h"

#include <math.h>

#include "shared/constants.h"

struct motion {
    double x, px, pz;
};

struct tracker {
    const struct plane_solution *electric;
    const struct plane_solution *magnetic;
    struct particle particle;
    bool lost;
};

static enum status slope_at(struct tracker *t, double z, const struct motion *m,
                            struct motion *slope)
{
    double e[2] = {0.0, 0.0}, b[2] = {0.0, 0.0};
    int part = -1;
    *slope = (struct motion){0.0, 0.0, 0.0};
    const struct vec2 at = {z, m->x};
    if (!(m->pz > 0.0) || !field_covers(&t->electric->grid, at)) {
        t->lost = true;
        return STATUS_OK;
    }
    enum status status = plane_field(t->electric, at, e, &part);
    if (status == STATUS_OK)
        status = plane_field(t->magnetic, (struct vec2){z, 0.0}, b, NULL);
    if (status != STATUS_OK)
        return status;
    t->lost = part >= 0;
    const double mc = t->particle.mass * SPEED_OF_LIGHT;
    const double p2 = m->px * m->px + m->pz * m->pz;
    const double gamma = sqrt(1.0 + p2 / (mc * mc));
    const double vz = m->pz / (gamma * t->particle.mass), q = t->particle.charge;
    slope->x = m->px / m->pz;
    slope->px = q * (e[1] / vz - b[1]);
    slope->pz = q * (e[0] / vz + slope->x * b[1]);
    return STATUS_OK;
}

static struct motion advanced(const struct motion *m, const struct motion *slope,
                              double h)
{
    return (struct motion){m->x + h * slope->x, m->px + h * slope->px,
                           m->pz + h * slope->pz};
}

static enum status step_once(struct tracker *t, double z, double h, struct motion *m)
{
    struct motion k[4], at = *m;
    static const double ahead[4] = {0.0, 0.5, 0.5, 1.0};
    for (int s = 0; s < 4; s++) {
        if (s > 0)
            at = advanced(m, &k[s - 1], ahead[s] * h);
        enum status status = slope_at(t, z + ahead[s] * h, &at, &k[s]);
        if (status != STATUS_OK || t->lost)
            return status;
    }
    m->x += h / 6.0 * (k[0].x + 2.0 * k[1].x + 2.0 * k[2].x + k[3].x);
    m->px += h / 6.0 * (k[0].px + 2.0 * k[1].px + 2.0 * k[2].px + k[3].px);
    m->pz += h / 6.0 * (k[0].pz + 2.0 * k[1].pz + 2.0 * k[2].pz + k[3].pz);
    return STATUS_OK;
}

enum status track_particle(const struct view *view, const struct particle *particle,
                           double from, double to, int steps, struct exit_state *exit)
{
    struct tracker t = {view->planes[PLANE_ELECTRIC_ALONG],
                        view->planes[PLANE_MAGNETIC_ALONG], *particle, false};
    const double beta = particle->speed / SPEED_OF_LIGHT, h = (to - from) / steps;
    const double gamma = 1.0 / sqrt(1.0 - beta * beta);
    struct motion m = {0.0, 0.0, gamma * particle->mass * particle->speed};
    enum status status = STATUS_OK;
    *exit = (struct exit_state){0.0, 0.0, false, 0.0};
    for (int k = 0; k < steps && status == STATUS_OK && !t.lost; k++) {
        const double z = from + h * k;
        status = step_once(&t, z, h, &m);
        if (t.lost)
            exit->lost_at = z;
    }
    exit->lost = t.lost;
    if (!t.lost) {
        exit->x = m.x;
        exit->slope = m.px / m.pz;
    }
    return status;
}
