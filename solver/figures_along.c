/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Figures of the beam alone and of the ratio E/B along the path. */

#include <math.h>
#include <stdio.h>

#include "shared/constants.h"
#include "solver/figure_maker.h"
#include "solver/ratio.h"

enum { NOTE_SIZE = 160 };

static const char *const NEEDS_BOTH = "needs both electric_along and magnetic_along";
static const char *const NEEDS_PARTICLE =
    "needs the mass, charge and energy (or speed) of the beam";

static void add_beam(struct maker *maker, const struct beam *beam)
{
    const double beta = beam->speed / SPEED_OF_LIGHT;
    const double gamma = 1.0 / sqrt(1.0 - beta * beta);
    maker_add(maker, (struct figure_key){"wanted_speed", "wanted speed", "m/s", 0.0},
              beam->speed, NULL, "from mass and energy, relativistic");
    maker_add(maker,
              (struct figure_key){"magnetic_rigidity", "magnetic rigidity", "T m", 0.0},
              gamma * beam->mass * beam->speed / fabs(beam->charge), NULL, NULL);
    maker_add(maker,
              (struct figure_key){"electric_rigidity", "electric rigidity", "V", 0.0},
              gamma * beam->mass * beam->speed * beam->speed / fabs(beam->charge), NULL,
              NULL);
}

enum status figures_beam(const struct view *view, struct figures *figures)
{
    struct maker maker = {figures, FIGURE_BEAM, 0, STATUS_OK};
    if (view->geometry->beam.has_particle)
        add_beam(&maker, &view->geometry->beam);
    return maker.status;
}

static void add_centre(struct maker *maker, const struct path *path)
{
    maker->planes = plane_bit(PLANE_ELECTRIC_ALONG);
    maker_add_or_miss(maker,
                      (struct figure_key){"centre_electric_field",
                                          "E_x at the reference point", "V/m", 0.0},
                      path->e_centre, NULL, NULL,
                      path->e_x[0] != NULL ? NULL : "needs electric_along");
    maker->planes = plane_bit(PLANE_MAGNETIC_ALONG);
    maker_add_or_miss(maker,
                      (struct figure_key){"centre_flux_density",
                                          "B_y at the reference point", "T", 0.0},
                      path->b_centre, NULL, NULL,
                      path->b_y[0] != NULL ? NULL : "needs magnetic_along");
}

static double balanced_speed(const struct path *path)
{
    return path_integral(path, path->e_x[0], 0, PATH_POINTS - 1) /
           path_integral(path, path->b_y[0], 0, PATH_POINTS - 1);
}

static void add_speeds(struct maker *maker, const struct geometry *geometry,
                       const struct path *path)
{
    const bool both = ratio_is_available(path);
    const double centre = ratio_reference(path);
    const double balanced = both ? balanced_speed(path) : 0.0;
    const char *const lack = both ? NULL : NEEDS_BOTH;
    const char *const lack_wanted = !both                          ? NEEDS_BOTH
                                    : !geometry->beam.has_particle ? NEEDS_PARTICLE
                                                                   : NULL;
    const double wanted = geometry->beam.has_particle ? geometry->beam.speed : 1.0;
    char note[NOTE_SIZE];
    (void)snprintf(note, sizeof note, "integrals from z = %.6g mm to %.6g mm",
                   path->z[0] * 1e3, path->z[PATH_POINTS - 1] * 1e3);
    maker_add_or_miss(maker,
                      (struct figure_key){"centre_pass_speed",
                                          "pass speed E/B at the reference point",
                                          "m/s", 0.0},
                      centre, NULL, NULL, lack);
    maker_add_or_miss(maker,
                      (struct figure_key){"balanced_speed",
                                          "balanced speed (no sideways impulse)", "m/s",
                                          0.0},
                      balanced, NULL, note, lack);
    maker_add_or_miss(
        maker,
        (struct figure_key){"detuning", "detuning: balanced/wanted - 1", "1", 1.0},
        balanced / wanted - 1.0, NULL, NULL, lack_wanted);
    maker_add_or_miss(maker,
                      (struct figure_key){"centre_detuning",
                                          "centre detuning: pass/wanted - 1", "1", 1.0},
                      centre / wanted - 1.0, NULL, NULL, lack_wanted);
}

/* Figures of the ratio summary in order, with the notes they carry. */
static void add_evenness(struct maker *maker, const struct ratio_summary *s,
                         double bound, bool bundle, const char *lack)
{
    char zone[NOTE_SIZE], peak[2 * NOTE_SIZE], flat[NOTE_SIZE], force[NOTE_SIZE];
    (void)snprintf(zone, sizeof zone,
                   "where both fields exceed %.0f %% of centre: z = %.4g to %.4g mm",
                   100.0 * RATIO_ZONE, s->zone_from * 1e3, s->zone_to * 1e3);
    (void)snprintf(peak, sizeof peak, "at z = %.4g mm; %s", s->peak_z * 1e3, zone);
    (void)snprintf(flat, sizeof flat, "|ratio error| <= %.3g; z = %.4g to %.4g mm",
                   bound, s->flat_from * 1e3, s->flat_to * 1e3);
    (void)snprintf(force, sizeof force,
                   "|E - u_ref B| / E_centre, whole path; at z = %.4g mm",
                   s->imbalance_z * 1e3);
    maker_add_or_miss(
        maker, (struct figure_key){"flat_length", "flat length on the axis", "m", 0.0},
        s->flat_to - s->flat_from, NULL, flat, lack);
    maker_add_or_miss(maker,
                      (struct figure_key){"ratio_error_peak_along",
                                          "ratio error on the axis, peak", "1", 1.0},
                      s->peak, NULL, peak, lack);
    maker_add_or_miss(maker,
                      (struct figure_key){"ratio_error_rms_along",
                                          "ratio error on the axis, rms", "1", 1.0},
                      s->rms, NULL, zone, lack);
    if (bundle)
        maker_add_or_miss(maker,
                          (struct figure_key){"ratio_error_peak_bundle",
                                              "ratio error over the beam, peak", "1",
                                              1.0},
                          s->bundle_peak, NULL, zone, lack);
    maker_add_or_miss(maker,
                      (struct figure_key){"force_imbalance_peak",
                                          "force imbalance on the axis, peak", "1",
                                          1.0},
                      s->imbalance, NULL, force, lack);
}

enum status figures_along(const struct view *view, const struct path *path,
                          struct figures *figures)
{
    const struct geometry *g = view->geometry;
    struct maker maker = {figures, FIGURE_ALONG, 0, STATUS_OK};
    struct ratio_summary summary = {0};
    const bool both = ratio_is_available(path);
    const double bound = geometry_ratio_bound(g);
    if (both)
        ratio_summarise(path, g->reference_z, bound, &summary);
    add_centre(&maker, path);
    maker.planes = plane_bit(PLANE_ELECTRIC_ALONG) | plane_bit(PLANE_MAGNETIC_ALONG);
    add_speeds(&maker, g, path);
    add_evenness(&maker, &summary, bound, g->beam.has_footprint,
                 both ? NULL : NEEDS_BOTH);
    return maker.status;
}
