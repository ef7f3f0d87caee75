/* SPDX-License-Identifier: GPL-3.0-or-later */

/* The ratio error spans decades: flat in the middle, of order one in the fringe. Its
 * panel is scaled to what is judged (the limit, or the stretch where both fields are
 * nearly full), and a note says how far the curve goes on outside. Uncertainties are
 * drawn as bands where they are wider than the line; where they are not, which is the
 * rule, a note gives their size instead. */

#include "output/plot_path.h"

#include <math.h>
#include <stdio.h>

#include "output/gnuplot.h"
#include "output/number.h"
#include "solver/ratio.h"

#define WIDTH        920
#define PARTS_HEIGHT 90.0 /* pixels */
#define PANEL_HEIGHT 230.0
#define GAP          42.0 /* holds the key of the panel below */
#define TOP          50.0
#define BOTTOM       86.0
#define LEFT         0.13 /* of the width */
#define RIGHT        0.96
#define FULL_FIELD   0.9  /* both fields above this share of centre: ratio is judged */
#define LIMIT_VIEW   3.0  /* limits shown on either side */
#define FIELD_ROOM   0.08 /* beyond the fields, of the reference */
#define LINE_WIDTH   2.0  /* pixels */
#define NOTE_LINE    18.0
#define NOTES_MOST   4
#define NOTE_SIZE    200

/* Which panels there are and how much of the height is used up. */
struct panels {
    const struct result *result;
    int height;  /* pixels of the whole picture */
    double used; /* pixels from the top */
    int left;    /* panels still to come */
    double e_reference, b_reference;
    bool e_band, b_band, ratio_band; /* wider than the line */
    char notes[NOTES_MOST][NOTE_SIZE];
    int note_count;
};

static size_t reference_index(const struct result *result)
{
    const struct profile *profile = &result->profile;
    double z = result->geometry->has_reference ? result->geometry->reference_z : 0;
    size_t best = 0;
    for (size_t k = 1; k < profile->count; k++)
        if (fabs(profile->z[k] - z) < fabs(profile->z[best] - z))
            best = k;
    return best;
}

static void print_value(struct sink *script, const double *values, size_t k,
                        double unit, bool shown)
{
    if (values && shown && unit != 0 && isfinite(values[k] / unit))
        sink_print(script, " %.9g", values[k] / unit);
    else
        sink_print(script, " NaN");
}

/* Columns: 1 z (mm), 2 E_x, 3 B_y (relative), 4 imbalance, 5 ratio error, 6 its
 * uncertainty, 7 and 8 lowest and highest over the footprint, 9 and 10 uncertainties of
 * columns 2 and 3. */
static void print_data(struct sink *script, const struct panels *panels)
{
    const struct profile *profile = &panels->result->profile;
    double e = panels->e_reference, b = panels->b_reference;
    sink_print(script, "$path << EOD\n");
    for (size_t k = 0; k < profile->count; k++) {
        bool ratio = profile->defined && profile->defined[k];
        sink_print(script, "%.9g", profile->z[k] * 1e3);
        print_value(script, profile->e_x, k, e, true);
        print_value(script, profile->b_y, k, b, true);
        print_value(script, profile->imbalance, k, 1, true);
        print_value(script, profile->ratio_error, k, 1, ratio);
        print_value(script, profile->ratio_error_err, k, 1, ratio);
        print_value(script, profile->bundle_low, k, 1, ratio && profile->has_bundle);
        print_value(script, profile->bundle_high, k, 1, ratio && profile->has_bundle);
        print_value(script, profile->e_x_err, k, fabs(e), profile->e_x != NULL);
        print_value(script, profile->b_y_err, k, fabs(b), profile->b_y != NULL);
        sink_print(script, "\n");
    }
    sink_print(script, "EOD\n");
}

/* Notes stand below the last panel. */
static void print_notes(struct sink *script, const struct panels *panels)
{
    for (int k = 0; k < panels->note_count; k++) {
        sink_print(script, "set label %d ", 100 + k);
        plot_quote(script, panels->notes[k]);
        sink_print(script, " at screen %g,screen %.6f left font ',12'\n", LEFT,
                   (panels->note_count - k - 0.2) * NOTE_LINE / panels->height);
    }
}

