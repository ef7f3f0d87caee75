/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "solver/probe_reading.h"

#include <math.h>

#include "shared/mem.h"
#include "solver/extrapolate.h"

static struct vec2 place_in(const struct probe *probe, enum plane_kind kind)
{
    return plane_kind_project(kind, probe->x, probe->y, probe->z);
}

static bool belongs(const struct view *view, const struct probe *probe,
                    enum plane_kind kind)
{
    const struct plane_solution *plane = view->planes[kind];
    if (plane == NULL || (probe->has_plane && probe->plane != kind))
        return false;
    if (!probe->has_plane && !geometry_probe_counts(view->geometry, probe, kind))
        return false;
    return field_covers(&plane->grid, place_in(probe, kind));
}

static enum status read_one(const struct view *views, int count,
                            struct probe_reading *reading)
{
    const double factor = plane_field_factor(reading->plane);
    double potential[RESULT_LEVELS_MAX], a[RESULT_LEVELS_MAX], b[RESULT_LEVELS_MAX];
    struct field_value value = {0};
    for (int l = 0; l < count; l++) {
        enum status status =
            field_at(views[l].planes[reading->plane]->field, reading->at, &value);
        if (status != STATUS_OK)
            return status;
        potential[l] = value.potential;
        a[l] = factor * value.gradient.a;
        b[l] = factor * value.gradient.b;
    }
    reading->part = value.part;
    const struct estimate p = extrapolate(potential, count, 0.0);
    reading->potential = p.value;
    reading->potential_err = p.uncertainty;
    const struct estimate e[2] = {extrapolate(a, count, 0.0),
                                  extrapolate(b, count, 0.0)};
    /* A component small beside the other is judged with it: its own grids say too little
     * of an error that turns the vector. */
    for (int k = 0; k < 2; k++) {
        reading->field[k] = e[k].value;
        reading->field_err[k] = fmax(e[0].uncertainty, e[1].uncertainty);
    }
    return STATUS_OK;
}

enum status probes_read(const struct view *views, int count,
                        struct probe_reading **readings, size_t *reading_count)
{
    const struct geometry *g = views[0].geometry;
    enum status status = STATUS_OK;
    *reading_count = 0;
    *readings = MEM_NEW(PLANE_KINDS * g->probe_count, struct probe_reading);
    if (*readings == NULL)
        return STATUS_MEMORY;
    for (size_t p = 0; p < g->probe_count; p++)
        for (int k = 0; k < PLANE_KINDS && status == STATUS_OK; k++) {
            const enum plane_kind kind = (enum plane_kind)k;
            if (!belongs(&views[0], &g->probes[p], kind))
                continue;
            struct probe_reading *reading = &(*readings)[(*reading_count)++];
            reading->probe = p;
            reading->plane = kind;
            reading->at = place_in(&g->probes[p], kind);
            status = read_one(views, count, reading);
        }
    return status;
}
