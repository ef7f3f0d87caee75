/* SPDX-License-Identifier: GPL-3.0-or-later */
/* One plane: what is fixed must not contradict itself, and something must drive it.
 * Potentials are compared as linear forms, so two parts that happen to be equal at
 * today's settings still count as different. */
#include <math.h>
#include <string.h>

#include "mesh/geometry_check_internal.h"
#include "shared/mem.h"

#define THICKNESS_MIN 1e-7 /* of the smaller side of the region */
#define SIZE_MIN      1e-6 /* m, side of a region */
#define SIZE_MAX_SIDE 1e3  /* m */
#define ASPECT_MAX    1e4  /* longer side over shorter side */
#define POINT_TEXT    80

static bool same_linear(const struct check *check, const struct linear *p,
                        const struct linear *q)
{
    bool same = same_potential(p->constant, q->constant);
    for (size_t s = 0; s < check->geometry->supply_count; s++)
        same = same && same_potential(linear_gain(p, s), linear_gain(q, s));
    return same;
}

static bool check_region(struct check *check, const struct plane *plane)
{
    double a = plane->high.a - plane->low.a, b = plane->high.b - plane->low.b;
    bool fine = a >= SIZE_MIN && b >= SIZE_MIN && a <= SIZE_MAX_SIDE &&
                b <= SIZE_MAX_SIDE && a <= ASPECT_MAX * b && b <= ASPECT_MAX * a;
    return fine ||
           mistakes_add(&check->mistakes, plane->place,
                        "the region of \"%s\" cannot be solved; expected sides "
                        "from 1 um to 1 km, the longer at most %g times the "
                        "shorter; found %g mm by %g mm",
                        plane_kind_key(plane->kind), ASPECT_MAX, a * 1e3, b * 1e3);
}

static void check_names(struct check *check, const struct plane *plane)
{
    for (size_t k = 1; k < plane->part_count; k++)
        for (size_t j = 0; j < k; j++) {
            if (strcmp(plane->parts[j].name, plane->parts[k].name) != 0)
                continue;
            (void)mistakes_add(&check->mistakes, plane->parts[k].place,
                               "two parts of \"%s\" are called \"%.60s\"; expected "
                               "different names; found the other in line %d",
                               plane_kind_key(plane->kind), plane->parts[k].name,
                               plane->parts[j].place.line);
            break;
        }
}

static bool check_inside(struct check *check, const struct plane *plane,
                         const struct part *part)
{
    struct vec2 low, high;
    double tolerance = plane_tolerance(plane);
    shape_bounds(&part->shape, &low, &high);
    if (low.a >= plane->low.a - tolerance && low.b >= plane->low.b - tolerance &&
        high.a <= plane->high.a + tolerance && high.b <= plane->high.b + tolerance)
        return true;
    char from[POINT_TEXT], to[POINT_TEXT], region_from[POINT_TEXT],
        region_to[POINT_TEXT];
    describe_point(plane, low, from, sizeof from);
    describe_point(plane, high, to, sizeof to);
    describe_point(plane, plane->low, region_from, sizeof region_from);
    describe_point(plane, plane->high, region_to, sizeof region_to);
    bool wholly = high.a < plane->low.a || high.b < plane->low.b ||
                  low.a > plane->high.a || low.b > plane->high.b;
    return mistakes_add(&check->mistakes, part->place,
                        "the part \"%.60s\" lies %s the region of \"%s\"; expected it "
                        "between (%s) and (%s); found it between (%s) and (%s)",
                        part->name, wholly ? "outside" : "partly outside",
                        plane_kind_key(plane->kind), region_from, region_to, from, to);
}

static bool bounds_apart(const struct shape *p, const struct shape *q, double tolerance)
{
    struct vec2 p_low, p_high, q_low, q_high;
    shape_bounds(p, &p_low, &p_high);
    shape_bounds(q, &q_low, &q_high);
    return p_low.a > q_high.a + tolerance || q_low.a > p_high.a + tolerance ||
           p_low.b > q_high.b + tolerance || q_low.b > p_high.b + tolerance;
}

/* May two parts share a place? Insulators fill what conductors leave, and conductors at
 * one potential are one. Floating ones have a potential of their own. */
static bool may_meet(const struct check *check, const struct part *p,
                     const struct part *q)
{
    if (!part_is_conductor(p) || !part_is_conductor(q))
        return true;
    return p->kind != PART_FLOATING && q->kind != PART_FLOATING &&
           same_linear(check, &p->potential, &q->potential);
}

/* What is wrong with two parts that meet, and what would be right. */
static const char *meeting_words(const struct part *p, const struct part *q)
{
    if (p->kind == PART_FLOATING && q->kind == PART_FLOATING)
        return "touch or overlap, though both float; expected a gap, or one part drawn "
               "for both";
    if (p->kind == PART_FLOATING || q->kind == PART_FLOATING)
        return "touch or overlap, so the floating one would be at the potential of the "
               "other; expected a gap between them";
    return "touch or overlap at different potential; expected a gap between them";
}

