/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Places the result is asked for: each must lie where a plane knows the field, so that
 * no figure or map is ever filled with zeros in silence. A mirror or antimirror at
 * coordinate 0 lets a plane know the other half too. */
#include <math.h>
#include <stdio.h>

#include "mesh/geometry_check_internal.h"

#define POINT_TEXT 80
#define THIN       1e-9 /* half width of a path without a footprint, of the region */

static struct interval point_interval(double at)
{
    return (struct interval){at, at};
}

/* Reports an interval that a plane does not cover; true if it does. */
static bool covers(struct check *check, const struct plane *plane, int which,
                   struct interval wanted, const char *what, struct place place)
{
    if (plane_covers(plane, which, wanted))
        return true;
    struct interval extent = plane_extent(plane, which);
    return mistakes_add(&check->mistakes, place,
                        "%s reaches outside the region of \"%s\"; expected %s from %g "
                        "mm to %g mm; found %g mm to %g mm",
                        what, plane_kind_key(plane->kind),
                        axis_key(plane_kind_axis(plane->kind, which)), extent.low * 1e3,
                        extent.high * 1e3, wanted.low * 1e3, wanted.high * 1e3);
}

static void report_crossing(struct check *check, const struct plane *plane,
                            const struct part *part, struct vec2 where,
                            const char *what)
{
    char at[POINT_TEXT];
    describe_point(plane, where, at, sizeof at);
    (void)mistakes_add(
        &check->mistakes, check->geometry->beam.place,
        "%s runs into the part \"%.60s\" of \"%s\"; expected a free way; "
        "found the part (line %d) at %s",
        what, part->name, plane_kind_key(plane->kind), part->place.line, at);
}

/* A rectangle of the beam, in a plane's axes, must be free of parts. */
static void check_free(struct check *check, const struct plane *plane,
                       struct interval a, struct interval b, const char *what)
{
    struct shape way = {0};
    struct interval fa = plane_fold(plane, 0, a), fb = plane_fold(plane, 1, b);
    if (!check_status(check, shape_init_box(&way, (struct vec2){fa.low, fb.low},
                                            (struct vec2){fa.high, fb.high}, 0)))
        return;
    for (size_t k = 0; k < plane->part_count; k++) {
        bool meets = false;
        struct vec2 where = {0, 0};
        if (check_status(check, shape_meets(&plane->parts[k].shape, &way,
                                            plane_tolerance(plane), &meets, &where)) &&
            meets)
            report_crossing(check, plane, &plane->parts[k], where, what);
    }
    shape_free(&way);
}

static void check_path(struct check *check, const struct plane *plane)
{
    const struct beam *beam = &check->geometry->beam;
    double half = plane->kind == PLANE_ELECTRIC_ALONG ? beam->half_x : beam->half_y;
    if (!beam->has_footprint)
        half = THIN * (plane->high.b - plane->low.b);
    const char *what =
        beam->has_footprint ? "the beam (path and footprint)" : "the path of the beam";
    struct interval z = {beam->path_from, beam->path_to};
    struct interval width = {-half, half};
    if (covers(check, plane, 0, z, what, beam->place) &&
        covers(check, plane, 1, width, what, beam->place))
        check_free(check, plane, z, width, what);
}

static void check_footprint(struct check *check, const struct plane *plane)
{
    const struct beam *beam = &check->geometry->beam;
    const char *what = "the footprint of the beam";
    struct interval x = {-beam->half_x, beam->half_x};
    struct interval y = {-beam->half_y, beam->half_y};
    if (covers(check, plane, 0, x, what, beam->place) &&
        covers(check, plane, 1, y, what, beam->place))
        check_free(check, plane, x, y, what);
}

static void check_beam(struct check *check)
{
    const struct beam *beam = &check->geometry->beam;
    for (int k = 0; k < PLANE_KINDS; k++) {
        const struct plane *plane = &check->geometry->planes[k];
        if (!plane->present)
            continue;
        if (plane_kind_is_along(plane->kind) && beam->has_path)
            check_path(check, plane);
        if (plane_kind_is_across(plane->kind) && beam->has_footprint)
            check_footprint(check, plane);
    }
}

static bool holds_point(const struct plane *plane, struct vec2 p)
{
    return plane->present && plane_covers(plane, 0, point_interval(p.a)) &&
           plane_covers(plane, 1, point_interval(p.b));
}

static void check_named_probe(struct check *check, const struct probe *probe)
{
    const struct plane *plane = &check->geometry->planes[probe->plane];
    const char *name = plane_kind_key(probe->plane);
    if (!plane->present) {
        (void)mistakes_add(&check->mistakes, probe->place,
                           "the probe names the plane \"%s\", which the file does not "
                           "have",
                           name);
        return;
    }
    struct vec2 p = plane_kind_project(probe->plane, probe->x, probe->y, probe->z);
    (void)(covers(check, plane, 0, point_interval(p.a), "the probe", probe->place) &&
           covers(check, plane, 1, point_interval(p.b), "the probe", probe->place));
}

