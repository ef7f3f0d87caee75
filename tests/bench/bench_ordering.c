/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Two orderings of the direct solver compared on the model plates and on the planes of
 * geometry files: time and memory of the factors, and time of one solve, each as METIS
 * over AMD (below 1: METIS is better).
 *
 *     bench_ordering [FILE...]
 *
 * The linker hands the solver's call to __wrap_umfpack_di_symbolic (CMakeLists.txt),
 * which puts the ordering of the moment into its copy of the control array. The
 * library's header stays in solver/system.c alone; the few numbers needed here are
 * checked against what is found in the arrays. */

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "mesh/reader.h"
#include "shared/mem.h"
#include "solver/system.h"
#include "tests/bench/model_plates.h"
#include "tests/bench/stopwatch.h"

enum {
    CONTROL_SIZE = 20,
    CONTROL_ORDERING = 10,
    INFO_ORDERING_USED = 19,
    ORDERING_AMD = 1,
    ORDERING_METIS = 3,
    REPEATS = 3 /* the quickest counts */
};

static int wanted_ordering = ORDERING_AMD;

/* NOLINTBEGIN(bugprone-reserved-identifier): the names are the linker's. */
int __real_umfpack_di_symbolic(int rows, int columns, const int *start,
                               const int *column, const double *value, void **symbolic,
                               const double *control, double *info);
int __wrap_umfpack_di_symbolic(int rows, int columns, const int *start,
                               const int *column, const double *value, void **symbolic,
                               const double *control, double *info);

int __wrap_umfpack_di_symbolic(int rows, int columns, const int *start,
                               const int *column, const double *value, void **symbolic,
                               const double *control, double *info)
{
    double changed[CONTROL_SIZE];
    memcpy(changed, control, sizeof changed);
    changed[CONTROL_ORDERING] = wanted_ordering;
    int code = __real_umfpack_di_symbolic(rows, columns, start, column, value, symbolic,
                                          changed, info);
    if ((int)info[INFO_ORDERING_USED] != wanted_ordering) {
        (void)fprintf(stderr, "bench_ordering: the library did not use ordering %d\n",
                      wanted_ordering);
        exit(EXIT_FAILURE);
    }
    return code;
}

/* NOLINTEND(bugprone-reserved-identifier) */

/* What one ordering costs. */
struct cost {
    double factor; /* s */
    double memory; /* bytes */
    double solve;  /* s */
    int unknowns;
};

static double least(double p, double q)
{
    return p < q ? p : q;
}

static enum status measure_once(const struct grid *grid, const struct drive *drive,
                                double *phi, struct cost *cost)
{
    struct system *system = NULL;
    struct system_facts facts;
    double start = stopwatch_seconds();
    enum status status = system_create(grid, &system, &facts);
    cost->factor = least(cost->factor, stopwatch_seconds() - start);
    cost->memory = facts.memory;
    cost->unknowns = facts.unknowns;
    start = stopwatch_seconds();
    if (status == STATUS_OK)
        status = system_solve(system, drive, phi, NULL);
    cost->solve = least(cost->solve, stopwatch_seconds() - start);
    system_destroy(&system);
    return status;
}

static enum status measure(const struct grid *grid, int ordering, struct cost *cost)
{
    struct drive drive = {.part = MEM_NEW(grid->plane->part_count, double)};
    double *phi = MEM_NEW((size_t)grid->na * (size_t)grid->nb, double);
    enum status status = drive.part != NULL && phi != NULL ? STATUS_OK : STATUS_MEMORY;
    wanted_ordering = ordering;
    *cost = (struct cost){1e9, 0.0, 1e9, 0};
    if (status == STATUS_OK && grid->plane->part_count > 0)
        drive.part[0] = 1.0;
    for (int k = 0; k < REPEATS && status == STATUS_OK; k++)
        status = measure_once(grid, &drive, phi, cost);
    mem_free(drive.part);
    mem_free(phi);
    return status;
}

static enum status compare_plane(const char *title, const struct plane *plane,
                                 double fineness, int level)
{
    struct grid grid;
    struct cost amd = {0}, metis = {0};
    enum status status =
        grid_build(plane,
                   &(struct grid_request){
                       .fineness = fineness, .level = level, .memory_budget = 20e9},
                   &grid, NULL);
    if (status == STATUS_OK)
        status = measure(&grid, ORDERING_AMD, &amd);
    if (status == STATUS_OK)
        status = measure(&grid, ORDERING_METIS, &metis);
    if (status == STATUS_OK)
        printf("%-24.24s %-16s %9d unknowns: factor time %.2f, memory %.2f, solve time "
               "%.2f  (AMD %.0f MB)\n",
               title, plane_kind_key(plane->kind), amd.unknowns,
               metis.factor / amd.factor, metis.memory / amd.memory,
               metis.solve / amd.solve, 1e-6 * amd.memory);
    grid_free(&grid);
    return status;
}

static enum status compare_geometry(const char *title, const struct geometry *geometry)
{
    enum status status = STATUS_OK;
    for (int k = 0; k < PLANE_KINDS; k++)
        for (int l = 0; l < 3 && geometry->planes[k].present && status == STATUS_OK;
             l++)
            status = compare_plane(title, &geometry->planes[k], geometry->fineness, l);
    return status;
}

static enum status compare_model(const char *title, double rounding)
{
    struct geometry geometry;
    enum status status = model_plates(rounding, &geometry);
    if (status == STATUS_OK)
        status = compare_geometry(title, &geometry);
    geometry_free(&geometry);
    return status;
}

static enum status compare_file(const char *file)
{
    const char *slash = strrchr(file, '/');
    struct geometry geometry;
    enum status status = reader_read_file(file, &geometry, NULL);
    if (status == STATUS_OK)
        status = compare_geometry(slash != NULL ? slash + 1 : file, &geometry);
    geometry_free(&geometry);
    return status;
}

int main(int argc, char *argv[])
{
    printf("METIS over AMD\n");
    enum status status = compare_model("model plates, square", 0.0);
    if (status == STATUS_OK)
        status = compare_model("model plates, rounded", 1e-3);
    for (int k = 1; k < argc && status == STATUS_OK; k++)
        status = compare_file(argv[k]);
    if (status != STATUS_OK)
        (void)fprintf(stderr, "bench_ordering: %s\n", status_text(status));
    return status == STATUS_OK ? EXIT_SUCCESS : EXIT_FAILURE;
}
