/* SPDX-License-Identifier: GPL-3.0-or-later */
/* One plane: what is fixed must not contradict itself, and something must drive it.
 * Potentials are compared as linear forms, so two parts that happen to be equal at
 * today's settings still count as different. */
#include <math.h>
#include <string.h>

#include "mesh/geometry_check_internal.h"
#include "shared/mem.h"

#define THICKNESS_MIN  1e-7  /* of the smaller side of the region */
#define SAME_POTENTIAL 1e-12 /* relative: rounding of the arithmetic in the file */
#define SIZE_MIN       1e-6  /* m, side of a region */
#define SIZE_MAX_SIDE  1e3   /* m */
#define ASPECT_MAX     1e4   /* longer side over shorter side */
#define POINT_TEXT     80

static bool same_number(double p, double q)
{
    return fabs(p - q) <= SAME_POTENTIAL * fmax(fabs(p), fabs(q));
}

static double gain_of(const struct linear *p, size_t s)
{
    return p->gain != NULL ? p->gain[s] : 0;
}

static bool same_linear(const struct check *check, const struct linear *p,
                        const struct linear *q)
{
    bool same = same_number(p->constant, q->constant);
    for (size_t s = 0; s < check->geometry->supply_count; s++)
        same = same && same_number(gain_of(p, s), gain_of(q, s));
    return same;
}

/* Is the part at the potential that a side has at fraction t of its length? */
static bool matches_side(const struct check *check, const struct part *part,
                         const struct side *side, double t)
{
    const struct linear *p = &part->potential;
    bool same =
        same_number(p->constant, side->from.constant +
                                     t * (side->to.constant - side->from.constant));
    for (size_t s = 0; s < check->geometry->supply_count; s++) {
        double from = gain_of(&side->from, s), to = gain_of(&side->to, s);
        same = same && same_number(gain_of(p, s), from + t * (to - from));
    }
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

static void check_pair(struct check *check, const struct plane *plane,
                       const struct part *p, const struct part *q)
{
    bool meets = false;
    struct vec2 where = {0, 0};
    double tolerance = plane_tolerance(plane);
    if (same_linear(check, &p->potential, &q->potential) ||
        bounds_apart(&p->shape, &q->shape, tolerance) ||
        !check_status(check,
                      shape_meets(&p->shape, &q->shape, tolerance, &meets, &where)) ||
        !meets)
        return;
    char at[POINT_TEXT];
    describe_point(plane, where, at, sizeof at);
    (void)mistakes_add(
        &check->mistakes, q->place,
        "the parts \"%.60s\" and \"%.60s\" of \"%s\" touch or overlap at "
        "different potential; expected a gap between them; found them "
        "together at %s",
        p->name, q->name, plane_kind_key(plane->kind), at);
}

/* Solid stretches of a part on side s (coordinates along the side). */
static bool spans_on_side(struct check *check, const struct plane *plane, int s,
                          const struct part *part, struct span **spans, size_t *count)
{
    struct vec2 low, high;
    size_t capacity = 0;
    double tolerance = plane_tolerance(plane);
    shape_bounds(&part->shape, &low, &high);
    const double reach[] = {low.a - plane->low.a, plane->high.a - high.a,
                            low.b - plane->low.b, plane->high.b - high.b};
    const double face[] = {low.a, high.a, low.b, high.b};
    const double side[] = {plane->low.a, plane->high.a, plane->low.b, plane->high.b};
    *spans = NULL;
    *count = 0;
    if (reach[s] > tolerance)
        return true;
    /* A face within the tolerance of the side, but not on it, is looked at itself. */
    double at = fabs(reach[s]) <= tolerance ? face[s] : side[s];
    int axis = s == SIDE_A_LOW || s == SIDE_A_HIGH ? 1 : 0;
    return check_status(
        check, shape_spans(&part->shape, axis, at, tolerance, spans, &capacity, count));
}

static void report_side(struct check *check, const struct plane *plane, int s,
                        const struct part *part)
{
    static const char *const ends[] = {"low", "high"};
    bool wall = plane->sides[s].kind == SIDE_WALL;
    (void)mistakes_add(
        &check->mistakes, part->place,
        "the part \"%.60s\" touches the %s at the %s end of %s in \"%s\"; "
        "expected %s; found another potential",
        part->name, side_kind_key(plane->sides[s].kind), ends[s % 2],
        axis_key(plane_kind_axis(plane->kind, s / 2)), plane_kind_key(plane->kind),
        wall ? "a gap, or the potential of the wall there"
             : "a gap, or a potential of 0");
}

static void check_side(struct check *check, const struct plane *plane, int s,
                       const struct part *part)
{
    const struct side *side = &plane->sides[s];
    bool along_b = s == SIDE_A_LOW || s == SIDE_A_HIGH;
    double start = along_b ? plane->low.b : plane->low.a;
    double length = (along_b ? plane->high.b : plane->high.a) - start;
    struct span *spans = NULL;
    size_t count = 0;
    bool matches = true;
    if (side->kind == SIDE_MIRROR)
        return;
    if (spans_on_side(check, plane, s, part, &spans, &count))
        for (size_t k = 0; k < count; k++)
            matches = matches &&
                      matches_side(check, part, side,
                                   fmin(fmax((spans[k].low - start) / length, 0), 1)) &&
                      matches_side(check, part, side,
                                   fmin(fmax((spans[k].high - start) / length, 0), 1));
    mem_free(spans);
    if (!matches)
        report_side(check, plane, s, part);
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
};

static void meet_potential(const struct check *check, struct drive *drive,
                           const struct linear *potential)
{
    if (drive->first == NULL)
        drive->first = potential;
    if (same_linear(check, drive->first, potential))
        return;
    drive->differs = true;
    drive->differs_now = drive->differs_now ||
                         !same_number(geometry_potential(check->geometry, drive->first),
                                      geometry_potential(check->geometry, potential));
}

static void check_drive(struct check *check, const struct plane *plane)
{
    struct drive drive = {NULL, false, false};
    const char *name = plane_kind_key(plane->kind);
    for (int s = 0; s < SIDE_COUNT; s++) {
        if (plane->sides[s].kind == SIDE_MIRROR)
            continue;
        meet_potential(check, &drive, &plane->sides[s].from);
        meet_potential(check, &drive, &plane->sides[s].to);
    }
    for (size_t k = 0; k < plane->part_count; k++)
        meet_potential(check, &drive, &plane->parts[k].potential);
    if (drive.first == NULL)
        (void)mistakes_add(
            &check->mistakes, plane->place,
            "nothing fixes the potential in \"%s\"; expected a wall or a "
            "part; found mirrors only",
            name);
    else if (!drive.differs)
        (void)mistakes_add(&check->mistakes, plane->place,
                           "there is no potential difference in \"%s\"; expected parts "
                           "or walls at different potential",
                           name);
    else if (!drive.differs_now)
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
