/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Evenness over the cross-section: ratio error over the footprint, the largest even
 * circle, and the expansions of both fields with their difference, which is what the
 * filter feels. */

#include <math.h>
#include <stdio.h>

#include "shared/constants.h"
#include "solver/cross_section.h"
#include "solver/figure_maker.h"

enum { CIRCLE_POINTS = 48, RADIUS_STEPS = 40, NOTE_SIZE = 240 };

static const char *const NEEDS_BOTH =
    "needs one electric and one magnetic plane (across, or along as a substitute)";

/* Largest |ratio error| over the map. */
static double map_peak(const struct section *map, double *x, double *y)
{
    double peak = 0.0;
    *x = *y = 0.0;
    for (size_t n = 0; n < map->nx * map->ny; n++)
        if (fabs(map->ratio_error[n]) > peak) {
            peak = fabs(map->ratio_error[n]);
            *x = map->x[n % map->nx];
            *y = map->y[n / map->nx];
        }
    return peak;
}

static double map_rms(const struct section *map)
{
    double sum = 0.0;
    for (size_t n = 0; n < map->nx * map->ny; n++)
        sum += map->ratio_error[n] * map->ratio_error[n];
    return sqrt(sum / (double)(map->nx * map->ny));
}

/* Said where an along plane stands in for an across plane. */
static const char *substitute(const struct section_source *source)
{
    const bool electric = plane_kind_is_along(source->electric->plane->kind);
    const bool magnetic = plane_kind_is_along(source->magnetic->plane->kind);
    if (electric && magnetic)
        return "; along planes stand in: nothing known of y in E and of x in B";
    if (electric)
        return "; electric_along stands in: nothing known of y in E";
    return magnetic ? "; magnetic_along stands in: nothing known of x in B" : "";
}

static void add_map(struct maker *maker, const struct view *view,
                    const struct section_source *source)
{
    const char *lack = NULL;
    struct section map = {0};
    double x = 0.0, y = 0.0, peak = 0.0, rms = 0.0;
    char note[NOTE_SIZE] = "";
    if (source->electric == NULL || source->magnetic == NULL)
        lack = NEEDS_BOTH;
    else if (!view->geometry->beam.has_footprint)
        lack = "needs the footprint of the beam";
    if (lack == NULL && maker->status == STATUS_OK)
        maker->status = section_map(view, &map);
    if (map.present) {
        peak = map_peak(&map, &x, &y);
        rms = map_rms(&map);
        (void)snprintf(note, sizeof note,
                       "|x| <= %.4g mm, |y| <= %.4g mm; at x = %.4g, "
                       "y = %.4g mm%s",
                       view->geometry->beam.half_x * 1e3,
                       view->geometry->beam.half_y * 1e3, x * 1e3, y * 1e3,
                       substitute(source));
    }
    maker_add_or_miss(maker,
                      (struct figure_key){"ratio_error_peak_across",
                                          "ratio error over the footprint, peak", "1",
                                          1.0},
                      peak, NULL, note, lack);
    maker_add_or_miss(maker,
                      (struct figure_key){"ratio_error_rms_across",
                                          "ratio error over the footprint, rms", "1",
                                          1.0},
                      rms, NULL, NULL, lack);
    section_free(&map);
}

/* Largest |ratio error| on a circle; *open is false if the circle meets a part or leaves
 * the region. */
static enum status circle_error(const struct section_source *source, double reference,
                                double radius, double *worst, bool *open)
{
    *worst = 0.0;
    *open = true;
    for (int k = 0; k < CIRCLE_POINTS && *open; k++) {
        const double angle = 2.0 * PI * k / CIRCLE_POINTS;
        double error;
        enum status status = section_ratio_error(source, reference, radius * cos(angle),
                                                 radius * sin(angle), &error, open);
        if (status != STATUS_OK)
            return status;
        *worst = fmax(*worst, fabs(error));
    }
    return STATUS_OK;
}

struct even_circle {
    double radius;
    bool met_wall; /* the search ended at a part, not at the bound */
};

/* Reach of the search: half the smaller extent of the planes used. */
static double reach_of(const struct section_source *source)
{
    const struct plane *p = source->electric->plane, *q = source->magnetic->plane;
    return 0.5 * fmin(p->high.b - p->low.b, q->high.b - q->low.b);
}

/* Grows circles until the bound is passed; the radius is interpolated between the last
 * two circles, on the errors' logarithms (the error grows like a power). */
static enum status find_even_circle(const struct section_source *source,
                                    double reference, double bound,
                                    struct even_circle *found)
{
    const double step = reach_of(source) / RADIUS_STEPS;
    double before = 0.0;
    found->radius = 0.0;
    found->met_wall = true;
    for (int k = 1; k <= RADIUS_STEPS; k++) {
        double error;
        bool open;
        enum status status = circle_error(source, reference, k * step, &error, &open);
        if (status != STATUS_OK || !open)
            return status;
        if (error > bound) {
            const double t = before > 0.0 && k > 1
                                 ? log(bound / before) / log(error / before)
                                 : bound / error;
            const double last = (k - 1) * step;
            found->radius = k > 1 && before > 0.0 ? last * pow(k * step / last, t)
                                                  : last + t * step;
            found->met_wall = false;
            return STATUS_OK;
        }
        found->radius = k * step;
        before = error;
    }
    return STATUS_OK;
}

