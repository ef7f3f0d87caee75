/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What concerns the file as a whole: is there anything to solve, is every supply used,
 * and does every limit have what it needs. Planes and places are judged in
 * geometry_check_plane.c and geometry_check_extent.c. */
#include "mesh/geometry_check.h"

#include <math.h>
#include <stdio.h>

#include "mesh/geometry_check_internal.h"

#define SAME_PLACE 1e-9 /* of the size of a region */

double plane_tolerance(const struct plane *plane)
{
    return SAME_PLACE *
           fmax(plane->high.a - plane->low.a, plane->high.b - plane->low.b);
}

static struct interval region_interval(const struct plane *plane, int which)
{
    return which == 0 ? (struct interval){plane->low.a, plane->high.a}
                      : (struct interval){plane->low.b, plane->high.b};
}

/* Is side `end` (0 low, 1 high) of an axis a mirror or antimirror at coordinate 0? The
 * axis of a turned plane is not meant: r has no other side. */
static bool reflects_at_zero(const struct plane *plane, int which, int end)
{
    const struct interval region = region_interval(plane, which);
    const enum side_kind kind = plane->sides[2 * which + end].kind;
    return (kind == SIDE_MIRROR || kind == SIDE_ANTIMIRROR) &&
           plane_kind_axis(plane->kind, which) != AXIS_R &&
           fabs(end == 0 ? region.low : region.high) <= plane_tolerance(plane);
}

struct interval plane_extent(const struct plane *plane, int which)
{
    struct interval extent = region_interval(plane, which);
    if (reflects_at_zero(plane, which, 0))
        extent.low = -extent.high;
    else if (reflects_at_zero(plane, which, 1))
        extent.high = -extent.low;
    return extent;
}

bool plane_covers(const struct plane *plane, int which, struct interval wanted)
{
    struct interval extent = plane_extent(plane, which);
    double tolerance = plane_tolerance(plane);
    return wanted.low >= extent.low - tolerance &&
           wanted.high <= extent.high + tolerance;
}

struct interval plane_fold(const struct plane *plane, int which, struct interval wanted)
{
    struct interval region = region_interval(plane, which);
    struct interval folded = wanted;
    if (reflects_at_zero(plane, which, 0) && wanted.low < region.low)
        folded = wanted.high <= region.low
                     ? (struct interval){-wanted.high, -wanted.low}
                     : (struct interval){region.low, fmax(wanted.high, -wanted.low)};
    else if (reflects_at_zero(plane, which, 1) && wanted.high > region.high)
        folded = wanted.low >= region.high
                     ? (struct interval){-wanted.high, -wanted.low}
                     : (struct interval){fmin(wanted.low, -wanted.high), region.high};
    return folded;
}

void describe_point(const struct plane *plane, struct vec2 p, char *text, size_t size)
{
    (void)snprintf(text, size, "%s %.6g mm, %s %.6g mm",
                   axis_key(plane_kind_axis(plane->kind, 0)), p.a * 1e3,
                   axis_key(plane_kind_axis(plane->kind, 1)), p.b * 1e3);
}

bool check_status(struct check *check, enum status status)
{
    if (status == STATUS_MEMORY)
        check->out_of_memory = true;
    return status == STATUS_OK;
}

static void check_supplies(struct check *check)
{
    const struct geometry *geometry = check->geometry;
    for (size_t s = 0; s < geometry->supply_count; s++)
        if (!geometry->supplies[s].used)
            (void)mistakes_add(&check->mistakes, geometry->supplies[s].place,
                               "the supply \"%s\" is not used; expected a part or wall "
                               "whose potential refers to it",
                               geometry->supplies[s].name);
}

/* What a limit may need. */
enum need {
    NEED_NOTHING = 0,
    NEED_PARTICLE = 1,
    NEED_PATH = 2,
    NEED_FOOTPRINT = 4,
    NEED_SLIT = 8,
    NEED_RATIO_LIMIT = 16,
    NEED_BOTH_ALONG = 32,
    NEED_BOTH_ACROSS = 64,
    NEED_ELECTRIC = 128,
    NEED_LAST = NEED_ELECTRIC
};

