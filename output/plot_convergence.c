/* SPDX-License-Identifier: GPL-3.0-or-later */

/* A second-order figure falls fourfold from grid to grid: on logarithmic axes its points
 * lie along a line of slope 2. Names stand beside the plot, in the order of the lines and
 * tied to their ends, so nobody has to match a key; marks tell the lines apart without
 * colour, and dashes are kept for what does not converge. */

#include "output/plot_convergence.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

#include "output/gnuplot.h"
#include "output/number.h"
#include "output/picture.h"

#define WIDTH       920
#define HEIGHT      560
#define LEFT        105.0 /* pixels, edges of the axes */
#define RIGHT       545.0
#define TOP         50.0
#define BOTTOM      430.0
#define NAME_AT     590.0 /* left edge of the names */
#define NAME_STEP   37.0  /* a name takes two lines */
#define NAME_MOST   46    /* letters */
#define SPACING_LOW 0.6   /* ends of the axis of relative spacings */
#define MARGIN_FROM 0.66  /* the bar of an uncertainty, left of the finest grid */
#define MARGIN_TO   0.77
#define MARGIN_EDGE 0.85
#define AGREEMENT   1e-10 /* grids that agree that well have nothing to show */
#define TINY        1e-15 /* no departure at all */
#define ROOM_LOW    2.0   /* factors that the axis of departures goes on for */
#define ROOM_HIGH   6.0
#define SPAN_LEAST  1e3

/* A figure being shown. */
struct line {
    const struct figure *figure;
    double departure[FIGURE_GRIDS_MAX]; /* NaN where there is none */
    double margin;                      /* uncertainty over size */
    double name_at;                     /* pixels from the top */
};

struct chart {
    struct line lines[CONVERGENCE_MOST]; /* [count] from the top down at the coarsest */
    int count;
    int grids;        /* the largest number of grids */
    double low, high; /* of the axis of departures */
};

double convergence_size(const struct figure *figure)
{
    if (figure->scale > 0)
        return figure->scale;
    double size = fabs(figure->value), largest = 0;
    for (int k = 0; k < figure->grid_count; k++)
        largest = fmax(largest, fabs(figure->grids[k]));
    return size > 0 ? size : largest;
}

double convergence_departure(const struct figure *figure, int k)
{
    double size = convergence_size(figure);
    return size > 0 ? fabs(figure->grids[k] - figure->value) / size : 0;
}

static bool is_telling(const struct figure *figure)
{
    double most = 0;
    if (!figure || figure->state == FIGURE_MISSING)
        return false;
    for (int k = 0; k < figure->grid_count; k++)
        most = fmax(most, convergence_departure(figure, k));
    return figure->grid_count >= 2 && most > AGREEMENT;
}

static void take(const struct figure *figure,
                 const struct figure *chosen[CONVERGENCE_MOST], size_t *count)
{
    if (*count >= CONVERGENCE_MOST || !is_telling(figure))
        return;
    for (size_t k = 0; k < *count; k++)
        if (strcmp(chosen[k]->name, figure->name) == 0)
            return; /* one of a kind: twins would lie on top of each other */
    chosen[(*count)++] = figure;
}

/* The figure of that name with the largest value; of twins, equal but for round-off, the
 * first. */
static const struct figure *find_largest(const struct figures *figures,
                                         const char *name)
{
    const struct figure *best = NULL;
    for (size_t k = 0; k < figures->count; k++) {
        const struct figure *figure = &figures->items[k];
        if (strcmp(figure->name, name) == 0 && figure->state != FIGURE_MISSING &&
            (!best || fabs(figure->value) > fabs(best->value) * (1 + 1e-9)))
            best = figure;
    }
    return best;
}

