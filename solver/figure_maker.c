/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "solver/figure_maker.h"

static void append(struct maker *maker, struct figure_key key, enum figure_state state,
                   double value, const char *subject, const char *note)
{
    const struct figure figure = {.name = key.name,
                                  .title = key.title,
                                  .unit = key.unit,
                                  .group = maker->group,
                                  .state = state,
                                  .planes = maker->planes,
                                  .value = value,
                                  .scale = key.scale};
    if (maker->status == STATUS_OK)
        maker->status = figures_add(maker->figures, &figure, subject, note);
}

void maker_add(struct maker *maker, struct figure_key key, double value,
               const char *subject, const char *note)
{
    append(maker, key, FIGURE_GOOD, value, subject, note);
}

void maker_add_unsettled(struct maker *maker, struct figure_key key, double value,
                         const char *subject, const char *note)
{
    append(maker, key, FIGURE_UNSETTLED, value, subject, note);
}

void maker_miss(struct maker *maker, struct figure_key key, const char *subject,
                const char *reason)
{
    append(maker, key, FIGURE_MISSING, 0.0, subject, reason);
}

void maker_add_or_miss(struct maker *maker, struct figure_key key, double value,
                       const char *subject, const char *note, const char *reason)
{
    if (reason == NULL)
        maker_add(maker, key, value, subject, note);
    else
        maker_miss(maker, key, subject, reason);
}
