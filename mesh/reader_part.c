/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Parts: what they are, their potential, their shape, and their twins (mirror images
 * that share everything but the potential and the name). */
#include <stdio.h>
#include <string.h>

#include "mesh/reader_sections.h"
#include "shared/mem.h"

#define PARTS_MAX 1000 /* of one plane, twins included */

static const enum part_kind part_kinds[] = {PART_ELECTRODE, PART_GUARD, PART_CLAMP,
                                            PART_POLE};
#define PART_KIND_COUNT (sizeof part_kinds / sizeof part_kinds[0])

static bool kind_fits(enum part_kind part, enum plane_kind plane)
{
    return part == PART_CLAMP || (part == PART_POLE) == plane_kind_is_magnetic(plane);
}

static bool read_kind(struct reader *reader, const struct node *node,
                      enum plane_kind plane, struct part *part)
{
    const struct node *found = NULL;
    int count = 0;
    for (size_t k = 0; k < PART_KIND_COUNT; k++) {
        const struct node *item = node_find(node, part_kind_key(part_kinds[k]));
        if (item == NULL)
            continue;
        found = item;
        part->kind = part_kinds[k];
        count++;
    }
    const char *fitting = plane_kind_is_magnetic(plane)
                              ? "\"pole\" or \"clamp\""
                              : "\"electrode\", \"guard\" or \"clamp\"";
    if (count != 1)
        return mistakes_add(&reader->mistakes, node->place,
                            "the kind of the part \"%.60s\" is not clear; expected one "
                            "of %s; found %s",
                            part->name, fitting, count == 0 ? "none" : "several");
    if (!kind_fits(part->kind, plane))
        return mistakes_add(&reader->mistakes, found->place,
                            "a part of this kind does not belong into the plane "
                            "\"%s\"; expected %s; found \"%s\"",
                            plane_kind_key(plane), fitting, part_kind_key(part->kind));
    return reader_potential(reader, found, part_kind_key(part->kind), plane,
                            part->kind == PART_CLAMP, &part->potential);
}

static bool read_cut(struct reader *reader, const struct node *node,
                     enum plane_kind plane, struct shape *shape)
{
    static const char *const keys[] = {"box",      "disc", "outline",
                                       "rounding", "turn", NULL};
    struct shape cut;
    if (!reader_mapping(reader, node, "cut", keys) ||
        !reader_shape(reader, node, plane, &cut))
        return false;
    bool ok = reader_turn(reader, node, plane, &cut);
    if (ok) {
        enum status status = shape_cut(shape, &cut);
        ok = status == STATUS_OK;
        if (status == STATUS_MEMORY)
            reader_no_memory(reader);
        else if (!ok)
            (void)mistakes_add(&reader->mistakes, node->place,
                               "this shape cannot be cut out of the part");
    }
    shape_free(&cut);
    return ok;
}

/* `cut: {...}` or a list of them. */
static bool read_cuts(struct reader *reader, const struct node *node,
                      enum plane_kind plane, struct shape *shape)
{
    const struct node *cut = node_find(node, "cut");
    if (cut == NULL)
        return true;
    if (cut->kind != NODE_SEQUENCE)
        return read_cut(reader, cut, plane, shape);
    bool ok = true;
    for (size_t k = 0; k < cut->count; k++)
        ok = read_cut(reader, cut->items[k], plane, shape) && ok;
    return ok;
}

static bool read_shape(struct reader *reader, const struct node *node,
                       enum plane_kind plane, struct shape *shape)
{
    return reader_shape(reader, node, plane, shape) &&
           read_cuts(reader, node, plane, shape) &&
           reader_turn(reader, node, plane, shape); /* cuts turn with the part */
}

static bool read_edge_radius(struct reader *reader, const struct node *node,
                             double *edge_radius)
{
    const struct node *item = node_find(node, "edge_radius");
    return item == NULL ||
           reader_positive(reader, item, "edge_radius", &wanted_length, edge_radius);
}

/* A new part at the end of the plane; NULL if memory ran out or there are too many. */
static struct part *add_part(struct reader *reader, const struct node *node,
                             struct plane *plane)
{
    if (plane->part_count == PARTS_MAX) {
        (void)mistakes_add(&reader->mistakes, node->place,
                           "too many parts in one plane; expected at most %d",
                           PARTS_MAX);
        return NULL;
    }
    struct part *grown =
        reader_grow(reader, plane->parts, plane->part_count, sizeof(struct part));
    if (grown == NULL)
        return NULL;
    plane->parts = grown;
    return &plane->parts[plane->part_count++];
}

static bool flip_axis(struct reader *reader, const struct node *node,
                      enum plane_kind plane, bool *flip)
{
    for (int k = 0; node->kind == NODE_SCALAR && k < 2; k++) {
        if (strcmp(node->text, axis_key(plane_kind_axis(plane, k))) != 0)
            continue;
        flip[k] = true;
        return true;
    }
    char expected[32];
    (void)snprintf(expected, sizeof expected, "%s or %s",
                   axis_key(plane_kind_axis(plane, 0)),
                   axis_key(plane_kind_axis(plane, 1)));
    return reader_expected(reader, node, "across", expected);
}

