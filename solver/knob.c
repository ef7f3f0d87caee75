/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "solver/knob.h"

#include <math.h>
#include <string.h>

#include "shared/mem.h"

/* Factors of the trials. */
#define TRY_PART 1.5
#define TRY_ALL  1.25
/* Parts are alike if their sizes agree to this fraction. */
#define ALIKE 1e-9

static struct vec2 size_of(const struct part *part)
{
    struct vec2 low, high;
    shape_bounds(&part->shape, &low, &high);
    return vec2_sub(high, low);
}

static bool are_alike(const struct part *p, const struct part *q)
{
    const struct vec2 a = size_of(p), b = size_of(q);
    const double tolerance = ALIKE * fmax(a.a, a.b);
    return p->kind == q->kind && fabs(a.a - b.a) <= tolerance &&
           fabs(a.b - b.b) <= tolerance;
}

size_t knob_leader(const struct plane *plane, size_t part)
{
    size_t leader = 0;
    while (!are_alike(&plane->parts[leader], &plane->parts[part]))
        leader++;
    return leader;
}

void knob_turn(const struct plane *plane, size_t part, double factor,
               struct plane_knobs *knobs)
{
    if (part == KNOB_ALL_LINES)
        knobs->fineness *= factor;
    for (size_t p = 0; p < plane->part_count && part != KNOB_ALL_LINES; p++)
        if (knob_leader(plane, p) == part)
            knobs->crowding[p] *= factor;
}

/* All that the trials share. */
struct trial {
    const struct solve *solve;
    const struct aims *aims;
    struct vec2 *grids[2]; /* [aims] values on the grids of the trials */
    struct vec2 *base; /* [aims] extrapolated over them, with the knobs as they are */
    struct path path;
    struct figures figures;
};

enum { TRIAL_GRIDS = 2 };

/* The finest of a family need no trial: those before them tell as much for a fifth of the
 * work. Of four grids the coarsest is too coarse to tell. */
static int trial_level(const struct solve *solve, int k)
{
    return (solve->levels > 3 ? solve->levels - 3 : 0) + k;
}

static struct vec2 extrapolated(const struct trial *trial, size_t k)
{
    const struct vec2 coarse = trial->grids[0][k], fine = trial->grids[1][k];
    return vec2_add(fine, vec2_scale(vec2_sub(fine, coarse), 1.0 / 3.0));
}

/* Values of the aims on one grid with another solution in the place of one
 * plane. */
static enum status read_trial(struct trial *trial, enum plane_kind kind, int k,
                              const struct plane_solution *solution)
{
    struct view view = trial->solve->views[trial_level(trial->solve, k)];
    view.planes[kind] = solution;
    enum status status = measure_view(&view, &trial->path, &trial->figures);
    if (status == STATUS_OK)
        status = aims_read(trial->aims, &view, &trial->figures, trial->grids[k]);
    path_free(&trial->path);
    figures_free(&trial->figures);
    return status;
}

/* Solves and reads the two grids; unknowns that the first has gained. */
static enum status solve_trials(struct trial *trial, enum plane_kind kind,
                                const struct plane_knobs *turned, double *added)
{
    const struct solve *solve = trial->solve;
    const int first = trial_level(solve, 0);
    const int had = solve->families[kind]->slots[first].quality.unknowns;
    enum status status = STATUS_OK;
    *added = 1.0;
    for (int k = 0; k < TRIAL_GRIDS && status == STATUS_OK && *added > 0.0; k++) {
        struct plane_solution solution = {0};
        status = solve_trial(solve, kind, turned, first + k, &solution);
        if (k == 0)
            *added = (double)solution.quality.unknowns - had;
        /* A knob without lines of its own changes nothing. */
        if (status == STATUS_OK && *added > 0.0)
            status = read_trial(trial, kind, k, &solution);
        if (solution.geometry != NULL)
            plane_solution_free(&solution);
    }
    return status;
}

static enum status append(struct knobs *knobs, struct knob knob)
{
    void *array = knobs->items;
    enum status status =
        mem_grow(&array, &knobs->capacity, knobs->count + 1, sizeof *knobs->items);
    knobs->items = array;
    if (status == STATUS_OK)
        knobs->items[knobs->count++] = knob; /* takes ownership of error */
    return status;
}

/* A knob turned by f shows 1 - f^-order of the error that comes from its lines.
 */
