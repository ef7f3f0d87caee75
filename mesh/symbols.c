/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Values may refer to each other in any order. Each is evaluated on first use; the
 * values under evaluation form a stack, and meeting one of them again is a circle that
 * can be named from that stack. */
#include "mesh/symbols.h"

#include <ctype.h>
#include <stdio.h>
#include <string.h>

#include "mesh/expression.h"
#include "shared/mem.h"

bool symbols_add(struct symbols *symbols, const char *name,
                 const struct node *definition, int supply)
{
    size_t count = symbols->count;
    if ((count & (count - 1)) == 0) { /* doubles at every power of two */
        size_t capacity = count == 0 ? 1 : 2 * count;
        struct symbol *grown =
            mem_resize(symbols->items, capacity, sizeof(struct symbol));
        if (grown == NULL)
            return false;
        symbols->items = grown;
    }
    symbols->items[count] =
        (struct symbol){.name = name, .definition = definition, .supply = supply};
    symbols->count++;
    return true;
}

struct symbol *symbols_find(const struct symbols *symbols, const char *name,
                            size_t length)
{
    for (size_t k = 0; k < symbols->count; k++) {
        const char *candidate = symbols->items[k].name;
        if (strncmp(candidate, name, length) == 0 && candidate[length] == '\0')
            return &symbols->items[k];
    }
    return NULL;
}

static bool report_circle(struct symbols *symbols, size_t index, struct place use)
{
    char circle[400] = "";
    size_t used = 0;
    bool inside = false;
    for (int k = 0; k < symbols->open_count && used < sizeof circle; k++) {
        inside = inside || symbols->open[k] == index;
        if (inside)
            used += (size_t)snprintf(circle + used, sizeof circle - used, "%s -> ",
                                     symbols->items[symbols->open[k]].name);
    }
    return mistakes_add(symbols->mistakes, use,
                        "values refer to each other in a circle; expected values that "
                        "come back to plain numbers; found %s%s",
                        circle, symbols->items[index].name);
}

bool symbols_evaluate(struct symbols *symbols, struct symbol *symbol, struct place use)
{
    size_t index = (size_t)(symbol - symbols->items);
    if (symbol->state == SYMBOL_OPEN)
        return report_circle(symbols, index, use);
    if (symbol->state != SYMBOL_NEW)
        return symbol->state == SYMBOL_KNOWN;
    if (symbols->open_count == SYMBOLS_DEPTH_MAX)
        return mistakes_add(symbols->mistakes, use,
                            "values refer to each other over more than %d steps",
                            SYMBOLS_DEPTH_MAX);
    symbol->state = SYMBOL_OPEN;
    symbols->open[symbols->open_count++] = index;
    struct affine result;
    bool ok = expression_evaluate(symbols, symbol->definition, false, &result);
    symbols->open_count--;
    symbol->state = ok ? SYMBOL_KNOWN : SYMBOL_MISTAKEN;
    symbol->value = result.constant;
    return ok;
}

bool symbols_name_is_fit(const char *name)
{
    if (name[0] == '\0' || isdigit((unsigned char)name[0]) ||
        expression_word_is_taken(name))
        return false;
    for (; *name != '\0'; name++)
        if (!isalnum((unsigned char)*name) && *name != '_')
            return false;
    return true;
}

void symbols_free(struct symbols *symbols)
{
    mem_free(symbols->items);
    symbols->items = NULL;
    symbols->count = 0;
}
