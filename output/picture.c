/* SPDX-License-Identifier: GPL-3.0-or-later */

/* gnuplot draws only what it is given: geometry is cut into short chords here, fields
 * are put on a raster fine enough that a pixel is about a pixel of the picture. */

#include "output/picture.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

#include "mesh/grid.h"
#include "shared/constants.h"
#include "shared/mem.h"

#define AXES_WIDTH  760.0 /* pixels, the most the axes take */
#define AXES_HEIGHT 600.0
#define AXES_LEAST  230.0
#define MARGIN_LEFT 90.0
#define MARGIN_TOP  50.0
#define MARGIN_LOW  70.0
#define CHORD_ANGLE (PI / 60) /* of a drawn arc */
#define CHORD_SHARE 200.0     /* a straight edge is cut into pieces of extent/this */

double picture_scale(const struct frame *frame)
{
    struct vec2 size = vec2_sub(frame->high, frame->low);
    return fmin(AXES_WIDTH / size.a, AXES_HEIGHT / size.b);
}

struct frame picture_frame(struct vec2 low, struct vec2 high, const char *axis_a,
                           const char *axis_b, int right, int bottom)
{
    struct vec2 size = vec2_sub(high, low);
    double scale = fmin(AXES_WIDTH / size.a, AXES_HEIGHT / size.b);
    double width = fmax(size.a * scale, AXES_LEAST);
    double height = fmax(size.b * scale, AXES_LEAST);
    struct frame frame = {low, high, axis_a, axis_b, 0, 0, 0, 0, 0, 0};
    double all_width = MARGIN_LEFT + width + right;
    double all_height = MARGIN_TOP + height + MARGIN_LOW + bottom;
    frame.width = (int)ceil(all_width);
    frame.height = (int)ceil(all_height);
    frame.left = MARGIN_LEFT / all_width;
    frame.right = (MARGIN_LEFT + width) / all_width;
    frame.bottom = (MARGIN_LOW + bottom) / all_height;
    frame.top = (MARGIN_LOW + bottom + height) / all_height;
    return frame;
}

void picture_axes(struct sink *script, const struct frame *frame, const char *title)
{
    sink_print(script, "set title ");
    plot_quote(script, title);
    sink_print(script, "\nset size ratio -1\n");
    sink_print(script, "set lmargin at screen %.6f\nset rmargin at screen %.6f\n",
               frame->left, frame->right);
    sink_print(script, "set bmargin at screen %.6f\nset tmargin at screen %.6f\n",
               frame->bottom, frame->top);
    sink_print(script, "set xrange [%.9g:%.9g]\nset yrange [%.9g:%.9g]\n",
               frame->low.a * 1e3, frame->high.a * 1e3, frame->low.b * 1e3,
               frame->high.b * 1e3);
    sink_print(script, "set xlabel '%s (mm)'\nset ylabel '%s (mm)'\n", frame->axis_a,
               frame->axis_b);
    sink_print(script, "set tics out nomirror front\nset border lw 1.2\n"
                       "set palette defined (0 '#ffffff', 1 '#5f93c4')\n");
}

enum status raster_init(struct raster *raster, const struct frame *frame, double grain)
{
    struct vec2 size = vec2_sub(frame->high, frame->low);
    *raster = (struct raster){.low = frame->low};
    double scale = fmin(AXES_WIDTH / size.a, AXES_HEIGHT / size.b) / grain;
    raster->na = (int)fmax(2, ceil(size.a * scale));
    raster->nb = (int)fmax(2, ceil(size.b * scale));
    raster->pixel = (struct vec2){size.a / raster->na, size.b / raster->nb};
    raster->values = MEM_NEW((size_t)raster->na * (size_t)raster->nb, double);
    return raster->values ? STATUS_OK : STATUS_MEMORY;
}

static double pixel_a(const struct raster *raster, int i)
{
    return raster->low.a + (i + 0.5) * raster->pixel.a;
}

static double pixel_b(const struct raster *raster, int j)
{
    return raster->low.b + (j + 0.5) * raster->pixel.b;
}

