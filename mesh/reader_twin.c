/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Twins of parts: mirror images that share everything but the potential and the name. */
#include <stdio.h>
#include <string.h>

#include "mesh/reader_sections.h"
#include "shared/mem.h"

static bool flip_axis(struct reader *reader, const struct node *node,
                      enum plane_kind plane, bool *flip)
{
    const int axes = plane_kind_is_turned(plane) ? 1 : 2; /* r has no other side */
    for (int k = 0; node->kind == NODE_SCALAR && k < axes; k++) {
        if (strcmp(node->text, axis_key(plane_kind_axis(plane, k))) != 0)
            continue;
        flip[k] = true;
        return true;
    }
    if (axes == 1)
        return reader_expected(reader, node, "across",
                               "z, as a part of a turned plane has no image across r");
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

/* The potential of a twin, where it has one: its own, or that of the original. */
static bool read_twin_potential(struct reader *reader, const struct node *node,
                                enum plane_kind plane, const struct part *original,
                                struct linear *to)
{
    if (node == NULL)
        return copy_potential(reader, &original->potential, to);
    if (original->kind != PART_FLOATING && original->kind != PART_INSULATOR)
        return reader_potential(reader, node, "potential", plane, false, to);
    return mistakes_add(&reader->mistakes, node->place,
                        "the twin of this part takes no potential; expected \"%s\" as "
                        "that of the original, and nothing here",
                        part_kind_key(original->kind));
}

static bool fill_twin(struct reader *reader, const struct node *node,
                      enum plane_kind plane, const struct part *original,
                      struct part *twin)
{
    bool flip[2] = {false, false};
    const struct node *name = node_find(node, "name");
    if (!read_across(reader, node, plane, flip))
        return false;
    bool ok = name != NULL
                  ? reader_name(reader, name, "name", &twin->name)
                  : default_twin_name(reader, original->name, plane, flip, &twin->name);
    ok = read_twin_potential(reader, node_find(node, "potential"), plane, original,
                             &twin->potential) &&
         ok;
    twin->kind = original->kind;
    twin->charge = original->charge;
    twin->permittivity = original->permittivity;
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
    struct part *twin = reader_add_part(reader, node, plane);
    return twin != NULL &&
           fill_twin(reader, node, plane->kind, &plane->parts[original], twin);
}

bool reader_twins(struct reader *reader, const struct node *node, struct plane *plane,
                  size_t original)
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
