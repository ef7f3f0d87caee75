/* SPDX-License-Identifier: GPL-3.0-or-later */

#include "output/sheet_figures.h"

#include <stdbool.h>
#include <stdio.h>
#include <string.h>

#include "output/number.h"
#include "output/sheet_conductors.h"
#include "output/sheet_layout.h"
#include "output/words.h"

enum { PART_COLUMN = 26, CELL_COLUMN = 19, TERM_COLUMN = 16 };

static bool named(const struct figure *figure, const char *name)
{
    return strcmp(figure->name, name) == 0;
}

static bool is_expansion(const struct figure *figure)
{
    return strncmp(figure->name, "expansion_", strlen("expansion_")) == 0;
}

static bool is_part_figure(const struct figure *figure)
{
    return named(figure, "charge") || named(figure, "capacitance") ||
           named(figure, "surface_field") || named(figure, "flux");
}

/* Coefficients and fit errors of Enge functions. */
static bool is_enge(const struct figure *figure)
{
    return strncmp(figure->name, "enge_", strlen("enge_")) == 0;
}

/* Coefficients are missing with their function, or left out of it. */
static bool is_enge_term(const struct figure *figure)
{
    return is_enge(figure) && figure->subject;
}

/* Figures with a line of their own. */
static bool is_line(const struct figure *figure)
{
    return figure->state != FIGURE_MISSING && !is_expansion(figure) &&
           !is_part_figure(figure) && !is_enge(figure) &&
           !sheet_is_conductor_figure(figure);
}

static void value_text(const struct figure *figure, char *text, size_t size)
{
    char value[NUMBER_TEXT] = "missing";
    if (figure->state != FIGURE_MISSING)
        number_quantity(figure->value, figure->uncertainty, figure->unit, value,
                        sizeof value);
    (void)snprintf(text, size, "%s%s", value,
                   figure->state == FIGURE_UNSETTLED ? " unsettled" : "");
}

/* "1 3": numbers of the planes, as in the list of planes. */
static void write_plane_numbers(struct sink *sink, unsigned planes)
{
    for (unsigned k = 0; k < PLANE_KINDS; k++)
        if (planes & (1U << k))
            sink_print(sink, " %u", k + 1);
    sink_print(sink, "\n");
}

static void write_line(struct sink *sink, const struct figure *figure)
{
    char title[SHEET_TEXT], value[2 * NUMBER_TEXT];
    (void)snprintf(title, sizeof title, "%s%s%s", figure->title,
                   figure->subject ? ", " : "", figure->subject ? figure->subject : "");
    sheet_title(sink, title);
    value_text(figure, value, sizeof value);
    if (figure->planes) {
        sink_print(sink, "%-*s", SHEET_VALUE_COLUMN, value);
        write_plane_numbers(sink, figure->planes);
    } else {
        sink_print(sink, "%s\n", value);
    }
    if (figure->note)
        sheet_wrap(sink, SHEET_NOTE_INDENT, figure->note);
}

/* One term of an expansion; NULL if there is none. */
static const struct figure *find_term(const struct figures *figures, const char *name,
                                      int n, bool skew)
{
    char subject[32];
    (void)snprintf(subject, sizeof subject, "n = %d%s", n, skew ? " skew" : "");
    return figures_find(figures, name, subject);
}

static const char *const EXPANSIONS[3] = {"expansion_electric", "expansion_magnetic",
                                          "expansion_difference"};

/* A row of the table, unless nothing in it is worth showing; false past the last n. */
static bool write_term(struct sink *sink, const struct figures *figures, int n,
                       bool skew)
{
    const struct figure *terms[3];
    bool any = false, shown = false;
    for (int k = 0; k < 3; k++) {
        terms[k] = find_term(figures, EXPANSIONS[k], n, skew);
        any = any || terms[k];
        shown = shown || (terms[k] && !words_is_zero_term(terms[k]));
    }
    if (!shown)
        return any;
    sink_print(sink, "    %d %-5s", n, skew ? "skew" : "");
    for (int k = 0; k < 3; k++) {
        char text[2 * NUMBER_TEXT] = "-";
        if (terms[k])
            value_text(terms[k], text, sizeof text);
        sink_print(sink, "  %-*s", TERM_COLUMN, text);
    }
    sink_print(sink, "\n");
    return true;
}

static void write_expansions(struct sink *sink, const struct figures *figures)
{
    const struct figure *first = find_term(figures, EXPANSIONS[0], 1, false);
    if (first == NULL)
        first = find_term(figures, EXPANSIONS[1], 1, false);
    if (first == NULL)
        return;
    sink_print(sink, "  expansion about the axis, terms above %.0e\n", WORDS_ZERO_TERM);
    if (first->note)
        sheet_wrap(sink, SHEET_NOTE_INDENT, first->note);
    sink_print(sink, "    n        %-*s  %-*s  %s\n", TERM_COLUMN, "e_n of E",
               TERM_COLUMN, "b_n of B", "e_n - b_n, what the filter feels");
    for (int n = 1; write_term(sink, figures, n, false); n++)
        (void)write_term(sink, figures, n, true);
}

