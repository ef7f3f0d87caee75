/* SPDX-License-Identifier: GPL-3.0-or-later */

/* The subject of a diagonal entry is "name, name": that is where the names of the rows
 * are found again. */

#include "solver/figures_conductor.h"

#include <stdio.h>
#include <string.h>

#include "shared/constants.h"
#include "shared/mem.h"

static const char *const MATRIX = "capacitance_matrix";

static const struct figure_key *matrix_key(enum plane_kind kind)
{
    static const struct figure_key keys[2] = {
        {"capacitance_matrix", "capacitance matrix per metre", "F/m", 0.0},
        {"capacitance_matrix", "capacitance matrix", "F", 0.0}};
    return &keys[plane_kind_is_turned(kind)];
}

static void add_entry(struct maker *maker, const struct plane_solution *plane, size_t i,
                      size_t j)
{
    const struct capacitance *c = &plane->capacitance;
    const struct part *parts = plane->plane->parts;
    const char *names[2] = {parts[c->conductors.items[i].first].name,
                            parts[c->conductors.items[j].first].name};
    const size_t n = c->conductors.count;
    const size_t size = strlen(names[0]) + strlen(names[1]) + sizeof ", ";
    const double mean = 0.5 * (c->flux[i * n + j] + c->flux[j * n + i]);
    char *subject = MEM_NEW(size, char);
    if (subject == NULL) {
        maker->status = STATUS_MEMORY;
        return;
    }
    (void)snprintf(subject, size, "%s, %s", names[0], names[1]);
    struct figure_key key = *matrix_key(plane->plane->kind);
    key.scale = VACUUM_PERMITTIVITY * plane_depth(plane->plane->kind) *
                (c->flux[i * n + i] + c->flux[j * n + j]) / 2.0;
    maker_add(maker, key, VACUUM_PERMITTIVITY * plane_depth(plane->plane->kind) * mean,
              subject, NULL);
    mem_free(subject);
}

void figures_matrix(struct maker *maker, const struct plane_solution *plane)
{
    const struct conductors *all = &plane->capacitance.conductors;
    size_t rows = 0;
    char reason[80];
    for (size_t k = 0; k < all->count; k++)
        rows += !all->items[k].held;
    if (rows < 2)
        return;
    if (rows > MATRIX_CONDUCTORS) {
        (void)snprintf(reason, sizeof reason, "left out: %zu conductors, more than %d",
                       rows, (int)MATRIX_CONDUCTORS);
        maker_miss(maker, *matrix_key(plane->plane->kind),
                   plane_kind_key(plane->plane->kind), reason);
        return;
    }
    for (size_t i = 0; i < all->count; i++)
        for (size_t j = i; j < all->count && maker->status == STATUS_OK; j++)
            if (!all->items[i].held && !all->items[j].held)
                add_entry(maker, plane, i, j);
}

static struct figure_key force_key(enum axis axis, bool turned)
{
    static const struct figure_key keys[] = {
        [AXIS_X] = {"force_x", "force along x per metre", "N/m", 0.0},
        [AXIS_Y] = {"force_y", "force along y per metre", "N/m", 0.0},
        [AXIS_Z] = {"force_z", "force along z per metre", "N/m", 0.0}};
    if (turned)
        return (struct figure_key){"force_z", "force along z", "N", 0.0};
    return keys[axis];
}

static void add_force(struct maker *maker, const struct plane_solution *plane, size_t k,
                      int which)
{
    const enum plane_kind kind = plane->plane->kind;
    const struct conductor *conductor = &plane->capacitance.conductors.items[k];
    const struct force *force = &plane->capacitance.force[k];
    const double factor = VACUUM_PERMITTIVITY * plane_depth(kind);
    const bool half = conductor->cut[0] || conductor->cut[1];
    struct figure_key key =
        force_key(plane_kind_axis(kind, which), plane_kind_is_turned(kind));
    const char *reason = NULL;
    if (force->blocked)
        reason = "an insulator lies in the field round the part";
    if (conductor->cut[which])
        reason = "a mirror across this direction cuts the part; the forces on its two "
                 "halves cancel";
    key.scale = factor * force->gross;
    maker_add_or_miss(
        maker, key, factor * (which == 0 ? force->value.a : force->value.b),
        plane->plane->parts[conductor->first].name,
        half ? "on the half of the part inside the region" : NULL, reason);
}

void figures_force(struct maker *maker, const struct plane_solution *plane)
{
    const struct conductors *all = &plane->capacitance.conductors;
    for (size_t k = 0; k < all->count; k++) {
        if (all->items[k].held)
            continue;
        add_force(maker, plane, k, 0);
        if (!plane_kind_is_turned(plane->plane->kind))
            add_force(maker, plane, k, 1);
    }
}

bool matrix_find(const struct figures *figures, enum plane_kind kind,
                 struct matrix_view *view)
{
    size_t entries = 0;
    *view = (struct matrix_view){0};
    for (size_t k = 0; k < figures->count; k++) {
        const struct figure *f = &figures->items[k];
        if (f->planes != plane_bit(kind) || strcmp(f->name, MATRIX) != 0)
            continue;
        if (entries++ == 0)
            view->first = f;
    }
    while (view->count * (view->count + 1) / 2 < entries)
        view->count++;
    return view->count >= 2;
}

const struct figure *matrix_entry(const struct matrix_view *view, size_t i, size_t j)
{
    const size_t row = i < j ? i : j, column = i < j ? j : i;
    return &view->first[row * view->count - row * (row + 1) / 2 + column];
}

void matrix_name(const struct matrix_view *view, size_t i, char *text, size_t size)
{
    const char *subject = matrix_entry(view, i, i)->subject;
    const size_t length = subject != NULL ? strlen(subject) / 2 - 1 : 0;
    (void)snprintf(text, size, "%.*s", (int)length, subject != NULL ? subject : "");
}
