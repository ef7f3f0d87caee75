/* SPDX-License-Identifier: GPL-3.0-or-later */

/* One potential at a time is held: it is solved, measured and overwritten. */

#include "solver/capacitance.h"

#include <math.h>
#include <string.h>

#include "shared/mem.h"
#include "solver/flux.h"

/* Scratch of the whole measurement. */
struct bench {
    const struct grid *grid;
    const struct system *system;
    const struct floating *floating;
    struct force_field field;
    struct drive drive; /* the conductor whose turn it is at 1 */
    double *unit;       /* [nb*na] */
    double *part_flux;  /* [part_count] */
};

static enum status allocate(struct bench *bench, struct capacitance *c)
{
    const size_t nodes = (size_t)bench->grid->na * (size_t)bench->grid->nb;
    const size_t parts = bench->grid->plane->part_count, n = c->conductors.count;
    bench->drive.part = MEM_NEW(parts, double);
    bench->unit = MEM_NEW(nodes, double);
    bench->part_flux = MEM_NEW(parts, double);
    c->flux = MEM_NEW(n * n, double);
    c->force = MEM_NEW(n, struct force);
    if (bench->drive.part == NULL || bench->unit == NULL || bench->part_flux == NULL ||
        c->flux == NULL || c->force == NULL)
        return STATUS_MEMORY;
    return STATUS_OK;
}

/* The unit potential of conductor k. */
static enum status find_unit(const struct bench *bench, const struct capacitance *c,
                             size_t k, const double **unit)
{
    const struct conductors *all = &c->conductors;
    const size_t parts = bench->grid->plane->part_count;
    for (size_t p = 0; p < parts; p++)
        bench->drive.part[p] = all->of_part[p] == k ? 1.0 : 0.0;
    *unit = floating_unit(bench->floating, all->items[k].first);
    if (*unit != NULL)
        return STATUS_OK;
    *unit = bench->unit;
    return system_solve(bench->system, &bench->drive, bench->unit, NULL);
}

/* Adds the fluxes of one unit potential to column k; sum: over all parts and sides. */
static enum status measure_fluxes(const struct bench *bench, struct capacitance *c,
                                  size_t k, const double *unit, double *sum)
{
    const struct conductors *all = &c->conductors;
    double side[SIDE_COUNT], imbalance;
    enum status status =
        flux_measure(bench->grid, unit, bench->part_flux, side, &imbalance);
    *sum = 0.0;
    for (int s = 0; s < SIDE_COUNT && status == STATUS_OK; s++)
        *sum += side[s];
    for (size_t p = 0; p < bench->grid->plane->part_count && status == STATUS_OK; p++) {
        const size_t i = all->of_part[p];
        *sum += bench->part_flux[p];
        if (i < all->count && !all->items[i].held)
            c->flux[i * all->count + k] += bench->part_flux[p];
    }
    return status;
}

/* Turns the largest sum into a share of the largest entry, and compares the matrix with
 * its transpose. */
static void judge(struct capacitance *c)
{
    const size_t n = c->conductors.count;
    double largest = 0.0, skew = 0.0;
    for (size_t i = 0; i < n; i++)
        for (size_t j = 0; j < n; j++) {
            largest = fmax(largest, fabs(c->flux[i * n + j]));
            skew = fmax(skew, fabs(c->flux[i * n + j] - c->flux[j * n + i]));
        }
    if (largest > 0.0) {
        c->reciprocity = skew / largest;
        c->row_sum /= largest;
    }
}

static enum status measure_all(const struct bench *bench, struct capacitance *c)
{
    enum status status = STATUS_OK;
    for (size_t k = 0; k < c->conductors.count && status == STATUS_OK; k++) {
        const double *unit = NULL;
        double sum = 0.0;
        if (c->conductors.items[k].held)
            continue;
        status = find_unit(bench, c, k, &unit);
        if (status == STATUS_OK)
            status = measure_fluxes(bench, c, k, unit, &sum);
        if (status == STATUS_OK)
            force_measure(bench->grid, bench->field,
                          (struct force_field){unit, bench->drive.part}, &c->force[k]);
        c->row_sum = fmax(c->row_sum, fabs(sum));
    }
    return status;
}

enum status capacitance_measure(const struct grid *grid, const struct system *system,
                                const struct floating *floating,
                                struct force_field field,
                                struct capacitance *capacitance)
{
    struct bench bench = {
        .grid = grid, .system = system, .floating = floating, .field = field};
    memset(capacitance, 0, sizeof *capacitance);
    enum status status = conductors_find(grid->plane, &capacitance->conductors);
    if (status == STATUS_OK)
        status = allocate(&bench, capacitance);
    if (status == STATUS_OK)
        status = measure_all(&bench, capacitance);
    if (status == STATUS_OK)
        judge(capacitance);
    else
        capacitance_free(capacitance);
    mem_free(bench.drive.part);
    mem_free(bench.unit);
    mem_free(bench.part_flux);
    return status;
}

void capacitance_free(struct capacitance *capacitance)
{
    conductors_free(&capacitance->conductors);
    mem_free(capacitance->flux);
    mem_free(capacitance->force);
    memset(capacitance, 0, sizeof *capacitance);
}
