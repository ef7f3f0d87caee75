/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "solver/verdict.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

#include "shared/mem.h"

enum { REASON_SIZE = 300 };

const char *verdict_figure_name(enum limit_kind kind)
{
    static const char *const names[LIMIT_KINDS] = {
        [LIMIT_RATIO_ERROR] = "ratio_error_peak_across",
        [LIMIT_FLAT_LENGTH] = "flat_length",
        [LIMIT_EVEN_RADIUS] = "even_radius",
        [LIMIT_DETUNING] = "detuning",
        [LIMIT_LENGTH_MISMATCH] = "length_mismatch",
        [LIMIT_KICK] = "kick",
        [LIMIT_OFFSET] = "offset",
        [LIMIT_RESOLUTION] = "mass_resolution",
        [LIMIT_SURFACE_FIELD] = "surface_field"};
    return names[kind];
}

/* Severity of a figure for a limit: the larger the worse; missing and unsettled figures
 * and what is no number are worst. */
static double badness(const struct figure *figure, bool at_least)
{
    if (figure->state != FIGURE_GOOD || !isfinite(figure->value))
        return (double)INFINITY;
    const double size = fabs(figure->value);
    return at_least ? -(size - figure->uncertainty) : size + figure->uncertainty;
}

static const struct figure *worst_figure(const struct figures *figures,
                                         const char *name, bool at_least)
{
    const struct figure *worst = NULL;
    for (size_t k = 0; k < figures->count; k++) {
        const struct figure *f = &figures->items[k];
        if (strcmp(f->name, name) == 0 &&
            (worst == NULL || badness(f, at_least) > badness(worst, at_least)))
            worst = f;
    }
    return worst;
}

static void judge_good(struct verdict_item *item, const struct limit_rule *rule,
                       char *reason)
{
    const double margin = rule->at_least
                              ? item->value - item->uncertainty - item->allowed
                              : item->allowed - item->value - item->uncertainty;
    const bool central =
        rule->at_least ? item->value >= item->allowed : item->value <= item->allowed;
    item->judged = true;
    item->met = margin >= 0.0;
    (void)snprintf(reason, REASON_SIZE, "%s",
                   item->met ? "holds with its uncertainty"
                   : central ? "holds only without its uncertainty"
                             : "the figure is beyond the limit");
}

static enum status judge_item(const struct result *result, enum limit_kind kind,
                              struct verdict_item *item)
{
    const struct limit_rule *rule = geometry_limit_rule(kind);
    const struct figure *figure =
        worst_figure(&result->figures, verdict_figure_name(kind), rule->at_least);
    char reason[REASON_SIZE];
    *item = (struct verdict_item){.limit = kind,
                                  .allowed = result->geometry->limits[kind].value,
                                  .figure = figure};
    if (figure == NULL) {
        (void)snprintf(reason, sizeof reason, "no plane gives this figure");
    } else if (figure->state == FIGURE_GOOD) {
        item->value = fabs(figure->value);
        item->uncertainty = figure->uncertainty;
        judge_good(item, rule, reason);
    } else {
        (void)snprintf(reason, sizeof reason, "not judged: %s",
                       figure->note != NULL ? figure->note : "the figure is missing");
    }
    item->reason = mem_text(reason);
    return item->reason != NULL ? STATUS_OK : STATUS_MEMORY;
}

enum status verdict_judge(struct result *result)
{
    struct verdict *v = &result->verdict;
    enum status status = STATUS_OK;
    memset(v, 0, sizeof *v);
    v->all_met = true;
    for (int k = 0; k < LIMIT_KINDS && status == STATUS_OK; k++) {
        if (!result->geometry->limits[k].present)
            continue;
        struct verdict_item *item = &v->items[v->count++];
        status = judge_item(result, (enum limit_kind)k, item);
        v->all_met = v->all_met && item->met;
    }
    return status;
}

void verdict_free(struct verdict *verdict)
{
    for (size_t k = 0; k < verdict->count; k++)
        mem_free(verdict->items[k].reason);
    memset(verdict, 0, sizeof *verdict);
}
