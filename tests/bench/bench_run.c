/* SPDX-License-Identifier: GPL-3.0-or-later */

/* The main job on geometry files: wall time of every stage as the progress reports tell
 * them apart, peak memory, and the finest grid of every plane taken once more to pieces
 * (grid, factors, one solve).
 *
 *     bench_run FILE...
 *
 * Every file runs in a process of its own, so that the memory is its own too. */

#include <dirent.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/wait.h>
#include <unistd.h>

#include "mesh/geometry_check.h"
#include "mesh/reader.h"
#include "output/result_folder.h"
#include "shared/mem.h"
#include "solver/run.h"
#include "solver/system.h"
#include "tests/bench/stopwatch.h"

enum { STAGE_SIZE = 80, PATH_SIZE = 600 };

/* The stage that is going on. */
struct stages {
    char name[STAGE_SIZE]; /* empty before the first */
    double since;
};

static void end_stage(struct stages *stages)
{
    if (stages->name[0] != '\0')
        printf("  %-34s %8.3f s\n", stages->name, stopwatch_seconds() - stages->since);
    stages->name[0] = '\0';
}

static void begin_stage(void *context, const char *stage, double fraction)
{
    struct stages *stages = context;
    (void)fraction;
    end_stage(stages);
    (void)snprintf(stages->name, sizeof stages->name, "%s", stage);
    stages->since = stopwatch_seconds();
}

static void print_messages(const struct messages *messages)
{
    for (size_t k = 0; k < messages->count; k++) {
        char *text = messages_format(messages, k);
        (void)fprintf(stderr, "%s\n", text != NULL ? text : "(out of memory)");
        mem_free(text);
    }
}

static void remove_folder(const char *folder)
{
    DIR *list = opendir(folder);
    for (struct dirent *entry = list != NULL ? readdir(list) : NULL; entry != NULL;
         entry = readdir(list)) {
        char path[PATH_SIZE];
        (void)snprintf(path, sizeof path, "%s/%s", folder, entry->d_name);
        (void)unlink(path); /* refuses "." and ".." */
    }
    if (list != NULL)
        (void)closedir(list);
    (void)rmdir(folder);
}

static enum status write_result(const struct result *result, struct stages *stages,
                                struct messages *messages)
{
    char folder[] = "/tmp/evengap_bench_XXXXXX";
    if (mkdtemp(folder) == NULL)
        return STATUS_WRITE;
    begin_stage(stages, "writers and plots", 1.0);
    enum status status = result_folder_write(result, folder, messages);
    end_stage(stages);
    remove_folder(folder);
    return status;
}

static enum status run_whole(const struct geometry *geometry, struct messages *messages)
{
    struct stages stages = {"", 0.0};
    struct result result;
    const struct run_options options = {.progress = begin_stage, .context = &stages};
    const double start = stopwatch_seconds();
    enum status status = run_geometry(geometry, &options, &result, messages);
    end_stage(&stages);
    printf("  %-34s %8.3f s, peak memory %.0f MB\n", "solved and judged",
           stopwatch_seconds() - start, 1e-6 * stopwatch_peak_memory());
    if (status == STATUS_OK)
        status = write_result(&result, &stages, messages);
    printf("  %-34s %8.3f s, peak memory %.0f MB\n", "whole run",
           stopwatch_seconds() - start, 1e-6 * stopwatch_peak_memory());
    result_free(&result);
    return status;
}

/* One solve of a system, driven by the first part at 1. */
static enum status solve_once(const struct grid *grid, const struct system *system)
{
    const size_t nodes = (size_t)grid->na * (size_t)grid->nb;
    struct drive drive = {.part = MEM_NEW(grid->plane->part_count, double)};
    double *phi = MEM_NEW(nodes, double);
    enum status status = drive.part != NULL && phi != NULL ? STATUS_OK : STATUS_MEMORY;
    if (status == STATUS_OK) {
        if (grid->plane->part_count > 0)
            drive.part[0] = 1.0;
        status = system_solve(system, &drive, phi, NULL);
    }
    mem_free(drive.part);
    mem_free(phi);
    return status;
}

static enum status take_apart(const struct geometry *geometry, enum plane_kind kind,
                              struct messages *messages)
{
    struct grid grid;
    struct system *system = NULL;
    struct system_facts facts;
    double at[4] = {stopwatch_seconds(), 0.0, 0.0, 0.0};
    enum status status =
        grid_build(&geometry->planes[kind],
                   &(struct grid_request){.fineness = geometry->fineness,
                                          .level = RESULT_LEVELS_MAX - 1,
                                          .memory_budget = geometry->memory_budget},
                   &grid, messages);
    at[1] = stopwatch_seconds();
    if (status == STATUS_OK)
        status = system_create(&grid, &system, &facts);
    at[2] = stopwatch_seconds();
    if (status == STATUS_OK)
        status = solve_once(&grid, system);
    at[3] = stopwatch_seconds();
    if (status == STATUS_OK)
        printf("  %-34s %8d unknowns: grid %.3f s, factors %.3f s (%.0f MB), one solve "
               "%.3f s\n",
               plane_kind_key(kind), facts.unknowns, at[1] - at[0], at[2] - at[1],
               1e-6 * facts.memory, at[3] - at[2]);
    system_destroy(&system);
    grid_free(&grid);
    return status;
}

static enum status bench_geometry(const struct geometry *geometry,
                                  struct messages *messages)
{
    enum status status = run_whole(geometry, messages);
    for (int k = 0; k < PLANE_KINDS && status == STATUS_OK; k++)
        if (geometry->planes[k].present)
            status = take_apart(geometry, (enum plane_kind)k, messages);
    return status;
}

static int bench_file(const char *file)
{
    struct geometry geometry;
    struct messages messages = {0};
    printf("%s\n", file);
    enum status status = reader_read_file(file, &geometry, &messages);
    if (status == STATUS_OK)
        status = geometry_check(&geometry, &messages);
    if (status == STATUS_OK)
        status = bench_geometry(&geometry, &messages);
    print_messages(&messages);
    if (status != STATUS_OK)
        (void)fprintf(stderr, "%s: %s\n", file, status_text(status));
    messages_free(&messages);
    geometry_free(&geometry);
    return status == STATUS_OK ? EXIT_SUCCESS : EXIT_FAILURE;
}

/* Runs one file in a child; true if all went well. */
static int bench_apart(const char *file)
{
    int how = 0;
    (void)fflush(stdout);
    const pid_t child = fork();
    if (child == 0)
        exit(bench_file(file));
    return child > 0 && waitpid(child, &how, 0) == child && WIFEXITED(how) &&
           WEXITSTATUS(how) == EXIT_SUCCESS;
}

int main(int argc, char *argv[])
{
    int failed = argc < 2;
    if (failed)
        (void)fprintf(stderr, "usage: bench_run FILE...\n");
    for (int k = 1; k < argc; k++)
        failed |= !bench_apart(argv[k]);
    return failed ? EXIT_FAILURE : EXIT_SUCCESS;
}
