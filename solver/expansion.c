/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "solver/expansion.h"

#include <math.h>
#include <string.h>

#include "shared/constants.h"

enum { CIRCLE_POINTS = 64 };

/* A centre field below this share of the largest on the circle is none. */
#define CENTRE_SHARE 1e-9

/* The analytic function of the plane at a point: E_x - i E_y, or B_y + i B_x. */
static enum status analytic_at(const struct plane_solution *plane, struct vec2 at,
                               double value[2])
{
    double field[2];
    int part;
    enum status status = plane_field(plane, at, field, &part);
    const bool magnetic = plane_kind_is_magnetic(plane->plane->kind);
    value[0] = magnetic ? field[1] : field[0];
    value[1] = magnetic ? field[0] : -field[1];
    if (status == STATUS_OK && part >= 0)
        status = STATUS_SIZE;
    return status;
}

static void add_point(struct expansion *e, const double f[2], double angle)
{
    for (int n = 0; n < EXPANSION_TERMS; n++) {
        const double c = cos(n * angle) / CIRCLE_POINTS;
        const double s = -sin(n * angle) / CIRCLE_POINTS;
        e->real[n] += f[0] * c - f[1] * s;
        e->imag[n] += f[0] * s + f[1] * c;
    }
}

enum status expansion_of_plane(const struct plane_solution *plane, double radius,
                               struct expansion *expansion)
{
    double largest = 0.0;
    memset(expansion, 0, sizeof *expansion);
    expansion->radius = radius;
    for (int k = 0; k < CIRCLE_POINTS; k++) {
        const double angle = 2.0 * PI * k / CIRCLE_POINTS;
        const struct vec2 at = {radius * cos(angle), radius * sin(angle)};
        double f[2];
        enum status status = analytic_at(plane, at, f);
        if (status != STATUS_OK)
            return status;
        add_point(expansion, f, angle);
        largest = fmax(largest, hypot(f[0], f[1]));
    }
    expansion->centre = expansion->real[0];
    /* Not decided by round-off: where the centre field vanishes by symmetry it must be
     * found so on every grid. */
    if (fabs(expansion->centre) <= CENTRE_SHARE * largest)
        return STATUS_SIZE;
    for (int n = 0; n < EXPANSION_TERMS; n++) {
        expansion->real[n] /= expansion->centre;
        expansion->imag[n] /= expansion->centre;
    }
    return STATUS_OK;
}