/* `across: x` or `across: [z, x]`. */
static bool read_across(struct reader *reader, const struct node *node,
                        enum plane_kind plane, bool *flip)
{
    const struct node *across = node_find(node, "across");
    if (across == NULL)
        return mistakes_add(&reader->mistakes, node->place,
                            "the twin lacks \"across\"; expected the axis whose "
                            "coordinate changes sign");
    if (across->kind != NODE_SEQUENCE)
        return flip_axis(reader, across, plane, flip);
    bool ok = across->count > 0 ||
              reader_expected(reader, across, "across", "at least one axis");
    for (size_t k = 0; k < across->count; k++)
        ok = flip_axis(reader, across->items[k], plane, flip) && ok;
    return ok;
}

static bool default_twin_name(struct reader *reader, const char *of,
                              enum plane_kind plane, const bool *flip, char **name)
{
    size_t size = strlen(of) + 32;
    *name = mem_new(size, 1);
    if (*name == NULL)
        return reader_no_memory(reader);
    (void)snprintf(*name, size, "%s (twin across %s%s%s)", of,
                   flip[0] ? axis_key(plane_kind_axis(plane, 0)) : "",
                   flip[0] && flip[1] ? ", " : "",
                   flip[1] ? axis_key(plane_kind_axis(plane, 1)) : "");
    return true;
}

static bool copy_potential(struct reader *reader, const struct linear *from,
                           struct linear *to)
{
    size_t count = reader->geometry->supply_count;
    to->constant = from->constant;
    to->gain = MEM_NEW(count, double);
    if (to->gain == NULL)
        return reader_no_memory(reader);
    memcpy(to->gain, from->gain, count * sizeof(double));
    return true;
}

static bool fill_twin(struct reader *reader, const struct node *node,
                      enum plane_kind plane, const struct part *original,
                      struct part *twin)
{
    bool flip[2] = {false, false};
    const struct node *name = node_find(node, "name");
    const struct node *potential = node_find(node, "potential");
    if (!read_across(reader, node, plane, flip))
        return false;
    bool ok = name != NULL
                  ? reader_name(reader, name, "name", &twin->name)
                  : default_twin_name(reader, original->name, plane, flip, &twin->name);
    ok = (potential != NULL
              ? reader_potential(reader, potential, "potential", plane, false,
                                 &twin->potential)
              : copy_potential(reader, &original->potential, &twin->potential)) &&
         ok;
    twin->kind = original->kind;
    twin->edge_radius = original->edge_radius;
    twin->place = node->place;
    if (!ok)
        return false;
    if (shape_copy(&twin->shape, &original->shape) != STATUS_OK)
        return reader_no_memory(reader);
    shape_mirror(&twin->shape, flip[0], flip[1]);
    return true;
}

static bool read_twin(struct reader *reader, const struct node *node,
                      struct plane *plane, size_t original)
{
    static const char *const keys[] = {"across", "potential", "name", NULL};
    if (!reader_mapping(reader, node, "twin", keys))
        return false;
    struct part *twin = add_part(reader, node, plane);
    return twin != NULL &&
           fill_twin(reader, node, plane->kind, &plane->parts[original], twin);
}

static bool read_twins(struct reader *reader, const struct node *node,
                       struct plane *plane, size_t original)
{
    const struct node *twin = node_find(node, "twin");
    if (twin == NULL)
        return true;
    if (twin->kind != NODE_SEQUENCE)
        return read_twin(reader, twin, plane, original);
    bool ok = true;
    for (size_t k = 0; k < twin->count; k++)
        ok = read_twin(reader, twin->items[k], plane, original) && ok;
    return ok;
}

static bool read_part(struct reader *reader, const struct node *key,
                      const struct node *node, struct plane *plane)
{
    static const char *const keys[] = {
        "electrode", "guard", "clamp", "pole",        "box",  "disc", "outline",
        "rounding",  "turn",  "cut",   "edge_radius", "twin", NULL};
    char what[80];
    size_t index = plane->part_count;
    struct part *part = add_part(reader, node, plane);
    if (part == NULL || !reader_name(reader, key, "parts", &part->name))
        return false;
    part->place = key->place;
    (void)snprintf(what, sizeof what, "%.60s", part->name);
    bool ok = reader_mapping(reader, node, what, keys);
    ok = read_kind(reader, node, plane->kind, part) && ok;
    ok = read_shape(reader, node, plane->kind, &part->shape) && ok;
    ok = read_edge_radius(reader, node, &part->edge_radius) && ok;
    return ok && read_twins(reader, node, plane, index);
}

void reader_parts(struct reader *reader, const struct node *node, struct plane *plane)
{
    if (node_is_empty(node))
        return;
    if (node->kind != NODE_MAPPING) {
        reader_expected(reader, node, "parts", "names with parts");
        return;
    }
    for (size_t k = 0; k < node->count && !reader->out_of_memory; k++)
        (void)read_part(reader, node->keys[k], node->items[k], plane);
}
