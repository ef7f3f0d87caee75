/* SPDX-License-Identifier: GPL-3.0-or-later */

#include "solver/plane_solution.h"

#include <math.h>
#include <string.h>
#include <time.h>

#include "shared/constants.h"
#include "shared/mem.h"
#include "solver/blame.h"
#include "solver/floating.h"
#include "solver/flux.h"
#include "solver/system.h"

/* A solve is trusted within these. Residual and balance are of the size of round-off, with
 * room. UMFPACK reports success on singular systems; their reciprocal condition was measured
 * at 6e-16 (64 unknowns) to 1e-11 (0.12 million), that of sound ones at 4e-7 (0.97 million,
 * strongly graded) and above. */
#define RESIDUAL_TRUSTED 1e-9
#define RCOND_TRUSTED    1e-9
#define BALANCE_TRUSTED  1e-6
/* Reciprocity is of the discretisation: 2e-3 on the coarsest grids that can be had of round
 * parts (300 unknowns), 1e-5 and less on usual ones. */
#define RECIPROCITY_TRUSTED 0.05

bool quality_is_trusted(const struct quality *q)
{
    return q->residual <= RESIDUAL_TRUSTED && q->rcond >= RCOND_TRUSTED &&
           q->flux_imbalance <= BALANCE_TRUSTED && q->row_sum <= BALANCE_TRUSTED &&
           q->reciprocity <= RECIPROCITY_TRUSTED;
}

static double seconds_now(void)
{
    struct timespec t;
    clock_gettime(CLOCK_MONOTONIC, &t);
    return (double)t.tv_sec + 1e-9 * (double)t.tv_nsec;
}

double plane_field_factor(enum plane_kind kind)
{
    return plane_kind_is_magnetic(kind) ? -VACUUM_PERMEABILITY : -1.0;
}

double plane_depth(enum plane_kind kind)
{
    return plane_kind_is_turned(kind) ? 2.0 * PI : 1.0;
}

/* Share of a potential that column `column` drives: a gain, or the constant. */
static double column_value(const struct linear *potential, size_t column,
                           size_t supplies)
{
    if (column == supplies)
        return potential->constant;
    return potential->gain != NULL ? potential->gain[column] : 0.0;
}

static void drive_of_column(const struct plane *plane, size_t column, size_t supplies,
                            struct drive *drive)
{
    for (size_t p = 0; p < plane->part_count; p++)
        drive->part[p] = column_value(&plane->parts[p].potential, column, supplies);
    for (int s = 0; s < SIDE_COUNT; s++) {
        const struct side *side = &plane->sides[s];
        const bool wall = side->kind == SIDE_WALL;
        drive->side_from[s] = wall ? column_value(&side->from, column, supplies) : 0.0;
        drive->side_to[s] = wall ? column_value(&side->to, column, supplies) : 0.0;
    }
}

static bool drive_is_zero(const struct drive *drive, size_t parts)
{
    double size = 0.0;
    for (size_t p = 0; p < parts; p++)
        size += fabs(drive->part[p]);
    for (int s = 0; s < SIDE_COUNT; s++)
        size += fabs(drive->side_from[s]) + fabs(drive->side_to[s]);
    return size == 0.0;
}

static enum status allocate(struct plane_solution *s)
{
    const size_t nodes = (size_t)s->grid.na * (size_t)s->grid.nb;
    const size_t parts = s->plane->part_count;
    s->unit = MEM_NEW(s->geometry->supply_count + 1, double *);
    s->phi = MEM_NEW(nodes, double);
    s->part_value = MEM_NEW(parts, double);
    s->part_flux = MEM_NEW(parts, double);
    if (s->unit == NULL || s->phi == NULL || s->part_value == NULL ||
        s->part_flux == NULL)
        return STATUS_MEMORY;
    return STATUS_OK;
}

/* Unit potential of one column, added to the potential at the settings. */
static enum status solve_column(struct plane_solution *s, const struct system *system,
                                const struct floating *floating, size_t column,
                                struct drive *drive)
{
    const size_t supplies = s->geometry->supply_count;
    const size_t nodes = (size_t)s->grid.na * (size_t)s->grid.nb;
    const double setting =
        column < supplies ? s->geometry->supplies[column].setting : 1.0;
    const bool charged = column == supplies && floating_is_charged(floating, s->plane);
    double residual = 0.0;
    drive_of_column(s->plane, column, supplies, drive);
    if (drive_is_zero(drive, s->plane->part_count) && !charged)
        return STATUS_OK;
    s->unit[column] = MEM_NEW(nodes, double);
    if (s->unit[column] == NULL)
        return STATUS_MEMORY;
    enum status status = system_solve(system, drive, s->unit[column], &residual);
    if (status == STATUS_OK)
        status =
            floating_settle(floating, &s->grid, charged, s->unit[column], drive->part);
    if (status != STATUS_OK)
        return status;
    for (size_t n = 0; n < nodes; n++)
        s->phi[n] += setting * s->unit[column][n];
    for (size_t p = 0; p < s->plane->part_count; p++)
        s->part_value[p] += setting * drive->part[p];
    s->quality.residual = fmax(s->quality.residual, residual);
    return STATUS_OK;
}

