/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "solver/turning.h"

#include <math.h>

#include "shared/mem.h"

/* The target of a round: a little beyond what is asked, as the next uncertainty
 * scatters, and no more than a plane refined twofold everywhere would give. */
#define TARGET_MARGIN 0.7
#define TARGET_LEAST  0.125
/* That of a figure that stood on a coarser grid. */
#define TARGET_FALLEN 0.4
/* No knob is turned further than this in one round. */
#define TURN_MOST 3.0
/* The least share of a plane's lines that is not near a part. */
#define REST_LEAST 0.05

/* One knob as one aim sees it. */
struct pull {
    double error, cost;
    double turn;
};

/* The knobs of a plane stand together, all lines first. */
static size_t plane_end(const struct knobs *knobs, size_t begin)
{
    size_t end = begin + 1;
    while (end < knobs->count && knobs->items[end].plane == knobs->items[begin].plane)
        end++;
    return end;
}

/* Errors and costs of one plane: what the parts do not account for is the
 * rest's. */
static void pull_plane(const struct knobs *knobs, size_t begin, size_t end, size_t aim,
                       struct pull *pulls)
{
    double error = 0.0, cost = 0.0;
    for (size_t k = begin; k < end; k++) {
        const struct knob *knob = &knobs->items[k];
        pulls[k] = (struct pull){knob->error[aim], knob->cost, 1.0};
        if (knob->part != KNOB_ALL_LINES) {
            error += knob->error[aim];
            cost += knob->cost;
        }
    }
    if (knobs->items[begin].part == KNOB_ALL_LINES) {
        struct pull *all = &pulls[begin];
        all->error = fmax(all->error - error, 0.0);
        all->cost = fmax(all->cost - cost, REST_LEAST * all->cost);
    }
}

/* Share of the error left with the multiplier lambda. */
static double left(const struct pull *pulls, size_t count, double lambda)
{
    double error = 0.0, whole = 0.0;
    for (size_t k = 0; k < count; k++) {
        whole += pulls[k].error;
        const double turn =
            lambda * pow(pulls[k].error / pulls[k].cost, 1.0 / (KNOB_ORDER + 2.0));
        error += pulls[k].error * pow(fmin(fmax(turn, 1.0), TURN_MOST), -KNOB_ORDER);
    }
    return error / whole;
}

static void turn_pulls(struct pull *pulls, size_t count, double target)
{
    double largest = 0.0;
    for (size_t k = 0; k < count; k++)
        largest = fmax(largest, pulls[k].error / pulls[k].cost);
    if (!(largest > 0.0))
        return;
    /* At `low` the steepest knob begins to turn; `high` is beyond any target. */
    double low = pow(largest, -1.0 / (KNOB_ORDER + 2.0)), high = 1e6 * low;
    for (int step = 0; step < 60; step++) {
        const double middle = sqrt(low * high);
        if (left(pulls, count, middle) > target)
            low = middle;
        else
            high = middle;
    }
    for (size_t k = 0; k < count; k++) {
        const double turn =
            high * pow(pulls[k].error / pulls[k].cost, 1.0 / (KNOB_ORDER + 2.0));
        pulls[k].turn = fmin(fmax(turn, 1.0), TURN_MOST);
    }
}

static void take_turns(const struct pull *pulls, struct knobs *knobs)
{
    for (size_t k = 0; k < knobs->count; k++)
        knobs->items[k].turn = fmax(knobs->items[k].turn, pulls[k].turn);
}

/* Turns of parts are what is left to do once all lines are turned. */
static void relate_to_all_lines(struct knobs *knobs)
{
    for (size_t begin = 0, end; begin < knobs->count; begin = end) {
        end = plane_end(knobs, begin);
        if (knobs->items[begin].part != KNOB_ALL_LINES)
            continue;
        for (size_t k = begin + 1; k < end; k++)
            knobs->items[k].turn =
                fmax(knobs->items[k].turn / knobs->items[begin].turn, 1.0);
    }
}

static double target_of(const struct aim *aim, double within)
{
    if (!aim->stands)
        return TARGET_FALLEN;
    return fmax(TARGET_MARGIN * within / aim->reached, TARGET_LEAST);
}

/* Turns that one aim asks for. */
static void serve_aim(struct knobs *knobs, size_t aim, double target,
                      struct pull *pulls)
{
    for (size_t begin = 0, end; begin < knobs->count; begin = end) {
        end = plane_end(knobs, begin);
        pull_plane(knobs, begin, end, aim, pulls);
    }
    turn_pulls(pulls, knobs->count, target);
    take_turns(pulls, knobs);
}

enum status turning_choose(struct knobs *knobs, const struct aims *aims, double within)
{
    struct pull *pulls = MEM_NEW(knobs->count, struct pull);
    if (pulls == NULL)
        return STATUS_MEMORY;
    for (size_t k = 0; k < knobs->count; k++)
        knobs->items[k].turn = 1.0;
    for (size_t a = 0; a < aims->count; a++)
        if (aim_is_open(&aims->items[a], within))
            serve_aim(knobs, a, target_of(&aims->items[a], within), pulls);
    relate_to_all_lines(knobs);
    mem_free(pulls);
    return STATUS_OK;
}