/* The ends of the fields, a column each. */
static const struct {
    const char *title, *error, *term;
} ENGE_COLUMNS[] = {
    {"E_x, entrance", "enge_error_electric_entrance", "enge_electric_entrance"},
    {"E_x, exit", "enge_error_electric_exit", "enge_electric_exit"},
    {"B_y, entrance", "enge_error_magnetic_entrance", "enge_magnetic_entrance"},
    {"B_y, exit", "enge_error_magnetic_exit", "enge_magnetic_exit"},
};
enum { ENGE_COLUMN_COUNT = sizeof ENGE_COLUMNS / sizeof *ENGE_COLUMNS };

/* A row of the table: coefficients of one name, or the errors (NULL). */
static void write_enge_row(struct sink *sink, const struct figures *figures,
                           const char *subject)
{
    sink_print(sink, "    %-7s", subject ? subject : "error");
    for (int k = 0; k < ENGE_COLUMN_COUNT; k++) {
        const struct figure *f = figures_find(
            figures, subject ? ENGE_COLUMNS[k].term : ENGE_COLUMNS[k].error, subject);
        char text[NUMBER_TEXT] = "-";
        if (f && f->state == FIGURE_GOOD)
            number_quantity(f->value, f->uncertainty, f->unit, text, sizeof text);
        else if (f && f->state == FIGURE_UNSETTLED)
            (void)snprintf(text, sizeof text, "unsettled");
        sink_print(sink, "  %-*s", k + 1 < ENGE_COLUMN_COUNT ? TERM_COLUMN : 0, text);
    }
    sink_print(sink, "\n");
}

static void write_enge_notes(struct sink *sink, const struct figures *figures)
{
    char text[SHEET_TEXT];
    for (int k = 0; k < ENGE_COLUMN_COUNT; k++) {
        const struct figure *f = figures_find(figures, ENGE_COLUMNS[k].error, NULL);
        if (!f || f->state == FIGURE_MISSING || !f->note)
            continue;
        (void)snprintf(text, sizeof text, "%s: %s", ENGE_COLUMNS[k].title, f->note);
        sheet_wrap(sink, SHEET_NOTE_INDENT, text);
    }
}

static void write_enge(struct sink *sink, const struct figures *figures)
{
    static const char *const subjects[] = {"a0", "a1", "a2", "a3", "a4", "a5"};
    bool any = false;
    for (int k = 0; k < ENGE_COLUMN_COUNT; k++) {
        const struct figure *f = figures_find(figures, ENGE_COLUMNS[k].error, NULL);
        any = any || (f && f->state != FIGURE_MISSING);
    }
    if (!any)
        return;
    sink_print(sink, "  Enge functions, field/centre = 1/(1 + exp(a0 + a1 s + ... + a5 "
                     "s^5))\n           ");
    for (int k = 0; k < ENGE_COLUMN_COUNT; k++)
        sink_print(sink, "  %-*s", k + 1 < ENGE_COLUMN_COUNT ? TERM_COLUMN : 0,
                   ENGE_COLUMNS[k].title);
    sink_print(sink, "\n");
    for (size_t k = 0; k < sizeof subjects / sizeof *subjects; k++)
        write_enge_row(sink, figures, subjects[k]);
    write_enge_row(sink, figures, NULL);
    write_enge_notes(sink, figures);
}

static bool same_part(const struct figure *p, const struct figure *q)
{
    return p->planes == q->planes && p->subject && q->subject &&
           strcmp(p->subject, q->subject) == 0;
}

static enum plane_kind first_plane(const struct figure *figure)
{
    unsigned plane = 0;
    while (plane + 1 < PLANE_KINDS && !(figure->planes & (1U << plane)))
        plane++;
    return (enum plane_kind)plane;
}

static void write_table_head(struct sink *sink, const struct figure *figure)
{
    sink_print(sink, "  %-*s", PART_COLUMN - 2, plane_kind_key(first_plane(figure)));
    if (named(figure, "charge"))
        sink_print(sink, "%-*s%-*s%s\n", CELL_COLUMN, "charge", CELL_COLUMN,
                   "capacitance", "peak surface field");
    else
        sink_print(sink, "flux\n");
}

/* Notes of the part's figures: the place of a surface field, the reason of a gap. */
static void write_part_notes(struct sink *sink, const struct figure *figures,
                             size_t count)
{
    char text[SHEET_TEXT];
    for (size_t k = 0; k < count; k++) {
        const struct figure *f = &figures[k];
        const bool missing = f->state == FIGURE_MISSING;
        if (!f->note || !(missing || named(f, "surface_field")))
            continue;
        (void)snprintf(text, sizeof text, "%s%s%s", missing ? f->title : "",
                       missing ? ": " : "", f->note);
        sheet_wrap(sink, SHEET_NOTE_INDENT, text);
    }
}

