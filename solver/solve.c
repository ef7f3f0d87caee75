/* SPDX-License-Identifier: GPL-3.0-or-later */

/* One plane after the other: UMFPACK leans on the BLAS, and serial builds of
 * OpenBLAS must not be used by two threads (2 of 10 runs came out untrusted).
 */

#include "solver/solve.h"

#include <math.h>
#include <string.h>

#include "shared/mem.h"
#include "solver/doubling.h"

#define FAR_REACH 2.0

enum status solve_begin(const struct geometry *geometry, int levels, double fineness,
                        struct solve *solve)
{
    memset(solve, 0, sizeof *solve);
    solve->geometry = geometry;
    solve->levels = levels;
    solve->fineness = fineness;
    for (int l = 0; l < SOLVE_SLOTS; l++)
        solve->views[l].geometry = geometry;
    for (int k = 0; k < PLANE_KINDS; k++) {
        const struct plane *plane = &geometry->planes[k];
        struct plane_knobs *knobs = &solve->knobs[k];
        knobs->fineness = fineness;
        knobs->crowding = MEM_NEW(plane->part_count, double);
        if (knobs->crowding == NULL)
            return STATUS_MEMORY;
        for (size_t p = 0; p < plane->part_count; p++)
            knobs->crowding[p] = 1.0;
        solve->is_open = solve->is_open || doubling_needed(plane);
    }
    return levels >= 2 && levels <= RESULT_LEVELS_MAX ? STATUS_OK : STATUS_SIZE;
}

int solve_test_level(const struct solve *solve)
{
    return solve->levels - 2;
}

static struct grid_request request_of(const struct plane_knobs *knobs, int level)
{
    return (struct grid_request){
        .fineness = knobs->fineness, .level = level, .crowding = knobs->crowding};
}

static void family_free(struct plane_family *family)
{
    if (family == NULL)
        return;
    for (int s = 0; s < SOLVE_SLOTS; s++)
        if (family->slots[s].geometry != NULL)
            plane_solution_free(&family->slots[s]);
    mem_free(family);
}

/* Work grows about fourfold from level to level. */
static double work_before(int level, int levels)
{
    return level == 0 ? 0.0 : pow(0.25, levels - level);
}

static enum status solve_levels(const struct solve *solve, enum plane_kind kind,
                                struct plane_family *family,
                                const struct progress *progress,
                                struct messages *messages)
{
    enum status status = STATUS_OK;
    for (int l = 0; l < solve->levels && status == STATUS_OK; l++) {
        const struct grid_request request = request_of(&solve->knobs[kind], l);
        progress_tell(progress, work_before(l, solve->levels), "%s, grid %d of %d",
                      plane_kind_key(kind), l + 1, solve->levels);
        status =
            plane_solve(solve->geometry, kind, &request, &family->slots[l], messages);
    }
    return status;
}

/* The doubling test of a plane: its far solution. */
static enum status solve_far(const struct solve *solve, enum plane_kind kind,
                             struct plane_family *family,
                             const struct progress *progress, struct messages *messages)
{
    if (!doubling_needed(&solve->geometry->planes[kind]))
        return STATUS_OK;
    struct grid_request request =
        request_of(&solve->knobs[kind], solve_test_level(solve));
    request.reach = FAR_REACH;
    progress_tell(progress, 1.0, "%s, open sides twice as far", plane_kind_key(kind));
    return plane_solve(solve->geometry, kind, &request, &family->slots[SOLVE_FAR],
                       messages);
}

static void take_family(struct solve *solve, enum plane_kind kind,
                        struct plane_family *family)
{
    const int far = doubling_needed(&solve->geometry->planes[kind])
                        ? SOLVE_FAR
                        : solve_test_level(solve);
    family_free(solve->families[kind]);
    solve->families[kind] = family;
    for (int l = 0; l < solve->levels; l++)
        solve->views[l].planes[kind] = &family->slots[l];
    solve->views[SOLVE_FAR].planes[kind] = &family->slots[far];
}

enum status solve_plane(struct solve *solve, enum plane_kind kind,
                        const struct progress *progress, struct messages *messages)
{
    struct plane_family *family = MEM_NEW(1, struct plane_family);
    if (family == NULL)
        return STATUS_MEMORY;
    enum status status = solve_levels(solve, kind, family, progress, messages);
    if (status == STATUS_OK)
        status = solve_far(solve, kind, family, progress, messages);
    if (status == STATUS_OK)
        take_family(solve, kind, family); /* takes ownership */
    else
        family_free(family);
    return status;
}

enum status solve_planes(struct solve *solve, const struct progress *progress,
                         struct messages *messages)
{
    int count = 0, done = 0;
    enum status status = STATUS_OK;
    for (int k = 0; k < PLANE_KINDS; k++)
        count += solve->geometry->planes[k].present;
    for (int k = 0; k < PLANE_KINDS && status == STATUS_OK; k++) {
        if (!solve->geometry->planes[k].present)
            continue;
        const struct progress part =
            progress_part(progress, (double)done / count, (done + 1.0) / count);
        status = solve_plane(solve, (enum plane_kind)k, &part, messages);
        done++;
    }
    return status;
}

enum status solve_trial(const struct solve *solve, enum plane_kind kind,
                        const struct plane_knobs *knobs, int level,
                        struct plane_solution *trial)
{
    const struct grid_request request = request_of(knobs, level);
    return plane_solve(solve->geometry, kind, &request, trial, NULL);
}

enum status solve_fits(const struct solve *solve, enum plane_kind kind,
                       const struct plane_knobs *knobs, bool *fits)
{
    const struct grid_request request = request_of(knobs, solve->levels - 1);
    double bytes = 0.0;
    *fits = false;
    enum status status =
        grid_estimate(&solve->geometry->planes[kind], &request, &bytes);
    if (status == STATUS_SIZE) /* more lines than can be counted */
        return STATUS_OK;
    *fits = status == STATUS_OK && bytes <= solve->geometry->memory_budget;
    return status;
}

void solve_free(struct solve *solve)
{
    for (int k = 0; k < PLANE_KINDS; k++) {
        family_free(solve->families[k]);
        mem_free(solve->knobs[k].crowding);
    }
    memset(solve, 0, sizeof *solve);
}
