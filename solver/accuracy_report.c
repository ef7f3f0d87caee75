/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "solver/accuracy_report.h"

#include <stdio.h>

#include "shared/mem.h"
#include "solver/knob.h"

enum { NAME_SIZE = 300 };

static enum status report_items(const struct aims *aims, const struct result *result,
                                struct accuracy *accuracy)
{
    accuracy->items = MEM_NEW(aims->count, struct accuracy_item);
    if (accuracy->items == NULL)
        return STATUS_MEMORY;
    for (size_t k = 0; k < aims->count; k++) {
        const struct aim *aim = &aims->items[k];
        struct accuracy_item *item = &accuracy->items[accuracy->count++];
        item->name = aim_name(aim, result);
        if (item->name == NULL)
            return STATUS_MEMORY;
        item->stands = aim->stands;
        item->of_limit = aim->of_limit;
        item->reached = aim->reached;
        item->met = aim->stands && aim->reached <= accuracy->within;
    }
    return STATUS_OK;
}

/* "upper plate", "upper plate and 1 alike". */
static char *name_of(const struct plane *plane, size_t leader)
{
    char name[NAME_SIZE];
    size_t alike = 0;
    for (size_t p = leader + 1; p < plane->part_count; p++)
        alike += knob_leader(plane, p) == leader;
    if (alike > 0)
        (void)snprintf(name, sizeof name, "%s and %zu alike", plane->parts[leader].name,
                       alike);
    else
        (void)snprintf(name, sizeof name, "%s", plane->parts[leader].name);
    return mem_text(name);
}

static enum status report_plane(const struct plane *plane,
                                const struct plane_knobs *knobs, double fineness,
                                struct accuracy_plane *report)
{
    report->factor = knobs->fineness / fineness;
    report->parts = MEM_NEW(plane->part_count, struct accuracy_part);
    if (report->parts == NULL)
        return STATUS_MEMORY;
    for (size_t p = 0; p < plane->part_count; p++) {
        if (knobs->crowding[p] == 1.0 || knob_leader(plane, p) != p)
            continue;
        struct accuracy_part *part = &report->parts[report->part_count++];
        part->factor = knobs->crowding[p];
        part->name = name_of(plane, p);
        if (part->name == NULL)
            return STATUS_MEMORY;
    }
    return STATUS_OK;
}

enum status accuracy_report(const struct aims *aims, enum accuracy_state state,
                            double within, const struct solve *solve,
                            struct result *result)
{
    struct accuracy *accuracy = &result->accuracy;
    accuracy->state = state;
    accuracy->within = within;
    accuracy->of_limits = aims->of_limits;
    accuracy->memory_budget = solve->geometry->memory_budget;
    enum status status = report_items(aims, result, accuracy);
    for (int k = 0; k < PLANE_KINDS && status == STATUS_OK; k++)
        status = report_plane(&solve->geometry->planes[k], &solve->knobs[k],
                              solve->fineness, &accuracy->planes[k]);
    return status;
}
