/* SPDX-License-Identifier: GPL-3.0-or-later */

/* The map is for the eye; the numbers are in the VTK file. Conductors are painted over
 * the map, so the constant potential inside them never shows as field-free space. */

#include "output/plot_plane.h"

#include <math.h>
#include <stdio.h>

#include "mesh/grid_crop.h"
#include "output/number.h"
#include "output/picture.h"
#include "output/words.h"

#define COLOUR_BAR  140 /* pixels right of the axes */
#define PLAIN_RIGHT 30
#define LEVELS_MOST 20
#define GRID_BELOW  25
#define TITLE_SIZE  160

const char *plot_plane_name(enum plane_kind kind)
{
    static const char *const names[PLANE_KINDS] = {
        [PLANE_ELECTRIC_ALONG] = "electric_along.svg",
        [PLANE_ELECTRIC_ACROSS] = "electric_across.svg",
        [PLANE_MAGNETIC_ALONG] = "magnetic_along.svg",
        [PLANE_MAGNETIC_ACROSS] = "magnetic_across.svg",
        [PLANE_ELECTRIC_TURNED] = "electric_turned.svg",
    };
    return names[kind];
}

static struct frame plane_frame(const struct plane *plane, int right, int bottom)
{
    return picture_frame(plane->low, plane->high,
                         axis_key(plane_kind_axis(plane->kind, 0)),
                         axis_key(plane_kind_axis(plane->kind, 1)), right, bottom);
}

static void find_range(const double *values, size_t count, double *low, double *high)
{
    *low = *high = values[0];
    for (size_t k = 1; k < count; k++) {
        *low = fmin(*low, values[k]);
        *high = fmax(*high, values[k]);
    }
}

/* Paints the parts: filled polygons, and pixels for parts with cuts (cover, NULL if
 * there are none). */
static void print_parts(struct sink *script, const struct raster *cover)
{
    if (cover != NULL) {
        raster_using(script, cover, "cover");
        sink_print(script, ":(%d):(%d):(%d):(255*$3) with rgbalpha notitle, ",
                   PICTURE_PART_GREY, PICTURE_PART_GREY, PICTURE_PART_GREY);
    }
    sink_print(script,
               "$solids with filledcurves closed fs solid fc rgb '#%02x%02x%02x' "
               "notitle, $outlines with lines lc 'black' lw 1.6 notitle",
               PICTURE_PART_GREY, PICTURE_PART_GREY, PICTURE_PART_GREY);
}

/* Raster of the parts with cuts; *needed is false, and nothing made, without any. */
static enum status make_cover(struct raster *cover, const struct frame *frame,
                              const struct plane *plane, bool *needed)
{
    *needed = picture_needs_cover(plane);
    if (!*needed)
        return STATUS_OK;
    enum status status = raster_init(cover, frame, 1);
    return status ? status : raster_cover(cover, plane);
}

static void print_potential(struct sink *script, enum plane_kind kind,
                            const struct plane *plane, const struct frame *frame,
                            const struct raster *map, const struct raster *cover)
{
    double low, high;
    find_range(map->values, (size_t)map->na * (size_t)map->nb, &low, &high);
    double step = picture_step(high - low, LEVELS_MOST);
    char title[TITLE_SIZE], step_text[NUMBER_TEXT];
    number_plain(step, 3, step_text, sizeof step_text);
    (void)snprintf(title, sizeof title, "%s: %s, a line every %s %s",
                   plane_kind_key(kind),
                   plane_kind_is_magnetic(kind) ? "magnetic potential" : "potential",
                   step_text, plane_kind_is_magnetic(kind) ? "A" : "V");
    if (cover != NULL)
        raster_print(script, cover, "cover");
    picture_outlines(script, plane);
    picture_levels(script, map, low, high, step);
    picture_axes(script, frame, title);
    picture_names(script, plane, frame);
    sink_print(script, "set cblabel '%s'\n", words_potential(kind));
    if (high > low)
        sink_print(script, "set cbrange [%.9g:%.9g]\n", low, high);
    sink_print(script, "plot ");
    raster_source(script, map, 2);
    sink_print(script, " with image notitle, "
                       "$levels using 1:2 with lines lc '#303030' lw 0.8 notitle, ");
    print_parts(script, cover);
    sink_print(script, "\n");
}