static enum status book(const struct trial *trial, struct knob knob, double factor,
                        struct knobs *knobs)
{
    const struct aims *aims = trial->aims;
    const double share = 1.0 - pow(factor, -KNOB_ORDER);
    knob.error = MEM_NEW(aims->count, double);
    if (knob.error == NULL)
        return STATUS_MEMORY;
    for (size_t k = 0; k < aims->count; k++) {
        const struct vec2 moved = vec2_sub(extrapolated(trial, k), trial->base[k]);
        const double error = vec2_length(moved) / (share * aims->items[k].size);
        knob.error[k] = isfinite(error) ? error : 0.0; /* missing on some grid */
    }
    enum status status = append(knobs, knob);
    if (status != STATUS_OK)
        mem_free(knob.error);
    return status;
}

/* A trial that fails is no failure: its knob will not be turned. */
static enum status try_knob(struct trial *trial, enum plane_kind kind, size_t part,
                            struct knobs *knobs)
{
    const struct plane *plane = &trial->solve->geometry->planes[kind];
    const struct plane_knobs *now = &trial->solve->knobs[kind];
    const double factor = part == KNOB_ALL_LINES ? TRY_ALL : TRY_PART;
    struct plane_knobs turned = {now->fineness, MEM_NEW(plane->part_count, double)};
    double added = 0.0;
    if (turned.crowding == NULL)
        return STATUS_MEMORY;
    for (size_t p = 0; p < plane->part_count; p++)
        turned.crowding[p] = now->crowding[p];
    knob_turn(plane, part, factor, &turned);
    enum status status = solve_trials(trial, kind, &turned, &added);
    mem_free(turned.crowding);
    if (status != STATUS_OK || added <= 0.0)
        return status == STATUS_MEMORY ? status : STATUS_OK;
    const struct knob knob = {.plane = kind,
                              .part = part,
                              .cost = added / (factor * factor - 1.0),
                              .turn = 1.0};
    return book(trial, knob, factor, knobs);
}

static enum status try_plane(struct trial *trial, enum plane_kind kind,
                             const struct progress *progress, struct knobs *knobs)
{
    const struct plane *plane = &trial->solve->geometry->planes[kind];
    progress_tell(progress, 0.0, "%s, where the error comes from",
                  plane_kind_key(kind));
    enum status status = try_knob(trial, kind, KNOB_ALL_LINES, knobs);
    for (size_t p = 0; p < plane->part_count && status == STATUS_OK; p++)
        if (knob_leader(plane, p) == p)
            status = try_knob(trial, kind, p, knobs);
    return status;
}

static enum status begin_trials(struct trial *trial, const struct measure *measure)
{
    const size_t count = trial->aims->count;
    enum status status = STATUS_OK;
    trial->base = MEM_NEW(count, struct vec2);
    for (int l = 0; l < TRIAL_GRIDS; l++)
        trial->grids[l] = MEM_NEW(count, struct vec2);
    if (trial->base == NULL || trial->grids[0] == NULL || trial->grids[1] == NULL)
        return STATUS_MEMORY;
    for (int l = 0; l < TRIAL_GRIDS && status == STATUS_OK; l++) {
        const int level = trial_level(trial->solve, l);
        status = aims_read(trial->aims, &trial->solve->views[level],
                           &measure->figures[level], trial->grids[l]);
    }
    for (size_t k = 0; k < count && status == STATUS_OK; k++)
        trial->base[k] = extrapolated(trial, k);
    return status;
}

enum status knobs_try(const struct solve *solve, const struct measure *measure,
                      const struct aims *aims, unsigned planes,
                      const struct progress *progress, struct knobs *knobs)
{
    memset(knobs, 0, sizeof *knobs);
    struct trial *trial = MEM_NEW(1, struct trial);
    if (trial == NULL)
        return STATUS_MEMORY;
    trial->solve = solve;
    trial->aims = aims;
    enum status status = begin_trials(trial, measure);
    for (int k = 0; k < PLANE_KINDS && status == STATUS_OK; k++)
        if (solve->families[k] != NULL && (planes & plane_bit((enum plane_kind)k)) != 0)
            status = try_plane(trial, (enum plane_kind)k, progress, knobs);
    mem_free(trial->base);
    mem_free(trial->grids[0]);
    mem_free(trial->grids[1]);
    mem_free(trial);
    if (status != STATUS_OK)
        knobs_free(knobs);
    return status;
}

void knobs_free(struct knobs *knobs)
{
    for (size_t k = 0; k < knobs->count; k++)
        mem_free(knobs->items[k].error);
    mem_free(knobs->items);
    memset(knobs, 0, sizeof *knobs);
}
