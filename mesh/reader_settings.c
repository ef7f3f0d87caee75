/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What is asked of the result: probes, limits, the reference point and the lattice. */
#include <math.h>
#include <stdio.h>
#include <string.h>

#include "mesh/reader_sections.h"

#define LATTICE_POINTS_MAX 1e8  /* 48 bytes each: about 5 GB */
#define LATTICE_WHOLE      1e-6 /* how far (to - from)/step may be from a whole number */

static const struct wanted wanted_field = {{1, 1, -3, -1, 0},
                                           "an electric field such as 2 kV/mm"};

/* Coordinates by axis key; missing ones keep their value. */
static bool read_coordinates(struct reader *reader, const struct node *node, double *x,
                             double *y, double *z)
{
    double *const values[] = {[AXIS_X] = x, [AXIS_Y] = y, [AXIS_Z] = z};
    bool ok = true;
    for (int k = AXIS_X; k <= AXIS_Z; k++) {
        const char *key = axis_key((enum axis)k);
        const struct node *item = node_find(node, key);
        if (item != NULL)
            ok = reader_quantity(reader, item, key, &wanted_length, values[k]) && ok;
    }
    return ok;
}

static bool read_plane_name(struct reader *reader, const struct node *node,
                            enum plane_kind *plane)
{
    for (int k = 0; node->kind == NODE_SCALAR && k < PLANE_KINDS; k++) {
        if (strcmp(node->text, plane_kind_key((enum plane_kind)k)) != 0)
            continue;
        *plane = (enum plane_kind)k;
        return true;
    }
    char names[PLANE_KINDS * 20] = "one of ";
    for (int k = 0; k < PLANE_KINDS; k++) {
        const size_t used = strlen(names);
        (void)snprintf(names + used, sizeof names - used, "%s%s", k > 0 ? ", " : "",
                       plane_kind_key((enum plane_kind)k));
    }
    return reader_expected(reader, node, "plane", names);
}

static void read_probe(struct reader *reader, const struct node *node)
{
    static const char *const keys[] = {"x", "y", "z", "plane", NULL};
    struct geometry *geometry = reader->geometry;
    struct probe probe = {.place = node->place};
    const struct node *plane = node_find(node, "plane");
    if (node->kind != NODE_MAPPING) {
        reader_expected(reader, node, "probes",
                        "coordinates such as {z: 0 mm, x: 2 mm}");
        return;
    }
    bool ok = reader_mapping(reader, node, "probes", keys);
    ok = read_coordinates(reader, node, &probe.x, &probe.y, &probe.z) && ok;
    probe.has_z = node_find(node, "z") != NULL;
    probe.has_plane = plane != NULL;
    if (plane != NULL)
        ok = read_plane_name(reader, plane, &probe.plane) && ok;
    if (!ok)
        return;
    struct probe *grown = reader_grow(reader, geometry->probes, geometry->probe_count,
                                      sizeof(struct probe));
    if (grown == NULL)
        return;
    geometry->probes = grown;
    geometry->probes[geometry->probe_count++] = probe;
}

void reader_probes(struct reader *reader, const struct node *node)
{
    if (node == NULL || node_is_empty(node) || !reader_list(reader, node, "probes"))
        return;
    for (size_t k = 0; k < node->count && !reader->out_of_memory; k++)
        read_probe(reader, node->items[k]);
}

static const struct wanted *wanted_for_limit(const struct limit_rule *rule)
{
    if (strcmp(rule->unit, "m") == 0)
        return &wanted_length;
    if (strcmp(rule->unit, "V/m") == 0)
        return &wanted_field;
    return strcmp(rule->unit, "rad") == 0 ? &wanted_angle : &wanted_number;
}

