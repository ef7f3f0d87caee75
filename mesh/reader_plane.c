/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Planes: the region, what happens at its sides, and the parts inside. */
#include <math.h>
#include <string.h>

#include "mesh/reader_sections.h"

#define ON_AXIS 1e-9 /* of the extent in r: rounding of the arithmetic in the file */

/* The r of a turned plane: a distance, so not negative. */
static bool check_radii(struct reader *reader, const struct node *node, double *from,
                        double to)
{
    if (fabs(*from) <= ON_AXIS * (to - *from))
        *from = 0;
    return *from >= 0 ||
           mistakes_add(&reader->mistakes, node->place,
                        "r is the distance from the axis z; expected an interval from "
                        "0 mm or more; found %g mm to %g mm",
                        *from * 1e3, to * 1e3);
}

static bool read_region(struct reader *reader, const struct node *node,
                        struct plane *plane)
{
    const char *const keys[] = {axis_key(plane_kind_axis(plane->kind, 0)),
                                axis_key(plane_kind_axis(plane->kind, 1)), NULL};
    double from[2] = {0, 0}, to[2] = {0, 0};
    bool ok = reader_mapping(reader, node, "region", keys);
    for (int k = 0; k < 2; k++) {
        const struct node *item = node_find(node, keys[k]);
        if (item == NULL)
            return mistakes_add(&reader->mistakes, node->place,
                                "the region lacks an axis; expected {%s: [from, to], "
                                "%s: [from, to]}; missing: %s",
                                keys[0], keys[1], keys[k]);
        ok = reader_interval(reader, item, keys[k], &from[k], &to[k]) && ok;
        if (ok && plane_kind_axis(plane->kind, k) == AXIS_R)
            ok = check_radii(reader, item, &from[k], to[k]);
    }
    plane->low = (struct vec2){from[0], from[1]};
    plane->high = (struct vec2){to[0], to[1]};
    return ok;
}

/* A fixed potential, or one that runs from the low to the high end of the side. */
static void read_wall(struct reader *reader, const struct node *node,
                      enum plane_kind kind, struct side *side)
{
    if (node->kind != NODE_SEQUENCE) {
        if (reader_potential(reader, node, "wall", kind, true, &side->from))
            (void)reader_potential(reader, node, "wall", kind, true, &side->to);
        return;
    }
    if (node->count != 2) {
        reader_expected(reader, node, "wall",
                        "a potential, or two [low end, high end]");
        return;
    }
    (void)reader_potential(reader, node->items[0], "wall", kind, false, &side->from);
    (void)reader_potential(reader, node->items[1], "wall", kind, false, &side->to);
}

static bool zero_wall(struct reader *reader, struct side *side)
{
    side->kind = SIDE_WALL;
    return reader_zero_potential(reader, &side->from) &&
           reader_zero_potential(reader, &side->to);
}

static void read_side(struct reader *reader, const struct node *node,
                      enum plane_kind kind, struct side *side)
{
    static const char *const keys[] = {"wall", NULL};
    side->place = node->place;
    if (node->kind == NODE_MAPPING) {
        if (!reader_mapping(reader, node, "side", keys) || node->count == 0)
            return;
        read_wall(reader, node->items[0], kind, side);
        return;
    }
    for (int k = SIDE_WALL; node->kind == NODE_SCALAR && k <= SIDE_OPEN; k++) {
        if (strcmp(node->text, side_kind_key((enum side_kind)k)) != 0)
            continue;
        (void)zero_wall(reader, side); /* others carry zeros too: never NULL */
        side->kind = (enum side_kind)k;
        return;
    }
    reader_expected(reader, node, "side",
                    "wall, mirror, antimirror, open, {wall: potential} or {low: ..., "
                    "high: ...}");
}

/* Does the region of a turned plane reach the axis z? */
static bool starts_on_axis(const struct plane *plane)
{
    return plane_kind_is_turned(plane->kind) && plane->low.b == 0 && plane->high.b > 0;
}

/* Both sides across one axis: the same for both, or {low: ..., high: ...}. What is said
 * of both where the low one is the axis of a turned plane is said of the other. */
