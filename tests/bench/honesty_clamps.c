/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Ends that face clamps (checks 5 and 6 of the published values): half geometries with
 * mirror sides. Between square ends and thick clamps every channel decays exponentially, so
 * cutting the region off a few gaps out changes nothing that can be seen. Thin parts leave
 * the space beside the gap open; its far sides are mirrors at REACH gaps. The path starts
 * at the filter's centre, CORNER gaps inside the end, and the exact figures are taken for
 * that same path: no tail is left to be guessed. Turned copies have all four quarters and
 * only cut legs. */

#include "tests/bench/honesty_families.h"

#include <math.h>
#include <stdlib.h>

#include "shared/constants.h"
#include "tests/bench/honesty_map.h"
#include "tests/bench/honesty_quadrature.h"
#include "tests/support/scene.h"

#define VOLTS  1100.0
#define AMPS   3200.0
#define CORNER 2.0  /* gaps */
#define THIN   4e-7 /* gaps, thickness; thicker would show in the figures */
#define REACH  60.0 /* gaps */

static double setting_of(enum plane_kind kind)
{
    return plane_kind_is_magnetic(kind) ? AMPS : VOLTS;
}

static double unit_of(enum plane_kind kind)
{
    return plane_kind_is_magnetic(kind) ? VACUUM_PERMEABILITY : 1.0;
}

/* Turned by angle about the centre; corner in gaps. */
static void expect_parameter(struct honesty_case *c, const struct half_gap *map,
                             double corner, double angle, double complex t)
{
    const double setting = setting_of(c->kind), scale = unit_of(c->kind) * setting;
    const struct map_point p = half_gap_point(map, t);
    const double complex turn = turn_by(angle);
    const double complex at = c->gap * turn * complex_of(p.at.a + corner, p.at.b);
    const double complex field =
        scale / c->gap * turn * complex_of(p.field.a, p.field.b);
    honesty_expect_point(c, (struct vec2){creal(at), cimag(at)},
                         cimag(t) == 0.0 ? 0.0 : setting * p.potential,
                         (struct vec2){creal(field), cimag(field)});
}

static void expect_points(struct honesty_case *c, const struct half_gap *map,
                          double corner, double angle)
{
    static const double xs[] = {-0.6, -0.2, 0.0, 0.3, 0.7};
    static const double turns[] = {0.8, 1.7, 2.3};
    for (size_t k = 0; k < sizeof xs / sizeof *xs; k++)
        expect_parameter(c, map, corner, angle, half_gap_t(map, xs[k]));
    for (int k = 0; k < 3; k++) {
        const double t = half_gap_t(map, -0.35 + 0.3 * k);
        expect_parameter(c, map, corner, angle, t * turn_by(turns[k]));
    }
}

/* Effective length, exit edge and K of the path from the centre to x = `to` (gaps beyond
 * the corner). */
static void expect_fringe(struct honesty_case *c, const struct half_gap *map, double to)
{
    const double first = half_gap_t(map, -CORNER), last = half_gap_t(map, to);
    const double length = c->gap * half_gap_length(map, first, last);
    c->geometry.beam.has_path = true;
    c->geometry.beam.path_to = (CORNER + to) * c->gap;
    honesty_expect(c, (struct honesty_figure){.kind = HONESTY_LENGTH, .exact = length});
    honesty_expect(c, (struct honesty_figure){.kind = HONESTY_EXIT, .exact = length});
    honesty_expect(c,
                   (struct honesty_figure){.kind = HONESTY_FRINGE_K,
                                           .exact = half_gap_fringe(map, first, last)});
}

static void name_clamp(char *name, const char *what, enum plane_kind kind,
                       double distance, double aperture)
{
    (void)snprintf(name, HONESTY_NAME, "%s clamp, distance %.4g, aperture %.4g, %s",
                   what, distance, aperture, plane_kind_key(kind));
}

static void mirror_sides(struct plane *plane)
{
    for (int s = 0; s < SIDE_COUNT; s++)
        plane->sides[s].kind = SIDE_MIRROR;
    plane->sides[SIDE_B_LOW].kind = SIDE_ANTIMIRROR;
}

