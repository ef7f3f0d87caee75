/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "tests/support/scene.h"

#include <stdlib.h>
#include <string.h>

#include "shared/mem.h"

static void *must(void *pointer)
{
    if (pointer == NULL)
        abort();
    return pointer;
}

static void must_do(enum status status)
{
    if (status != STATUS_OK)
        abort();
}

static struct linear linear_of(double gain)
{
    struct linear linear = {0.0, must(MEM_NEW(1, double))};
    linear.gain[0] = gain;
    return linear;
}

void scene_begin(struct geometry *geometry, double setting, bool is_current)
{
    memset(geometry, 0, sizeof *geometry);
    geometry->fineness = 1.0;
    geometry->memory_budget = 20e9;
    geometry->supplies = must(MEM_NEW(1, struct supply));
    geometry->supply_count = 1;
    geometry->supplies[0].name = must(mem_text("supply"));
    geometry->supplies[0].setting = setting;
    geometry->supplies[0].is_current = is_current;
}

struct plane *scene_plane(struct geometry *geometry, enum plane_kind kind, double a_low,
                          double a_high, double b_low, double b_high)
{
    struct plane *plane = &geometry->planes[kind];
    plane->present = true;
    plane->kind = kind;
    plane->low = (struct vec2){a_low, b_low};
    plane->high = (struct vec2){a_high, b_high};
    plane->supply_count = 1;
    return plane;
}

struct plane *scene_turned(struct geometry *geometry, double z_low, double z_high,
                           double r_low, double r_high)
{
    struct plane *plane =
        scene_plane(geometry, PLANE_ELECTRIC_TURNED, z_low, z_high, r_low, r_high);
    plane->sides[SIDE_A_LOW].kind = plane->sides[SIDE_A_HIGH].kind = SIDE_MIRROR;
    if (!(r_low > 0.0))
        plane->sides[SIDE_B_LOW].kind = SIDE_MIRROR;
    return plane;
}

static struct part *add_part(struct plane *plane, const char *name, double gain)
{
    plane->parts =
        must(mem_resize(plane->parts, plane->part_count + 1, sizeof *plane->parts));
    struct part *part = &plane->parts[plane->part_count++];
    memset(part, 0, sizeof *part);
    part->kind = plane_kind_is_magnetic(plane->kind) ? PART_POLE : PART_ELECTRODE;
    part->name = must(mem_text(name));
    part->potential = linear_of(gain);
    return part;
}

struct part *scene_box(struct plane *plane, const char *name, double gain, double a_low,
                       double a_high, double b_low, double b_high, double rounding)
{
    struct part *part = add_part(plane, name, gain);
    must_do(shape_init_box(&part->shape, (struct vec2){a_low, b_low},
                           (struct vec2){a_high, b_high}, rounding));
    return part;
}

struct part *scene_disc(struct plane *plane, const char *name, double gain, double a,
                        double b, double radius)
{
    struct part *part = add_part(plane, name, gain);
    must_do(shape_init_disc(&part->shape, (struct vec2){a, b}, radius));
    return part;
}

struct part *scene_polygon(struct plane *plane, const char *name, double gain,
                           const struct vec2 *points, size_t count)
{
    struct part *part = add_part(plane, name, gain);
    must_do(shape_init_polygon(&part->shape, points, count, 0.0, NULL));
    return part;
}

void scene_cut_disc(struct part *part, double a, double b, double radius)
{
    struct shape disc;
    must_do(shape_init_disc(&disc, (struct vec2){a, b}, radius));
    must_do(shape_cut(&part->shape, &disc));
    shape_free(&disc);
}

void scene_wall(struct plane *plane, enum side_index side, double from, double to)
{
    mem_free(plane->sides[side].from.gain);
    mem_free(plane->sides[side].to.gain);
    plane->sides[side].kind = SIDE_WALL;
    plane->sides[side].from = linear_of(from);
    plane->sides[side].to = linear_of(to);
}
