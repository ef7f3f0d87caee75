/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "solver/run.h"

#include <stdio.h>
#include <string.h>

#include "shared/mem.h"
#include "solver/cross_section.h"
#include "solver/family.h"
#include "solver/figure_maker.h"
#include "solver/lattice_field.h"
#include "solver/path.h"
#include "solver/plane_solution.h"
#include "solver/probe_reading.h"
#include "solver/profile.h"
#include "solver/verdict.h"
#include "solver/view.h"

enum { LEVELS_DEFAULT = 3, STAGE_SIZE = 80 };

static const struct place NOWHERE = {0, 0};

/* Everything that lives while a run goes on. */
struct run {
    const struct geometry *geometry;
    const struct run_options *options;
    struct messages *messages;
    int levels;
    double fineness;
    struct plane_solution solutions[RESULT_LEVELS_MAX][PLANE_KINDS];
    struct view views[RESULT_LEVELS_MAX];
    struct path paths[RESULT_LEVELS_MAX];
    struct figures figures[RESULT_LEVELS_MAX];
};

static void tell(const struct run *run, const char *stage, double fraction)
{
    if (run->options->progress != NULL)
        run->options->progress(run->options->context, stage, fraction);
}

/* Solving is this share of the whole as far as progress is concerned. */
#define SOLVE_SHARE 0.8

static enum status solve_plane(struct run *run, enum plane_kind kind, double from,
                               double share)
{
    enum status status = STATUS_OK;
    for (int l = 0; l < run->levels && status == STATUS_OK; l++) {
        char stage[STAGE_SIZE];
        (void)snprintf(stage, sizeof stage, "%s, grid %d of %d", plane_kind_key(kind),
                       l + 1, run->levels);
        /* Work grows about fourfold from level to level. */
        tell(run, stage, from + share * (l == 0 ? 0.0 : l == 1 ? 0.05 : 0.2));
        status = plane_solve(run->geometry, kind, run->fineness, l,
                             &run->solutions[l][kind], run->messages);
        run->views[l].planes[kind] = &run->solutions[l][kind];
    }
    return status;
}

/* One plane after the other: UMFPACK leans on the BLAS, and serial builds of OpenBLAS
 * must not be used by two threads (2 of 10 runs came out untrusted). */
static enum status solve_planes(struct run *run)
{
    int count = 0, done = 0;
    enum status status = STATUS_OK;
    for (int k = 0; k < PLANE_KINDS; k++)
        count += run->geometry->planes[k].present;
    for (int k = 0; k < PLANE_KINDS && status == STATUS_OK; k++) {
        if (!run->geometry->planes[k].present)
            continue;
        const double share = SOLVE_SHARE / count;
        status = solve_plane(run, (enum plane_kind)k, share * done++, share);
    }
    return status;
}

