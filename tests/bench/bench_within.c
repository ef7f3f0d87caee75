/* SPDX-License-Identifier: GPL-3.0-or-later */

/* What it takes to bring the figures of a geometry file within a relative accuracy:
 * refinement where the error comes from, against more lines everywhere.
 *
 *     bench_within FILE X [BUDGET]
 *
 * FILE is refined as `evengap run --within X` does, then solved anew with all lines of all
 * planes multiplied by steps of FINER until the same figures are within X. Prints for each
 * the unknowns of the finest grids and the seconds: of the last family alone, and of all.
 * BUDGET (GB) replaces the memory budget of the file. */

#include <stdio.h>
#include <stdlib.h>

#include "mesh/geometry_check.h"
#include "mesh/reader.h"
#include "solver/aim.h"
#include "solver/measure.h"
#include "solver/refine.h"
#include "tests/bench/stopwatch.h"

#define FINER 1.2

enum { LEVELS = 3, FINENESSES = 12 };

/* One family and its figures. */
struct state {
    struct solve solve;
    struct measure measure;
    struct result result;
};

static const struct progress silent = {NULL, NULL, 0, 0.0, 1.0};

static enum status begin(const struct geometry *geometry, double fineness,
                         struct state *state)
{
    state->result.geometry = geometry;
    enum status status = solve_begin(geometry, LEVELS, fineness, &state->solve);
    if (status == STATUS_OK)
        status = solve_planes(&state->solve, &silent, NULL);
    if (status == STATUS_OK)
        status = measure_figures(&state->solve, &state->measure, &state->result);
    return status;
}

static void end(struct state *state)
{
    measure_free(&state->measure);
    solve_free(&state->solve);
    result_free(&state->result);
    *state = (struct state){.solve = {0}};
}

/* Unknowns of the finest grids, and seconds of all grids that are left. */
static void print_state(const char *title, const struct state *state, double seconds,
                        double worst)
{
    int unknowns = 0;
    double last = 0.0;
    for (int k = 0; k < PLANE_KINDS; k++)
        for (int l = 0; state->solve.families[k] != NULL && l < LEVELS; l++) {
            const struct quality *q = &state->solve.families[k]->slots[l].quality;
            unknowns += l == LEVELS - 1 ? q->unknowns : 0;
            last += q->seconds;
        }
    printf("%-24s %9d unknowns, %6.1f s (all %6.1f s), worst %.1e\n", title, unknowns,
           last, seconds, worst);
    (void)fflush(stdout);
}

static enum status run_local(const struct geometry *geometry, double within,
                             struct state *state)
{
    const double start = stopwatch_seconds();
    char text[1000];
    enum status status = begin(geometry, geometry->fineness, state);
    if (status == STATUS_OK)
        status =
            refine(&state->solve, &state->measure, within, &silent, &state->result);
    if (status != STATUS_OK)
        return status;
    const struct accuracy *accuracy = &state->result.accuracy;
    const struct accuracy_item *worst = accuracy_worst(accuracy);
    print_state("where it comes from", state, stopwatch_seconds() - start,
                worst != NULL ? worst->reached : 0.0);
    accuracy_sentence(accuracy, text, sizeof text);
    printf("  %s\n  %d rounds\n", text, accuracy->rounds);
    for (int k = 0; k < PLANE_KINDS; k++) {
        if (!geometry->planes[k].present)
            continue;
        accuracy_refined(&accuracy->planes[k], text, sizeof text);
        printf("  %s: %s\n", plane_kind_key((enum plane_kind)k), text);
    }
    return STATUS_OK;
}

/* True once all figures that can be are within. */
static bool is_within(const struct aims *aims, double within)
{
    bool all = true;
    for (size_t k = 0; k < aims->count; k++)
        all = all && !aim_is_open(&aims->items[k], within);
    return all;
}

static enum status run_uniform(const struct geometry *geometry, double within,
                               struct state *state)
{
    const double start = stopwatch_seconds();
    double fineness = geometry->fineness;
    struct aims aims = {0};
    enum status status = STATUS_OK;
    bool done = false;
    for (int k = 0; k < FINENESSES && status == STATUS_OK && !done; k++) {
        char title[32];
        status = begin(geometry, fineness, state);
        if (status == STATUS_OK && k == 0)
            status = aims_choose(&state->result, &aims);
        if (status != STATUS_OK)
            break;
        aims_update(&aims, &state->result);
        done = is_within(&aims, within);
        (void)snprintf(title, sizeof title, "all lines x %.3g",
                       fineness / geometry->fineness);
        print_state(title, state, stopwatch_seconds() - start, aims_worst(&aims));
        end(state);
        fineness *= FINER;
    }
    printf("  %s\n", done ? "met" : "not met");
    aims_free(&aims);
    return status == STATUS_INPUT ? STATUS_OK : status; /* beyond the budget */
}

int main(int argc, char *argv[])
{
    struct geometry geometry = {0};
    struct state *state = calloc(1, sizeof *state);
    if (argc < 3 || state == NULL) {
        (void)fprintf(stderr, "bench_within FILE X [BUDGET in GB]\n");
        free(state);
        return EXIT_FAILURE;
    }
    const double within = strtod(argv[2], NULL);
    enum status status = reader_read_file(argv[1], &geometry, NULL);
    if (status == STATUS_OK)
        status = geometry_check(&geometry, NULL);
    if (argc > 3)
        geometry.memory_budget = 1e9 * strtod(argv[3], NULL);
    printf("%s within %g\n", argv[1], within);
    if (status == STATUS_OK)
        status = run_local(&geometry, within, state);
    end(state);
    if (status == STATUS_OK)
        status = run_uniform(&geometry, within, state);
    end(state);
    if (status != STATUS_OK)
        (void)fprintf(stderr, "bench_within: %s\n", status_text(status));
    geometry_free(&geometry);
    free(state);
    return status == STATUS_OK ? EXIT_SUCCESS : EXIT_FAILURE;
}
