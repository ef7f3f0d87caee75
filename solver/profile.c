/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Fields are extrapolated line by line into a path of their own; ratios are then formed
 * from extrapolated fields, and their uncertainty is that of E and B added. */

#include "solver/profile.h"

#include <math.h>
#include <string.h>

#include "shared/mem.h"
#include "solver/extrapolate.h"
#include "solver/family.h"
#include "solver/ratio.h"

static enum status combine_line(const struct path *paths, int count, bool electric,
                                int line, double scale, double **value, double **error)
{
    const double *levels[RESULT_LEVELS_MAX];
    *value = MEM_NEW(PATH_POINTS, double);
    if (error != NULL)
        *error = MEM_NEW(PATH_POINTS, double);
    if (*value == NULL || (error != NULL && *error == NULL))
        return STATUS_MEMORY;
    for (int l = 0; l < count; l++)
        levels[l] = electric ? paths[l].e_x[line] : paths[l].b_y[line];
    family_array(levels, count, PATH_POINTS, scale, *value,
                 error != NULL ? *error : NULL);
    return STATUS_OK;
}

/* The extrapolated path, and the uncertainties of its axis. */
static enum status combine_path(const struct path *paths, int count, struct path *best,
                                double **e_err, double **b_err)
{
    double e[RESULT_LEVELS_MAX], b[RESULT_LEVELS_MAX];
    enum status status = STATUS_OK;
    memset(best, 0, sizeof *best);
    best->present = true;
    best->lines = paths[0].lines;
    best->step = paths[0].step;
    memcpy(best->z, paths[0].z, sizeof best->z);
    for (int l = 0; l < count; l++) {
        e[l] = paths[l].e_centre;
        b[l] = paths[l].b_centre;
    }
    best->e_centre = extrapolate(e, count, 0.0).value;
    best->b_centre = extrapolate(b, count, 0.0).value;
    for (int k = 0; k < best->lines && status == STATUS_OK; k++) {
        if (paths[0].e_x[0] != NULL)
            status = combine_line(paths, count, true, k, fabs(best->e_centre),
                                  &best->e_x[k], k == 0 ? e_err : NULL);
        if (paths[0].b_y[0] != NULL && status == STATUS_OK)
            status = combine_line(paths, count, false, k, fabs(best->b_centre),
                                  &best->b_y[k], k == 0 ? b_err : NULL);
    }
    return status;
}

static enum status allocate_ratio(struct profile *p)
{
    p->ratio_error = MEM_NEW(PATH_POINTS, double);
    p->ratio_error_err = MEM_NEW(PATH_POINTS, double);
    p->bundle_low = MEM_NEW(PATH_POINTS, double);
    p->bundle_high = MEM_NEW(PATH_POINTS, double);
    p->imbalance = MEM_NEW(PATH_POINTS, double);
    p->defined = MEM_NEW(PATH_POINTS, bool);
    if (p->ratio_error == NULL || p->ratio_error_err == NULL || p->bundle_low == NULL ||
        p->bundle_high == NULL || p->imbalance == NULL || p->defined == NULL)
        return STATUS_MEMORY;
    return STATUS_OK;
}

/* Range of the ratio error over all pairs of lines at sample k. */
static void bundle_at(const struct path *path, int k, double *low, double *high)
{
    *low = *high = ratio_error(path, 0, 0, k);
    for (int e = 0; e < path->lines; e++)
        for (int b = 0; b < path->lines; b++) {
            if (!ratio_is_defined(path, e, b, k, RATIO_FLOOR))
                continue;
            *low = fmin(*low, ratio_error(path, e, b, k));
            *high = fmax(*high, ratio_error(path, e, b, k));
        }
}

static void fill_ratio(struct profile *p, const struct path *path)
{
    for (int k = 0; k < PATH_POINTS; k++) {
        p->imbalance[k] =
            path->e_x[0][k] / path->e_centre - path->b_y[0][k] / path->b_centre;
        p->defined[k] = ratio_is_defined(path, 0, 0, k, RATIO_FLOOR);
        if (!p->defined[k])
            continue;
        p->ratio_error[k] = ratio_error(path, 0, 0, k);
        p->ratio_error_err[k] =
            p->e_x_err[k] / fabs(p->e_x[k]) + p->b_y_err[k] / fabs(p->b_y[k]);
        bundle_at(path, k, &p->bundle_low[k], &p->bundle_high[k]);
    }
}

/* Hands the axis arrays over to the profile. */
static enum status take_axis(struct profile *p, struct path *path)
{
    p->present = true;
    p->count = PATH_POINTS;
    p->z = MEM_NEW(PATH_POINTS, double);
    if (p->z == NULL)
        return STATUS_MEMORY;
    memcpy(p->z, path->z, sizeof path->z);
    p->e_x = path->e_x[0];
    p->b_y = path->b_y[0];
    p->has_bundle = path->lines > 1;
    p->reference_speed = ratio_reference(path);
    return STATUS_OK;
}

enum status profile_combine(const struct path *paths, int count,
                            struct profile *profile)
{
    memset(profile, 0, sizeof *profile);
    if (!paths[0].present)
        return STATUS_OK;
    struct path *path = MEM_NEW(1, struct path);
    if (path == NULL)
        return STATUS_MEMORY;
    enum status status =
        combine_path(paths, count, path, &profile->e_x_err, &profile->b_y_err);
    if (status == STATUS_OK)
        status = take_axis(profile, path);
    if (status == STATUS_OK && ratio_is_available(path)) {
        status = allocate_ratio(profile);
        if (status == STATUS_OK)
            fill_ratio(profile, path);
    }
    if (profile->present) /* the profile owns the axis now */
        path->e_x[0] = path->b_y[0] = NULL;
    path_free(path);
    mem_free(path);
    return status;
}

void profile_free(struct profile *profile)
{
    double *arrays[] = {profile->z,
                        profile->e_x,
                        profile->e_x_err,
                        profile->b_y,
                        profile->b_y_err,
                        profile->ratio_error,
                        profile->ratio_error_err,
                        profile->bundle_low,
                        profile->bundle_high,
                        profile->imbalance};
    for (size_t k = 0; k < sizeof arrays / sizeof *arrays; k++)
        mem_free(arrays[k]);
    mem_free(profile->defined);
    memset(profile, 0, sizeof *profile);
}
