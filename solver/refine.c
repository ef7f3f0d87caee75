/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "solver/refine.h"

#include <math.h>
#include <string.h>

#include "shared/mem.h"
#include "solver/accuracy_report.h"
#include "solver/aim.h"
#include "solver/knob.h"
#include "solver/turning.h"

/* A knob turned by less is left as it is. */
#define TURN_LEAST 1.05
/* A round that leaves more than this of the distance gained too little;
 * uncertainties scatter, so one such round is forgiven. */
#define SLOW_SHARE 0.75
enum { SLOW_ROUNDS = 2 };
/* Times a turn is halved to fit the budget. */
enum { FIT_STEPS = 4 };
/* What is left to do after a round, as far as progress is concerned, and its
 * trials. */
#define PROGRESS_LEFT  0.6
#define PROGRESS_TRIAL 0.2

struct refinement {
    struct solve *solve;
    struct measure *measure;
    struct result *result;
    double within;
    struct aims aims;
    struct knobs knobs;
    unsigned turned;  /* planes (bits) whose knobs were turned this round */
    bool over_budget; /* some plane was turned less than it should */
    double best;      /* smallest aims_worst so far */
    int slow;         /* rounds since it was reached */
    enum accuracy_state state;
};

/* Planes of the aims that are not met but may be. */
static unsigned planes_needed(const struct refinement *r)
{
    unsigned planes = 0;
    for (size_t k = 0; k < r->aims.count; k++)
        if (aim_is_open(&r->aims.items[k], r->within))
            planes |= r->aims.items[k].planes;
    return planes;
}

static bool all_stand(const struct aims *aims)
{
    bool stand = true;
    for (size_t k = 0; k < aims->count; k++)
        stand = stand && aims->items[k].stands;
    return stand;
}

/* The knobs of a plane turned by the given power of what was chosen; the
 * largest turn. */
static double turned_knobs(const struct refinement *r, enum plane_kind kind,
                           double power, struct plane_knobs *knobs)
{
    const struct plane *plane = &r->solve->geometry->planes[kind];
    const struct plane_knobs *now = &r->solve->knobs[kind];
    double largest = 1.0;
    knobs->fineness = now->fineness;
    for (size_t p = 0; p < plane->part_count; p++)
        knobs->crowding[p] = now->crowding[p];
    for (size_t k = 0; k < r->knobs.count; k++) {
        const struct knob *knob = &r->knobs.items[k];
        const double turn = pow(knob->turn, power);
        if (knob->plane != kind || turn < TURN_LEAST)
            continue;
        knob_turn(plane, knob->part, turn, knobs);
        largest = fmax(largest, turn);
    }
    return largest;
}

/* Turns as far as the budget allows; *turn is 1 where nothing is left to turn.
 */
static enum status fit_plane(struct refinement *r, enum plane_kind kind,
                             struct plane_knobs *knobs, double *turn)
{
    bool fits = false;
    for (int step = 0; step < FIT_STEPS; step++) {
        *turn = turned_knobs(r, kind, ldexp(1.0, -step), knobs);
        if (*turn == 1.0)
            return STATUS_OK;
        enum status status = solve_fits(r->solve, kind, knobs, &fits);
        if (status != STATUS_OK || fits)
            return status;
        r->over_budget = true;
    }
    *turn = 1.0;
    return STATUS_OK;
}

static void swap_knobs(struct plane_knobs *p, struct plane_knobs *q)
{
    const struct plane_knobs keep = *p;
    *p = *q;
    *q = keep;
}

/* Solves a plane with turned knobs. A failed solve leaves plane and knobs as
 * they were. */