static void add_circle(struct maker *maker, const struct view *view,
                       const struct section_source *source)
{
    const struct geometry *g = view->geometry;
    const double bound = geometry_ratio_bound(g);
    const struct figure_key key = {"even_radius", "largest even circle", "m", 0.0};
    struct even_circle circle = {0.0, false};
    char note[NOTE_SIZE];
    double reference;
    if (source->electric == NULL || source->magnetic == NULL) {
        maker_miss(maker, key, NULL, NEEDS_BOTH);
        return;
    }
    enum status status =
        section_reference(source, g->reference_x, g->reference_y, &reference);
    if (status == STATUS_OK)
        status = find_even_circle(source, reference, bound, &circle);
    if (maker->status == STATUS_OK)
        maker->status = status;
    (void)snprintf(note, sizeof note, "|ratio error| <= %.3g%s", bound,
                   circle.met_wall ? "; ends at a part, not at the bound" : "");
    maker_add(maker, key, circle.radius, NULL, note);
}

static void add_terms(struct maker *maker, struct figure_key key,
                      const struct expansion *e, const struct expansion *minus,
                      const char *note)
{
    for (int n = 1; n < EXPANSION_TERMS; n++) {
        char subject[32];
        const double real = e->real[n] - (minus != NULL ? minus->real[n] : 0.0);
        const double imag = e->imag[n] - (minus != NULL ? minus->imag[n] : 0.0);
        (void)snprintf(subject, sizeof subject, "n = %d", n);
        maker_add(maker, key, real, subject, note);
        (void)snprintf(subject, sizeof subject, "n = %d skew", n);
        maker_add(maker, key, imag, subject, note);
    }
}

/* r0: the larger half width of the footprint, or a twentieth of the smaller height of the
 * across planes. */
static double expansion_radius(const struct geometry *g)
{
    if (g->beam.has_footprint)
        return fmax(g->beam.half_x, g->beam.half_y);
    double reach = (double)INFINITY;
    for (int k = 0; k < PLANE_KINDS; k++)
        if (g->planes[k].present && plane_kind_is_across((enum plane_kind)k))
            reach = fmin(reach, g->planes[k].high.b - g->planes[k].low.b);
    return 0.05 * reach;
}

static enum status expand(struct maker *maker, const struct plane_solution *plane,
                          double radius, struct figure_key key, const char *lack,
                          struct expansion *e, bool *good)
{
    char note[NOTE_SIZE];
    *good = false;
    if (plane == NULL) {
        maker_miss(maker, key, NULL, lack);
        return STATUS_OK;
    }
    maker->planes = plane_bit(plane->plane->kind);
    enum status status = expansion_of_plane(plane, radius, e);
    if (status == STATUS_SIZE) {
        maker_miss(maker, key, NULL, "the circle of expansion meets a part or a side");
        return STATUS_OK;
    }
    *good = status == STATUS_OK;
    (void)snprintf(note, sizeof note, "r0 = %.6g mm", radius * 1e3);
    if (*good)
        add_terms(maker, key, e, NULL, note);
    return status;
}

static void add_expansions(struct maker *maker, const struct view *view)
{
    const double radius = expansion_radius(view->geometry);
    const struct figure_key difference = {"expansion_difference",
                                          "difference e_n - b_n", "1", 1.0};
    struct expansion e, b;
    bool good_e = false, good_b = false;
    enum status status = expand(
        maker, view->planes[PLANE_ELECTRIC_ACROSS], radius,
        (struct figure_key){"expansion_electric", "expansion of E, e_n", "1", 1.0},
        "needs electric_across", &e, &good_e);
    if (status == STATUS_OK)
        status = expand(
            maker, view->planes[PLANE_MAGNETIC_ACROSS], radius,
            (struct figure_key){"expansion_magnetic", "expansion of B, b_n", "1", 1.0},
            "needs magnetic_across", &b, &good_b);
    if (maker->status == STATUS_OK)
        maker->status = status;
    maker->planes = plane_bit(PLANE_ELECTRIC_ACROSS) | plane_bit(PLANE_MAGNETIC_ACROSS);
    if (good_e && good_b)
        add_terms(maker, difference, &e, &b, NULL);
    else
        maker_miss(maker, difference, NULL,
                   "needs both electric_across and magnetic_across");
}

static void add_centre(struct maker *maker, const struct plane_solution *plane,
                       const struct geometry *g, struct figure_key key, int component,
                       const char *lack)
{
    double field[2] = {0.0, 0.0};
    if (plane != NULL) {
        maker->planes = plane_bit(plane->plane->kind);
        enum status status = plane_field(
            plane, (struct vec2){g->reference_x, g->reference_y}, field, NULL);
        if (maker->status == STATUS_OK)
            maker->status = status;
    }
    maker_add_or_miss(maker, key, field[component], NULL, NULL,
                      plane != NULL ? NULL : lack);
}

enum status figures_across(const struct view *view, struct figures *figures)
{
    const struct section_source source = section_source_of(view);
    struct maker maker = {figures, FIGURE_ACROSS, 0, STATUS_OK};
    add_centre(&maker, view->planes[PLANE_ELECTRIC_ACROSS], view->geometry,
               (struct figure_key){"centre_electric_field_across",
                                   "E_x at the reference point, across", "V/m", 0.0},
               0, "needs electric_across");
    add_centre(&maker, view->planes[PLANE_MAGNETIC_ACROSS], view->geometry,
               (struct figure_key){"centre_flux_density_across",
                                   "B_y at the reference point, across", "T", 0.0},
               1, "needs magnetic_across");
    maker.planes = section_planes(&source);
    add_map(&maker, view, &source);
    add_circle(&maker, view, &source);
    add_expansions(&maker, view);
    return maker.status;
}
