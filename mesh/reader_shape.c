/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Shapes: box, disc and outline, with rounding and turn. Parts and cuts write them the
 * same way. */
#include <stdio.h>

#include "mesh/reader_sections.h"
#include "shared/mem.h"

/* STATUS_SIZE from the shape room means that the numbers do not make a shape. */
static bool accept(struct reader *reader, enum status status)
{
    if (status == STATUS_MEMORY)
        reader_no_memory(reader);
    return status == STATUS_OK;
}

static bool read_rounding(struct reader *reader, const struct node *node,
                          double *rounding)
{
    const struct node *item = node_find(node, "rounding");
    *rounding = 0;
    if (item == NULL)
        return true;
    if (!reader_quantity(reader, item, "rounding", &wanted_length, rounding))
        return false;
    return *rounding >= 0 ||
           reader_expected(reader, item, "rounding", "a length of 0 or more");
}

static bool read_box(struct reader *reader, const struct node *node,
                     enum plane_kind kind, double rounding, struct shape *shape)
{
    const char *const keys[] = {axis_key(plane_kind_axis(kind, 0)),
                                axis_key(plane_kind_axis(kind, 1)), NULL};
    double low[2] = {0, 0}, high[2] = {0, 0};
    bool ok = reader_mapping(reader, node, "box", keys);
    for (int k = 0; k < 2; k++) {
        const struct node *item = node_find(node, keys[k]);
        if (item == NULL)
            return mistakes_add(&reader->mistakes, node->place,
                                "the box lacks an axis; expected {%s: [from, to], %s: "
                                "[from, to]}; missing: %s",
                                keys[0], keys[1], keys[k]);
        ok = reader_interval(reader, item, keys[k], &low[k], &high[k]) && ok;
    }
    if (!ok)
        return false;
    enum status status = shape_init_box(shape, (struct vec2){low[0], low[1]},
                                        (struct vec2){high[0], high[1]}, rounding);
    if (status == STATUS_SIZE)
        return mistakes_add(
            &reader->mistakes, node->place,
            "the box cannot be built; expected sides of some length and "
            "a rounding of at most half the shorter side; found %g mm "
            "by %g mm, rounding %g mm",
            (high[0] - low[0]) * 1e3, (high[1] - low[1]) * 1e3, rounding * 1e3);
    return accept(reader, status);
}

static bool read_disc(struct reader *reader, const struct node *node,
                      enum plane_kind kind, struct shape *shape)
{
    const char *const keys[] = {axis_key(plane_kind_axis(kind, 0)),
                                axis_key(plane_kind_axis(kind, 1)), "radius", NULL};
    double numbers[3] = {0, 0, 0};
    bool ok = reader_mapping(reader, node, "disc", keys);
    for (int k = 0; k < 3; k++) {
        const struct node *item = node_find(node, keys[k]);
        if (item == NULL)
            return mistakes_add(&reader->mistakes, node->place,
                                "the disc is not complete; expected {%s: ..., %s: ..., "
                                "radius: ...}; missing: %s",
                                keys[0], keys[1], keys[k]);
        ok =
            (k < 2 ? reader_quantity(reader, item, keys[k], &wanted_length, &numbers[k])
                   : reader_positive(reader, item, keys[k], &wanted_length,
                                     &numbers[k])) &&
            ok;
    }
    if (!ok)
        return false;
    enum status status =
        shape_init_disc(shape, (struct vec2){numbers[0], numbers[1]}, numbers[2]);
    if (status == STATUS_SIZE)
        return mistakes_add(&reader->mistakes, node->place,
                            "the disc cannot be built; found a radius of %g mm",
                            numbers[2] * 1e3);
    return accept(reader, status);
}

static bool report_outline(struct reader *reader, const struct node *node,
                           const struct vec2 *points, size_t count, size_t bad)
{
    struct place place = node->place;
    if (count < 3)
        return mistakes_add(
            &reader->mistakes, place,
            "the outline has too few points; expected at least 3; found "
            "%zu",
            count);
    if (bad >= count)
        bad = 0;
    if (node->kind == NODE_SEQUENCE)
        place = node->items[bad]->place;
    return mistakes_add(
        &reader->mistakes, place,
        "the outline cannot be built; expected points all different, "
        "lines that do not cross and a rounding that fits every corner; "
        "found a fault at point %zu (%g mm, %g mm)",
        bad + 1, points[bad].a * 1e3, points[bad].b * 1e3);
}

static bool read_outline(struct reader *reader, const struct node *node,
                         double rounding, struct shape *shape)
{
    struct vec2 *points = NULL;
    size_t count = 0, bad = 0;
    if (!reader_outline(reader, node, &points, &count))
        return false;
    enum status status = shape_init_polygon(shape, points, count, rounding, &bad);
    bool ok = status == STATUS_SIZE ? report_outline(reader, node, points, count, bad)
                                    : accept(reader, status);
    mem_free(points);
    return ok;
}

bool reader_shape(struct reader *reader, const struct node *node, enum plane_kind kind,
                  struct shape *shape)
{
    const struct node *box = node_find(node, "box");
    const struct node *disc = node_find(node, "disc");
    const struct node *outline = node_find(node, "outline");
    int count = (box != NULL) + (disc != NULL) + (outline != NULL);
    double rounding;
    *shape = (struct shape){0};
    if (count != 1)
        return mistakes_add(&reader->mistakes, node->place,
                            "the shape is not clear; expected one of \"box\", \"disc\" "
                            "and \"outline\"; found %s",
                            count == 0 ? "none" : "several");
    if (disc != NULL && node_find(node, "rounding") != NULL)
        return mistakes_add(&reader->mistakes, node_find(node, "rounding")->place,
                            "a disc has no corners; expected \"rounding\" only with "
                            "\"box\" or \"outline\"");
    if (!read_rounding(reader, node, &rounding))
        return false;
    bool ok = box != NULL    ? read_box(reader, box, kind, rounding, shape)
              : disc != NULL ? read_disc(reader, disc, kind, shape)
                             : read_outline(reader, outline, rounding, shape);
    if (!ok)
        shape_free(shape);
    return ok;
}

bool reader_turn(struct reader *reader, const struct node *node, enum plane_kind kind,
                 struct shape *shape)
{
    static const char *const keys[] = {"angle", "about", NULL};
    const struct node *turn = node_find(node, "turn");
    struct vec2 low, high;
    double angle;
    if (turn == NULL)
        return true;
    shape_bounds(shape, &low, &high);
    struct vec2 about = vec2_scale(vec2_add(low, high), 0.5);
    if (turn->kind == NODE_MAPPING) {
        const struct node *point = node_find(turn, "about");
        if (!reader_mapping(reader, turn, "turn", keys) ||
            (point != NULL && !reader_point(reader, point, "about", kind, &about)))
            return false;
        const struct node *given = node_find(turn, "angle");
        if (given == NULL)
            return mistakes_add(&reader->mistakes, turn->place,
                                "\"turn\" lacks \"angle\"; expected an angle such as 3 "
                                "deg");
        turn = given;
    }
    if (!reader_angle(reader, turn, "turn", &angle))
        return false;
    shape_turn(shape, angle, about);
    return true;
}
