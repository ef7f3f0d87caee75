/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "solver/figures_surface.h"

#include <math.h>
#include <stdio.h>

#include "solver/surface_field.h"

enum { NOTE_SIZE = 300, PIECE_SIZE = 160 };

static bool is_unbounded(const struct surface_peak *peak)
{
    return peak->at_corner && !peak->edge_given;
}

/* What is said of sharp corners; empty without any. */
static void corner_note(const struct surface_peak *peak, char *text, size_t size)
{
    const double distance = peak->corner_distance * 1e3;
    text[0] = '\0';
    if (is_unbounded(peak))
        (void)snprintf(
            text, size,
            "; no limit exists beside a sharp corner: looked at from %.3g mm "
            "on, give the part a rounding or an edge_radius",
            distance);
    else if (peak->at_corner)
        (void)snprintf(text, size,
                       "; beside a sharp corner, at the edge radius %.3g mm", distance);
    else if (peak->corner_distance > 0.0)
        (void)snprintf(text, size, "; looked at from %.3g mm on beside sharp corners",
                       distance);
}

static void surface_note(const struct surface_peak *peak, const struct plane *plane,
                         char *note, size_t size)
{
    char radius[64] = "flat face", corner[PIECE_SIZE];
    if (isfinite(peak->radius))
        (void)snprintf(radius, sizeof radius, "radius %.4g mm", peak->radius * 1e3);
    corner_note(peak, corner, sizeof corner);
    (void)snprintf(note, size, "%s, at %s = %.5g, %s = %.5g mm%s", radius,
                   axis_key(plane_kind_axis(plane->kind, 0)), peak->at.a * 1e3,
                   axis_key(plane_kind_axis(plane->kind, 1)), peak->at.b * 1e3, corner);
}

static void add_peak(struct maker *maker, const struct plane_solution *plane,
                     size_t part, struct figure_key key,
                     const struct surface_peak *peak)
{
    const char *name = plane->plane->parts[part].name;
    char note[NOTE_SIZE];
    surface_note(peak, plane->plane, note, sizeof note);
    if (!peak->found)
        maker_miss(maker, key, name, "no surface in free space");
    else if (is_unbounded(peak))
        maker_add_unsettled(maker, key, peak->field, name, note);
    else
        maker_add(maker, key, peak->field, name, note);
}

void figures_conductor_surface(struct maker *maker, const struct plane_solution *plane,
                               size_t part)
{
    const struct figure_key key = {"surface_field", "surface field, peak", "V/m", 0.0};
    struct surface_peak peak = {0};
    enum status status = surface_field_peak(plane, part, &peak);
    if (maker->status == STATUS_OK)
        maker->status = status;
    add_peak(maker, plane, part, key, &peak);
}

void figures_insulator_surfaces(struct maker *maker, const struct plane_solution *plane)
{
    const struct figure_key key = {"insulator_field", "field along the surface, peak",
                                   "V/m", 0.0};
    for (size_t p = 0; p < plane->plane->part_count; p++) {
        struct surface_peak peak = {0};
        if (part_is_conductor(&plane->plane->parts[p]))
            continue;
        enum status status = surface_field_creep(plane, p, &peak);
        if (maker->status == STATUS_OK)
            maker->status = status;
        add_peak(maker, plane, p, key, &peak);
    }
}
