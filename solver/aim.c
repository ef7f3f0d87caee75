/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "solver/aim.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

#include "shared/mem.h"
#include "solver/probe_reading.h"
#include "solver/verdict.h"

enum { NAME_SIZE = 300 };

static enum status append(struct aims *aims, struct aim aim)
{
    void *array = aims->items;
    enum status status =
        mem_grow(&array, &aims->capacity, aims->count + 1, sizeof *aims->items);
    aims->items = array;
    if (status == STATUS_OK)
        aims->items[aims->count++] = aim;
    return status;
}

/* All figures of that name that some plane gives; those that do not stand only
 * if `all`. */
static enum status append_named(const struct result *result, const char *name,
                                double allowed, bool all, struct aims *aims)
{
    enum status status = STATUS_OK;
    for (size_t k = 0; k < result->figures.count && status == STATUS_OK; k++) {
        const struct figure *f = &result->figures.items[k];
        if (strcmp(f->name, name) != 0)
            continue;
        const bool stands = f->state == FIGURE_GOOD && f->value != 0.0;
        if (all || stands)
            status = append(
                aims,
                (struct aim){.index = k, .allowed = allowed, .planes = f->planes});
    }
    return status;
}

static enum status choose_limits(const struct result *result, struct aims *aims)
{
    enum status status = STATUS_OK;
    for (int k = 0; k < LIMIT_KINDS && status == STATUS_OK; k++) {
        const struct limit *limit = &result->geometry->limits[k];
        if (!limit->present)
            continue;
        aims->of_limits = true;
        status = append_named(result, verdict_figure_name((enum limit_kind)k),
                              limit->value, true, aims);
    }
    return status;
}

static enum status choose_main(const struct result *result, struct aims *aims)
{
    static const char *const names[] = {"centre_pass_speed",
                                        "balanced_speed",
                                        "flat_length",
                                        "ratio_error_peak_along",
                                        "ratio_error_peak_across",
                                        "effective_length_electric",
                                        "effective_length_magnetic",
                                        "centre_electric_field",
                                        "centre_flux_density",
                                        "centre_electric_field_across",
                                        "centre_flux_density_across",
                                        "capacitance"};
    enum status status = STATUS_OK;
    for (size_t k = 0; k < sizeof names / sizeof *names && status == STATUS_OK; k++)
        status = append_named(result, names[k], 0.0, false, aims);
    for (size_t k = 0; k < result->probe_count && status == STATUS_OK; k++) {
        const struct probe_reading *r = &result->probes[k];
        if (r->part < 0 && hypot(r->field[0], r->field[1]) > 0.0)
            status = append(aims, (struct aim){.is_probe = true,
                                               .index = k,
                                               .planes = plane_bit(r->plane)});
    }
    return status;
}

enum status aims_choose(const struct result *result, struct aims *aims)
{
    memset(aims, 0, sizeof *aims);
    enum status status = choose_limits(result, aims);
    if (status == STATUS_OK && !aims->of_limits)
        status = choose_main(result, aims);
    if (status == STATUS_OK)
        aims_update(aims, result);
    return status;
}

static void set_size(struct aim *aim, double value, double scale, double uncertainty)
{
    aim->of_limit = aim->allowed > fabs(value);
    aim->size = fmax(fmax(fabs(value), scale), aim->allowed);
    aim->reached = uncertainty > 0.0 ? uncertainty / aim->size : 0.0;
}

void aims_update(struct aims *aims, const struct result *result)
{
    for (size_t k = 0; k < aims->count; k++) {
        struct aim *aim = &aims->items[k];
        if (aim->is_probe) {
            const struct probe_reading *r = &result->probes[aim->index];
            aim->stands = true;
            set_size(aim, hypot(r->field[0], r->field[1]), 0.0,
                     fmax(r->field_err[0], r->field_err[1]));
        } else {
            const struct figure *f = &result->figures.items[aim->index];
            aim->stands = f->state == FIGURE_GOOD;
            set_size(aim, f->value, aim->allowed > 0.0 ? 0.0 : f->scale,
                     f->uncertainty);
        }
    }
}

bool aim_is_open(const struct aim *aim, double within)
{
    return aim->stands ? aim->reached > within : aim->stood;
}

double aims_worst(const struct aims *aims)
{
    double worst = 0.0;
    for (size_t k = 0; k < aims->count; k++)
        if (aims->items[k].stands)
            worst = fmax(worst, aims->items[k].reached);
    return worst;
}

enum status aims_read(const struct aims *aims, const struct view *view,
                      const struct figures *figures, struct vec2 *values)
{
    /* Twice the same view: the readings as they are. */
    const struct view pair[2] = {*view, *view};
    struct probe_reading *probes = NULL;
    size_t count = 0;
    enum status status = probes_read(pair, 2, &probes, &count);
    for (size_t k = 0; k < aims->count && status == STATUS_OK; k++) {
        const size_t n = aims->items[k].index;
        if (aims->items[k].is_probe)
            values[k] = (struct vec2){probes[n].field[0], probes[n].field[1]};
        else if (figures->items[n].state != FIGURE_MISSING)
            values[k] = (struct vec2){figures->items[n].value, 0.0};
        else
            values[k] = (struct vec2){(double)NAN, 0.0};
    }
    mem_free(probes);
    return status;
}

char *aim_name(const struct aim *aim, const struct result *result)
{
    char name[NAME_SIZE];
    if (aim->is_probe) {
        const struct probe_reading *r = &result->probes[aim->index];
        (void)snprintf(name, sizeof name, "field at probe %zu (%s)", r->probe + 1,
                       plane_kind_key(r->plane));
    } else {
        const struct figure *f = &result->figures.items[aim->index];
        (void)snprintf(name, sizeof name, f->subject != NULL ? "%s (%s)" : "%s",
                       f->title, f->subject);
    }
    return mem_text(name);
}

void aims_free(struct aims *aims)
{
    mem_free(aims->items);
    memset(aims, 0, sizeof *aims);
}
