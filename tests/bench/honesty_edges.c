/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Ends of plates and poles as half gaps above the mid plane (honesty_map.h). The origin,
 * the filter's centre, lies two gaps inside the corner.
 *
 * The regions are endless and must end somewhere. Channels decay exponentially, so a plate
 * between planes and a step are cut off a few gaps out without harm. The space beside a
 * lone edge does not: there the far sides are mirrors at REACH gaps. For square ends the
 * error of that falls with the third power of the reach: fields changed by 9e-7 from 30 to
 * 120 gaps, by 2e-7 from 60 to 120, far below their uncertainties. Beside lone thin plates
 * it falls with the square only (1.1e-4 of the field left at 120 gaps), which no
 * affordable region makes small, so they are left out; the plate below a plane has the
 * same edge and an exact solution in a closed channel. */

#include "tests/bench/honesty_families.h"

#include <math.h>
#include <stdlib.h>

#include "shared/constants.h"
#include "tests/bench/honesty_map.h"
#include "tests/support/scene.h"

#define VOLTS  350.0
#define AMPS   2400.0
#define CORNER 2.0  /* gaps, where the map's x = 0 is put */
#define THIN   4e-7 /* gaps, thickness; thicker would show in the figures */
#define REACH  60.0 /* gaps */
#define INNER  3.0  /* gaps, how far the region reaches inside */

struct half_case {
    const char *name;
    struct half_gap map;
    enum plane_kind kind;
    double gap; /* m */
};

static double setting_of(enum plane_kind kind)
{
    return plane_kind_is_magnetic(kind) ? AMPS : VOLTS;
}

/* All sides mirrors but the mid plane. Sizes in gaps. */
static struct plane *begin_half(struct honesty_case *c, const struct half_case *h,
                                double inside, double outside, double above)
{
    struct plane *plane = honesty_begin(
        c, h->name, h->kind, setting_of(h->kind), (struct vec2){-inside * h->gap, 0.0},
        (struct vec2){outside * h->gap, above * h->gap});
    for (int s = 0; s < SIDE_COUNT; s++)
        plane->sides[s].kind = SIDE_MIRROR;
    plane->sides[SIDE_B_LOW].kind = SIDE_ANTIMIRROR;
    return plane;
}

static void expect_parameter(struct honesty_case *c, const struct half_case *h,
                             double complex t)
{
    const double setting = setting_of(h->kind);
    const double unit = (plane_kind_is_magnetic(h->kind) ? VACUUM_PERMEABILITY : 1.0) *
                        setting / h->gap;
    const struct map_point p = half_gap_point(&h->map, t);
    const struct vec2 at = {(p.at.a + CORNER) * h->gap, p.at.b * h->gap};
    /* The potential on the mid plane is exactly 0. */
    honesty_expect_point(c, at, cimag(t) == 0.0 ? 0.0 : setting * p.potential,
                         vec2_scale(p.field, unit));
}

/* On the mid plane at several x, and beside it at parameters of the same size. */
static void expect_points(struct honesty_case *c, const struct half_case *h)
{
    static const double xs[] = {-1.3, -0.94, -0.5, -0.2, 0.0, 0.17, 0.5, 0.8, 1.3};
    static const double turns[] = {0.9, 1.6, 2.1};
    for (size_t k = 0; k < sizeof xs / sizeof *xs; k++)
        expect_parameter(c, h, half_gap_t(&h->map, xs[k]));
    for (int k = 0; k < 3; k++) {
        const double t = half_gap_t(&h->map, -0.4 + 0.35 * k);
        expect_parameter(c, h, t * turn_by(turns[k]));
    }
}

static void lone_edge_case(struct honesty_tally *tally, const struct half_case *h)
{
    struct honesty_case c;
    const double g = h->gap;
    struct plane *plane = begin_half(&c, h, REACH, REACH, REACH);
    scene_box(plane, "edge", 0.5, -REACH * g, CORNER * g, 0.5 * g, REACH * g, 0.0);
    expect_points(&c, h);
    honesty_run(&c, tally);
}

/* Where x on the plate has the parameter t = -corner +- ...: z = a1 ln t + a2 ln(1 + t). */
static double plate_parameter(const struct half_gap *map, double height, double x,
                              bool upper)
{
    const double a1 = 0.5 / PI, a2 = (height - 0.5) / PI, p = map->corner;
    const double shift = a1 * log(p) + a2 * log1p(-p);
    double low = -2000.0, high = log(upper ? 1.0 - p : p); /* ln of distance from end */
    for (int k = 0; k < 200; k++) {
        const double middle = 0.5 * (low + high), d = exp(middle);
        const double near =
            upper ? a1 * log1p(-d) + a2 * middle : a1 * middle + a2 * log1p(-d);
        if (near - shift < x)
            low = middle;
        else
            high = middle;
    }
    return low;
}

