/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Figures of the hardware: charges, capacitances, energy, forces, surface fields and
 * fluxes. Per metre of depth; in turned planes of the whole ring. */

#include <math.h>
#include <stdio.h>

#include "shared/constants.h"
#include "solver/figure_maker.h"
#include "solver/figures_conductor.h"
#include "solver/figures_surface.h"

enum { NOTE_SIZE = 200 };

/* Keys of figures whose unit depends on the plane: per metre, or of a whole ring. */
static const struct figure_key CHARGE[2] = {{"charge", "charge per metre", "C/m", 0.0},
                                            {"charge", "charge", "C", 0.0}};
static const struct figure_key CAPACITANCE[2] = {
    {"capacitance", "capacitance per metre", "F/m", 0.0},
    {"capacitance", "capacitance", "F", 0.0}};
static const struct figure_key ENERGY[2] = {
    {"stored_energy", "stored energy per metre", "J/m", 0.0},
    {"stored_energy", "stored energy", "J", 0.0}};

static struct figure_key key_of(const struct figure_key keys[2],
                                const struct plane_solution *plane, double scale)
{
    struct figure_key key = keys[plane_kind_is_turned(plane->plane->kind)];
    key.scale = scale;
    return key;
}

/* From the solver's flux to a charge. */
static double charge_factor(const struct plane_solution *plane)
{
    return VACUUM_PERMITTIVITY * plane_depth(plane->plane->kind);
}

/* Potentials of the two ends of a side at the settings. */
static void side_ends(const struct plane_solution *plane, int s, double ends[2])
{
    const struct side *side = &plane->plane->sides[s];
    const bool wall = side->kind == SIDE_WALL;
    ends[0] = wall ? geometry_potential(plane->geometry, &side->from) : 0.0;
    ends[1] = wall ? geometry_potential(plane->geometry, &side->to) : 0.0;
}

/* Why half the sum of potential times charge is not the energy; NULL if it is. */
static const char *energy_reason(const struct plane_solution *plane)
{
    double ends[SIDE_COUNT][2];
    for (int s = 0; s < SIDE_COUNT; s++) {
        side_ends(plane, s, ends[s]);
        if (ends[s][0] != ends[s][1])
            return "the potential of a wall runs along it";
    }
    for (int s = SIDE_A_LOW; s <= SIDE_A_HIGH; s++)
        for (int t = SIDE_B_LOW; t <= SIDE_B_HIGH; t++)
            if (plane->plane->sides[s].kind != SIDE_MIRROR &&
                plane->plane->sides[t].kind != SIDE_MIRROR && ends[s][0] != ends[t][0])
                return "sides of different potential meet in a corner, where the "
                       "energy has no bound";
    return NULL;
}

/* W = half the sum of potential times charge over parts and sides. */
static void add_energy(struct maker *maker, const struct plane_solution *plane)
{
    double sum = 0.0, ends[2];
    for (size_t p = 0; p < plane->plane->part_count; p++)
        sum += plane->part_value[p] * plane->part_flux[p];
    for (int s = 0; s < SIDE_COUNT; s++) {
        side_ends(plane, s, ends);
        sum += ends[0] * plane->side_flux[s];
    }
    maker_add_or_miss(maker, key_of(ENERGY, plane, 0.0),
                      0.5 * charge_factor(plane) * sum,
                      plane_kind_key(plane->plane->kind), NULL, energy_reason(plane));
}

/* Largest potential of the plane: sets the scale against which charges, potentials and
 * fluxes that vanish by symmetry are judged. */
static double potential_scale(const struct plane_solution *plane)
{
    double scale = 0.0, ends[2];
    for (size_t p = 0; p < plane->plane->part_count; p++)
        scale = fmax(scale, fabs(plane->part_value[p]));
    for (int s = 0; s < SIDE_COUNT; s++) {
        side_ends(plane, s, ends);
        scale = fmax(scale, fmax(fabs(ends[0]), fabs(ends[1])));
    }
    return scale;
}

/* Fluxes per volt are about 1; in a turned plane about the size of the region. */
static double flux_scale(const struct plane_solution *plane)
{
    const struct plane *p = plane->plane;
    const double size = fmax(p->high.a - p->low.a, p->high.b - p->low.b);
    return potential_scale(plane) * (plane_kind_is_turned(p->kind) ? size : 1.0);
}

/* The capacitance belongs to the conductor, told at its first part. */
static void add_capacitance(struct maker *maker, const struct plane_solution *plane,
                            size_t part)
{
    const struct conductors *all = &plane->capacitance.conductors;
    const struct conductor *conductor = &all->items[all->of_part[part]];
    const struct part *parts = plane->plane->parts;
    char text[NOTE_SIZE];
    const char *reason = NULL;
    if (conductor->first != part) {
        (void)snprintf(text, sizeof text, "one conductor with %s",
                       parts[conductor->first].name);
        reason = text;
    }
    if (conductor->held)
        reason = conductor->parts == 1
                     ? "the part touches a side of fixed potential"
                     : "the part is one conductor with a side of fixed potential";
    maker_add_or_miss(maker, key_of(CAPACITANCE, plane, 0.0),
                      charge_factor(plane) * plane->self_flux[part], parts[part].name,
                      conductor->parts == 1
                          ? "to everything else, earthed"
                          : "with the parts it touches, to everything else, earthed",
                      reason);
}

static void add_potential(struct maker *maker, const struct plane_solution *plane,
                          size_t part)
{
    const struct figure_key key = {"potential", "potential found", "V",
                                   potential_scale(plane)};
    if (plane->plane->parts[part].kind == PART_FLOATING)
        maker_add(maker, key, plane->part_value[part], plane->plane->parts[part].name,
                  "floating");
}

static void add_electric(struct maker *maker, const struct plane_solution *plane)
{
    const double scale = charge_factor(plane) * flux_scale(plane);
    maker->planes = plane_bit(plane->plane->kind);
    for (size_t p = 0; p < plane->plane->part_count; p++) {
        if (!part_is_conductor(&plane->plane->parts[p]))
            continue;
        maker_add(maker, key_of(CHARGE, plane, scale),
                  charge_factor(plane) * plane->part_flux[p],
                  plane->plane->parts[p].name, NULL);
        add_capacitance(maker, plane, p);
        figures_conductor_surface(maker, plane, p);
    }
    figures_insulator_surfaces(maker, plane);
    for (size_t p = 0; p < plane->plane->part_count; p++)
        add_potential(maker, plane, p);
    figures_matrix(maker, plane);
    figures_force(maker, plane);
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