enum status plot_plane_potential(struct folder *folder, enum plane_kind kind,
                                 const struct plane *plane,
                                 const struct plane_result *result, bool *drawn,
                                 struct messages *messages)
{
    *drawn = false;
    struct frame frame = plane_frame(plane, COLOUR_BAR, 0);
    struct raster map = {0}, cover = {0};
    struct plot plot = {0};
    const struct grid *grid = &result->grid;
    bool cut = false;
    enum status status = raster_init(&map, &frame, PICTURE_MAP_GRAIN);
    if (!status)
        status = make_cover(&cover, &frame, plane, &cut);
    if (!status)
        status = plot_begin(&plot, folder, plot_plane_name(kind), frame.width,
                            frame.height, messages);
    if (!status) {
        raster_sample(&map, grid->a, grid->na, grid->b, grid->nb, result->potential);
        print_potential(&plot.script, kind, plane, &frame, &map, cut ? &cover : NULL);
        status = plot_data(&plot, folder, map.values, (size_t)map.na * (size_t)map.nb,
                           messages);
    }
    if (!status) {
        status = plot_end(&plot, folder, drawn, messages);
    }
    plot_drop(&plot);
    raster_free(&map);
    raster_free(&cover);
    return status;
}

/* Lines within the region as drawn. */
static void print_grid_lines(struct sink *script, const struct grid *grid)
{
    const struct grid_window w = grid_drawn(grid);
    const double *a = grid->a + w.first_a, *b = grid->b + w.first_b;
    double low_a = a[0] * 1e3, high_a = a[w.na - 1] * 1e3;
    double low_b = b[0] * 1e3, high_b = b[w.nb - 1] * 1e3;
    sink_print(script, "$grid << EOD\n");
    for (int i = 0; i < w.na; i++)
        sink_print(script, "%.9g %.9g\n%.9g %.9g\n\n", a[i] * 1e3, low_b, a[i] * 1e3,
                   high_b);
    for (int j = 0; j < w.nb; j++)
        sink_print(script, "%.9g %.9g\n%.9g %.9g\n\n", low_a, b[j] * 1e3, high_a,
                   b[j] * 1e3);
    sink_print(script, "EOD\n");
}

/* Kinds of the four sides, below the axes. */
static void print_sides(struct sink *script, const struct plane *plane)
{
    const char *a = axis_key(plane_kind_axis(plane->kind, 0));
    const char *b = axis_key(plane_kind_axis(plane->kind, 1));
    sink_print(script,
               "set label 'sides: low %s %s, high %s %s, low %s %s, high %s %s' at "
               "graph 0, screen 0 offset 0,1 left font ',12'\n",
               a, side_kind_key(plane->sides[SIDE_A_LOW].kind), a,
               side_kind_key(plane->sides[SIDE_A_HIGH].kind), b,
               side_kind_key(plane->sides[SIDE_B_LOW].kind), b,
               side_kind_key(plane->sides[SIDE_B_HIGH].kind));
}

static void print_grid(struct sink *script, const struct plane *plane,
                       const struct frame *frame, const struct grid *grid,
                       const struct raster *cover)
{
    char title[TITLE_SIZE];
    (void)snprintf(title, sizeof title, "%s: %zu parts, coarsest grid %d by %d lines",
                   plane_kind_key(plane->kind), plane->part_count, grid->na, grid->nb);
    if (cover != NULL)
        raster_print(script, cover, "cover");
    picture_outlines(script, plane);
    print_grid_lines(script, grid);
    picture_axes(script, frame, title);
    picture_names(script, plane, frame);
    print_sides(script, plane);
    sink_print(script, "plot $grid with lines lc '#a8a8a8' lw 0.5 notitle, ");
    print_parts(script, cover);
    sink_print(script, "\n");
}

enum status plot_plane_grid(struct folder *folder, const struct plane *plane,
                            const struct grid *grid, bool *drawn,
                            struct messages *messages)
{
    *drawn = false;
    struct frame frame = plane_frame(plane, PLAIN_RIGHT, GRID_BELOW);
    struct raster cover = {0};
    struct plot plot = {0};
    bool cut = false;
    enum status status = make_cover(&cover, &frame, plane, &cut);
    if (!status)
        status = plot_begin(&plot, folder, plot_plane_name(plane->kind), frame.width,
                            frame.height, messages);
    if (!status) {
        print_grid(&plot.script, plane, &frame, grid, cut ? &cover : NULL);
        status = plot_end(&plot, folder, drawn, messages);
    }
    plot_drop(&plot);
    raster_free(&cover);
    return status;
}
