/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "solver/measure.h"

#include <string.h>

#include "shared/mem.h"
#include "solver/cross_section.h"
#include "solver/doubling.h"
#include "solver/family.h"
#include "solver/figure_maker.h"
#include "solver/lattice_field.h"
#include "solver/probe_reading.h"
#include "solver/profile.h"

enum status measure_view(const struct view *view, struct path *path,
                         struct figures *figures)
{
    enum status status = path_sample(view, path);
    if (status == STATUS_OK)
        status = figures_beam(view, figures);
    if (status == STATUS_OK)
        status = figures_along(view, path, figures);
    if (status == STATUS_OK)
        status = figures_fringe(view, path, figures);
    if (status == STATUS_OK)
        status = figures_enge(view, path, figures);
    if (status == STATUS_OK)
        status = figures_motion(view, path, figures);
    if (status == STATUS_OK)
        status = figures_across(view, figures);
    if (status == STATUS_OK)
        status = figures_hardware(view, figures);
    return status;
}

/* The pair that the doubling test compares. */
struct pair {
    int near;
    struct view views[2];
};

static struct pair pair_of(const struct solve *solve)
{
    const int near = solve_test_level(solve);
    return (struct pair){near, {solve->views[near], solve->views[SOLVE_FAR]}};
}

/* Readings whose uncertainties are their change from near to far. */
static enum status widen_probes(const struct pair *pair, struct result *result)
{
    struct probe_reading *moved = NULL;
    size_t count = 0;
    enum status status = probes_read(pair->views, 2, &moved, &count);
    if (status == STATUS_OK)
        doubling_probes(moved, count, result->planes, result->probes);
    mem_free(moved);
    return status;
}

/* What the doubling test adds to the uncertainties of figures and probes. */
static enum status widen_figures(const struct solve *solve, struct measure *measure,
                                 struct result *result)
{
    const struct pair pair = pair_of(solve);
    for (int k = 0; k < PLANE_KINDS; k++)
        if (doubling_needed(&solve->geometry->planes[k]))
            result->planes[k].open =
                doubling_begin(&solve->families[k]->slots[pair.near], pair.near);
    enum status status = measure_view(&pair.views[1], &measure->paths[SOLVE_FAR],
                                      &measure->figures[SOLVE_FAR]);
    if (status == STATUS_OK)
        status =
            doubling_figures(&measure->figures[pair.near], &measure->figures[SOLVE_FAR],
                             result->planes, &result->figures);
    if (status == STATUS_OK)
        status = widen_probes(&pair, result);
    return status;
}

enum status measure_figures(const struct solve *solve, struct measure *measure,
                            struct result *result)
{
    enum status status = STATUS_OK;
    measure_free(measure);
    figures_free(&result->figures);
    mem_free(result->probes);
    result->probes = NULL;
    for (int l = 0; l < solve->levels && status == STATUS_OK; l++)
        status =
            measure_view(&solve->views[l], &measure->paths[l], &measure->figures[l]);
    if (status == STATUS_OK)
        status = family_figures(measure->figures, solve->levels, &result->figures);
    if (status == STATUS_OK)
        status = probes_read(solve->views, solve->levels, &result->probes,
                             &result->probe_count);
    if (status == STATUS_OK && solve->is_open)
        status = widen_figures(solve, measure, result);
    return status;
}

/* The map of the finest level with its ratio error extrapolated. */
static enum status combine_sections(const struct solve *solve, struct section *section)
{
    struct section maps[RESULT_LEVELS_MAX] = {{0}};
    const double *levels[RESULT_LEVELS_MAX] = {NULL};
    enum status status = STATUS_OK;
    for (int l = 0; l < solve->levels && status == STATUS_OK; l++) {
        status = section_map(&solve->views[l], &maps[l]);
        levels[l] = maps[l].ratio_error;
    }
    if (status == STATUS_OK) {
        struct section *finest = &maps[solve->levels - 1];
        if (finest->ratio_error != NULL)
            family_array(levels, solve->levels, finest->nx * finest->ny, 1.0,
                         finest->ratio_error, NULL);
        *section = *finest;
        memset(finest, 0, sizeof *finest);
    }
    for (int l = 0; l < solve->levels; l++)
        section_free(&maps[l]);
    return status;
}

static enum status widen_maps(const struct solve *solve, const struct measure *measure,
                              struct result *result)
{
    const struct pair pair = pair_of(solve);
    doubling_profile(&measure->paths[pair.near], &measure->paths[SOLVE_FAR],
                     result->planes, &result->profile);
    return lattice_widen(pair.views, result->planes, &result->lattice);
}

enum status measure_maps(const struct solve *solve, const struct measure *measure,
                         struct result *result)
{
    enum status status =
        profile_combine(measure->paths, solve->levels, &result->profile);
    if (status == STATUS_OK)
        status = combine_sections(solve, &result->section);
    if (status == STATUS_OK)
        status = lattice_fill(solve->views, solve->levels, &result->lattice);
    if (status == STATUS_OK && solve->is_open)
        status = widen_maps(solve, measure, result);
    return status;
}

void measure_free(struct measure *measure)
{
    for (int l = 0; l < SOLVE_SLOTS; l++) {
        path_free(&measure->paths[l]);
        figures_free(&measure->figures[l]);
    }
}
