/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_OUTPUT_GNUPLOT_H
#define EVENGAP_OUTPUT_GNUPLOT_H

/* Plots are drawn by gnuplot, run as a child process: a script with its data goes in,
 * one SVG file comes out. */

#include <stdbool.h>

#include "output/folder.h"
#include "shared/attributes.h"
#include "shared/message.h"
#include "shared/status.h"

/* A plot being made. Caller-owned; zeroed is idle. */
struct plot {
    struct sink script; /* write the gnuplot commands here */
    char *script_path;
    char *data_path;  /* of plot_data; NULL without */
    const char *name; /* borrowed: name of the picture, "path.svg" */
};

/** Opens the script of a plot in the staging folder and writes its first lines: an SVG
 *  terminal of width by height pixels with a white background. */
enum status plot_begin(struct plot *plot, const struct folder *folder, const char *name,
                       int width, int height, struct messages *messages) MUST_CHECK;

/** Gives the script values[count] as single-precision binary data, which it reads as the
 *  file PLOT_DATA: parsing numbers as text took most of gnuplot's time. At most once per
 *  plot. */
enum status plot_data(struct plot *plot, const struct folder *folder,
                      const double *values, size_t count,
                      struct messages *messages) MUST_CHECK;

/* Name of that file for the script: a descriptor, so no path needs quoting; each use
 * reads it from its start (Linux). */
#define PLOT_DATA "/dev/fd/3"

/** Runs gnuplot on the script, removes the script, and notes the picture in the folder.
 *  *drawn tells whether there is a picture: without gnuplot, or when it rejects the
 *  script, a warning is added, *drawn is false and the status is STATUS_OK.
 *  STATUS_WRITE if the picture could not be written whole, STATUS_MEMORY. The plot is
 *  idle afterwards. */
enum status plot_end(struct plot *plot, struct folder *folder, bool *drawn,
                     struct messages *messages) MUST_CHECK;

/** Removes the script without drawing. Safe on zeroed and twice. */
void plot_drop(struct plot *plot);

/** Prints text as a gnuplot string in single quotes; control characters become
 *  spaces. */
void plot_quote(struct sink *sink, const char *text);

#endif