size_t convergence_choose(const struct result *result,
                          const struct figure *chosen[CONVERGENCE_MOST])
{
    static const char *const names[] = {"centre_pass_speed",
                                        "balanced_speed",
                                        "effective_length_electric",
                                        "effective_length_magnetic",
                                        "surface_field",
                                        "centre_electric_field",
                                        "centre_flux_density",
                                        "centre_electric_field_across",
                                        "centre_flux_density_across",
                                        "capacitance"};
    size_t count = 0;
    for (size_t k = 0; k < result->verdict.count; k++)
        take(result->verdict.items[k].figure, chosen, &count);
    for (size_t k = 0; k < sizeof names / sizeof names[0]; k++)
        take(find_largest(&result->figures, names[k]), chosen, &count);
    return count;
}

static double above_tiny(double value)
{
    return value > TINY ? value : (double)NAN;
}

/* Where a line ends on the side of the names: at its coarsest grid. */
static double line_end(const struct line *line, double low)
{
    return isfinite(line->departure[0]) ? line->departure[0] : low;
}

static void widen(struct chart *chart, double value)
{
    chart->low = fmin(chart->low, value); /* fmin and fmax pass over NaN */
    chart->high = fmax(chart->high, value);
}

static void fill_line(struct chart *chart, const struct figure *figure)
{
    struct line *line = &chart->lines[chart->count++];
    line->figure = figure;
    line->margin = above_tiny(figure->uncertainty / convergence_size(figure));
    widen(chart, line->margin);
    for (int k = 0; k < FIGURE_GRIDS_MAX; k++) {
        line->departure[k] = (double)NAN;
        if (k < figure->grid_count)
            line->departure[k] = above_tiny(convergence_departure(figure, k));
        widen(chart, line->departure[k]);
    }
    if (figure->grid_count > chart->grids)
        chart->grids = figure->grid_count;
}

/* Insertion keeps equal lines in their order. */
static void sort_lines(struct chart *chart)
{
    for (int k = 1; k < chart->count; k++) {
        struct line line = chart->lines[k];
        int at = k;
        for (; at > 0 && line_end(&chart->lines[at - 1], 0) < line_end(&line, 0); at--)
            chart->lines[at] = chart->lines[at - 1];
        chart->lines[at] = line;
    }
}

/* Pixels from the top of the picture to a departure. */
static double pixel_of(const struct chart *chart, double departure)
{
    double share = log(departure / chart->low) / log(chart->high / chart->low);
    return BOTTOM - share * (BOTTOM - TOP);
}

/* Names beside the ends of their lines, moved apart where they would meet: down first,
 * then up again from the last place there is. */
static void place_names(struct chart *chart)
{
    double next = TOP, last = BOTTOM;
    for (int k = 0; k < chart->count; k++) {
        struct line *line = &chart->lines[k];
        double home = pixel_of(chart, line_end(line, chart->low));
        line->name_at = fmax(home, next);
        next = line->name_at + NAME_STEP;
    }
    for (int k = chart->count - 1; k >= 0; k--) {
        chart->lines[k].name_at = fmin(chart->lines[k].name_at, last);
        last = chart->lines[k].name_at - NAME_STEP;
    }
}

static struct chart make_chart(const struct figure *const *chosen, size_t count)
{
    struct chart chart = {.low = (double)INFINITY, .high = 0};
    for (size_t k = 0; k < count; k++)
        fill_line(&chart, chosen[k]);
    chart.low /= ROOM_LOW;
    chart.high = fmax(chart.high * ROOM_HIGH, chart.low * SPAN_LEAST);
    sort_lines(&chart);
    place_names(&chart);
    return chart;
}

/* Line spacing of grid k over that of the finest. */
static double spacing(const struct figure *figure, int k)
{
    return exp2(figure->grid_count - 1 - k);
}

static void print_number(struct sink *script, double value)
{
    if (isfinite(value))
        sink_print(script, " %.9g", value);
    else
        sink_print(script, " NaN");
}