void raster_sample(struct raster *raster, const double *a, int na, const double *b,
                   int nb, const double *values)
{
    for (int j = 0; j < raster->nb; j++) {
        double y = pixel_b(raster, j);
        int q = grid_interval(b, nb, y);
        double t = (y - b[q]) / (b[q + 1] - b[q]);
        for (int i = 0; i < raster->na; i++) {
            double x = pixel_a(raster, i);
            int p = grid_interval(a, na, x);
            double s = (x - a[p]) / (a[p + 1] - a[p]);
            const double *row = &values[(size_t)q * (size_t)na + (size_t)p];
            double low = row[0] + s * (row[1] - row[0]);
            double high = row[na] + s * (row[na + 1] - row[na]);
            raster->values[(size_t)j * (size_t)raster->na + (size_t)i] =
                low + t * (high - low);
        }
    }
}

void raster_scale(struct raster *raster, double factor)
{
    for (size_t k = 0; k < (size_t)raster->na * (size_t)raster->nb; k++)
        raster->values[k] *= factor;
}

static void cover_span(struct raster *raster, int j, struct span span)
{
    double first = ceil((span.low - raster->low.a) / raster->pixel.a - 0.5);
    double last = floor((span.high - raster->low.a) / raster->pixel.a - 0.5);
    first = fmax(first, 0);
    last = fmin(last, raster->na - 1);
    for (int i = (int)first; i <= (int)last; i++)
        raster->values[(size_t)j * (size_t)raster->na + (size_t)i] = 1;
}

static enum status cover_row(struct raster *raster, const struct shape *shape, int j,
                             struct span **spans, size_t *capacity)
{
    size_t count;
    enum status status = shape_spans(shape, 0, pixel_b(raster, j),
                                     1e-9 * raster->pixel.b, spans, capacity, &count);
    for (size_t k = 0; !status && k < count; k++)
        cover_span(raster, j, (*spans)[k]);
    return status;
}

/* Conductors that a filled polygon would not show. */
static bool has_cuts(const struct part *part)
{
    return part_is_conductor(part) && part->shape.count > 1;
}

bool picture_needs_cover(const struct plane *plane)
{
    for (size_t k = 0; k < plane->part_count; k++)
        if (has_cuts(&plane->parts[k]))
            return true;
    return false;
}

enum status raster_cover(struct raster *raster, const struct plane *plane)
{
    struct span *spans = NULL;
    size_t capacity = 0;
    enum status status = STATUS_OK;
    for (size_t k = 0; k < plane->part_count; k++)
        for (int j = 0; !status && has_cuts(&plane->parts[k]) && j < raster->nb; j++)
            status = cover_row(raster, &plane->parts[k].shape, j, &spans, &capacity);
    mem_free(spans);
    return status;
}

void raster_print(struct sink *script, const struct raster *raster, const char *name)
{
    sink_print(script, "$%s << EOD\n", name);
    for (int j = 0; j < raster->nb; j++) {
        for (int i = 0; i < raster->na; i++)
            sink_print(script, " %.7g",
                       raster->values[(size_t)j * (size_t)raster->na + (size_t)i]);
        sink_print(script, "\n");
    }
    sink_print(script, "EOD\n");
}

void raster_using(struct sink *script, const struct raster *raster, const char *name)
{
    sink_print(script, "$%s matrix using (%.9g+%.9g*$1):(%.9g+%.9g*$2)", name,
               pixel_a(raster, 0) * 1e3, raster->pixel.a * 1e3,
               pixel_b(raster, 0) * 1e3, raster->pixel.b * 1e3);
}

void raster_source(struct sink *script, const struct raster *raster, int coordinates)
{
    sink_print(script,
               "'" PLOT_DATA "' binary array=(%d,%d) format='%%float' "
               "origin=(%.9g,%.9g%s) dx=%.9g dy=%.9g",
               raster->na, raster->nb, pixel_a(raster, 0) * 1e3,
               pixel_b(raster, 0) * 1e3, coordinates > 2 ? ",0" : "",
               raster->pixel.a * 1e3, raster->pixel.b * 1e3);
}

void raster_free(struct raster *raster)
{
    mem_free(raster->values);
    *raster = (struct raster){0};
}

static struct vec2 edge_point(const struct edge *edge, double t)
{
    if (edge->radius == 0)
        return vec2_add(edge->start, vec2_scale(vec2_sub(edge->end, edge->start), t));
    struct vec2 arm = vec2_sub(edge->start, edge->centre);
    double c = cos(t * edge->sweep), s = sin(t * edge->sweep);
    struct vec2 turned = {c * arm.a - s * arm.b, s * arm.a + c * arm.b};
    return vec2_add(edge->centre, turned);
}