static enum status solve_selves(struct plane_solution *s, const struct system *system,
                                const struct floating *floating)
{
    struct capacitance *c = &s->capacitance;
    enum status status = capacitance_measure(
        &s->grid, system, floating, (struct force_field){s->phi, s->part_value}, c);
    if (status != STATUS_OK)
        return status;
    s->self_flux = MEM_NEW(s->plane->part_count, double);
    if (s->self_flux == NULL)
        return STATUS_MEMORY;
    for (size_t p = 0; p < s->plane->part_count; p++) {
        const size_t k = c->conductors.of_part[p], n = c->conductors.count;
        s->self_flux[p] = k < n ? c->flux[k * n + k] : 0.0;
    }
    s->quality.reciprocity = c->reciprocity;
    s->quality.row_sum = c->row_sum;
    return STATUS_OK;
}

static enum status solve_all(struct plane_solution *s, const struct system *system,
                             struct messages *messages)
{
    struct drive drive = {.part = MEM_NEW(s->plane->part_count, double)};
    struct floating floating = {0};
    enum status status = drive.part != NULL ? STATUS_OK : STATUS_MEMORY;
    if (status == STATUS_OK)
        status = floating_prepare(&s->grid, system, &s->quality.residual, &floating,
                                  messages);
    for (size_t c = 0; c <= s->geometry->supply_count && status == STATUS_OK; c++)
        status = solve_column(s, system, &floating, c, &drive);
    if (status == STATUS_OK)
        status = flux_measure(&s->grid, s->phi, s->part_flux, s->side_flux,
                              &s->quality.flux_imbalance);
    if (status == STATUS_OK && !plane_kind_is_magnetic(s->plane->kind))
        status = solve_selves(s, system, &floating);
    floating_free(&floating);
    mem_free(drive.part);
    return status;
}

/* Names the free space that fixed potentials hold least. */
static void blame(const struct plane_solution *s, struct messages *messages)
{
    struct blame space;
    if (blame_space(&s->grid, &space) != STATUS_OK)
        return;
    messages_add(
        messages, SEVERITY_NOTE, s->plane->place,
        "the free space round (%.6g, %.6g) mm, %d nodes, is the one that fixed "
        "potentials hold least (share of its legs that end on them: %.2g)",
        space.at.a * 1e3, space.at.b * 1e3, space.nodes, space.hold);
}

static enum status judge(const struct plane_solution *s, struct messages *messages)
{
    const struct quality *q = &s->quality;
    if (quality_is_trusted(q))
        return STATUS_OK;
    messages_add(messages, SEVERITY_ERROR, s->plane->place,
                 "the solve of %s (%d unknowns) cannot be trusted: residual %.2g "
                 "(expected at most %.0e), reciprocal condition %.2g (at least %.0e), "
                 "flux balance %.2g and that of the capacitances %.2g (at most %.0e), "
                 "reciprocity of these %.2g (at most %.0e)",
                 plane_kind_key(s->plane->kind), q->unknowns, q->residual,
                 RESIDUAL_TRUSTED, q->rcond, RCOND_TRUSTED, q->flux_imbalance,
                 q->row_sum, BALANCE_TRUSTED, q->reciprocity, RECIPROCITY_TRUSTED);
    blame(s, messages);
    return STATUS_UNTRUSTED;
}

static void explain(const struct plane_solution *s, enum status status,
                    struct messages *messages)
{
    messages_add(messages, SEVERITY_ERROR, s->plane->place,
                 "%s: %s while solving for %d unknowns on a grid of %d by %d nodes",
                 plane_kind_key(s->plane->kind), status_text(status),
                 s->grid.free_count, s->grid.na, s->grid.nb);
    if (status == STATUS_SINGULAR || status == STATUS_UNTRUSTED)
        blame(s, messages);
}

enum status plane_solve(const struct geometry *geometry, enum plane_kind kind,
                        const struct grid_request *request,
                        struct plane_solution *solution, struct messages *messages)
{
    struct grid_request wanted = *request;
    const double start = seconds_now();
    struct system *system = NULL;
    struct system_facts facts = {0};
    memset(solution, 0, sizeof *solution);
    solution->geometry = geometry;
    solution->plane = &geometry->planes[kind];
    wanted.memory_budget = geometry->memory_budget;
    enum status status =
        grid_build(solution->plane, &wanted, &solution->grid, messages);
    if (status != STATUS_OK)
        return status;
    status = allocate(solution);
    if (status == STATUS_OK)
        status = system_create(&solution->grid, &system, &facts);
    solution->quality.unknowns = facts.unknowns;
    solution->quality.rcond = facts.rcond;
    solution->quality.memory = facts.memory;
    if (status == STATUS_OK)
        status = solve_all(solution, system, messages);
    system_destroy(&system);
    if (status == STATUS_OK)
        status = field_create(&solution->grid, solution->phi, solution->part_value,
                              &solution->field);
    if (status == STATUS_OK)
        status = judge(solution, messages);
    else
        explain(solution, status, messages);
    solution->quality.seconds = seconds_now() - start;
    return status;
}

enum status plane_field(const struct plane_solution *solution, struct vec2 at,
                        double field[2], int *part)
{
    struct field_value value;
    const double factor = plane_field_factor(solution->plane->kind);
    enum status status = field_at(solution->field, at, &value);
    field[0] = factor * value.gradient.a;
    field[1] = factor * value.gradient.b;
    if (part != NULL)
        *part = value.part;
    return status;
}

void plane_solution_free(struct plane_solution *solution)
{
    field_destroy(&solution->field);
    for (size_t c = 0; solution->unit != NULL && c <= solution->geometry->supply_count;
         c++)
        mem_free(solution->unit[c]);
    mem_free(solution->unit);
    mem_free(solution->phi);
    mem_free(solution->part_value);
    mem_free(solution->part_flux);
    mem_free(solution->self_flux);
    capacitance_free(&solution->capacitance);
    grid_free(&solution->grid);
    memset(solution, 0, sizeof *solution);
}
