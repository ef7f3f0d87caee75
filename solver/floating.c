/* SPDX-License-Identifier: GPL-3.0-or-later */

/* With C the fluxes out of the floating parts per unit potential and q their fluxes while
 * at zero, the potentials V satisfy C V = Q - q. C is dense, as large as there are
 * floating parts. The inverse of its norm is what a unit charge lifts them to: without
 * bound where nothing of fixed potential is in sight. */

#include "solver/floating.h"

#include <assert.h>
#include <lapacke.h>
#include <math.h>
#include <string.h>

#include "shared/constants.h"
#include "shared/mem.h"
#include "solver/flux.h"
#include "solver/plane_solution.h"

/* Least flux per unit potential of floating parts, as a share of that of a part in free
 * space, which is about 1 (in a turned plane about the size of the region). Fluxes are
 * right to about 1e-11 of that. */
#define SIGHT_LEAST 1e-8

static_assert(sizeof(lapack_int) == sizeof(int), "pivots are kept as int");

static enum status allocate(const struct grid *grid, struct floating *f)
{
    const struct plane *plane = grid->plane;
    const size_t nodes = (size_t)grid->na * (size_t)grid->nb;
    f->part = MEM_NEW(f->count, size_t);
    f->unit = MEM_NEW(f->count, double *);
    f->factor = MEM_NEW(f->count * f->count, double);
    f->pivots = MEM_NEW(f->count, int);
    f->flux = MEM_NEW(plane->part_count, double);
    f->found = MEM_NEW(f->count, double);
    if (f->part == NULL || f->unit == NULL || f->factor == NULL || f->pivots == NULL ||
        f->flux == NULL || f->found == NULL)
        return STATUS_MEMORY;
    for (size_t k = 0; k < f->count; k++)
        if ((f->unit[k] = MEM_NEW(nodes, double)) == NULL)
            return STATUS_MEMORY;
    size_t next = 0;
    for (size_t p = 0; p < plane->part_count; p++)
        if (plane->parts[p].kind == PART_FLOATING)
            f->part[next++] = p;
    return STATUS_OK;
}

/* Fluxes out of the floating parts in a potential, into column[count]. */
static enum status measure(const struct floating *f, const struct grid *grid,
                           const double *phi, double *column)
{
    double side[SIDE_COUNT], imbalance;
    enum status status = flux_measure(grid, phi, f->flux, side, &imbalance);
    for (size_t k = 0; k < f->count && status == STATUS_OK; k++)
        column[k] = f->flux[f->part[k]];
    return status;
}

static enum status solve_units(const struct grid *grid, const struct system *system,
                               double *residual, struct floating *f)
{
    struct drive drive = {.part = MEM_NEW(grid->plane->part_count, double)};
    enum status status = drive.part != NULL ? STATUS_OK : STATUS_MEMORY;
    for (size_t k = 0; k < f->count && status == STATUS_OK; k++) {
        double here = 0.0;
        drive.part[f->part[k]] = 1.0;
        status = system_solve(system, &drive, f->unit[k], &here);
        drive.part[f->part[k]] = 0.0;
        *residual = fmax(*residual, here);
        if (status == STATUS_OK)
            status = measure(f, grid, f->unit[k], f->factor + k * f->count);
    }
    mem_free(drive.part);
    return status;
}

static double sight_scale(const struct plane *plane)
{
    if (!plane_kind_is_turned(plane->kind))
        return 1.0;
    return fmax(plane->high.a - plane->low.a, plane->high.b - plane->low.b);
}

static double norm_of(const double *matrix, size_t n)
{
    double norm = 0.0;
    for (size_t j = 0; j < n; j++) {
        double sum = 0.0;
        for (size_t i = 0; i < n; i++)
            sum += fabs(matrix[j * n + i]);
        norm = fmax(norm, sum);
    }
    return norm;
}

/* The part that a charge on each of them lifts furthest. */
static size_t least_held(const struct floating *f, int zero_pivot)
{
    const lapack_int n = (lapack_int)f->count;
    size_t worst = 0;
    if (zero_pivot > 0)
        return (size_t)zero_pivot - 1;
    for (size_t k = 0; k < f->count; k++)
        f->found[k] = 1.0;
    if (LAPACKE_dgetrs(LAPACK_COL_MAJOR, 'N', n, 1, f->factor, n, f->pivots, f->found,
                       n) != 0)
        return worst;
    for (size_t k = 1; k < f->count; k++)
        if (fabs(f->found[k]) > fabs(f->found[worst]))
            worst = k;
    return worst;
}