static enum status refine_plane(struct refinement *r, enum plane_kind kind,
                                const struct progress *progress)
{
    struct plane_knobs knobs = {
        0.0, MEM_NEW(r->solve->geometry->planes[kind].part_count, double)};
    double turn = 1.0;
    if (knobs.crowding == NULL)
        return STATUS_MEMORY;
    enum status status = fit_plane(r, kind, &knobs, &turn);
    if (status == STATUS_OK && turn > 1.0) {
        swap_knobs(&r->solve->knobs[kind], &knobs);
        if (solve_plane(r->solve, kind, progress, NULL) == STATUS_OK) {
            r->turned |= plane_bit(kind);
        } else {
            swap_knobs(&r->solve->knobs[kind], &knobs);
            r->state = ACCURACY_UNSOLVED;
        }
    }
    mem_free(knobs.crowding);
    return status;
}

/* Where a round ends that came out unmet. */
static void judge_round(struct refinement *r)
{
    const double worst = aims_worst(&r->aims);
    if (r->turned == 0 && r->state == ACCURACY_NOT_ASKED) {
        r->state = r->over_budget ? ACCURACY_MEMORY : ACCURACY_SLOW;
        return;
    }
    r->slow = worst > SLOW_SHARE * r->best ? r->slow + 1 : 0;
    r->best = fmin(r->best, worst);
    if (r->slow >= SLOW_ROUNDS && r->state == ACCURACY_NOT_ASKED)
        r->state = r->over_budget ? ACCURACY_MEMORY : ACCURACY_SLOW;
}

static enum status solve_round(struct refinement *r, const struct progress *progress)
{
    const struct progress trial = progress_part(progress, 0.0, PROGRESS_TRIAL);
    const struct progress solve = progress_part(progress, PROGRESS_TRIAL, 1.0);
    enum status status =
        knobs_try(r->solve, r->measure, &r->aims, planes_needed(r), &trial, &r->knobs);
    if (status == STATUS_OK)
        status = turning_choose(&r->knobs, &r->aims, r->within);
    for (int k = 0; k < PLANE_KINDS && status == STATUS_OK; k++) {
        const struct progress plane =
            progress_part(&solve, (double)k / PLANE_KINDS, (k + 1.0) / PLANE_KINDS);
        if (r->solve->families[k] != NULL)
            status = refine_plane(r, (enum plane_kind)k, &plane);
    }
    return status;
}

static enum status refine_round(struct refinement *r, const struct progress *progress)
{
    r->turned = 0;
    r->over_budget = false;
    enum status status = solve_round(r, progress);
    if (status == STATUS_OK && r->turned != 0) {
        status = measure_figures(r->solve, r->measure, r->result);
        r->result->accuracy.rounds++;
    }
    if (status == STATUS_OK) {
        aims_update(&r->aims, r->result);
        judge_round(r);
    }
    knobs_free(&r->knobs);
    return status;
}

static enum status refine_rounds(struct refinement *r, const struct progress *progress)
{
    enum status status = STATUS_OK;
    for (int round = 1; round <= REFINE_ROUNDS && status == STATUS_OK &&
                        r->state == ACCURACY_NOT_ASKED && planes_needed(r) != 0;
         round++) {
        const double left = pow(PROGRESS_LEFT, round - 1);
        struct progress part =
            progress_part(progress, 1.0 - left, 1.0 - PROGRESS_LEFT * left);
        part.round = round;
        status = refine_round(r, &part);
    }
    return status;
}

static void judge_end(struct refinement *r)
{
    if (r->aims.count == 0)
        r->state = ACCURACY_NO_FIGURE;
    else if (planes_needed(r) == 0)
        r->state = all_stand(&r->aims) ? ACCURACY_MET : ACCURACY_UNSETTLED;
    else if (r->state == ACCURACY_NOT_ASKED)
        r->state = ACCURACY_ROUNDS;
}

enum status refine(struct solve *solve, struct measure *measure, double within,
                   const struct progress *progress, struct result *result)
{
    struct refinement r = {
        .solve = solve, .measure = measure, .result = result, .within = within};
    enum status status = aims_choose(result, &r.aims);
    if (status == STATUS_OK) {
        r.best = aims_worst(&r.aims);
        status = refine_rounds(&r, progress);
    }
    if (status == STATUS_OK) {
        judge_end(&r);
        status = accuracy_report(&r.aims, r.state, within, solve, result);
    }
    aims_free(&r.aims);
    return status;
}
