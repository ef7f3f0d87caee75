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
#define LABEL_POINT 45 /* of a line, in raster pixels from the edge of the map */

static void find_range(const struct section *section, double *low, double *high)
{
    *low = *high = section->ratio_error[0];
    for (size_t k = 1; k < section->nx * section->ny; k++) {
        *low = fmin(*low, section->ratio_error[k]);
        *high = fmax(*high, section->ratio_error[k]);
    }
}

/* The circle as far as it lies in the map; it may be larger than the footprint. */
static void print_circle(struct sink *script, const struct result *result,
                         const struct frame *frame)
{
    const struct figure *radius = figures_find(&result->figures, "even_radius", NULL);
    if (!radius || radius->state == FIGURE_MISSING || !(radius->value > 0))
        return;
    double x = result->geometry->reference_x, y = result->geometry->reference_y;
    double reach = fmin(fmin(x - frame->low.a, frame->high.a - x),
                        fmin(y - frame->low.b, frame->high.b - y));
    char text[NUMBER_TEXT];
    number_quantity(radius->value, radius->uncertainty, "m", text, sizeof text);
    if (radius->value < 1.5 * reach)
        sink_print(script,
                   "set object 1 circle at %.9g,%.9g size %.9g front fs empty border "
                   "lc 'black' lw 2.5 dt (10,4)\n",
                   x * 1e3, y * 1e3, radius->value * 1e3);
    sink_print(script,
               "set label 2 '%s even radius %s%s' at graph 0, screen 0 offset 0,1 left "
               "font ',12'\n",
               radius->value < 1.5 * reach ? "long dashes: circle of" : "circle of",
               text, radius->value < reach ? "" : " (reaches beyond this map)");
}

/* Map with its values in units of 10^power, so that ticks and labels stay short. */
static void print_map(struct sink *script, const struct result *result,
                      const struct frame *frame, struct raster *map)
{
    double low, high;
    find_range(&result->section, &low, &high);
    double most = fmax(fabs(low), fabs(high));
    int power = most > 0 ? (int)floor(log10(most)) : 0;
    double scale = pow(10, -power), step = picture_step(high - low, LEVELS_MOST);
    char title[TITLE_SIZE], step_text[NUMBER_TEXT];
    number_plain(step, 3, step_text, sizeof step_text);
    (void)snprintf(title, sizeof title,
                   "ratio error across, a line every %s, dotted "
                   "where negative",
                   step_text);
    raster_scale(map, scale);
    picture_levels(script, map, low * scale, high * scale, step * scale);
    picture_axes(script, frame, title);
    sink_print(script, "set cblabel 'ratio error (1e%d)'\n", power);
    if (high > low)
        sink_print(script, "set cbrange [%.9g:%.9g]\n", low * scale, high * scale);
    print_circle(script, result, frame);
    sink_print(script, "set style textbox opaque fc 'white' noborder margins 1,0.6\n"
                       "plot ");
    raster_source(script, map, 2);
    sink_print(script,
               " with image notitle, "
               "$levels using 1:($3>-1e-9?$2:NaN) with lines lc 'black' lw 1 notitle, "
               "$levels using 1:($3<-1e-9?$2:NaN) with lines lc 'black' lw 1 dt (3,3) "
               "notitle, "
               "$levels using 1:2:(sprintf('%%.3g',$3)) every ::%d::%d with labels "
               "boxed font ',11' notitle\n",
               LABEL_POINT, LABEL_POINT);
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
    enum status status = raster_init(&map, &frame, PICTURE_MAP_GRAIN);
    if (!status)
        status = plot_begin(&plot, folder, "ratio_map.svg", frame.width, frame.height,
                            messages);
    if (!status) {
        raster_sample(&map, section->x, (int)section->nx, section->y, (int)section->ny,
                      section->ratio_error);
        print_map(&plot.script, result, &frame, &map);
        status = plot_data(&plot, folder, map.values, (size_t)map.na * (size_t)map.nb,
                           messages);
    }
    if (!status) {
        status = plot_end(&plot, folder, drawn, messages);
    }
    plot_drop(&plot);
    raster_free(&map);
    return status;
}