static void check_pair(struct check *check, const struct plane *plane,
                       const struct part *p, const struct part *q)
{
    bool meets = false;
    struct vec2 where = {0, 0};
    double tolerance = plane_tolerance(plane);
    if (may_meet(check, p, q) || bounds_apart(&p->shape, &q->shape, tolerance) ||
        !check_status(check,
                      shape_meets(&p->shape, &q->shape, tolerance, &meets, &where)) ||
        !meets)
        return;
    char at[POINT_TEXT];
    describe_point(plane, where, at, sizeof at);
    (void)mistakes_add(&check->mistakes, q->place,
                       "the parts \"%.60s\" and \"%.60s\" of \"%s\" %s; found them "
                       "together at %s",
                       p->name, q->name, plane_kind_key(plane->kind),
                       meeting_words(p, q), at);
}

/* Solid thinner than the accuracy of the grid's surfaces could slip through it. */
static bool check_thickness(struct check *check, const struct plane *plane,
                            const struct part *part)
{
    struct vec2 low, high;
    shape_bounds(&part->shape, &low, &high);
    const double size = fmin(high.a - low.a, high.b - low.b);
    const double region =
        fmin(plane->high.a - plane->low.a, plane->high.b - plane->low.b);
    return size >= THICKNESS_MIN * region ||
           mistakes_add(&check->mistakes, part->place,
                        "the part \"%.60s\" of \"%s\" is too thin for its region; "
                        "expected at least %g mm; found %g mm",
                        part->name, plane_kind_key(plane->kind),
                        THICKNESS_MIN * region * 1e3, size * 1e3);
}

static void check_parts(struct check *check, const struct plane *plane)
{
    for (size_t k = 0; k < plane->part_count && !check->out_of_memory; k++) {
        const struct part *part = &plane->parts[k];
        bool inside =
            check_inside(check, plane, part) && check_thickness(check, plane, part);
        for (int s = 0; inside && s < SIDE_COUNT; s++)
            check_side(check, plane, s, part);
        for (size_t j = 0; j < k && !check->out_of_memory; j++)
            check_pair(check, plane, &plane->parts[j], part);
    }
}

/* The fixed potentials of a plane, compared one after the other. */
struct drive {
    const struct linear *first; /* NULL until one is met */
    bool differs;               /* as linear forms */
    bool differs_now;           /* at the settings of the supplies */
    bool floats;                /* a floating part was met */
    bool charged;               /* and carries a charge, which drives a field too */
};

static void meet_potential(const struct check *check, struct drive *drive,
                           const struct linear *potential)
{
    if (drive->first == NULL)
        drive->first = potential;
    if (same_linear(check, drive->first, potential))
        return;
    drive->differs = true;
    drive->differs_now =
        drive->differs_now ||
        !same_potential(geometry_potential(check->geometry, drive->first),
                        geometry_potential(check->geometry, potential));
}

static void meet_parts(const struct check *check, struct drive *drive,
                       const struct plane *plane)
{
    for (size_t k = 0; k < plane->part_count; k++) {
        const struct part *part = &plane->parts[k];
        if (part->kind == PART_FLOATING) {
            drive->floats = true;
            drive->charged = drive->charged || part->charge != 0;
        } else if (part_is_conductor(part)) {
            meet_potential(check, drive, &part->potential);
        }
    }
}

/* Open sides stand for a potential of zero far away, and carry it. */
static void meet_sides(const struct check *check, struct drive *drive,
                       const struct plane *plane)
{
    for (int s = 0; s < SIDE_COUNT; s++) {
        if (plane->sides[s].kind == SIDE_MIRROR)
            continue;
        meet_potential(check, drive, &plane->sides[s].from);
        meet_potential(check, drive, &plane->sides[s].to);
    }
}

static void check_drive(struct check *check, const struct plane *plane)
{
    struct drive drive = {0};
    const char *name = plane_kind_key(plane->kind);
    meet_sides(check, &drive, plane);
    meet_parts(check, &drive, plane);
    if (drive.first == NULL)
        (void)mistakes_add(&check->mistakes, plane->place,
                           "nothing fixes the potential in \"%s\"; expected a wall, an "
                           "open side or a part at a potential; found mirrors%s only",
                           name, drive.floats ? " and floating parts" : "");
    else if (!drive.differs && !drive.charged)
        (void)mistakes_add(&check->mistakes, plane->place,
                           "there is no potential difference in \"%s\"; expected parts "
                           "or walls at different potential",
                           name);
    else if (!drive.differs_now && !drive.charged)
        messages_add(
            check->mistakes.messages, SEVERITY_WARNING, plane->place,
            "there is no potential difference in \"%s\" at the settings of the "
            "supplies; the field is zero there",
            name);
}

void check_plane(struct check *check, const struct plane *plane)
{
    check_names(check, plane);
    if (!check_region(check, plane))
        return;
    check_parts(check, plane);
    check_drive(check, plane);
}