/* Cuts an edge into chords and prints those that are part of the surface: pieces of a
 * body inside a cut, or of a cut outside the body, are not in the shape. */
static void print_edge(struct sink *script, const struct shape *shape,
                       const struct edge *edge, double extent)
{
    int count = 1;
    if (edge->radius > 0)
        count = (int)ceil(fabs(edge->sweep) / CHORD_ANGLE);
    else if (shape->count > 1)
        count = 1 + (int)(CHORD_SHARE * vec2_length(vec2_sub(edge->end, edge->start)) /
                          extent);
    bool open = false;
    for (int k = 0; k < count; k++) {
        struct vec2 middle = edge_point(edge, (k + 0.5) / count);
        bool shown = shape_contains(shape, middle, 1e-9 * extent);
        struct vec2 from = edge_point(edge, (double)k / count);
        struct vec2 to = edge_point(edge, (k + 1.0) / count);
        if (shown && !open)
            sink_print(script, "%.9g %.9g\n", from.a * 1e3, from.b * 1e3);
        if (shown)
            sink_print(script, "%.9g %.9g\n", to.a * 1e3, to.b * 1e3);
        if (!shown && open)
            sink_print(script, "\n");
        open = shown;
    }
    sink_print(script, "\n");
}

/* The body of a part as one closed polygon. */
static void print_solid(struct sink *script, const struct shape *shape)
{
    const struct outline *body = &shape->outlines[0];
    for (size_t e = 0; e < body->count; e++) {
        const struct edge *edge = &body->edges[e];
        int count = edge->radius > 0 ? (int)ceil(fabs(edge->sweep) / CHORD_ANGLE) : 1;
        for (int k = 0; k < count; k++) {
            struct vec2 at = edge_point(edge, (double)k / count);
            sink_print(script, "%.9g %.9g\n", at.a * 1e3, at.b * 1e3);
        }
    }
    sink_print(script, "\n");
}

/* Insulators are left clear: the field goes on inside them. */
static void print_solids(struct sink *script, const struct plane *plane)
{
    sink_print(script, "$solids << EOD\n%.9g %.9g\n\n", plane->low.a * 1e3,
               plane->low.b * 1e3);
    for (size_t k = 0; k < plane->part_count; k++)
        if (part_is_conductor(&plane->parts[k]) && !has_cuts(&plane->parts[k]))
            print_solid(script, &plane->parts[k].shape);
    sink_print(script, "EOD\n");
}

void picture_outlines(struct sink *script, const struct plane *plane)
{
    double extent = vec2_length(vec2_sub(plane->high, plane->low));
    sink_print(script, "$outlines << EOD\n%.9g %.9g\n\n", plane->low.a * 1e3,
               plane->low.b * 1e3);
    for (size_t k = 0; k < plane->part_count; k++) {
        const struct shape *shape = &plane->parts[k].shape;
        for (size_t o = 0; o < shape->count; o++)
            for (size_t e = 0; e < shape->outlines[o].count; e++)
                print_edge(script, shape, &shape->outlines[o].edges[e], extent);
    }
    sink_print(script, "EOD\n");
    print_solids(script, plane);
}

void picture_shorten(char *text, size_t most)
{
    size_t count = 0;
    char *cut = NULL;
    for (char *byte = text; *byte; byte++) {
        if (((unsigned char)*byte & 0xC0) == 0x80)
            continue; /* inside a letter */
        if (count++ == most - 3)
            cut = byte;
    }
    if (cut != NULL && count > most)
        memcpy(cut, "...", sizeof "...");
}

double picture_step(double span, int most)
{
    if (!(span > 0) || !isfinite(span))
        return 1;
    double least = span / most;
    double power = pow(10, floor(log10(least)));
    static const double factors[] = {1, 2, 5, 10};
    for (int k = 0; k < 4; k++)
        if (factors[k] * power >= least * (1 - 1e-9))
            return factors[k] * power;
    return 10 * power;
}

void picture_levels(struct sink *script, const struct raster *raster, double low,
                    double high, double step)
{
    sink_print(script,
               "set contour base\nunset surface\n"
               "set cntrparam levels incremental %.9g,%.9g,%.9g\nset table $levels\n"
               "splot ",
               ceil(low / step) * step, step, high);
    raster_source(script, raster, 3);
    sink_print(script, " notitle\nunset table\nunset contour\nset surface\n");
}
