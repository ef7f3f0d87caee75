/* SPDX-License-Identifier: GPL-3.0-or-later */

/* A matrix is symmetric: only its lower half is shown, in blocks of columns that fit the
 * sheet. */

#include "output/sheet_conductors.h"

#include <stdio.h>
#include <string.h>

#include "output/number.h"
#include "output/sheet_layout.h"
#include "solver/figures_conductor.h"

enum { NAME_COLUMN = 22, CELL_COLUMN = 20, BLOCK = 3, NAME_TEXT = 120 };

static bool is_force(const struct figure *figure)
{
    return figure->group == FIGURE_HARDWARE &&
           strncmp(figure->name, "force_", strlen("force_")) == 0;
}

static bool is_matrix(const struct figure *figure)
{
    return strcmp(figure->name, "capacitance_matrix") == 0;
}

bool sheet_is_conductor_figure(const struct figure *figure)
{
    return is_force(figure) || (is_matrix(figure) && figure->state != FIGURE_MISSING);
}

static void write_cell(struct sink *sink, const struct figure *figure)
{
    char value[NUMBER_TEXT] = "-", text[2 * NUMBER_TEXT];
    if (figure->state != FIGURE_MISSING)
        number_quantity(figure->value, figure->uncertainty, figure->unit, value,
                        sizeof value);
    (void)snprintf(text, sizeof text, "%s%s", value,
                   figure->state == FIGURE_UNSETTLED ? " unsettled" : "");
    sink_print(sink, " %-*s", CELL_COLUMN - 1, text);
}

/* Indented name in a column of its own; a long one takes a line of its own. */
static void write_name(struct sink *sink, const char *name)
{
    if (strlen(name) < NAME_COLUMN)
        sink_print(sink, "    %-*s", NAME_COLUMN, name);
    else
        sink_print(sink, "    %s\n%*s", name, NAME_COLUMN + 4, "");
}

static bool same_subject(const struct figure *p, const struct figure *q)
{
    return p->planes == q->planes && p->subject && q->subject &&
           strcmp(p->subject, q->subject) == 0;
}

/* Forces of the conductor whose first one is figure k; returns the index after them. */
static size_t write_force(struct sink *sink, const struct figures *figures, size_t k)
{
    const struct figure *first = &figures->items[k];
    const char *note = NULL;
    write_name(sink, first->subject ? first->subject : "");
    for (; k < figures->count && is_force(&figures->items[k]) &&
           same_subject(first, &figures->items[k]);
         k++) {
        write_cell(sink, &figures->items[k]);
        if (figures->items[k].note != NULL &&
            (note == NULL || figures->items[k].state == FIGURE_MISSING))
            note = figures->items[k].note;
    }
    sink_print(sink, "\n");
    if (note != NULL)
        sheet_wrap(sink, SHEET_NOTE_INDENT, note);
    return k;
}

static size_t first_force(const struct figures *figures, enum plane_kind kind)
{
    size_t k = 0;
    while (k < figures->count && !(is_force(&figures->items[k]) &&
                                   figures->items[k].planes == 1U << (unsigned)kind))
        k++;
    return k;
}

static void write_forces(struct sink *sink, const struct figures *figures,
                         enum plane_kind kind)
{
    const unsigned planes = 1U << (unsigned)kind;
    size_t k = first_force(figures, kind);
    if (k == figures->count)
        return;
    const struct figure *first = &figures->items[k];
    sink_print(sink, "  %-*s", NAME_COLUMN + 2, plane_kind_key(kind));
    for (size_t n = k; n < figures->count && same_subject(first, &figures->items[n]) &&
                       is_force(&figures->items[n]);
         n++) {
        char title[CELL_COLUMN];
        (void)snprintf(title, sizeof title, "force along %s",
                       figures->items[n].name + strlen("force_"));
        sink_print(sink, " %-*s", CELL_COLUMN - 1, title);
    }
    sink_print(sink, "\n");
    while (k < figures->count && is_force(&figures->items[k]) &&
           figures->items[k].planes == planes)
        k = write_force(sink, figures, k);
}

static void write_block(struct sink *sink, const struct matrix_view *view, size_t from)
{
    const size_t to = from + BLOCK < view->count ? from + BLOCK : view->count;
    char name[NAME_TEXT], row[NAME_TEXT + 24];
    sink_print(sink, "    %-*s", NAME_COLUMN, "");
    for (size_t j = from; j < to; j++)
        sink_print(sink, " %-*zu", CELL_COLUMN - 1, j + 1);
    sink_print(sink, "\n");
    for (size_t i = from; i < view->count; i++) {
        matrix_name(view, i, name, sizeof name);
        (void)snprintf(row, sizeof row, "%zu %s", i + 1, name);
        write_name(sink, row);
        for (size_t j = from; j < to && j <= i; j++)
            write_cell(sink, matrix_entry(view, i, j));
        sink_print(sink, "\n");
    }
}

static void write_matrix(struct sink *sink, const struct figures *figures,
                         enum plane_kind kind)
{
    struct matrix_view view;
    if (!matrix_find(figures, kind, &view))
        return;
    sink_print(sink,
               "  %s, capacitance matrix: charge of one conductor per volt on "
               "another,\n  all else earthed\n",
               plane_kind_key(kind));
    for (size_t from = 0; from < view.count; from += BLOCK)
        write_block(sink, &view, from);
}

void sheet_conductors(struct sink *sink, const struct figures *figures)
{
    for (int k = 0; k < PLANE_KINDS; k++)
        write_forces(sink, figures, (enum plane_kind)k);
    for (int k = 0; k < PLANE_KINDS; k++)
        write_matrix(sink, figures, (enum plane_kind)k);
}
