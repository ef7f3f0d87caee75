/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Names of parts in a picture. A name must not hide another name or a small part, and the
 * reader must see which part it belongs to: where it cannot stand at its part, a thread
 * leads from one to the other. All lengths are pixels from the lower left corner of the
 * axes. */

#include <math.h>
#include <stdbool.h>

#include "output/picture.h"

#define LETTER_WIDTH 8.0
#define LETTER_LINE  18.0
#define PARTS_MOST   60   /* named at most */
#define SMALL        40.0 /* parts up to this size must not be covered */
#define WIDE_ENOUGH  0.6  /* of its name's width: a part that bears it in its middle */
#define ACROSS_STEP  20.0
#define ACROSS_STEPS 20
#define LINES_MOST   12
#define NEAR         (1.6 * LETTER_LINE) /* a name that near to home needs no thread */

struct box {
    double x, y; /* centre */
    double half_width, half_height;
};

/* What is placed already. */
struct names {
    const struct frame *frame;
    double scale, width, height; /* pixels per metre, and of the axes */
    struct box labels[PARTS_MOST];
    struct box parts[PARTS_MOST];
    size_t count, part_count;
};

static bool boxes_meet(const struct box *p, const struct box *q)
{
    return fabs(p->x - q->x) < p->half_width + q->half_width &&
           fabs(p->y - q->y) < p->half_height + q->half_height;
}

static bool is_small(const struct box *part)
{
    return 2 * fmin(part->half_width, part->half_height) < LETTER_LINE &&
           2 * fmax(part->half_width, part->half_height) < SMALL;
}

static bool is_free(const struct names *names, const struct box *label)
{
    bool free = label->x >= label->half_width && label->y >= label->half_height &&
                label->x <= names->width - label->half_width &&
                label->y <= names->height - label->half_height;
    for (size_t k = 0; free && k < names->count; k++)
        free = !boxes_meet(label, &names->labels[k]);
    for (size_t k = 0; free && k < names->part_count; k++)
        free = !(is_small(&names->parts[k]) && boxes_meet(label, &names->parts[k]));
    return free;
}

/* 0, 1, -1, 2, -2, ... */
static int in_turn(int k)
{
    return (k % 2 ? 1 : -1) * ((k + 1) / 2);
}

/* Moves a label to the free place nearest to it; of places equally near the one away from
 * the middle. False if there is none. */
static bool place_label(const struct names *names, struct box *label)
{
    const struct box home = *label;
    const double out_x = home.x < 0.5 * names->width ? -1 : 1;
    const double out_y = home.y < 0.5 * names->height ? -1 : 1;
    double least = (double)INFINITY;
    for (int j = 0; j <= 2 * LINES_MOST; j++)
        for (int i = 0; i <= 2 * ACROSS_STEPS; i++) {
            const double dx = out_x * in_turn(i) * ACROSS_STEP;
            const double dy = out_y * in_turn(j) * LETTER_LINE;
            struct box moved = home;
            moved.x += dx;
            moved.y += dy;
            if (hypot(dx, dy) < least - 1e-6 && is_free(names, &moved)) {
                least = hypot(dx, dy);
                *label = moved;
            }
        }
    return isfinite(least);
}

/* Letters of UTF-8 text. */
static double letters(const char *text)
{
    double count = 0;
    for (; *text; text++)
        count += ((unsigned char)*text & 0xC0) != 0x80;
    return count;
}

static struct box part_box(const struct names *names, const struct part *part)
{
    struct vec2 low, high;
    shape_bounds(&part->shape, &low, &high);
    const struct vec2 origin = names->frame->low;
    return (struct box){(0.5 * (low.a + high.a) - origin.a) * names->scale,
                        (0.5 * (low.b + high.b) - origin.b) * names->scale,
                        0.5 * (high.a - low.a) * names->scale,
                        0.5 * (high.b - low.b) * names->scale};
}

/* Where a name would like to be: beside a thin part, on the side away from the middle;
 * inside a thick one; inside the axes in any case. */
static struct box home_of(const struct names *names, const struct part *part)
{
    const struct box at = part_box(names, part);
    struct box label = {at.x, at.y, letters(part->name) * LETTER_WIDTH / 2 + 5,
                        LETTER_LINE / 2};
    if (2 * at.half_height < 1.5 * LETTER_LINE ||
        at.half_width < WIDE_ENOUGH * label.half_width)
        label.y += (at.y > 0.5 * names->height ? 1 : -1) *
                   (at.half_height + 0.7 * LETTER_LINE);
    label.x = fmin(fmax(label.x, label.half_width), names->width - label.half_width);
    label.y = fmin(fmax(label.y, label.half_height), names->height - label.half_height);
    return label;
}

static double millimetres(double pixels, double origin, double scale)
{
    return (origin + pixels / scale) * 1e3;
}

/* From the part to the edge of its label. */
static void print_thread(struct sink *script, const struct names *names,
                         const struct box *part, const struct box *label)
{
    const struct vec2 low = names->frame->low;
    const double side = label->y > part->y ? -1 : 1;
    sink_print(
        script,
        "set arrow from %.9g,%.9g to %.9g,%.9g nohead front lc 'black' lw 0.8\n",
        millimetres(part->x, low.a, names->scale),
        millimetres(part->y, low.b, names->scale),
        millimetres(label->x, low.a, names->scale),
        millimetres(label->y + side * 0.8 * label->half_height, low.b, names->scale));
}

static void print_name(struct sink *script, struct names *names,
                       const struct part *part)
{
    const struct box home = home_of(names, part), at = part_box(names, part);
    const struct vec2 low = names->frame->low;
    struct box label = home;
    if (!place_label(names, &label))
        return;
    names->labels[names->count++] = label;
    if (hypot(label.x - home.x, label.y - home.y) > NEAR && !boxes_meet(&label, &at))
        print_thread(script, names, &at, &label);
    sink_print(script, "set label ");
    plot_quote(script, part->name);
    sink_print(script, " at %.9g,%.9g center front font ',12' boxed\n",
               millimetres(label.x, low.a, names->scale),
               millimetres(label.y, low.b, names->scale));
}

void picture_names(struct sink *script, const struct plane *plane,
                   const struct frame *frame)
{
    const struct vec2 size = vec2_sub(frame->high, frame->low);
    const double scale = picture_scale(frame);
    struct names names = {.frame = frame,
                          .scale = scale,
                          .width = size.a * scale,
                          .height = size.b * scale};
    for (size_t k = 0; k < plane->part_count && k < PARTS_MOST; k++)
        names.parts[names.part_count++] = part_box(&names, &plane->parts[k]);
    for (size_t k = 0; k < names.part_count; k++)
        print_name(script, &names, &plane->parts[k]);
    sink_print(script, "set style textbox opaque fc 'white' noborder margins 1.5,1\n");
}