static enum status figures_of_level(struct run *run, int level)
{
    const struct view *view = &run->views[level];
    struct path *path = &run->paths[level];
    struct figures *figures = &run->figures[level];
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

/* The map of the finest level with its ratio error extrapolated. */
static enum status combine_sections(const struct run *run, struct section *section)
{
    struct section maps[RESULT_LEVELS_MAX] = {{0}};
    const double *levels[RESULT_LEVELS_MAX] = {NULL};
    enum status status = STATUS_OK;
    for (int l = 0; l < run->levels && status == STATUS_OK; l++) {
        status = section_map(&run->views[l], &maps[l]);
        levels[l] = maps[l].ratio_error;
    }
    if (status == STATUS_OK) {
        struct section *finest = &maps[run->levels - 1];
        if (finest->ratio_error != NULL)
            family_array(levels, run->levels, finest->nx * finest->ny, 1.0,
                         finest->ratio_error, NULL);
        *section = *finest;
        memset(finest, 0, sizeof *finest);
    }
    for (int l = 0; l < run->levels; l++)
        section_free(&maps[l]);
    return status;
}

/* Node arrays of the finest level move into the result. */
static enum status keep_plane(struct run *run, enum plane_kind kind,
                              struct plane_result *plane)
{
    struct plane_solution *finest = &run->solutions[run->levels - 1][kind];
    const int nodes = finest->grid.na * finest->grid.nb;
    const double factor = plane_field_factor(kind);
    plane->present = true;
    plane->levels = run->levels;
    for (int l = 0; l < run->levels; l++)
        plane->quality[l] = run->solutions[l][kind].quality;
    plane->field_a = MEM_NEW((size_t)nodes, double);
    plane->field_b = MEM_NEW((size_t)nodes, double);
    if (plane->field_a == NULL || plane->field_b == NULL)
        return STATUS_MEMORY;
    field_at_nodes(&finest->grid, finest->phi, finest->part_value, plane->field_a,
                   plane->field_b);
    for (int n = 0; n < nodes; n++) {
        plane->field_a[n] *= factor;
        plane->field_b[n] *= factor;
    }
    field_destroy(&finest->field); /* it points into what moves now */
    plane->potential = finest->phi;
    finest->phi = NULL;
    plane->grid = finest->grid;
    memset(&finest->grid, 0, sizeof finest->grid);
    return STATUS_OK;
}

static enum status keep_planes(struct run *run, struct result *result)
{
    enum status status = STATUS_OK;
    for (int k = 0; k < PLANE_KINDS && status == STATUS_OK; k++)
        if (run->geometry->planes[k].present)
            status = keep_plane(run, (enum plane_kind)k, &result->planes[k]);
    return status;
}

static enum status measure(struct run *run, struct result *result)
{
    enum status status = STATUS_OK;
    tell(run, "figures", SOLVE_SHARE);
    for (int l = 0; l < run->levels && status == STATUS_OK; l++)
        status = figures_of_level(run, l);
    if (status == STATUS_OK)
        status = family_figures(run->figures, run->levels, &result->figures);
    if (status == STATUS_OK)
        status = profile_combine(run->paths, run->levels, &result->profile);
    tell(run, "maps", 0.9);
    if (status == STATUS_OK)
        status = combine_sections(run, &result->section);
    if (status == STATUS_OK)
        status =
            probes_read(run->views, run->levels, &result->probes, &result->probe_count);
    if (status == STATUS_OK)
        status = lattice_fill(run->views, run->levels, &result->lattice);
    if (status == STATUS_OK)
        status = verdict_judge(result);
    if (status == STATUS_OK)
        status = keep_planes(run, result);
    if (status != STATUS_OK)
        messages_add(run->messages, SEVERITY_ERROR, NOWHERE,
                     "the figures could not be formed: %s", status_text(status));
    return status;
}

static void run_free(struct run *run)
{
    for (int l = 0; l < RESULT_LEVELS_MAX; l++) {
        for (int k = 0; k < PLANE_KINDS; k++)
            if (run->solutions[l][k].geometry != NULL)
                plane_solution_free(&run->solutions[l][k]);
        path_free(&run->paths[l]);
        figures_free(&run->figures[l]);
    }
    mem_free(run);
}

enum status run_geometry(const struct geometry *geometry,
                         const struct run_options *options, struct result *result,
                         struct messages *messages)
{
    memset(result, 0, sizeof *result);
    result->geometry = geometry;
    struct run *run = MEM_NEW(1, struct run);
    if (run == NULL)
        return STATUS_MEMORY;
    run->geometry = geometry;
    run->options = options;
    run->messages = messages;
    run->levels = options->levels > 0 ? options->levels : LEVELS_DEFAULT;
    run->fineness = options->fineness > 0.0 ? options->fineness : geometry->fineness;
    for (int l = 0; l < RESULT_LEVELS_MAX; l++)
        run->views[l].geometry = geometry;
    enum status status =
        run->levels >= 2 && run->levels <= RESULT_LEVELS_MAX ? STATUS_OK : STATUS_SIZE;
    if (status == STATUS_OK)
        status = solve_planes(run);
    if (status == STATUS_OK)
        status = measure(run, result);
    run_free(run);
    return status;
}
