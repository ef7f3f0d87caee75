/* SPDX-License-Identifier: GPL-3.0-or-later */

/* What the wanted particle does, and how the filter separates others from it. The
 * dispersion is half the difference of two particles a small step to either side. */

#include <math.h>
#include <stdio.h>

#include "shared/constants.h"
#include "solver/figure_maker.h"
#include "solver/ratio.h"
#include "solver/track.h"

enum { STEPS_LEAST = PATH_POINTS - 1, STEPS_MOST = 100000, NOTE_SIZE = 160 };

#define STEPS_PER_RADIUS 40.0 /* of the cyclotron circle in the centre field */

#define SMALL_STEP 1e-3 /* relative change of speed or mass for dispersions */

/* Exit of the wanted particle and dispersions per relative change, at the exit and at
 * the slit. */
struct motion_summary {
    struct exit_state wanted;
    double speed_dispersion;      /* m, dx/d(ln v) at the exit, mass kept */
    double speed_dispersion_slit; /* m, the same at the slit */
    double mass_dispersion_slit;  /* m, dx/d(ln m) at the slit, energy kept */
    bool lost;                    /* a neighbour did not arrive */
};

static double speed_of_energy(double mass, double energy)
{
    const double k = energy / (mass * SPEED_OF_LIGHT * SPEED_OF_LIGHT);
    return SPEED_OF_LIGHT * sqrt(k * (k + 2.0)) / (1.0 + k);
}

/* Difference of two neighbours per relative change. */
static enum status dispersion(const struct view *view, const struct path *path,
                              const struct particle neighbours[2], double drift,
                              int steps, double *at_exit, double *at_slit, bool *lost)
{
    struct exit_state ends[2];
    for (int k = 0; k < 2; k++) {
        enum status status = track_particle(view, &neighbours[k], path->z[0],
                                            path->z[PATH_POINTS - 1], steps, &ends[k]);
        if (status != STATUS_OK)
            return status;
        *lost = *lost || ends[k].lost;
    }
    const double dx = (ends[1].x - ends[0].x) / (2.0 * SMALL_STEP);
    const double dslope = (ends[1].slope - ends[0].slope) / (2.0 * SMALL_STEP);
    *at_exit = dx;
    *at_slit = dx + drift * dslope;
    return STATUS_OK;
}

static double cyclotron_radius(const struct beam *beam, const struct path *path)
{
    const double beta = beam->speed / SPEED_OF_LIGHT;
    const double momentum = beam->mass * beam->speed / sqrt(1.0 - beta * beta);
    return momentum / fabs(beam->charge * path->b_centre);
}

/* Steps along the path; more where the circle is small against it. */
static int steps_for(const struct beam *beam, const struct path *path)
{
    const double length = path->z[PATH_POINTS - 1] - path->z[0];
    const double wanted =
        ceil(STEPS_PER_RADIUS * length / cyclotron_radius(beam, path));
    return (int)fmin(fmax(wanted, STEPS_LEAST), STEPS_MOST);
}

static enum status summarise(const struct view *view, const struct path *path,
                             double drift, struct motion_summary *s)
{
    const struct beam *beam = &view->geometry->beam;
    const struct particle wanted = {beam->mass, beam->charge, beam->speed};
    struct particle speeds[2] = {wanted, wanted}, masses[2] = {wanted, wanted};
    const int steps = steps_for(beam, path);
    double unused;
    for (int k = 0; k < 2; k++) {
        const double factor = 1.0 + (k == 0 ? -SMALL_STEP : SMALL_STEP);
        speeds[k].speed = beam->speed * factor;
        masses[k].mass = beam->mass * factor;
        masses[k].speed = speed_of_energy(masses[k].mass, beam->energy);
    }
    enum status status = track_particle(view, &wanted, path->z[0],
                                        path->z[PATH_POINTS - 1], steps, &s->wanted);
    if (status == STATUS_OK)
        status = dispersion(view, path, speeds, drift, steps, &s->speed_dispersion,
                            &s->speed_dispersion_slit, &s->lost);
    if (status == STATUS_OK)
        status = dispersion(view, path, masses, drift, steps, &unused,
                            &s->mass_dispersion_slit, &s->lost);
    return status;
}