static unsigned needs_of_limit(enum limit_kind kind)
{
    static const unsigned needs[LIMIT_KINDS] = {
        [LIMIT_RATIO_ERROR] = NEED_FOOTPRINT,
        [LIMIT_FLAT_LENGTH] = NEED_RATIO_LIMIT | NEED_PATH | NEED_BOTH_ALONG,
        [LIMIT_EVEN_RADIUS] = NEED_RATIO_LIMIT | NEED_BOTH_ACROSS,
        [LIMIT_DETUNING] = NEED_PARTICLE | NEED_PATH | NEED_BOTH_ALONG,
        [LIMIT_LENGTH_MISMATCH] = NEED_PATH | NEED_BOTH_ALONG,
        [LIMIT_KICK] = NEED_PARTICLE | NEED_PATH | NEED_BOTH_ALONG,
        [LIMIT_OFFSET] = NEED_PARTICLE | NEED_PATH | NEED_BOTH_ALONG,
        [LIMIT_RESOLUTION] = NEED_PARTICLE | NEED_PATH | NEED_SLIT | NEED_BOTH_ALONG,
        [LIMIT_SURFACE_FIELD] = NEED_ELECTRIC,
    };
    return needs[kind];
}

static const char *need_words(unsigned need)
{
    switch (need) {
    case NEED_PARTICLE:
        return "mass, charge and energy (or speed) of the beam";
    case NEED_PATH:
        return "the path of the beam";
    case NEED_FOOTPRINT:
        return "the footprint of the beam";
    case NEED_SLIT:
        return "the slit of the beam";
    case NEED_RATIO_LIMIT:
        return "the limit \"ratio_error\", which says what counts as even";
    case NEED_BOTH_ALONG:
        return "the planes electric_along and magnetic_along";
    case NEED_BOTH_ACROSS:
        return "the planes electric_across and magnetic_across";
    default:
        return "an electric plane";
    }
}

static bool has_both(const struct geometry *geometry, enum plane_kind p,
                     enum plane_kind q)
{
    return geometry->planes[p].present && geometry->planes[q].present;
}

static bool is_met(const struct geometry *geometry, unsigned need)
{
    const struct beam *beam = &geometry->beam;
    switch (need) {
    case NEED_PARTICLE:
        return beam->has_particle;
    case NEED_PATH:
        return beam->has_path;
    case NEED_FOOTPRINT:
        return beam->has_footprint;
    case NEED_SLIT:
        return beam->has_slit;
    case NEED_RATIO_LIMIT:
        return geometry->limits[LIMIT_RATIO_ERROR].present;
    case NEED_BOTH_ALONG:
        return has_both(geometry, PLANE_ELECTRIC_ALONG, PLANE_MAGNETIC_ALONG);
    case NEED_BOTH_ACROSS:
        return has_both(geometry, PLANE_ELECTRIC_ACROSS, PLANE_MAGNETIC_ACROSS);
    default:
        return geometry->planes[PLANE_ELECTRIC_ALONG].present ||
               geometry->planes[PLANE_ELECTRIC_ACROSS].present ||
               geometry->planes[PLANE_ELECTRIC_TURNED].present;
    }
}

static void check_limits(struct check *check)
{
    for (int k = 0; k < LIMIT_KINDS; k++) {
        const struct limit *limit = &check->geometry->limits[k];
        unsigned needs = limit->present ? needs_of_limit((enum limit_kind)k) : 0;
        for (unsigned need = 1; need <= NEED_LAST; need *= 2)
            if ((needs & need) != 0 && !is_met(check->geometry, need))
                (void)mistakes_add(&check->mistakes, limit->place,
                                   "the limit \"%s\" cannot be judged; expected %s in "
                                   "the file; found none",
                                   geometry_limit_rule((enum limit_kind)k)->key,
                                   need_words(need));
    }
}

enum status geometry_check(const struct geometry *geometry, struct messages *messages)
{
    struct check check = {.geometry = geometry, .mistakes = {.messages = messages}};
    int lost = messages != NULL ? messages->lost : 0;
    bool any = false;
    for (int k = 0; k < PLANE_KINDS; k++) {
        any = any || geometry->planes[k].present;
        if (geometry->planes[k].present)
            check_plane(&check, &geometry->planes[k]);
    }
    if (!any)
        (void)mistakes_add(&check.mistakes, (struct place){0, 0},
                           "there is no plane to solve; expected at least one under "
                           "\"planes\", such as electric_along");
    check_supplies(&check);
    check_extent(&check);
    check_limits(&check);
    if (check.out_of_memory || (messages != NULL && messages->lost > lost))
        return STATUS_MEMORY;
    return check.mistakes.count > 0 ? STATUS_INPUT : STATUS_OK;
}
