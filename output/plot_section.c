/* SPDX-License-Identifier: GPL-3.0-or-later */

/* The map of the ratio error. The sign matters (faster or slower particles pass), so
 * the lines are labelled with their values and negative ones are dashed. */

#include "output/plot_section.h"

#include <math.h>
#include <stdio.h>

#include "output/number.h"
#include "output/picture.h"

#define COLOUR_BAR  150
#define BELOW       40
#define LEVELS_MOST 12
#define TITLE_SIZE  160

static void find_range(const struct section *section, double *low, double *high)
{
    *low = *high = section->ratio_error[0];
    for (size_t k = 1; k < section->nx * section->ny; k++) {
        *low = fmin(*low, section->ratio_error[k]);
        *high = fmax(*high, section->ratio_error[k]);
    }
}

static void print_circle(struct sink *script, const struct result *result)
{
    const struct figure *radius = figures_find(&result->figures, "even_radius", NULL);
    bool known = radius && radius->state != FIGURE_MISSING && radius->value > 0;
    const struct geometry *geometry = result->geometry;
    char text[NUMBER_TEXT];
    if (!known)
        return;
    number_quantity(radius->value, radius->uncertainty, "m", text, sizeof text);
    sink_print(script,
               "set object 1 circle at %.9g,%.9g size %.9g front fs empty border lc "
               "'black' lw 2.5 dt (10,4)\n",
               geometry->reference_x * 1e3, geometry->reference_y * 1e3,
               radius->value * 1e3);
    sink_print(script,
               "set label 'long dashes: circle of even radius %s' at graph 0, screen 0 "
               "offset 0,1 left font ',12'\n",
               text);
}

static void print_map(struct sink *script, const struct result *result,
                      const struct frame *frame, const struct raster *map)
{
    double low, high;
    find_range(&result->section, &low, &high);
    double step = picture_step(high - low, LEVELS_MOST);
    char title[TITLE_SIZE], step_text[NUMBER_TEXT];
    number_plain(step, 3, step_text, sizeof step_text);
    (void)snprintf(title, sizeof title, "ratio error across, a line every %s",
                   step_text);
    raster_print(script, map, "map");
    picture_levels(script, map, "map", low, high, step);
    picture_axes(script, frame, title);
    sink_print(script,
               "set cblabel 'ratio error (1)' offset 2\nset format cb '%%.1e'\n");
    if (high > low)
        sink_print(script, "set cbrange [%.9g:%.9g]\n", low, high);
    print_circle(script, result);
    sink_print(script, "plot ");
    raster_using(script, map, "map");
    sink_print(
        script,
        ":3 with image notitle, "
        "$levels using 1:($3>=0?$2:NaN) with lines lc 'black' lw 1 notitle, "
        "$levels using 1:($3<0?$2:NaN) with lines lc 'black' lw 1 dt (3,3) "
        "notitle, "
        "$levels using 1:2:(sprintf('%%.1e',$3)) every 400::200 with labels font "
        "',11' notitle\n");
}

enum status plot_section(struct folder *folder, const struct result *result,
                         bool *drawn, struct messages *messages)
{
    const struct section *section = &result->section;
    *drawn = false;
    if (!section->present || !section->ratio_error || section->nx < 2 ||
        section->ny < 2)
        return STATUS_OK;
    struct vec2 low = {section->x[0], section->y[0]};
    struct vec2 high = {section->x[section->nx - 1], section->y[section->ny - 1]};
    struct frame frame = picture_frame(low, high, "x", "y", COLOUR_BAR, BELOW);
    struct raster map = {0};
    struct plot plot = {0};
    enum status status = raster_init(&map, &frame);
    if (!status)
        status = plot_begin(&plot, folder, "ratio_map.svg", frame.width, frame.height,
                            messages);
    if (!status) {
        raster_sample(&map, section->x, (int)section->nx, section->y, (int)section->ny,
                      section->ratio_error);
        print_map(&plot.script, result, &frame, &map);
        status = plot_end(&plot, folder, drawn, messages);
    }
    plot_drop(&plot);
    raster_free(&map);
    return status;
}
