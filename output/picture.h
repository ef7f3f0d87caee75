/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_OUTPUT_PICTURE_H
#define EVENGAP_OUTPUT_PICTURE_H

/* Pieces that pictures of a plane share: an equal-scale frame in millimetres, rasters,
 * and the outlines of the parts. Colours run from white to a middle blue, so that they
 * keep their order in grey; parts are darker than any of them. */

#include "mesh/geometry.h"
#include "output/gnuplot.h"
#include "shared/attributes.h"
#include "shared/status.h"

#define PICTURE_PART_GREY 112 /* of 255 */
#define PICTURE_MAP_GRAIN 2.0 /* smooth fields need fewer pixels than outlines */

/* A window of a plane and the size of its picture. */
struct frame {
    struct vec2 low, high; /* m */
    const char *axis_a;    /* "z" */
    const char *axis_b;    /* "x" */
    int width, height;     /* pixels of the whole picture */
    double left, right;    /* edges of the axes as fractions of the width */
    double bottom, top;    /* the same of the height */
};

/* Values on a regular raster, pixel (i, j) centred at low + ((i+1/2) da, (j+1/2) db). */
struct raster {
    int na, nb;
    struct vec2 low, pixel; /* m */
    double *values;         /* [nb*na], a fastest */
};

/** Frame of a window; `right` pixels are kept free right of the axes and `bottom`
 *  more than usual below them. */
struct frame picture_frame(struct vec2 low, struct vec2 high, const char *axis_a,
                           const char *axis_b, int right, int bottom);

/** Pixels of a metre. */
double picture_scale(const struct frame *frame);

/** Prints title, ranges, axis labels with units and equal scales. */
void picture_axes(struct sink *script, const struct frame *frame, const char *title);

/** Raster over the window of the frame, zero everywhere; one of its pixels is `grain`
 *  pixels of the picture wide. STATUS_MEMORY. */
enum status raster_init(struct raster *raster, const struct frame *frame,
                        double grain) MUST_CHECK;

/** Fills from values[nb*na] on the lines a[na], b[nb], linear between them. */
void raster_sample(struct raster *raster, const double *a, int na, const double *b,
                   int nb, const double *values);

/** Multiplies every value. */
void raster_scale(struct raster *raster, double factor);

/** Sets 1 in every pixel whose centre lies in a part of the plane that has cuts.
 *  STATUS_MEMORY. */
enum status raster_cover(struct raster *raster, const struct plane *plane) MUST_CHECK;

/** Prints the raster as the gnuplot data block $name. */
void raster_print(struct sink *script, const struct raster *raster, const char *name);

/** Prints `$name matrix using <a in mm>:<b in mm>`. */
void raster_using(struct sink *script, const struct raster *raster, const char *name);

/** Prints the source of a raster handed over by plot_data, placed in mm, with the given
 *  number of coordinates (2 for plot, 3 for splot). */
void raster_source(struct sink *script, const struct raster *raster, int coordinates);

/** True if a part of the plane has cuts: then picture_outlines cannot be filled and a
 *  cover raster is needed. */
bool picture_needs_cover(const struct plane *plane);

/** Empties; safe on zeroed and twice. */
void raster_free(struct raster *raster);

/** Prints the remaining surface of every part as polylines in mm, data block
 *  $outlines, and the parts without cuts as closed polygons, data block $solids. There is
 *  at least one point in each block. */
void picture_outlines(struct sink *script, const struct plane *plane);

/** Prints labels with the names of the parts (picture_names.c): inside thick ones, beside
 *  thin ones, else at the nearest free place with a thread to the part. A name that finds
 *  no place is left out. */
void picture_names(struct sink *script, const struct plane *plane,
                   const struct frame *frame);

/** Cuts text (UTF-8) to at most `most` > 3 letters, the last three then being dots. */
void picture_shorten(char *text, size_t most);

/** A step of 1, 2 or 5 times a power of ten that divides span into at most `most`
 *  pieces; 1 if span is not positive. */
double picture_step(double span, int most);

/** Prints the data block $levels: lines of equal value of the raster handed over by
 *  plot_data, every `step` from the first multiple at or above low to high. */
void picture_levels(struct sink *script, const struct raster *raster, double low,
                    double high, double step);

#endif
