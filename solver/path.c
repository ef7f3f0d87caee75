/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "solver/path.h"

#include <math.h>
#include <string.h>

#include "shared/mem.h"

double path_line_offset(int k)
{
    static const double offset[PATH_LINES] = {0.0, -1.0, -0.5, 0.5, 1.0};
    return offset[k];
}

bool path_range(const struct geometry *geometry, double *from, double *to)
{
    if (geometry->beam.has_path) {
        *from = geometry->beam.path_from;
        *to = geometry->beam.path_to;
        return true;
    }
    *from = -(double)INFINITY;
    *to = (double)INFINITY;
    for (int k = 0; k < PLANE_KINDS; k++) {
        const struct plane *plane = &geometry->planes[k];
        if (!plane->present || !plane_kind_is_along((enum plane_kind)k))
            continue;
        *from = fmax(*from, plane->low.a);
        *to = fmin(*to, plane->high.a);
    }
    return isfinite(*from) && *from < *to;
}

/* One component (b) of an along plane on one line. */
static enum status sample_line(const struct plane_solution *plane, double offset,
                               const double *z, double **out)
{
    *out = MEM_NEW(PATH_POINTS, double);
    enum status status = *out != NULL ? STATUS_OK : STATUS_MEMORY;
    for (int k = 0; k < PATH_POINTS && status == STATUS_OK; k++) {
        double field[2];
        status = plane_field(plane, (struct vec2){z[k], offset}, field, NULL);
        (*out)[k] = field[1];
    }
    return status;
}

static enum status sample_plane(const struct plane_solution *plane, double half,
                                const struct path *path, double *out[PATH_LINES])
{
    enum status status = STATUS_OK;
    for (int k = 0; k < path->lines && status == STATUS_OK; k++)
        status = sample_line(plane, half * path_line_offset(k), path->z, &out[k]);
    return status;
}

static enum status centre_field(const struct plane_solution *plane, double z, double b,
                                double *out)
{
    double field[2];
    enum status status = plane_field(plane, (struct vec2){z, b}, field, NULL);
    *out = field[1];
    return status;
}

enum status path_sample(const struct view *view, struct path *path)
{
    const struct geometry *g = view->geometry;
    const struct plane_solution *electric = view->planes[PLANE_ELECTRIC_ALONG];
    const struct plane_solution *magnetic = view->planes[PLANE_MAGNETIC_ALONG];
    double from, to;
    enum status status = STATUS_OK;
    memset(path, 0, sizeof *path);
    if (!path_range(g, &from, &to) || (electric == NULL && magnetic == NULL))
        return STATUS_OK;
    path->present = true;
    path->step = (to - from) / (PATH_POINTS - 1);
    path->lines = g->beam.has_footprint ? PATH_LINES : 1;
    for (int k = 0; k < PATH_POINTS; k++)
        path->z[k] = from + (to - from) * ((double)k / (PATH_POINTS - 1));
    if (electric != NULL) {
        status = sample_plane(electric, g->beam.half_x, path, path->e_x);
        if (status == STATUS_OK)
            status =
                centre_field(electric, g->reference_z, g->reference_x, &path->e_centre);
    }
    if (magnetic != NULL && status == STATUS_OK) {
        status = sample_plane(magnetic, g->beam.half_y, path, path->b_y);
        if (status == STATUS_OK)
            status =
                centre_field(magnetic, g->reference_z, g->reference_y, &path->b_centre);
    }
    return status;
}

double path_integral(const struct path *path, const double *f, int i, int j)
{
    double sum = 0.0;
    const bool odd = (j - i) % 2 != 0;
    if (odd && j - i < 3)
        return 0.5 * path->step * (f[i] + f[j]);
    if (odd) {
        sum = 0.375 * path->step * (f[i] + 3.0 * (f[i + 1] + f[i + 2]) + f[i + 3]);
        i += 3;
    }
    for (int k = i; k + 2 <= j; k += 2)
        sum += path->step / 3.0 * (f[k] + 4.0 * f[k + 1] + f[k + 2]);
    return sum;
}

void path_free(struct path *path)
{
    for (int k = 0; k < PATH_LINES; k++) {
        mem_free(path->e_x[k]);
        mem_free(path->b_y[k]);
        path->e_x[k] = path->b_y[k] = NULL;
    }
    path->present = false;
}