static void read_limit(struct reader *reader, const struct node *node,
                       const struct limit_rule *rule, struct limit *limit)
{
    double angle;
    bool is_angle = strcmp(rule->unit, "rad") == 0;
    limit->place = node->place;
    limit->present =
        (!is_angle || reader_angle(reader, node, rule->key, &angle)) &&
        reader_positive(reader, node, rule->key, wanted_for_limit(rule), &limit->value);
}

void reader_limits(struct reader *reader, const struct node *node)
{
    const char *keys[LIMIT_KINDS + 1] = {NULL};
    for (int k = 0; k < LIMIT_KINDS; k++)
        keys[k] = geometry_limit_rule((enum limit_kind)k)->key;
    if (node == NULL)
        return;
    (void)reader_mapping(reader, node, "limits", keys);
    for (int k = 0; k < LIMIT_KINDS; k++) {
        const struct node *item = node_find(node, keys[k]);
        if (item != NULL)
            read_limit(reader, item, geometry_limit_rule((enum limit_kind)k),
                       &reader->geometry->limits[k]);
    }
}

void reader_reference(struct reader *reader, const struct node *node)
{
    static const char *const keys[] = {"x", "y", "z", NULL};
    struct geometry *geometry = reader->geometry;
    if (node == NULL || !reader_mapping(reader, node, "reference", keys))
        return;
    geometry->has_reference =
        read_coordinates(reader, node, &geometry->reference_x, &geometry->reference_y,
                         &geometry->reference_z);
}

/* [from, to, step] with a whole number of steps. */
static bool read_lattice_axis(struct reader *reader, const struct node *node,
                              const char *key, struct lattice_axis *axis)
{
    double *const values[] = {&axis->from, &axis->to, &axis->step};
    bool ok = true;
    if (node->kind != NODE_SEQUENCE || node->count != 3)
        return reader_expected(reader, node, key, "three lengths [from, to, step]");
    for (size_t k = 0; k < 3; k++)
        ok = reader_quantity(reader, node->items[k], key, &wanted_length, values[k]) &&
             ok;
    if (!ok)
        return false;
    const double steps =
        axis->step > 0 ? (axis->to - axis->from) / axis->step : (double)INFINITY;
    if (!(axis->from <= axis->to) || !(steps < LATTICE_POINTS_MAX))
        return mistakes_add(&reader->mistakes, node->place,
                            "the lattice along %s cannot be built; expected from not "
                            "above to and a step greater than 0; found %g mm to %g mm "
                            "in steps of %g mm",
                            key, axis->from * 1e3, axis->to * 1e3, axis->step * 1e3);
    if (fabs(steps - round(steps)) > LATTICE_WHOLE)
        return mistakes_add(&reader->mistakes, node->place,
                            "the lattice along %s does not end on a point; expected a "
                            "whole number of steps; found %.9g steps",
                            key, steps);
    axis->count = (int)round(steps) + 1;
    return true;
}

void reader_lattice(struct reader *reader, const struct node *node)
{
    static const char *const keys[] = {"x", "y", "z", NULL};
    struct lattice *lattice = &reader->geometry->lattice;
    if (node == NULL)
        return;
    bool ok = reader_mapping(reader, node, "lattice", keys);
    double points = 1;
    for (int k = AXIS_X; k <= AXIS_Z; k++) {
        const struct node *item = node_find(node, keys[k]);
        if (item == NULL) {
            (void)mistakes_add(&reader->mistakes, node->place,
                               "the lattice lacks an axis; expected x, y and z, each "
                               "[from, to, step]; missing: %s",
                               keys[k]);
            return;
        }
        ok = read_lattice_axis(reader, item, keys[k], &lattice->axes[k]) && ok;
        points *= lattice->axes[k].count;
    }
    if (points > LATTICE_POINTS_MAX)
        ok = mistakes_add(&reader->mistakes, node->place,
                          "the lattice has too many points; expected at most %g; found "
                          "%g",
                          LATTICE_POINTS_MAX, points);
    lattice->place = node->place;
    lattice->present = ok;
}
