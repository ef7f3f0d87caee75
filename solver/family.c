/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "solver/family.h"

#include <math.h>
#include <stdio.h>

#include "solver/extrapolate.h"

enum { NOTE_SIZE = 400 };

/* The finest level on which the figure is missing; NULL if it is there on all. */
static const struct figure *missing_on(const struct figures *levels, int count,
                                       size_t k)
{
    for (int l = count - 1; l >= 0; l--)
        if (levels[l].items[k].state == FIGURE_MISSING)
            return &levels[l].items[k];
    return NULL;
}

/* Says what the grids gave where they do not converge. */
static void unsettled_note(const double *values, int count, const char *note,
                           char *text, size_t size)
{
    int used = snprintf(text, size, "the grids do not converge on it (");
    for (int l = 0; l < count && used > 0 && (size_t)used < size; l++)
        used += snprintf(text + used, size - (size_t)used, "%s%.6g", l > 0 ? ", " : "",
                         values[l]);
    if (used > 0 && (size_t)used < size)
        (void)snprintf(text + used, size - (size_t)used, ")%s%s",
                       note != NULL ? "; " : "", note != NULL ? note : "");
}

static enum status combine_one(const struct figures *levels, int count, size_t k,
                               struct figures *combined)
{
    const struct figure *finest = &levels[count - 1].items[k];
    struct figure figure = *finest;
    double *const values = figure.grids;
    char note[NOTE_SIZE];
    const struct figure *missing = missing_on(levels, count, k);
    if (missing != NULL) {
        figure.state = FIGURE_MISSING;
        figure.value = 0.0;
        return figures_add(combined, &figure, missing->subject, missing->note);
    }
    for (int l = 0; l < count; l++)
        values[l] = levels[l].items[k].value;
    const struct estimate e = extrapolate(values, count, figure.scale);
    if (!isfinite(e.value) || !isfinite(e.uncertainty)) {
        figure.state = FIGURE_MISSING;
        figure.value = 0.0;
        return figures_add(combined, &figure, finest->subject,
                           "the computation gave no finite number");
    }
    /* Figures from the input alone are the same on every grid and exact. */
    const bool exact = figure.planes == 0;
    figure.value = exact ? finest->value : e.value;
    figure.uncertainty = exact ? 0.0 : e.uncertainty;
    figure.grid_count = exact ? 0 : count;
    if (e.settled)
        return figures_add(combined, &figure, finest->subject, finest->note);
    figure.state = FIGURE_UNSETTLED;
    unsettled_note(values, count, finest->note, note, sizeof note);
    return figures_add(combined, &figure, finest->subject, note);
}

enum status family_figures(const struct figures *levels, int count,
                           struct figures *combined)
{
    enum status status = STATUS_OK;
    *combined = (struct figures){0};
    for (int l = 1; l < count; l++)
        if (levels[l].count != levels[0].count)
            return STATUS_UNTRUSTED;
    for (size_t k = 0; k < levels[0].count && status == STATUS_OK; k++)
        status = combine_one(levels, count, k, combined);
    if (status != STATUS_OK)
        figures_free(combined);
    return status;
}

void family_array(const double *const *levels, int count, size_t n, double scale,
                  double *value, double *uncertainty)
{
    for (size_t k = 0; k < n; k++) {
        double values[3];
        for (int l = 0; l < count; l++)
            values[l] = levels[l][k];
        const struct estimate e = extrapolate(values, count, scale);
        value[k] = e.value;
        if (uncertainty != NULL)
            uncertainty[k] = e.uncertainty;
    }
}