static void read_sides_of_axis(struct reader *reader, const struct node *node,
                               enum plane_kind kind, bool low_is_axis, struct side *low,
                               struct side *high)
{
    static const char *const keys[] = {"low", "high", NULL};
    const struct node *low_node = node_find(node, "low");
    const struct node *high_node = node_find(node, "high");
    if (low_node == NULL && high_node == NULL) {
        if (!low_is_axis)
            read_side(reader, node, kind, low);
        if (low_is_axis || low->from.gain != NULL)
            read_side(reader, node, kind, high);
        return;
    }
    (void)reader_mapping(reader, node, "side", keys);
    if (low_node != NULL)
        read_side(reader, low_node, kind, low);
    if (high_node != NULL)
        read_side(reader, high_node, kind, high);
}

static void read_sides(struct reader *reader, const struct node *node,
                       struct plane *plane)
{
    const char *const keys[] = {axis_key(plane_kind_axis(plane->kind, 0)),
                                axis_key(plane_kind_axis(plane->kind, 1)), NULL};
    (void)reader_mapping(reader, node, "sides", keys);
    for (int k = 0; k < 2; k++) {
        const struct node *item = node_find(node, keys[k]);
        struct side *low = &plane->sides[k == 0 ? SIDE_A_LOW : SIDE_B_LOW];
        if (item != NULL)
            read_sides_of_axis(reader, item, plane->kind,
                               k == 1 && starts_on_axis(plane), low, low + 1);
    }
}

/* The axis of a turned plane is a mirror, whether the file says so or says nothing. */
static void close_axis(struct reader *reader, struct side *side)
{
    if (side->from.gain == NULL && side->to.gain == NULL) {
        (void)zero_wall(reader, side);
        side->kind = SIDE_MIRROR;
    } else if (side->kind != SIDE_MIRROR) {
        (void)mistakes_add(&reader->mistakes, side->place,
                           "the side at r = 0 is the axis, which is always a mirror; "
                           "expected \"mirror\" or nothing; found \"%s\"",
                           side_kind_key(side->kind));
    }
}

static void read_plane(struct reader *reader, const struct node *node,
                       struct plane *plane)
{
    static const char *const keys[] = {"region", "sides", "parts", NULL};
    const char *name = plane_kind_key(plane->kind);
    const struct node *region = node_find(node, "region");
    plane->present = true;
    plane->supply_count = reader->geometry->supply_count;
    plane->place = node->place;
    (void)reader_mapping(reader, node, name, keys);
    if (region == NULL)
        (void)mistakes_add(&reader->mistakes, node->place,
                           "the plane \"%s\" lacks \"region\"; expected the intervals "
                           "of its two axes",
                           name);
    else
        (void)read_region(reader, region, plane);
    if (node_find(node, "sides") != NULL)
        read_sides(reader, node_find(node, "sides"), plane);
    if (starts_on_axis(plane))
        close_axis(reader, &plane->sides[SIDE_B_LOW]);
    for (int s = 0; s < SIDE_COUNT; s++) {
        if (plane->sides[s].place.line == 0)
            plane->sides[s].place = plane->place;
        if (plane->sides[s].from.gain == NULL && plane->sides[s].to.gain == NULL)
            (void)zero_wall(reader, &plane->sides[s]);
    }
    if (node_find(node, "parts") != NULL)
        reader_parts(reader, node_find(node, "parts"), plane);
}

void reader_planes(struct reader *reader, const struct node *node)
{
    const char *keys[PLANE_KINDS + 1] = {NULL};
    for (int k = 0; k < PLANE_KINDS; k++)
        keys[k] = plane_kind_key((enum plane_kind)k);
    if (node == NULL)
        return;
    (void)reader_mapping(reader, node, "planes", keys);
    for (int k = 0; k < PLANE_KINDS && !reader->out_of_memory; k++) {
        struct plane *plane = &reader->geometry->planes[k];
        if (node_find(node, keys[k]) != NULL)
            read_plane(reader, node_find(node, keys[k]), plane);
    }
}
