/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Parts: what they are, what is given of them (a potential, a charge or a permittivity)
 * and their shape. Their twins are read in reader_twin.c. */
#include <stdio.h>

#include "mesh/reader_sections.h"
#include "shared/mem.h"

#define PARTS_MAX 1000 /* of one plane, twins included */

static const enum part_kind part_kinds[] = {
    PART_ELECTRODE, PART_GUARD, PART_CLAMP, PART_POLE, PART_FLOATING, PART_INSULATOR};
#define PART_KIND_COUNT (sizeof part_kinds / sizeof part_kinds[0])

static bool kind_fits(enum part_kind part, enum plane_kind plane)
{
    return part == PART_CLAMP || (part == PART_POLE) == plane_kind_is_magnetic(plane);
}

static const struct wanted wanted_charge = {{0, 0, 1, 1, 0}, "a charge such as 0 C"};
static const struct wanted wanted_line_charge = {{-1, 0, 1, 1, 0},
                                                 "a charge per metre such as 0 C/m"};

static bool read_permittivity(struct reader *reader, const struct node *node,
                              double *permittivity)
{
    if (!reader_quantity(reader, node, "insulator", &wanted_number, permittivity))
        return false;
    return *permittivity >= 1 ||
           reader_expected(reader, node, "insulator",
                           "a relative permittivity of 1 or more, such as 4.5");
}

/* What the key of the kind carries. */
static bool read_given(struct reader *reader, const struct node *node,
                       enum plane_kind plane, struct part *part)
{
    const char *what = part_kind_key(part->kind);
    if (part->kind == PART_INSULATOR)
        return read_permittivity(reader, node, &part->permittivity) &&
               reader_zero_potential(reader, &part->potential);
    if (part->kind == PART_FLOATING)
        return reader_quantity(reader, node, what,
                               plane_kind_is_turned(plane) ? &wanted_charge
                                                           : &wanted_line_charge,
                               &part->charge) &&
               reader_zero_potential(reader, &part->potential);
    return reader_potential(reader, node, what, plane, part->kind == PART_CLAMP,
                            &part->potential);
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
                              : "\"electrode\", \"guard\", \"clamp\", "
                                "\"floating\" or \"insulator\"";
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
    return read_given(reader, found, plane, part);
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

struct part *reader_add_part(struct reader *reader, const struct node *node,
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

static bool read_part(struct reader *reader, const struct node *key,
                      const struct node *node, struct plane *plane)
{
    static const char *const keys[] = {"electrode",   "guard",     "clamp", "pole",
                                       "floating",    "insulator", "box",   "disc",
                                       "outline",     "rounding",  "turn",  "cut",
                                       "edge_radius", "twin",      NULL};
    char what[80];
    size_t index = plane->part_count;
    struct part *part = reader_add_part(reader, node, plane);
    if (part == NULL || !reader_name(reader, key, "parts", &part->name))
        return false;
    part->place = key->place;
    (void)snprintf(what, sizeof what, "%.60s", part->name);
    bool ok = reader_mapping(reader, node, what, keys);
    ok = read_kind(reader, node, plane->kind, part) && ok;
    ok = read_shape(reader, node, plane->kind, &part->shape) && ok;
    ok = read_edge_radius(reader, node, &part->edge_radius) && ok;
    return ok && reader_twins(reader, node, plane, index);
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