/* Flux out of the plate from its tip to x on both faces, per V. */
static double plate_flux(const struct half_gap *map, double height, double x)
{
    const double below = plate_parameter(map, height, x, false);
    const double above = plate_parameter(map, height, x, true);
    return (log1p(-exp(above)) - above - below + log1p(-exp(below))) / (2.0 * PI);
}

static void between_planes_case(struct honesty_tally *tally, double height, double gap)
{
    struct honesty_case c;
    char name[HONESTY_NAME];
    (void)snprintf(name, sizeof name, "thin plate below a plane at %.4g gaps", height);
    const struct half_case h = {name, half_gap_between_planes(height),
                                PLANE_ELECTRIC_ALONG, gap};
    const double wide = fmax(INNER, 4.0 * height); /* decay exp(-pi x/height) */
    struct plane *plane = begin_half(&c, &h, wide, CORNER + wide, height);
    plane->sides[SIDE_B_HIGH].kind = SIDE_WALL;
    scene_box(plane, "plate", 0.5, -wide * gap, CORNER * gap, 0.5 * gap,
              0.5 * gap * (1.0 + THIN), 0.0);
    expect_points(&c, &h);
    honesty_expect_flux(&c, 0, VOLTS * plate_flux(&h.map, height, -wide - CORNER));
    honesty_run(&c, tally);
}

static void step_case(struct honesty_tally *tally, double height, enum plane_kind kind)
{
    struct honesty_case c;
    char name[HONESTY_NAME];
    const double g = 27e-3, wide = CORNER + 6.0 * height;
    (void)snprintf(name, sizeof name, "gap that widens to %.4g, %s", 2.0 * height,
                   plane_kind_key(kind));
    const struct half_case h = {name, half_gap_step(height), kind, g};
    const struct vec2 points[6] = {
        {-INNER * g, 0.5 * g},          {CORNER * g, 0.5 * g},
        {CORNER * g, height * g},       {wide * g, height * g},
        {wide * g, (height + 1.0) * g}, {-INNER * g, (height + 1.0) * g}};
    struct plane *plane = begin_half(&c, &h, INNER, wide, height + 1.0);
    scene_polygon(plane, "stepped", 0.5, points, 6);
    expect_points(&c, &h);
    honesty_expect_flux(&c, 0,
                        setting_of(kind) *
                            half_gap_flux(&h.map, half_gap_t(&h.map, -INNER - CORNER),
                                          half_gap_t(&h.map, wide - CORNER)));
    honesty_run(&c, tally);
}

static void check_closed_forms(void)
{
    static const double x[3] = {-0.5, 0.0, 0.5};
    static const double thin[3] = {0.9845905255, 0.7821882943, 0.3781738830};
    static const double square[3] = {0.9886341015, 0.8335565596, 0.4781525378};
    const struct half_gap plate = half_gap_thin_edge(), pole = half_gap_square_edge();
    for (int k = 0; k < 3; k++) {
        const double p = half_gap_field(&plate, half_gap_t(&plate, x[k]));
        const double q = half_gap_field(&pole, half_gap_t(&pole, x[k]));
        if (!(fabs(p - thin[k]) < 1e-10 && fabs(q - square[k]) < 1e-10)) {
            (void)fprintf(stderr, "edges: closed forms give %.12g %.12g\n", p, q);
            exit(EXIT_FAILURE);
        }
    }
}

void honesty_edges(struct honesty_tally *tally)
{
    const struct half_gap square = half_gap_square_edge();
    const struct half_case lone[] = {
        {"lone square plates", square, PLANE_ELECTRIC_ALONG, 19e-3},
        {"lone square poles", square, PLANE_MAGNETIC_ALONG, 31e-3},
    };
    honesty_family(tally, "edges");
    check_closed_forms();
    for (int k = 0; k < 2; k++)
        lone_edge_case(tally, &lone[k]);
    between_planes_case(tally, 0.75, 21e-3);
    between_planes_case(tally, 1.0, 23e-3);
    between_planes_case(tally, 2.0, 17e-3);
    between_planes_case(tally, 4.0, 12e-3);
    between_planes_case(tally, 9.0, 25e-3);
    step_case(tally, 0.8, PLANE_ELECTRIC_ALONG);
    step_case(tally, 1.5, PLANE_MAGNETIC_ALONG);
    step_case(tally, 3.0, PLANE_ELECTRIC_ALONG);
}