/* Starts a panel of the given height; only the last one carries the z axis. */
static void open_panel(struct sink *script, struct panels *panels, double height,
                       const char *label)
{
    double top = panels->used, bottom = top + height;
    panels->used = bottom + GAP;
    panels->left--;
    sink_print(script, "set tmargin at screen %.6f\nset bmargin at screen %.6f\n",
               1 - top / panels->height, 1 - bottom / panels->height);
    if (panels->left == 0) {
        sink_print(script, "set xlabel 'z (mm)'\nset format x '%%g'\n");
        print_notes(script, panels);
    } else
        sink_print(script, "unset xlabel\nset format x ''\n");
    sink_print(script, "set ylabel ");
    plot_quote(script, label);
    sink_print(script, "\nset autoscale y\nset key at graph 1,1.01 right bottom "
                       "horizontal maxrows 1 samplen 3\n");
}

/* One bar per part of a plane, on the row of the plane. */
static void print_bars(struct sink *script, const struct plane *plane, double row,
                       int *object)
{
    for (size_t k = 0; k < plane->part_count; k++) {
        static const char *const fills[] = {
            [PART_ELECTRODE] = "fc rgb '#606060' fs solid",
            [PART_GUARD] = "fc rgb '#ffffff' fs solid",
            [PART_CLAMP] = "fc rgb '#606060' fs pattern 4",
            [PART_POLE] = "fc rgb '#b0b0b0' fs solid",
            [PART_FLOATING] = "fc rgb '#606060' fs pattern 1",
            [PART_INSULATOR] = "fc rgb '#e8d8a8' fs solid",
        };
        struct vec2 low, high;
        shape_bounds(&plane->parts[k].shape, &low, &high);
        sink_print(script,
                   "set object %d rectangle from %.9g,%.9g to %.9g,%.9g %s border "
                   "lc 'black'\n",
                   (*object)++, low.a * 1e3, row - 0.3, high.a * 1e3, row + 0.3,
                   fills[plane->parts[k].kind]);
    }
}

static bool has_kind(const struct geometry *geometry, enum part_kind kind)
{
    static const enum plane_kind planes[2] = {PLANE_ELECTRIC_ALONG,
                                              PLANE_MAGNETIC_ALONG};
    for (int p = 0; p < 2; p++) {
        const struct plane *plane = &geometry->planes[planes[p]];
        for (size_t k = 0; k < plane->part_count; k++)
            if (plane->parts[k].kind == kind)
                return true;
    }
    return false;
}

/* What the fills mean, as far as there are such parts. */
static void print_fills(struct sink *script, const struct geometry *geometry)
{
    static const struct {
        enum part_kind kind;
        const char *text;
    } fills[] = {
        {PART_ELECTRODE, "electrode dark"},  {PART_POLE, "pole light"},
        {PART_GUARD, "guard white"},         {PART_CLAMP, "clamp hatched"},
        {PART_FLOATING, "floating crossed"}, {PART_INSULATOR, "insulator sand"}};
    const char *before = ": ";
    sink_print(script, "set title 'Along the path");
    for (size_t k = 0; k < sizeof fills / sizeof fills[0]; k++) {
        if (!has_kind(geometry, fills[k].kind))
            continue;
        sink_print(script, "%s%s", before, fills[k].text);
        before = ", ";
    }
    sink_print(script, "'\n");
}

static void plot_extents(struct sink *script, struct panels *panels)
{
    const struct geometry *geometry = panels->result->geometry;
    int object = 1;
    open_panel(script, panels, PARTS_HEIGHT, "");
    print_bars(script, &geometry->planes[PLANE_ELECTRIC_ALONG], 2, &object);
    print_bars(script, &geometry->planes[PLANE_MAGNETIC_ALONG], 1, &object);
    print_fills(script, geometry);
    sink_print(script, "set yrange [0.5:2.5]\nset ytics ('electric' 2, 'magnetic' 1)\n"
                       "plot NaN notitle\n");
    for (int k = 1; k < object; k++)
        sink_print(script, "unset object %d\n", k);
    sink_print(script, "unset title\nset ytics autofreq\n");
}

/* Widens a range by the values relative to the reference. */
static void widen(const double *values, size_t count, double reference, double *low,
                  double *high)
{
    for (size_t k = 0; values && reference != 0 && k < count; k++) {
        *low = fmin(*low, values[k] / reference);
        *high = fmax(*high, values[k] / reference);
    }
}

static void field_range(const struct panels *panels, double *low, double *high)
{
    const struct profile *profile = &panels->result->profile;
    *low = *high = 0;
    widen(profile->e_x, profile->count, panels->e_reference, low, high);
    widen(profile->b_y, profile->count, panels->b_reference, low, high);
    *low -= FIELD_ROOM;
    *high += FIELD_ROOM;
}