static void thick_case(struct honesty_tally *tally, enum plane_kind kind,
                       double distance, double aperture, double gap)
{
    struct honesty_case c;
    char name[HONESTY_NAME];
    const struct half_gap map = half_gap_thick_clamp(distance, aperture);
    const double face = CORNER + distance, outside = face + 4.0 * fmax(1.0, aperture);
    const double above = 0.5 * fmax(1.0, aperture) + 5.0 * fmax(0.5, distance);
    name_clamp(name, "thick", kind, distance, aperture);
    struct plane *plane =
        honesty_begin(&c, name, kind, setting_of(kind), (struct vec2){-2.0 * gap, 0.0},
                      (struct vec2){outside * gap, above * gap});
    mirror_sides(plane);
    scene_box(plane, "end", 0.5, -2.0 * gap, CORNER * gap, 0.5 * gap, above * gap, 0.0);
    scene_box(plane, "clamp", 0.0, face * gap, outside * gap, 0.5 * aperture * gap,
              above * gap, 0.0);
    c.gap = gap;
    expect_points(&c, &map, CORNER, 0.0);
    expect_fringe(&c, &map, outside - CORNER);
    honesty_run(&c, tally);
}

static void thin_case(struct honesty_tally *tally, double distance, double aperture,
                      double gap)
{
    struct honesty_case c;
    char name[HONESTY_NAME];
    const enum plane_kind kind = PLANE_ELECTRIC_ALONG;
    const struct half_gap map = half_gap_thin_clamp(distance, aperture);
    const double face = CORNER + distance;
    name_clamp(name, "thin", kind, distance, aperture);
    struct plane *plane = honesty_begin(&c, name, kind, setting_of(kind),
                                        (struct vec2){-REACH * gap, 0.0},
                                        (struct vec2){REACH * gap, REACH * gap});
    mirror_sides(plane);
    scene_box(plane, "end", 0.5, -REACH * gap, CORNER * gap, 0.5 * gap,
              0.5 * gap * (1.0 + THIN), 0.0);
    scene_box(plane, "clamp", 0.0, face * gap, (face + THIN) * gap,
              0.5 * aperture * gap, REACH * gap, 0.0);
    c.gap = gap;
    expect_points(&c, &map, CORNER, 0.0);
    expect_fringe(&c, &map, distance + 5.0);
    honesty_run(&c, tally);
}

/* Potential along a side that crosses the turned gap: linear in the distance from the
 * turned mid plane. */
static void gap_wall(struct plane *plane, enum side_index side, double gap,
                     double angle)
{
    const double from = (plane->low.b * cos(angle) - plane->low.a * sin(angle)) / gap;
    const double to = (plane->high.b * cos(angle) - plane->low.a * sin(angle)) / gap;
    scene_wall(plane, side, from, to);
}

/* ... and along top or bottom, which cross the slots between ends and clamps: linear
 * from the end's potential at the corner to 0 at the clamp's face. */
static void slot_wall(struct plane *plane, enum side_index side, double corner,
                      double slot, double angle, double sign)
{
    const double b = side == SIDE_B_LOW ? plane->low.b : plane->high.b;
    const double from = plane->low.a * cos(angle) + b * sin(angle);
    const double to = plane->high.a * cos(angle) + b * sin(angle);
    scene_wall(plane, side, 0.5 * sign * (corner + slot - from) / slot,
               0.5 * sign * (corner + slot - to) / slot);
}

static void turned_box(struct plane *plane, const char *name, double gain, double a_low,
                       double a_high, double b_low, double b_high, double angle)
{
    struct part *part = scene_box(plane, name, gain, a_low, a_high, b_low, b_high, 0.0);
    shape_turn(&part->shape, angle, (struct vec2){0.0, 0.0});
}

