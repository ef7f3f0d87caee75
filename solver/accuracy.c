/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "solver/accuracy.h"

#include <stdarg.h>
#include <stdio.h>
#include <string.h>

#include "shared/mem.h"

enum { REASON_SIZE = 200 };

/* A text that grows; what does not fit is cut off. */
struct text {
    char *bytes;
    size_t size, used;
};

PRINTF_LIKE(2, 3) static void put(struct text *text, const char *format, ...)
{
    va_list arguments;
    va_start(arguments, format);
    const int more =
        vsnprintf(text->bytes + text->used, text->size - text->used, format, arguments);
    va_end(arguments);
    if (more > 0)
        text->used += (size_t)more;
    if (text->used >= text->size)
        text->used = text->size - 1;
}

const struct accuracy_item *accuracy_worst(const struct accuracy *accuracy)
{
    const struct accuracy_item *worst = NULL;
    for (size_t k = 0; k < accuracy->count; k++) {
        const struct accuracy_item *item = &accuracy->items[k];
        if (worst == NULL || (worst->stands && !item->stands) ||
            (worst->stands == item->stands && item->reached > worst->reached))
            worst = item;
    }
    return worst;
}

const char *accuracy_key(enum accuracy_state state)
{
    static const char *const keys[] = {
        [ACCURACY_NOT_ASKED] = "not_asked", [ACCURACY_MET] = "met",
        [ACCURACY_MEMORY] = "memory",       [ACCURACY_SLOW] = "slow",
        [ACCURACY_ROUNDS] = "rounds",       [ACCURACY_UNSETTLED] = "unsettled",
        [ACCURACY_UNSOLVED] = "unsolved",   [ACCURACY_NO_FIGURE] = "no_figure"};
    return keys[state];
}

/* Why it is not met. */
static void reason_of(const struct accuracy *accuracy, char *reason)
{
    switch (accuracy->state) {
    case ACCURACY_MEMORY:
        (void)snprintf(reason, REASON_SIZE, "memory budget of %g GB spent",
                       accuracy->memory_budget / 1e9);
        return;
    case ACCURACY_SLOW:
        (void)snprintf(reason, REASON_SIZE, "refining no longer helps");
        return;
    case ACCURACY_ROUNDS:
        (void)snprintf(reason, REASON_SIZE, "%d rounds of refinement spent",
                       accuracy->rounds);
        return;
    case ACCURACY_UNSETTLED:
        (void)snprintf(reason, REASON_SIZE,
                       "no grid meets it for figures that do not stand");
        return;
    case ACCURACY_UNSOLVED:
        (void)snprintf(reason, REASON_SIZE, "a finer grid could not be solved");
        return;
    case ACCURACY_NOT_ASKED:
    case ACCURACY_MET:
    case ACCURACY_NO_FIGURE:
        break;
    }
    (void)snprintf(reason, REASON_SIZE, "there is no figure to ask it of");
}

static void put_item(struct text *text, const struct accuracy_item *item)
{
    if (item->stands)
        put(text, "%s stands at %.2e of its %s", item->name, item->reached,
            item->of_limit ? "limit" : "value");
    else
        put(text, "%s does not stand", item->name);
}

/* Those that do not stand all by name; of the others the worst. */
static void put_open_items(struct text *text, const struct accuracy *accuracy)
{
    const struct accuracy_item *worst = NULL;
    for (size_t k = 0; k < accuracy->count; k++) {
        const struct accuracy_item *item = &accuracy->items[k];
        if (item->met)
            continue;
        if (!item->stands) {
            put(text, "; ");
            put_item(text, item);
        } else if (worst == NULL || item->reached > worst->reached) {
            worst = item;
        }
    }
    if (worst != NULL) {
        put(text, "; ");
        put_item(text, worst);
    }
}

void accuracy_sentence(const struct accuracy *accuracy, char *text, size_t size)
{
    struct text t = {text, size, 0};
    char reason[REASON_SIZE];
    text[0] = '\0';
    if (accuracy->state == ACCURACY_NOT_ASKED)
        return;
    put(&t, "within %g: ", accuracy->within);
    if (accuracy->state == ACCURACY_MET) {
        put(&t, "met; ");
        put_item(&t, accuracy_worst(accuracy));
        return;
    }
    reason_of(accuracy, reason);
    put(&t, "not met: %s", reason);
    put_open_items(&t, accuracy);
}

void accuracy_refined(const struct accuracy_plane *plane, char *text, size_t size)
{
    struct text t = {text, size, 0};
    text[0] = '\0';
    for (size_t k = 0; k < plane->part_count; k++)
        put(&t, "%s%s x%.3g", k > 0 ? ", " : "", plane->parts[k].name,
            plane->parts[k].factor);
    if (plane->factor != 1.0)
        put(&t, "%sall lines x%.3g", t.used > 0 ? "; " : "", plane->factor);
    if (t.used == 0)
        put(&t, "as the file says");
}

void accuracy_free(struct accuracy *accuracy)
{
    for (size_t k = 0; k < accuracy->count; k++)
        mem_free(accuracy->items[k].name);
    mem_free(accuracy->items);
    for (int k = 0; k < PLANE_KINDS; k++) {
        struct accuracy_plane *plane = &accuracy->planes[k];
        for (size_t p = 0; p < plane->part_count; p++)
            mem_free(plane->parts[p].name);
        mem_free(plane->parts);
    }
    memset(accuracy, 0, sizeof *accuracy);
}