static void add_circle(struct maker *maker, const struct view *view,
                       const struct path *path, const char *lack)
{
    const struct beam *beam = &view->geometry->beam;
    double radius = 0.0, length = 0.0;
    if (lack == NULL) {
        radius = cyclotron_radius(beam, path);
        length = path_integral(path, path->b_y[0], 0, PATH_POINTS - 1) / path->b_centre;
    }
    maker_add_or_miss(maker,
                      (struct figure_key){"cyclotron_radius",
                                          "cyclotron radius R in the centre field", "m",
                                          0.0},
                      radius, NULL, NULL, lack);
    maker_add_or_miss(
        maker,
        (struct figure_key){"cyclotron_phase", "cyclotron phase L_B/R", "rad", 0.0},
        lack == NULL ? length / radius : 0.0, NULL, NULL, lack);
}

static void add_wanted(struct maker *maker, const struct motion_summary *s,
                       const char *lack)
{
    maker_add_or_miss(
        maker, (struct figure_key){"kick", "kick of the wanted particle", "rad", 1e-3},
        s->wanted.slope, NULL,
        "dx/dz at the end of the path, followed "
        "through both fields",
        lack);
    maker_add_or_miss(maker,
                      (struct figure_key){"offset",
                                          "sideways offset of the wanted "
                                          "particle",
                                          "m", 1e-3},
                      s->wanted.x, NULL, "x at the end of the path", lack);
}

static void add_separation(struct maker *maker, const struct beam *beam, double to,
                           const struct motion_summary *s, const char *lack)
{
    char note[NOTE_SIZE] = "";
    const char *lack_slit = lack;
    if (s->lost && lack == NULL)
        lack = lack_slit = "a particle of slightly other speed does not arrive";
    if (lack_slit == NULL && !beam->has_slit)
        lack_slit = "needs a slit in the beam section";
    else if (lack_slit == NULL && beam->slit_at < to)
        lack_slit = "the slit stands before the end of the path";
    if (lack_slit == NULL)
        (void)snprintf(
            note, sizeof note,
            "slit %.6g mm wide at z = %.6g mm; size and divergence of the beam "
            "come on top",
            beam->slit_width * 1e3, beam->slit_at * 1e3);
    const double width = lack_slit == NULL ? beam->slit_width : 1.0;
    maker_add_or_miss(maker,
                      (struct figure_key){"speed_dispersion",
                                          "speed dispersion dx/(dv/v) at the exit", "m",
                                          0.0},
                      s->speed_dispersion, NULL, NULL, lack);
    maker_add_or_miss(maker,
                      (struct figure_key){"speed_dispersion_slit",
                                          "speed dispersion dx/(dv/v) at the slit", "m",
                                          0.0},
                      s->speed_dispersion_slit, NULL, note, lack_slit);
    maker_add_or_miss(maker,
                      (struct figure_key){"speed_resolution",
                                          "speed resolution v/dv of the slit", "1",
                                          0.0},
                      fabs(s->speed_dispersion_slit) / width, NULL, note, lack_slit);
    maker_add_or_miss(maker,
                      (struct figure_key){"mass_resolution",
                                          "mass resolution m/dm of the slit", "1", 0.0},
                      fabs(s->mass_dispersion_slit) / width, NULL, note, lack_slit);
}

enum status figures_motion(const struct view *view, const struct path *path,
                           struct figures *figures)
{
    const struct beam *beam = &view->geometry->beam;
    struct maker maker = {
        figures, FIGURE_ALONG,
        plane_bit(PLANE_ELECTRIC_ALONG) | plane_bit(PLANE_MAGNETIC_ALONG), STATUS_OK};
    struct motion_summary s = {0};
    char lost[NOTE_SIZE];
    const char *lack = NULL;
    if (!ratio_is_available(path))
        lack = "needs both electric_along and magnetic_along";
    else if (!beam->has_particle)
        lack = "needs the mass, charge and energy (or speed) of the beam";
    add_circle(&maker, view, path, lack);
    if (lack == NULL && maker.status == STATUS_OK) {
        const double drift = beam->slit_at - path->z[PATH_POINTS - 1];
        maker.status = summarise(view, path, drift, &s);
        if (s.wanted.lost) {
            (void)snprintf(lost, sizeof lost,
                           "the wanted particle is lost at z = %.4g mm",
                           s.wanted.lost_at * 1e3);
            lack = lost;
        }
    }
    add_wanted(&maker, &s, lack);
    add_separation(&maker, beam, path->present ? path->z[PATH_POINTS - 1] : 0.0, &s,
                   lack);
    return maker.status;
}
