/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "mesh/medium.h"

bool plane_has_media(const struct plane *plane)
{
    for (size_t p = 0; p < plane->part_count; p++)
        if (!part_is_conductor(&plane->parts[p]))
            return true;
    return false;
}

static bool holds(const struct part *part, struct vec2 at)
{
    struct vec2 low, high;
    shape_bounds(&part->shape, &low, &high);
    return at.a >= low.a && at.a <= high.a && at.b >= low.b && at.b <= high.b &&
           shape_contains(&part->shape, at, 0.0);
}

int plane_medium_at(const struct plane *plane, struct vec2 at)
{
    int medium = MEDIUM_VACUUM;
    for (size_t p = 0; p < plane->part_count; p++) {
        if (!holds(&plane->parts[p], at))
            continue;
        if (part_is_conductor(&plane->parts[p]))
            return MEDIUM_CONDUCTOR;
        medium = (int)p;
    }
    return medium;
}

double medium_coefficient(const struct plane *plane, int medium)
{
    return medium >= 0 ? plane->parts[medium].permittivity : 1.0;
}
