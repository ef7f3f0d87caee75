/* SPDX-License-Identifier: GPL-3.0-or-later */

/* One kind or the other, told by the radial functions that only a turned plane has. */

#include "solver/local_fit.h"

size_t local_fit_work(int count)
{
    return (size_t)count * (HARMONIC_TERMS + 1);
}

enum status local_fit_make(const struct turned_radial *radial,
                           const struct fit_point *points, int count,
                           struct vec2 centre, bool exact, double *work,
                           struct local_fit *fit)
{
    fit->turned = radial != NULL;
    if (fit->turned)
        return (exact ? turned_fit_exact : turned_fit)(radial, points, count, centre,
                                                       work, &fit->of.turned);
    return (exact ? harmonic_fit_exact : harmonic_fit)(points, count, centre, work,
                                                       &fit->of.planar);
}

double local_fit_value(const struct local_fit *fit, struct vec2 at,
                       struct vec2 *gradient)
{
    return fit->turned ? turned_value(&fit->of.turned, at, gradient)
                       : harmonic_value(&fit->of.planar, at, gradient);
}