/* Per figure a block of $grids (relative spacing, departure) and a row of $margins. */
static void print_data(struct sink *script, const struct chart *chart)
{
    sink_print(script, "$grids << EOD\n");
    for (int k = 0; k < chart->count; k++) {
        const struct line *line = &chart->lines[k];
        sink_print(script, "# %s\n", line->figure->name);
        for (int g = 0; g < line->figure->grid_count; g++) {
            sink_print(script, "%g", spacing(line->figure, g));
            print_number(script, line->departure[g]);
            sink_print(script, "\n");
        }
        sink_print(script, "\n\n");
    }
    sink_print(script, "EOD\n$margins << EOD\n");
    for (int k = 0; k < chart->count; k++) {
        sink_print(script, "# %s\n%g", chart->lines[k].figure->name,
                   sqrt(MARGIN_FROM * MARGIN_TO));
        print_number(script, chart->lines[k].margin);
        sink_print(script, "\n\n\n");
    }
    sink_print(script, "EOD\n");
}

static double spacing_high(const struct chart *chart)
{
    return exp2(chart->grids - 1) * 1.15;
}

static void print_axes(struct sink *script, const struct chart *chart)
{
    sink_print(script,
               "set title 'Convergence: how far the value on each grid lies from the "
               "final one' font ',14'\n"
               "set lmargin at screen %.6f\nset rmargin at screen %.6f\n"
               "set tmargin at screen %.6f\nset bmargin at screen %.6f\n",
               LEFT / WIDTH, RIGHT / WIDTH, 1 - TOP / HEIGHT, 1 - BOTTOM / HEIGHT);
    sink_print(script,
               "set logscale xy\nset xrange [%g:%.9g]\nset yrange [%.9g:%.9g]\n"
               "set format y '1e%%T'\nset border lw 1.2\nset tics out nomirror\n"
               "set mytics 1\nunset mxtics\nunset key\nset grid y lc '#d8d8d8' dt 1\n",
               SPACING_LOW, spacing_high(chart), chart->low, chart->high);
    sink_print(script,
               "set xtics ('uncertainty' %g, '1 (finest)' 1, '2' 2%s) font ',12'\n",
               sqrt(MARGIN_FROM * MARGIN_TO), chart->grids > 2 ? ", '4' 4" : "");
    sink_print(script, "set xlabel 'line spacing of the grid / that of the finest (1)' "
                       "offset 0,0.2\n"
                       "set ylabel '|value on the grid - final value| / scale (1)'\n");
    sink_print(script,
               "set arrow from %g,graph 0 to %g,graph 1 nohead lc '#909090' dt 1\n",
               MARGIN_EDGE, MARGIN_EDGE);
}

/* The line of slope 2 above all others. */
static void print_slope(struct sink *script, const struct chart *chart)
{
    double coarse = exp2(chart->grids - 1), end = chart->high / 1.6;
    sink_print(script,
               "set arrow from 1,%.9g to %g,%.9g nohead lc '#909090' dt 1\n"
               "set label 'slope 2' at %g,%.9g right offset 0,0.5 font ',12'\n",
               end / (coarse * coarse), coarse, end, sqrt(coarse) * 0.95,
               end / coarse * 0.9);
}

static const char *line_colour(int k)
{
    static const char *const colours[] = {"black", "#3070b0", "#707070"};
    return colours[k % 3];
}

/* Title and subject, cut short where they are too long for their place. */
static void name_text(const struct figure *figure, char *text, size_t size)
{
    (void)snprintf(text, size, "%s%s%s", figure->title, figure->subject ? ", " : "",
                   figure->subject ? figure->subject : "");
    picture_shorten(text, NAME_MOST);
}

/* "1.234(5) mm (scale 1 mm), unsettled" */
static void value_text(const struct figure *figure, char *text, size_t size)
{
    char value[NUMBER_TEXT], number[NUMBER_TEXT], scale[2 * NUMBER_TEXT] = "";
    const struct unit_choice unit = unit_choose(figure->unit, figure->scale);
    number_quantity(figure->value, figure->uncertainty, figure->unit, value,
                    sizeof value);
    if (figure->scale > 0) {
        number_plain(figure->scale / unit.factor, 3, number, sizeof number);
        (void)snprintf(scale, sizeof scale, " (scale %s%s%s)", number,
                       *unit.name ? " " : "", unit.name);
    }
    (void)snprintf(text, size, "%s%s%s", value, scale,
                   figure->state == FIGURE_UNSETTLED ? ", unsettled" : "");
}

