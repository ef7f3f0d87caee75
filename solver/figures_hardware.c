/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Figures of the hardware, per metre of depth: charges, capacitances, energy, surface
 * fields and fluxes. */

#include <math.h>
#include <stdio.h>

#include "shared/constants.h"
#include "solver/figure_maker.h"
#include "solver/surface_field.h"

enum { NOTE_SIZE = 200 };

/* Energy per metre, W = half the sum of potential times charge over parts and sides.
 * Walls with a potential that runs along them are left out: their energy needs the
 * charge density (note says so). */
static double energy_of(const struct plane_solution *plane, double factor)
{
    double sum = 0.0;
    for (size_t p = 0; p < plane->plane->part_count; p++)
        sum += plane->part_value[p] * plane->part_flux[p];
    return 0.5 * factor * sum;
}

static bool walls_are_earthed(const struct plane_solution *plane)
{
    for (int s = 0; s < SIDE_COUNT; s++) {
        const struct side *side = &plane->plane->sides[s];
        if (side->kind == SIDE_WALL &&
            (geometry_potential(plane->geometry, &side->from) != 0.0 ||
             geometry_potential(plane->geometry, &side->to) != 0.0))
            return false;
    }
    return true;
}

static void add_energy(struct maker *maker, const struct plane_solution *plane)
{
    const struct figure_key key = {"stored_energy", "stored energy per metre", "J/m",
                                   0.0};
    const char *subject = plane_kind_key(plane->plane->kind);
    if (walls_are_earthed(plane))
        maker_add(maker, key, energy_of(plane, VACUUM_PERMITTIVITY), subject, NULL);
    else
        maker_miss(maker, key, subject,
                   "a wall of the region is not at zero potential");
}

static void surface_note(const struct surface_peak *peak, const struct plane *plane,
                         char *note, size_t size)
{
    char radius[64] = "flat face", corner[80] = "";
    if (isfinite(peak->radius))
        (void)snprintf(radius, sizeof radius, "radius %.4g mm", peak->radius * 1e3);
    if (peak->corner_distance > 0.0)
        (void)snprintf(corner, sizeof corner,
                       "; looked at from %.3g mm on beside sharp corners",
                       peak->corner_distance * 1e3);
    (void)snprintf(note, size, "%s, at %s = %.5g, %s = %.5g mm%s", radius,
                   axis_key(plane_kind_axis(plane->kind, 0)), peak->at.a * 1e3,
                   axis_key(plane_kind_axis(plane->kind, 1)), peak->at.b * 1e3, corner);
}

static void add_surface(struct maker *maker, const struct plane_solution *plane,
                        size_t part)
{
    const char *name = plane->plane->parts[part].name;
    const struct figure_key key = {"surface_field", "surface field, peak", "V/m", 0.0};
    struct surface_peak peak = {0};
    char note[NOTE_SIZE];
    enum status status = surface_field_peak(plane, part, &peak);
    if (maker->status == STATUS_OK)
        maker->status = status;
    surface_note(&peak, plane->plane, note, sizeof note);
    maker_add_or_miss(maker, key, peak.field, name, note,
                      peak.found ? NULL : "no surface in free space");
}

/* Largest potential of the plane: sets the scale against which charges and fluxes that
 * vanish by symmetry are judged. */
static double potential_scale(const struct plane_solution *plane)
{
    double scale = 0.0;
    for (size_t p = 0; p < plane->plane->part_count; p++)
        scale = fmax(scale, fabs(plane->part_value[p]));
    return scale;
}

static void add_electric(struct maker *maker, const struct plane_solution *plane)
{
    const double scale = VACUUM_PERMITTIVITY * potential_scale(plane);
    maker->planes = plane_bit(plane->plane->kind);
    for (size_t p = 0; p < plane->plane->part_count; p++) {
        const char *name = plane->plane->parts[p].name;
        maker_add(maker,
                  (struct figure_key){"charge", "charge per metre", "C/m", scale},
                  VACUUM_PERMITTIVITY * plane->part_flux[p], name, NULL);
        maker_add_or_miss(
            maker,
            (struct figure_key){"capacitance", "capacitance per metre", "F/m", 0.0},
            VACUUM_PERMITTIVITY * plane->self_flux[p], name,
            "to everything else, earthed",
            plane_touches_wall(plane->plane, &plane->plane->parts[p])
                ? "the part touches a wall of the region"
                : NULL);
        add_surface(maker, plane, p);
    }
    add_energy(maker, plane);
}

static void add_magnetic(struct maker *maker, const struct plane_solution *plane)
{
    const double scale = VACUUM_PERMEABILITY * potential_scale(plane);
    maker->planes = plane_bit(plane->plane->kind);
    for (size_t p = 0; p < plane->plane->part_count; p++)
        maker_add(maker, (struct figure_key){"flux", "flux per metre", "Wb/m", scale},
                  VACUUM_PERMEABILITY * plane->part_flux[p],
                  plane->plane->parts[p].name, NULL);
}

enum status figures_hardware(const struct view *view, struct figures *figures)
{
    struct maker maker = {figures, FIGURE_HARDWARE, 0, STATUS_OK};
    for (int k = 0; k < PLANE_KINDS; k++) {
        const struct plane_solution *plane = view->planes[k];
        if (plane == NULL)
            continue;
        if (plane_kind_is_magnetic((enum plane_kind)k))
            add_magnetic(&maker, plane);
        else
            add_electric(&maker, plane);
    }
    return maker.status;
}