static void plot_fields(struct sink *script, struct panels *panels)
{
    const struct profile *profile = &panels->result->profile;
    double low, high;
    field_range(panels, &low, &high);
    open_panel(script, panels, PANEL_HEIGHT, "field / reference (1)");
    sink_print(script, "set yrange [%.6g:%.6g]\nplot ", low, high);
    if (panels->e_band)
        sink_print(script, "$path using 1:($2-$9):($2+$9) with filledcurves fc rgb "
                           "'#c8c8c8' title 'uncertainty of E_x', ");
    if (panels->b_band)
        sink_print(script, "$path using 1:($3-$10):($3+$10) with filledcurves fc rgb "
                           "'#c4d6e8' title 'of B_y', ");
    if (profile->e_x)
        sink_print(script,
                   "$path using 1:2 with lines lw %g lc 'black' title "
                   "'E_x / E_x(reference)'%s",
                   LINE_WIDTH, profile->b_y ? ", " : "\n");
    if (profile->b_y)
        sink_print(script, "$path using 1:3 with lines lw 2.5 dt (8,5) lc '#3070b0' "
                           "title 'B_y / B_y(reference)'\n");
}

static void plot_imbalance(struct sink *script, struct panels *panels)
{
    open_panel(script, panels, PANEL_HEIGHT, "force imbalance (1)");
    sink_print(script, "set label 1 '(E_x - u B_y) / E_x(reference), u = E_x / B_y at "
                       "the reference' at graph 1,1.06 right\n"
                       "plot 0 with lines lc '#909090' notitle, "
                       "$path using 1:4 with lines lw 2 lc 'black' notitle\n"
                       "unset label 1\n");
}

/* Half height of the ratio panel. */
static double ratio_view(const struct panels *panels)
{
    const struct profile *profile = &panels->result->profile;
    const struct limit *limit = &panels->result->geometry->limits[LIMIT_RATIO_ERROR];
    if (limit->present)
        return LIMIT_VIEW * limit->value;
    double full = 0, all = 0;
    for (size_t k = 0; k < profile->count; k++) {
        if (!profile->defined[k])
            continue;
        double size = fabs(profile->ratio_error[k]);
        all = fmax(all, size);
        if (fabs(profile->e_x[k] / panels->e_reference) > FULL_FIELD &&
            fabs(profile->b_y[k] / panels->b_reference) > FULL_FIELD)
            full = fmax(full, size);
    }
    double view = 1.2 * (full > 0 ? full : all);
    return view > 0 ? view : 1e-6;
}

static void plot_ratio(struct sink *script, struct panels *panels)
{
    const struct profile *profile = &panels->result->profile;
    const struct limit *limit = &panels->result->geometry->limits[LIMIT_RATIO_ERROR];
    double view = ratio_view(panels);
    int power = (int)floor(log10(view));
    double scale = pow(10, -power);
    char label[64];
    (void)snprintf(label, sizeof label, "ratio error (1e%d)", power);
    open_panel(script, panels, PANEL_HEIGHT, label);
    sink_print(script, "set yrange [%.6g:%.6g]\ns = %.6g\n", -view * scale,
               view * scale, scale);
    sink_print(script, "plot 0 with lines lc '#909090' notitle");
    if (profile->has_bundle)
        sink_print(script, ", $path using 1:(s*$7):(s*$8) with filledcurves fc rgb "
                           "'#c4d6e8' title 'footprint'");
    if (panels->ratio_band)
        sink_print(script, ", $path using 1:(s*($5-$6)):(s*($5+$6)) with filledcurves "
                           "fc rgb '#b0b0b0' title 'uncertainty'");
    sink_print(script,
               ", $path using 1:(s*$5) with lines lw %g lc 'black' title 'on the axis'",
               LINE_WIDTH);
    if (limit->present)
        sink_print(script,
                   ", %.9g with lines lw 1.5 dt (4,4) lc 'black' title 'limit', "
                   "%.9g with lines lw 1.5 dt (4,4) lc 'black' notitle",
                   limit->value * scale, -limit->value * scale);
    sink_print(script, "\n");
}

/* The largest uncertainty over a reference, at the samples that are shown: all of them
 * without `values`, else those with |value| up to view. */
static double largest_error(const struct profile *profile, const double *errors,
                            double reference, const double *values, double view)
{
    double most = 0;
    for (size_t k = 0; k < profile->count; k++) {
        bool shown = !values || (profile->defined[k] && fabs(values[k]) <= view);
        double size = fabs(errors[k] / reference);
        if (shown && isfinite(size))
            most = fmax(most, size);
    }
    return most;
}

