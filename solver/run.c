/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "solver/run.h"

#include <math.h>
#include <string.h>

#include "shared/mem.h"
#include "solver/measure.h"
#include "solver/plane_result.h"
#include "solver/refine.h"
#include "solver/solve.h"
#include "solver/verdict.h"

enum { LEVELS_DEFAULT = 3, LEVELS_REFINED = RESULT_LEVELS_MAX, SENTENCE_SIZE = 1000 };

static const struct place NOWHERE = {0, 0};

/* Shares of the whole as far as progress is concerned. */
#define SOLVE_SHARE 0.8 /* solves, refinement included */
#define FIRST_SHARE                                                                    \
    0.2 /* of that, the first solve where refinement follows   \
                         */
#define FIGURE_SHARE 0.9

/* Everything that lives while a run goes on. */
struct run {
    struct solve solve;
    struct measure measure;
};

static enum status judge(struct result *result)
{
    enum status status = verdict_judge(result);
    return status == STATUS_OK
               ? cautions_of_figures(&result->figures, &result->cautions)
               : status;
}

/* An accuracy that is not met decides nothing: limits do, with their
 * uncertainty. */
static void warn(const struct accuracy *accuracy, struct messages *messages)
{
    char sentence[SENTENCE_SIZE];
    if (accuracy->state == ACCURACY_NOT_ASKED || accuracy->state == ACCURACY_MET)
        return;
    accuracy_sentence(accuracy, sentence, sizeof sentence);
    messages_add(messages, SEVERITY_WARNING, NOWHERE, "%s", sentence);
}

static enum status steps(struct run *run, const struct run_options *options,
                         struct result *result, struct messages *messages)
{
    const struct progress whole = {options->progress, options->context, 0, 0.0, 1.0};
    const bool refines = options->within > 0.0;
    const double first = SOLVE_SHARE * (refines ? FIRST_SHARE : 1.0);
    const struct progress begin = progress_part(&whole, 0.0, first);
    const struct progress next = progress_part(&whole, first, SOLVE_SHARE);

    enum status status = solve_planes(&run->solve, &begin, messages);
    if (status != STATUS_OK)
        return status;
    progress_tell(&whole, first, "figures");
    status = measure_figures(&run->solve, &run->measure, result);
    if (status == STATUS_OK && refines)
        status = refine(&run->solve, &run->measure, options->within, &next, result);
    progress_tell(&whole, FIGURE_SHARE, "maps");
    if (status == STATUS_OK)
        status = measure_maps(&run->solve, &run->measure, result);
    if (status == STATUS_OK)
        status = judge(result);
    if (status == STATUS_OK)
        status = plane_results_keep(&run->solve, result->planes);
    if (status != STATUS_OK)
        messages_add(messages, SEVERITY_ERROR, NOWHERE,
                     "the figures could not be formed: %s", status_text(status));
    else
        warn(&result->accuracy, messages);
    return status;
}

/* True if a grid of that fineness can be had of all planes. */
static bool can_begin(const struct geometry *geometry, double fineness)
{
    enum status status = STATUS_OK;
    for (int k = 0; k < PLANE_KINDS && status == STATUS_OK; k++) {
        struct grid grid = {0};
        if (!geometry->planes[k].present)
            continue;
        status = grid_build(&geometry->planes[k],
                            &(struct grid_request){.fineness = fineness}, &grid, NULL);
        grid_free(&grid);
    }
    return status == STATUS_OK;
}

/* Levels and fineness to begin with. One more grid makes uncertainties smaller for next to
 * nothing if it comes in front of the others, and then the finest is the same. */
static int begin_with(const struct geometry *geometry,
                      const struct run_options *options, double *fineness)
{
    *fineness = options->fineness > 0.0 ? options->fineness : geometry->fineness;
    if (options->levels > 0)
        return options->levels;
    const double coarser = ldexp(*fineness, LEVELS_DEFAULT - LEVELS_REFINED);
    if (options->within == 0.0 || !can_begin(geometry, coarser))
        return LEVELS_DEFAULT;
    *fineness = coarser;
    return LEVELS_REFINED;
}

enum status run_geometry(const struct geometry *geometry,
                         const struct run_options *options, struct result *result,
                         struct messages *messages)
{
    double fineness;
    const int levels = begin_with(geometry, options, &fineness);
    memset(result, 0, sizeof *result);
    result->geometry = geometry;
    struct run *run = MEM_NEW(1, struct run);
    if (run == NULL)
        return STATUS_MEMORY;
    enum status status = solve_begin(geometry, levels, fineness, &run->solve);
    if (status == STATUS_OK)
        status = steps(run, options, result, messages);
    measure_free(&run->measure);
    solve_free(&run->solve);
    mem_free(run);
    return status;
}