static enum status report(const struct floating *f, const struct plane *plane,
                          int zero_pivot, struct messages *messages)
{
    const struct part *part = &plane->parts[f->part[least_held(f, zero_pivot)]];
    messages_add(messages, SEVERITY_ERROR, part->place,
                 "the potential of the floating part \"%.60s\" of \"%s\" cannot be "
                 "found; expected a wall or a part of fixed potential that its field "
                 "reaches; found mirrors and floating parts only",
                 part->name, plane_kind_key(plane->kind));
    return STATUS_SINGULAR;
}

static enum status factor(const struct plane *plane, struct floating *f,
                          struct messages *messages)
{
    const lapack_int n = (lapack_int)f->count;
    const double norm = norm_of(f->factor, f->count);
    double rcond = 0.0;
    const lapack_int zero =
        LAPACKE_dgetrf(LAPACK_COL_MAJOR, n, n, f->factor, n, f->pivots);
    if (zero < 0)
        return STATUS_UNTRUSTED;
    if (zero == 0 &&
        LAPACKE_dgecon(LAPACK_COL_MAJOR, '1', n, f->factor, n, norm, &rcond) != 0)
        return STATUS_MEMORY;
    /* rcond * norm is 1 / (norm of the inverse) */
    if (!(rcond * norm >= SIGHT_LEAST * sight_scale(plane)))
        return report(f, plane, zero, messages);
    return STATUS_OK;
}

enum status floating_prepare(const struct grid *grid, const struct system *system,
                             double *residual, struct floating *floating,
                             struct messages *messages)
{
    memset(floating, 0, sizeof *floating);
    for (size_t p = 0; p < grid->plane->part_count; p++)
        floating->count += grid->plane->parts[p].kind == PART_FLOATING;
    if (floating->count == 0)
        return STATUS_OK;
    enum status status = allocate(grid, floating);
    if (status == STATUS_OK)
        status = solve_units(grid, system, residual, floating);
    if (status == STATUS_OK)
        status = factor(grid->plane, floating, messages);
    if (status != STATUS_OK)
        floating_free(floating);
    return status;
}

bool floating_is_charged(const struct floating *floating, const struct plane *plane)
{
    for (size_t k = 0; k < floating->count; k++)
        if (plane->parts[floating->part[k]].charge != 0.0)
            return true;
    return false;
}

/* The flux that a part's charge stands for, in the unit of flux_measure. */
static double flux_of_charge(const struct plane *plane, size_t part)
{
    return plane->parts[part].charge / (VACUUM_PERMITTIVITY * plane_depth(plane->kind));
}

enum status floating_settle(const struct floating *f, const struct grid *grid,
                            bool charged, double *phi, double *part_value)
{
    const size_t nodes = (size_t)grid->na * (size_t)grid->nb;
    const lapack_int n = (lapack_int)f->count;
    if (f->count == 0)
        return STATUS_OK;
    enum status status = measure(f, grid, phi, f->found);
    if (status != STATUS_OK)
        return status;
    for (size_t k = 0; k < f->count; k++)
        f->found[k] =
            (charged ? flux_of_charge(grid->plane, f->part[k]) : 0.0) - f->found[k];
    if (LAPACKE_dgetrs(LAPACK_COL_MAJOR, 'N', n, 1, f->factor, n, f->pivots, f->found,
                       n) != 0)
        return STATUS_UNTRUSTED;
    for (size_t k = 0; k < f->count; k++) {
        part_value[f->part[k]] = f->found[k];
        for (size_t node = 0; node < nodes; node++)
            phi[node] += f->found[k] * f->unit[k][node];
    }
    return STATUS_OK;
}

const double *floating_unit(const struct floating *floating, size_t part)
{
    for (size_t k = 0; k < floating->count; k++)
        if (floating->part[k] == part)
            return floating->unit[k];
    return NULL;
}

void floating_free(struct floating *floating)
{
    for (size_t k = 0; floating->unit != NULL && k < floating->count; k++)
        mem_free(floating->unit[k]);
    mem_free(floating->part);
    mem_free(floating->unit);
    mem_free(floating->factor);
    mem_free(floating->pivots);
    mem_free(floating->flux);
    mem_free(floating->found);
    memset(floating, 0, sizeof *floating);
}