/* True if a band of that half width on a panel of that range is wider than the line. */
static bool is_wide(double error, double range)
{
    return 2 * error * PANEL_HEIGHT / range > LINE_WIDTH;
}

static char *next_note(struct panels *panels)
{
    return panels->notes[panels->note_count++];
}

static void note_error(struct panels *panels, const char *what, double error,
                       const char *of, bool band)
{
    char size[NUMBER_TEXT];
    number_plain(error, 2, size, sizeof size);
    (void)snprintf(next_note(panels), NOTE_SIZE, "Uncertainty of %s: at most %s%s, %s.",
                   what, size, of, band ? "drawn as a band" : "thinner than the line");
}

static void note_fields(struct panels *panels)
{
    const struct profile *profile = &panels->result->profile;
    const char *of = " of the value at the reference";
    double low, high, error;
    field_range(panels, &low, &high);
    if (profile->e_x && profile->e_x_err && panels->e_reference != 0) {
        error = largest_error(profile, profile->e_x_err, panels->e_reference, NULL, 0);
        panels->e_band = is_wide(error, high - low);
        note_error(panels, "E_x", error, of, panels->e_band);
    }
    if (profile->b_y && profile->b_y_err && panels->b_reference != 0) {
        error = largest_error(profile, profile->b_y_err, panels->b_reference, NULL, 0);
        panels->b_band = is_wide(error, high - low);
        note_error(panels, "B_y", error, of, panels->b_band);
    }
}

static void note_ratio(struct panels *panels)
{
    const struct profile *profile = &panels->result->profile;
    double view = ratio_view(panels), low = 0, high = 0;
    if (profile->ratio_error_err) {
        double error = largest_error(profile, profile->ratio_error_err, 1,
                                     profile->ratio_error, view);
        panels->ratio_band = is_wide(error, 2 * view);
        note_error(panels, "the ratio error", error, " where it is in view",
                   panels->ratio_band);
    }
    for (size_t k = 0; k < profile->count; k++) {
        if (!profile->defined[k])
            continue;
        low = fmin(low, profile->ratio_error[k]);
        high = fmax(high, profile->ratio_error[k]);
    }
    if (fmax(high, -low) > view)
        (void)snprintf(next_note(panels), NOTE_SIZE,
                       "The ratio error goes on beyond its panel, from %.2g to %.2g "
                       "where both fields exceed %g %% of the centre.",
                       low, high, 100 * RATIO_FLOOR);
}

static void print_panels(struct sink *script, struct panels *panels)
{
    const struct profile *profile = &panels->result->profile;
    print_data(script, panels);
    sink_print(script,
               "set multiplot\nset lmargin at screen %g\nset rmargin at screen "
               "%g\n",
               LEFT, RIGHT);
    sink_print(script, "set xrange [%.9g:%.9g]\nset tics out nomirror\nset samples 2\n",
               profile->z[0] * 1e3, profile->z[profile->count - 1] * 1e3);
    sink_print(script, "set grid x lc '#d8d8d8' dt 1\n");
    plot_extents(script, panels);
    plot_fields(script, panels);
    if (profile->imbalance)
        plot_imbalance(script, panels);
    if (profile->ratio_error)
        plot_ratio(script, panels);
    sink_print(script, "unset multiplot\n");
}

enum status plot_path(struct folder *folder, const struct result *result, bool *drawn,
                      struct messages *messages)
{
    const struct profile *profile = &result->profile;
    *drawn = false;
    if (!profile->present || profile->count < 2 || !(profile->e_x || profile->b_y))
        return STATUS_OK;
    int count = 1 + (profile->imbalance != NULL) + (profile->ratio_error != NULL);
    size_t k = reference_index(result);
    struct panels panels = {
        .result = result,
        .used = TOP,
        .left = 1 + count,
        .e_reference = profile->e_x ? profile->e_x[k] : 0,
        .b_reference = profile->b_y ? profile->b_y[k] : 0,
    };
    note_fields(&panels);
    if (profile->ratio_error)
        note_ratio(&panels);
    panels.height = (int)(TOP + PARTS_HEIGHT + count * (GAP + PANEL_HEIGHT) + BOTTOM +
                          panels.note_count * NOTE_LINE);
    struct plot plot;
    enum status status =
        plot_begin(&plot, folder, "path.svg", WIDTH, panels.height, messages);
    if (status)
        return status;
    print_panels(&plot.script, &panels);
    return plot_end(&plot, folder, drawn, messages);
}
