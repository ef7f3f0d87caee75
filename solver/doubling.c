/* SPDX-License-Identifier: GPL-3.0-or-later */

#include "solver/doubling.h"

#include <math.h>
#include <stdio.h>

#include "shared/mem.h"

enum { NOTE_SIZE = 400 };

/* Of an error that falls as 1/R or faster. */
#define POWER_FACTOR 2.0

bool doubling_needed(const struct plane *plane)
{
    bool open = false;
    for (int s = 0; s < SIDE_COUNT; s++)
        open = open || plane->sides[s].kind == SIDE_OPEN;
    return plane->present && open;
}

/* The nearest of the far walls. */
static double distance_of(const struct grid *grid)
{
    const struct plane *plane = grid->plane;
    const double behind[SIDE_COUNT] = {
        plane->low.a - grid->a[0], grid->a[grid->na - 1] - plane->high.a,
        plane->low.b - grid->b[0], grid->b[grid->nb - 1] - plane->high.b};
    double distance = (double)INFINITY;
    for (int s = 0; s < SIDE_COUNT; s++)
        if (plane->sides[s].kind == SIDE_OPEN)
            distance = fmin(distance, behind[s]);
    return distance;
}

struct open_test doubling_begin(const struct plane_solution *near, int level)
{
    const struct plane *plane = near->plane;
    const struct vec2 size = vec2_sub(plane->high, plane->low);
    struct open_test test = {.done = true, .level = level};
    test.distance = distance_of(&near->grid);
    test.factor = POWER_FACTOR;
    if (!plane_kind_is_turned(plane->kind))
        test.factor =
            fmax(POWER_FACTOR, log2(2.0 * test.distance / fmin(size.a, size.b)));
    return test;
}

/* The largest factor of the open planes a figure uses; 0 if there is none. */
static double factor_of(const struct plane_result *planes, unsigned used)
{
    double factor = 0.0;
    for (unsigned k = 0; k < PLANE_KINDS; k++)
        if ((used & (1u << k)) != 0 && planes[k].open.done)
            factor = fmax(factor, planes[k].open.factor);
    return factor;
}

/* Books the movement (a share of the scale) in the planes it may come from. */
static void book(struct plane_result *planes, const struct figure *figure, double share,
                 bool unsettled)
{
    for (unsigned k = 0; k < PLANE_KINDS; k++) {
        struct open_test *test = &planes[k].open;
        if ((figure->planes & (1u << k)) == 0 || !test->done)
            continue;
        test->unsettled += unsettled;
        if (!unsettled && share > test->moved) {
            test->moved = share;
            test->moved_most = figure->title;
        }
    }
}

static enum status mark(struct figure *figure, double change, double share)
{
    char note[NOTE_SIZE], by[80];
    if (figure->scale > 0.0)
        (void)snprintf(by, sizeof by, "%.2g %s", change,
                       figure->unit[0] == '1' ? "" : figure->unit);
    else
        (void)snprintf(by, sizeof by, "%.2g %%", 100.0 * share);
    (void)snprintf(note, sizeof note,
                   "moves by %s when the open sides are moved twice as far away%s%s",
                   by, figure->note != NULL ? "; " : "",
                   figure->note != NULL ? figure->note : "");
    char *copy = mem_text(note);
    if (copy == NULL)
        return STATUS_MEMORY;
    mem_free(figure->note);
    figure->note = copy;
    figure->state = FIGURE_UNSETTLED;
    return STATUS_OK;
}

static enum status widen(const struct figure *near, const struct figure *far,
                         struct plane_result *planes, struct figure *figure)
{
    const double factor = factor_of(planes, figure->planes);
    if (figure->state == FIGURE_MISSING || factor == 0.0)
        return STATUS_OK;
    const bool gone = near->state == FIGURE_MISSING || far->state == FIGURE_MISSING;
    const double scale =
        figure->scale > 0.0 ? figure->scale : fmax(fabs(near->value), fabs(far->value));
    const double change = gone ? scale : fabs(far->value - near->value);
    const double share = change > 0.0 ? change / scale : 0.0;
    const bool unsettled = !(factor * share <= DOUBLING_SHARE);
    figure->uncertainty += factor * change;
    book(planes, figure, share, unsettled);
    return unsettled ? mark(figure, change, share) : STATUS_OK;
}

enum status doubling_figures(const struct figures *near, const struct figures *far,
                             struct plane_result *planes, struct figures *figures)
{
    enum status status = STATUS_OK;
    if (near->count != figures->count || far->count != figures->count)
        return STATUS_UNTRUSTED;
    for (size_t k = 0; k < figures->count && status == STATUS_OK; k++)
        status = widen(&near->items[k], &far->items[k], planes, &figures->items[k]);
    return status;
}

/* Adds to the uncertainty of one field, and to that of the ratio by its share. */
static void widen_field(const double *near, const double *far, double factor,
                        const double *field, double *uncertainty,
                        struct profile *profile)
{
    for (size_t k = 0; k < profile->count && field != NULL; k++) {
        const double more = factor * fabs(far[k] - near[k]);
        uncertainty[k] += more;
        if (profile->ratio_error_err != NULL && profile->defined[k])
            profile->ratio_error_err[k] += more / fabs(field[k]);
    }
}

void doubling_profile(const struct path *near, const struct path *far,
                      const struct plane_result *planes, struct profile *profile)
{
    if (!profile->present)
        return;
    widen_field(near->e_x[0], far->e_x[0], planes[PLANE_ELECTRIC_ALONG].open.factor,
                profile->e_x, profile->e_x_err, profile);
    widen_field(near->b_y[0], far->b_y[0], planes[PLANE_MAGNETIC_ALONG].open.factor,
                profile->b_y, profile->b_y_err, profile);
}

void doubling_probes(const struct probe_reading *moved, size_t count,
                     const struct plane_result *planes, struct probe_reading *probes)
{
    for (size_t k = 0; k < count; k++) {
        const double factor = planes[probes[k].plane].open.factor;
        probes[k].potential_err += factor * moved[k].potential_err;
        for (int i = 0; i < 2; i++)
            probes[k].field_err[i] += factor * moved[k].field_err[i];
    }
}
