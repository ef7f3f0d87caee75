/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The words of the geometry file live here once, as tables by enum; reader, checks and
 * writers all take them from these functions. */
#include "mesh/geometry.h"

#include <assert.h>
#include <math.h>

#include "shared/mem.h"

const char *plane_kind_key(enum plane_kind kind)
{
    static const char *const keys[PLANE_KINDS] = {
        [PLANE_ELECTRIC_ALONG] = "electric_along",
        [PLANE_ELECTRIC_ACROSS] = "electric_across",
        [PLANE_MAGNETIC_ALONG] = "magnetic_along",
        [PLANE_MAGNETIC_ACROSS] = "magnetic_across",
        [PLANE_ELECTRIC_TURNED] = "electric_turned",
    };
    assert(kind < PLANE_KINDS);
    return keys[kind];
}

bool plane_kind_is_magnetic(enum plane_kind kind)
{
    return kind == PLANE_MAGNETIC_ALONG || kind == PLANE_MAGNETIC_ACROSS;
}

bool plane_kind_is_along(enum plane_kind kind)
{
    return kind == PLANE_ELECTRIC_ALONG || kind == PLANE_MAGNETIC_ALONG;
}

bool plane_kind_is_across(enum plane_kind kind)
{
    return kind == PLANE_ELECTRIC_ACROSS || kind == PLANE_MAGNETIC_ACROSS;
}

bool plane_kind_is_turned(enum plane_kind kind)
{
    return kind == PLANE_ELECTRIC_TURNED;
}

bool part_is_conductor(const struct part *part)
{
    return part->kind != PART_INSULATOR;
}

enum axis plane_kind_axis(enum plane_kind kind, int which)
{
    static const enum axis axes[PLANE_KINDS][2] = {
        [PLANE_ELECTRIC_ALONG] = {AXIS_Z, AXIS_X},
        [PLANE_ELECTRIC_ACROSS] = {AXIS_X, AXIS_Y},
        [PLANE_MAGNETIC_ALONG] = {AXIS_Z, AXIS_Y},
        [PLANE_MAGNETIC_ACROSS] = {AXIS_X, AXIS_Y},
        [PLANE_ELECTRIC_TURNED] = {AXIS_Z, AXIS_R},
    };
    assert(kind < PLANE_KINDS && (which == 0 || which == 1));
    return axes[kind][which];
}

struct vec2 plane_kind_project(enum plane_kind kind, double x, double y, double z)
{
    const double at[] = {
        [AXIS_X] = x, [AXIS_Y] = y, [AXIS_Z] = z, [AXIS_R] = hypot(x, y)};
    return (struct vec2){at[plane_kind_axis(kind, 0)], at[plane_kind_axis(kind, 1)]};
}

const char *axis_key(enum axis axis)
{
    static const char *const keys[] = {
        [AXIS_X] = "x", [AXIS_Y] = "y", [AXIS_Z] = "z", [AXIS_R] = "r"};
    return keys[axis];
}

const char *part_kind_key(enum part_kind kind)
{
    static const char *const keys[] = {
        [PART_ELECTRODE] = "electrode", [PART_GUARD] = "guard",
        [PART_CLAMP] = "clamp",         [PART_POLE] = "pole",
        [PART_FLOATING] = "floating",   [PART_INSULATOR] = "insulator"};
    return keys[kind];
}

const char *side_kind_key(enum side_kind kind)
{
    static const char *const keys[] = {[SIDE_WALL] = "wall",
                                       [SIDE_MIRROR] = "mirror",
                                       [SIDE_ANTIMIRROR] = "antimirror",
                                       [SIDE_OPEN] = "open"};
    return keys[kind];
}

const struct limit_rule *geometry_limit_rule(enum limit_kind kind)
{
    static const struct limit_rule rules[LIMIT_KINDS] = {
        [LIMIT_RATIO_ERROR] = {"ratio_error", "1", false},
        [LIMIT_FLAT_LENGTH] = {"flat_length", "m", true},
        [LIMIT_EVEN_RADIUS] = {"even_radius", "m", true},
        [LIMIT_DETUNING] = {"detuning", "1", false},
        [LIMIT_LENGTH_MISMATCH] = {"length_mismatch", "m", false},
        [LIMIT_KICK] = {"kick", "rad", false},
        [LIMIT_OFFSET] = {"offset", "m", false},
        [LIMIT_RESOLUTION] = {"resolution", "1", true},
        [LIMIT_SURFACE_FIELD] = {"surface_field", "V/m", false},
    };
    assert(kind < LIMIT_KINDS);
    return &rules[kind];
}

double geometry_potential(const struct geometry *geometry,
                          const struct linear *potential)
{
    double sum = potential->constant;
    for (size_t s = 0; potential->gain != NULL && s < geometry->supply_count; s++)
        sum += potential->gain[s] * geometry->supplies[s].setting;
    return sum;
}

bool geometry_probe_counts(const struct geometry *geometry, const struct probe *probe,
                           enum plane_kind kind)
{
    const bool along = geometry->planes[PLANE_ELECTRIC_ALONG].present ||
                       geometry->planes[PLANE_MAGNETIC_ALONG].present;
    if (plane_kind_is_turned(kind))
        return probe->has_z;
    return plane_kind_is_along(kind) || !along || !probe->has_z ||
           probe->z == geometry->reference_z;
}

bool plane_touches_wall(const struct plane *plane, const struct part *part)
{
    struct vec2 low, high;
    shape_bounds(&part->shape, &low, &high);
    const double slack =
        1e-9 * fmin(plane->high.a - plane->low.a, plane->high.b - plane->low.b);
    const bool at[SIDE_COUNT] = {
        low.a <= plane->low.a + slack, high.a >= plane->high.a - slack,
        low.b <= plane->low.b + slack, high.b >= plane->high.b - slack};
    for (int s = 0; s < SIDE_COUNT; s++)
        if (at[s] && plane->sides[s].kind == SIDE_WALL)
            return true;
    return false;
}

double geometry_ratio_bound(const struct geometry *geometry)
{
    const struct limit *limit = &geometry->limits[LIMIT_RATIO_ERROR];
    return limit->present ? limit->value : 1e-3;
}

static void plane_free(struct plane *plane)
{
    for (size_t k = 0; k < plane->part_count; k++) {
        mem_free(plane->parts[k].name);
        mem_free(plane->parts[k].potential.gain);
        shape_free(&plane->parts[k].shape);
    }
    mem_free(plane->parts);
    for (int s = 0; s < SIDE_COUNT; s++) {
        mem_free(plane->sides[s].from.gain);
        mem_free(plane->sides[s].to.gain);
    }
}

void geometry_free(struct geometry *geometry)
{
    for (size_t k = 0; k < geometry->value_count; k++)
        mem_free(geometry->values[k].name);
    for (size_t k = 0; k < geometry->supply_count; k++)
        mem_free(geometry->supplies[k].name);
    for (int k = 0; k < PLANE_KINDS; k++)
        plane_free(&geometry->planes[k]);
    mem_free(geometry->values);
    mem_free(geometry->supplies);
    mem_free(geometry->probes);
    mem_free(geometry->path);
    mem_free(geometry->title);
    *geometry = (struct geometry){0};
}