static void turned_case(struct honesty_tally *tally, enum plane_kind kind,
                        double distance, double aperture, double degrees)
{
    struct honesty_case c;
    char name[HONESTY_NAME];
    const double gap = 17e-3, angle = degrees * PI / 180.0, corner = 1.0, far = 9.0;
    const struct half_gap map = half_gap_thick_clamp(distance, aperture);
    (void)snprintf(name, sizeof name,
                   "turned %.4g deg, distance %.4g, aperture %.4g, %s", degrees,
                   distance, aperture, plane_kind_key(kind));
    struct plane *plane = honesty_begin(&c, name, kind, setting_of(kind),
                                        (struct vec2){-2.6 * gap, -3.1 * gap},
                                        (struct vec2){3.3 * gap, 3.1 * gap});
    for (int sign = -1; sign <= 1; sign += 2) {
        const double near = sign < 0 ? -far : 0.5, last = sign < 0 ? -0.5 : far;
        const double lip = 0.5 * aperture;
        turned_box(plane, sign < 0 ? "lower end" : "upper end", 0.5 * sign, -far * gap,
                   corner * gap, near * gap, last * gap, angle);
        turned_box(plane, sign < 0 ? "lower clamp" : "upper clamp", 0.0,
                   (corner + distance) * gap, far * gap, (sign < 0 ? -far : lip) * gap,
                   (sign < 0 ? -lip : far) * gap, angle);
    }
    gap_wall(plane, SIDE_A_LOW, gap, angle);
    slot_wall(plane, SIDE_B_LOW, corner * gap, distance * gap, angle, -1.0);
    slot_wall(plane, SIDE_B_HIGH, corner * gap, distance * gap, angle, 1.0);
    c.gap = gap;
    expect_points(&c, &map, corner, angle);
    honesty_run(&c, tally);
}

/* The published anchors: effective edge and K of endless paths. */
static void check_anchor(const char *what, const struct half_gap *map, double far,
                         double edge, double edge_tolerance, double k)
{
    const double first = half_gap_t(map, -4.0), last = half_gap_t(map, far);
    const double got_edge = half_gap_length(map, first, last) - 4.0;
    const double got_k = half_gap_fringe(map, first, last);
    if (fabs(got_edge - edge) < edge_tolerance && fabs(got_k - k) < edge_tolerance)
        return;
    (void)fprintf(stderr, "%s: closed form gives edge %.10f, K %.8f\n", what, got_edge,
                  got_k);
    exit(EXIT_FAILURE);
}

static void check_closed_forms(void)
{
    struct half_gap map = half_gap_thick_clamp(0.5, 1.0);
    check_anchor("thick clamp 1", &map, 5.0, 0.2117225904, 2e-8, 0.18309802);
    map = half_gap_thick_clamp(0.5, 0.5);
    check_anchor("thick clamp 1/2", &map, 5.0, 0.1591428642, 2e-8, 0.15412021);
    map = half_gap_thin_clamp(0.5, 0.5);
    check_anchor("thin clamp", &map, 3000.0, 0.1319997408, 2e-8, 0.16051726);
}

void honesty_clamps(struct honesty_tally *tally)
{
    honesty_family(tally, "clamps");
    check_closed_forms();
    thick_case(tally, PLANE_ELECTRIC_ALONG, 0.5, 1.0, 20e-3);
    thick_case(tally, PLANE_ELECTRIC_ALONG, 0.5, 0.5, 20e-3);
    thick_case(tally, PLANE_MAGNETIC_ALONG, 0.25, 0.7, 40e-3);
    thick_case(tally, PLANE_MAGNETIC_ALONG, 1.0, 0.6, 40e-3);
    thick_case(tally, PLANE_ELECTRIC_ALONG, 0.8, 1.6, 13e-3);
    thick_case(tally, PLANE_ELECTRIC_ALONG, 0.35, 0.3, 20e-3);
    thin_case(tally, 0.5, 0.5, 20e-3);
    thin_case(tally, 0.8, 1.0, 20e-3);
    thin_case(tally, 0.35, 0.7, 15e-3);
    turned_case(tally, PLANE_ELECTRIC_ALONG, 0.5, 0.5, 15.0);
    turned_case(tally, PLANE_MAGNETIC_ALONG, 0.4, 0.7, 30.0);
    turned_case(tally, PLANE_ELECTRIC_ALONG, 0.5, 1.0, -21.0);
}
