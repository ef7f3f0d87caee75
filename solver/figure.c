/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "solver/figure.h"

#include <string.h>

#include "shared/mem.h"

static enum status grow(struct figures *figures)
{
    void *array = figures->items;
    enum status status = mem_grow(&array, &figures->capacity, figures->count + 1,
                                  sizeof *figures->items);
    figures->items = array;
    return status;
}

enum status figures_add(struct figures *figures, const struct figure *figure,
                        const char *subject, const char *note)
{
    struct figure copy = *figure;
    copy.subject = mem_text(subject);
    copy.note = mem_text(note);
    if ((subject != NULL && copy.subject == NULL) ||
        (note != NULL && copy.note == NULL) || grow(figures) != STATUS_OK) {
        mem_free(copy.subject);
        mem_free(copy.note);
        return STATUS_MEMORY;
    }
    figures->items[figures->count++] = copy;
    return STATUS_OK;
}

const struct figure *figures_find(const struct figures *figures, const char *name,
                                  const char *subject)
{
    for (size_t k = 0; k < figures->count; k++) {
        const struct figure *f = &figures->items[k];
        if (strcmp(f->name, name) != 0)
            continue;
        if (subject == NULL || (f->subject != NULL && strcmp(f->subject, subject) == 0))
            return f;
    }
    return NULL;
}

void figures_free(struct figures *figures)
{
    for (size_t k = 0; k < figures->count; k++) {
        mem_free(figures->items[k].subject);
        mem_free(figures->items[k].note);
    }
    mem_free(figures->items);
    memset(figures, 0, sizeof *figures);
}