static void check_probe(struct check *check, const struct probe *probe)
{
    const struct geometry *geometry = check->geometry;
    bool held = false;
    if (probe->has_plane) {
        check_named_probe(check, probe);
        return;
    }
    for (int k = 0; k < PLANE_KINDS; k++) {
        const struct plane *plane = &geometry->planes[k];
        const enum plane_kind kind = (enum plane_kind)k;
        held = held || (geometry_probe_counts(geometry, probe, kind) &&
                        holds_point(plane, plane_kind_project(kind, probe->x, probe->y,
                                                              probe->z)));
    }
    if (!held)
        (void)mistakes_add(
            &check->mistakes, probe->place,
            "the probe lies outside every plane; expected a place inside "
            "a region%s; found x %g mm, y %g mm, z %g mm",
            probe->has_z || !geometry->planes[PLANE_ELECTRIC_TURNED].present
                ? ""
                : ", with its z given for electric_turned",
            probe->x * 1e3, probe->y * 1e3, probe->z * 1e3);
}

/* The ratio is compared with that at the reference point, so a file with both fields
 * needs it in free space even if it does not name it. */
static bool reference_matters(const struct geometry *geometry)
{
    bool electric = geometry->planes[PLANE_ELECTRIC_ALONG].present ||
                    geometry->planes[PLANE_ELECTRIC_ACROSS].present;
    bool magnetic = geometry->planes[PLANE_MAGNETIC_ALONG].present ||
                    geometry->planes[PLANE_MAGNETIC_ACROSS].present;
    return geometry->has_reference || (electric && magnetic);
}

static void check_reference(struct check *check, const struct plane *plane)
{
    const struct geometry *geometry = check->geometry;
    const char *what = geometry->has_reference
                           ? "the reference point"
                           : "the reference point (the centre, as none is given)";
    struct vec2 p = plane_kind_project(plane->kind, geometry->reference_x,
                                       geometry->reference_y, geometry->reference_z);
    if (!covers(check, plane, 0, point_interval(p.a), what, plane->place) ||
        !covers(check, plane, 1, point_interval(p.b), what, plane->place))
        return;
    struct vec2 folded = {plane_fold(plane, 0, point_interval(p.a)).low,
                          plane_fold(plane, 1, point_interval(p.b)).low};
    for (size_t k = 0; k < plane->part_count; k++)
        if (shape_contains(&plane->parts[k].shape, folded, 0))
            (void)mistakes_add(&check->mistakes, plane->parts[k].place,
                               "%s lies inside the part \"%.60s\" of \"%s\"; expected "
                               "it in free space",
                               what, plane->parts[k].name, plane_kind_key(plane->kind));
}

/* The plane that fills one field of the lattice; NULL if there is none. */
static const struct plane *lattice_plane(const struct geometry *geometry,
                                         enum plane_kind along, enum plane_kind across)
{
    if (geometry->planes[along].present)
        return &geometry->planes[along];
    return geometry->planes[across].present ? &geometry->planes[across] : NULL;
}

static void check_lattice(struct check *check, const struct plane *plane)
{
    const struct lattice *lattice = &check->geometry->lattice;
    for (int which = 0; plane != NULL && which < 2; which++) {
        const struct lattice_axis *axis =
            &lattice->axes[plane_kind_axis(plane->kind, which)];
        (void)covers(check, plane, which, (struct interval){axis->from, axis->to},
                     "the lattice", lattice->place);
    }
}

static void check_lattices(struct check *check)
{
    const struct geometry *geometry = check->geometry;
    const struct plane *electric =
        lattice_plane(geometry, PLANE_ELECTRIC_ALONG, PLANE_ELECTRIC_ACROSS);
    const struct plane *magnetic =
        lattice_plane(geometry, PLANE_MAGNETIC_ALONG, PLANE_MAGNETIC_ACROSS);
    check_lattice(check, electric);
    check_lattice(check, magnetic);
    if (electric == NULL && magnetic == NULL &&
        geometry->planes[PLANE_ELECTRIC_TURNED].present)
        (void)mistakes_add(&check->mistakes, geometry->lattice.place,
                           "the lattice cannot be filled; expected a plane along or "
                           "across the beam; found \"electric_turned\" only");
}

void check_extent(struct check *check)
{
    const struct geometry *geometry = check->geometry;
    check_beam(check);
    for (size_t k = 0; k < geometry->probe_count; k++)
        check_probe(check, &geometry->probes[k]);
    /* No ratio is made of a turned plane. */
    for (int k = 0; k < PLANE_KINDS && reference_matters(geometry); k++)
        if (geometry->planes[k].present && !plane_kind_is_turned((enum plane_kind)k))
            check_reference(check, &geometry->planes[k]);
    if (geometry->lattice.present)
        check_lattices(check);
}