static void print_label(struct sink *script, const char *text, double down)
{
    sink_print(script, "set label ");
    plot_quote(script, text);
    sink_print(script, " at screen %.6f,screen %.6f left font ',12'\n", NAME_AT / WIDTH,
               1 - down / HEIGHT);
}

/* Name and value, and a thread from the end of the line to them. */
static void print_name(struct sink *script, const struct chart *chart, int k)
{
    const struct line *line = &chart->lines[k];
    char text[256];
    name_text(line->figure, text, sizeof text);
    print_label(script, text, line->name_at - 8);
    value_text(line->figure, text, sizeof text);
    print_label(script, text, line->name_at + 8);
    sink_print(
        script,
        "set arrow from %g,%.9g to screen %.6f,screen %.6f nohead lc '%s' lw 0.7 "
        "dt (1,3)\n",
        spacing(line->figure, 0), line_end(line, chart->low), (NAME_AT - 6) / WIDTH,
        1 - line->name_at / HEIGHT, line_colour(k));
}

/* What the reader has to know, and only that. */
static void print_notes(struct sink *script, const struct chart *chart)
{
    bool dashed = false, kept = false;
    for (int k = 0; k < chart->count; k++) {
        const struct figure *figure = chart->lines[k].figure;
        dashed = dashed || figure->state == FIGURE_UNSETTLED;
        kept = kept || !isfinite(chart->lines[k].departure[figure->grid_count - 1]);
    }
    sink_print(
        script,
        "set label 'Scale: the value itself unless stated beside it. Bars at the "
        "left: the uncertainty printed with each value.' at screen %.6f,"
        "screen %.6f left font ',12'\n",
        LEFT / WIDTH, 40.0 / HEIGHT);
    if (dashed || kept)
        sink_print(
            script, "set label '%s%s' at screen %.6f,screen %.6f left font ',12'\n",
            dashed ? "Dashed: the grids do not converge on it. " : "",
            kept ? "No point at the finest grid: its value is the final one." : "",
            LEFT / WIDTH, 20.0 / HEIGHT);
}

static void print_plot(struct sink *script, const struct chart *chart)
{
    static const int marks[CONVERGENCE_MOST] = {7, 4, 9, 12, 6, 5, 8, 13};
    sink_print(script, "plot ");
    for (int k = 0; k < chart->count; k++)
        sink_print(script,
                   "%s$grids index %d with linespoints lw 1.8 lc '%s' pt %d ps 0.9 "
                   "dt %s, $margins index %d using (%g):2:(%g):(0) with vectors nohead "
                   "lw 1.8 lc '%s', $margins index %d with points lc '%s' pt %d ps 0.9",
                   k > 0 ? ", " : "", k, line_colour(k), marks[k],
                   chart->lines[k].figure->state == FIGURE_UNSETTLED ? "(9,6)" : "1", k,
                   MARGIN_FROM, MARGIN_TO - MARGIN_FROM, line_colour(k), k,
                   line_colour(k), marks[k]);
    sink_print(script, "\n");
}

enum status plot_convergence(struct folder *folder, const struct result *result,
                             bool *drawn, struct messages *messages)
{
    const struct figure *chosen[CONVERGENCE_MOST];
    size_t count = convergence_choose(result, chosen);
    *drawn = false;
    if (count == 0)
        return STATUS_OK;
    struct chart chart = make_chart(chosen, count);
    struct plot plot;
    enum status status =
        plot_begin(&plot, folder, "convergence.svg", WIDTH, HEIGHT, messages);
    if (status)
        return status;
    print_data(&plot.script, &chart);
    print_axes(&plot.script, &chart);
    print_slope(&plot.script, &chart);
    for (int k = 0; k < chart.count; k++)
        print_name(&plot.script, &chart, k);
    print_notes(&plot.script, &chart);
    print_plot(&plot.script, &chart);
    return plot_end(&plot, folder, drawn, messages);
}