/* All figures of one part, from figure k on; returns the index after them. */
static size_t write_part(struct sink *sink, const struct figures *figures, size_t k)
{
    const struct figure *first = &figures->items[k];
    size_t count = 0;
    if (strlen(first->subject) < PART_COLUMN - 4)
        sink_print(sink, "    %-*s", PART_COLUMN - 4, first->subject);
    else
        sink_print(sink, "    %s\n%*s", first->subject, PART_COLUMN, "");
    for (; k + count < figures->count && is_part_figure(&first[count]) &&
           same_part(first, &first[count]);
         count++) {
        char text[2 * NUMBER_TEXT];
        value_text(&first[count], text, sizeof text);
        sink_print(sink, "%-*s ", CELL_COLUMN - 1, text);
    }
    sink_print(sink, "\n");
    write_part_notes(sink, first, count);
    return k + count;
}

static void write_parts(struct sink *sink, const struct figures *figures)
{
    unsigned planes = 0;
    bool planar = false, turned = false;
    for (size_t k = 0; k < figures->count;) {
        const struct figure *figure = &figures->items[k];
        if (!is_part_figure(figure) || !figure->subject) {
            k++;
            continue;
        }
        bool *told = plane_kind_is_turned(first_plane(figure)) ? &turned : &planar;
        if (!*told)
            sink_print(sink,
                       "  %s; capacitance of a part to everything else, earthed.\n",
                       told == &turned ? "Of whole rings" : "Per metre of depth");
        *told = true;
        if (figure->planes != planes)
            write_table_head(sink, figure);
        planes = figure->planes;
        k = write_part(sink, figures, k);
    }
}

static bool same_reason(const struct figure *p, const struct figure *q)
{
    return p->group == q->group && q->state == FIGURE_MISSING && !is_part_figure(q) &&
           !is_enge_term(q) && !sheet_is_conductor_figure(q) &&
           strcmp(p->note ? p->note : "", q->note ? q->note : "") == 0;
}

/* True if the group holds anything but missing figures: then it matters which they are. */
static bool has_figures(const struct figures *figures, enum figure_group group)
{
    for (size_t k = 0; k < figures->count; k++)
        if (figures->items[k].group == group &&
            figures->items[k].state != FIGURE_MISSING)
            return true;
    return false;
}

/* The reason of figure k, and every figure of the group that is missing for it, unless
 * all are missing. */
static void write_missing(struct sink *sink, const struct figures *figures, size_t k)
{
    const struct figure *first = &figures->items[k];
    for (size_t p = 0; p < k; p++)
        if (figures->items[p].state == FIGURE_MISSING &&
            same_reason(first, &figures->items[p]))
            return; /* told already */
    sink_print(sink, "  missing: %s\n", first->note ? first->note : "not computed");
    if (!has_figures(figures, first->group))
        return;
    char text[8 * SHEET_TEXT];
    size_t used = 0;
    text[0] = '\0';
    for (size_t p = k; p < figures->count && used < sizeof text; p++) {
        const struct figure *f = &figures->items[p];
        if (!same_reason(first, f))
            continue;
        int more =
            snprintf(text + used, sizeof text - used, "%s%s%s%s", used ? "; " : "",
                     f->title, f->subject ? ", " : "", f->subject ? f->subject : "");
        used += more > 0 ? (size_t)more : 0;
    }
    sheet_wrap(sink, SHEET_NOTE_INDENT, text);
}

static void write_group(struct sink *sink, const struct figures *figures,
                        enum figure_group group)
{
    bool opened = false;
    for (size_t k = 0; k < figures->count; k++) {
        if (figures->items[k].group != group)
            continue;
        if (!opened)
            sheet_heading(sink, words_group(group));
        opened = true;
        if (is_line(&figures->items[k]))
            write_line(sink, &figures->items[k]);
    }
    if (group == FIGURE_ALONG)
        write_enge(sink, figures);
    if (group == FIGURE_ACROSS)
        write_expansions(sink, figures);
    if (group == FIGURE_HARDWARE) {
        write_parts(sink, figures);
        sheet_conductors(sink, figures);
    }
    for (size_t k = 0; k < figures->count; k++)
        if (figures->items[k].group == group &&
            figures->items[k].state == FIGURE_MISSING &&
            !is_part_figure(&figures->items[k]) && !is_enge_term(&figures->items[k]) &&
            !sheet_is_conductor_figure(&figures->items[k]))
            write_missing(sink, figures, k);
}

void sheet_figures(struct sink *sink, const struct figures *figures)
{
    for (int group = 0; group < FIGURE_GROUPS; group++)
        write_group(sink, figures, (enum figure_group)group);
}
