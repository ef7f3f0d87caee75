/* SPDX-License-Identifier: GPL-3.0-or-later */

/* A table of bounds, highest first for each figure: the first one exceeded speaks. */

#include "solver/caution.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

#include "shared/mem.h"

enum { TEXT_SIZE = 600 };

struct bound {
    const char *figure;
    double above; /* V/m */
    const char *what;
    const char *words;
};

static const struct bound BOUNDS[] = {
    {"surface_field", FIELD_POLISHED, "surface field",
     "above what even polished and conditioned surfaces hold in vacuum across gaps "
     "below "
     "about 10 mm (5 kV/mm, common practice)"},
    {"surface_field", FIELD_UNPOLISHED, "surface field",
     "above what unpolished surfaces hold in vacuum (1 to 2 kV/mm, common practice)"},
    {"insulator_field", FIELD_CREEP_HIGHEST, "field along the surface",
     "above what insulators hold along their surface in vacuum (0.3 to 1 kV/mm, common "
     "practice)"},
    {"insulator_field", FIELD_CREEP, "field along the surface",
     "in the range where insulators flash over in vacuum (0.3 to 1 kV/mm, common "
     "practice)"},
};

static const struct bound *bound_of(const struct figure *figure)
{
    if (figure->state == FIGURE_MISSING)
        return NULL;
    for (size_t k = 0; k < sizeof BOUNDS / sizeof BOUNDS[0]; k++)
        if (strcmp(figure->name, BOUNDS[k].figure) == 0 &&
            fabs(figure->value) > BOUNDS[k].above)
            return &BOUNDS[k];
    return NULL;
}

static enum status add(struct cautions *cautions, const struct figure *figure,
                       const struct bound *bound)
{
    void *array = cautions->items;
    char text[TEXT_SIZE];
    enum status status = mem_grow(&array, &cautions->capacity, cautions->count + 1,
                                  sizeof *cautions->items);
    cautions->items = array;
    if (status != STATUS_OK)
        return status;
    (void)snprintf(text, sizeof text, "%s of %s: %.3g kV/mm (%s), %s", bound->what,
                   figure->subject != NULL ? figure->subject : "a part",
                   fabs(figure->value) * 1e-6,
                   figure->note != NULL ? figure->note : "place not known",
                   bound->words);
    struct caution *caution = &cautions->items[cautions->count++];
    *caution = (struct caution){mem_text(text), bound->figure, NULL};
    if (figure->subject != NULL) {
        caution->subject = mem_text(figure->subject);
        if (caution->subject == NULL)
            return STATUS_MEMORY;
    }
    return caution->text != NULL ? STATUS_OK : STATUS_MEMORY;
}

enum status cautions_of_figures(const struct figures *figures,
                                struct cautions *cautions)
{
    enum status status = STATUS_OK;
    *cautions = (struct cautions){0};
    for (size_t k = 0; k < figures->count && status == STATUS_OK; k++) {
        const struct bound *bound = bound_of(&figures->items[k]);
        if (bound != NULL)
            status = add(cautions, &figures->items[k], bound);
    }
    if (status != STATUS_OK)
        cautions_free(cautions);
    return status;
}

void cautions_free(struct cautions *cautions)
{
    for (size_t k = 0; k < cautions->count; k++) {
        mem_free(cautions->items[k].text);
        mem_free(cautions->items[k].subject);
    }
    mem_free(cautions->items);
    *cautions = (struct cautions){0};
}
