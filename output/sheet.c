/* SPDX-License-Identifier: GPL-3.0-or-later */

#include "output/sheet.h"

#include <stdio.h>
#include <string.h>

#include "output/number.h"
#include "output/sheet_figures.h"
#include "output/sheet_layout.h"
#include "output/words.h"

static void write_limit(struct sink *sink, const struct verdict_item *item)
{
    const struct limit_rule *rule = geometry_limit_rule(item->limit);
    char allowed[NUMBER_TEXT], found[NUMBER_TEXT] = "not known", line[SHEET_TEXT];
    number_quantity(item->allowed, 0, rule->unit, allowed, sizeof allowed);
    if (item->judged)
        number_quantity(item->value, item->uncertainty, rule->unit, found,
                        sizeof found);
    (void)snprintf(line, sizeof line, "%s, %s %s", words_limit(item->limit),
                   rule->at_least ? "at least" : "at most", allowed);
    sheet_title(sink, line);
    sink_print(sink, "%-*s%s\n", SHEET_VALUE_COLUMN, found,
               item->met ? "met" : "NOT MET");
    sheet_wrap(sink, SHEET_NOTE_INDENT, item->reason);
}

static void write_verdict(struct sink *sink, const struct verdict *verdict)
{
    char line[SHEET_TEXT];
    words_verdict(verdict, line, sizeof line);
    sink_print(sink, "\nVerdict: %s\n", line);
    for (size_t k = 0; k < verdict->count; k++)
        write_limit(sink, &verdict->items[k]);
}

static void write_field_cautions(struct sink *sink, const struct cautions *cautions)
{
    if (cautions->count == 0)
        return;
    sheet_heading(sink, "Cautions on these fields");
    for (size_t k = 0; k < cautions->count; k++)
        sheet_wrap(sink, 2, cautions->items[k].text);
    sheet_wrap(sink, 2, CAUTIONS_STANDING);
}

static void write_probe(struct sink *sink, const struct geometry *geometry,
                        const struct probe_reading *probe)
{
    enum plane_kind kind = probe->plane;
    bool magnetic = plane_kind_is_magnetic(kind);
    const char *axes[2] = {axis_key(plane_kind_axis(kind, 0)),
                           axis_key(plane_kind_axis(kind, 1))};
    char place[SHEET_TEXT], text[NUMBER_TEXT];
    (void)snprintf(place, sizeof place, "probe %zu, %s, %s = %.6g mm, %s = %.6g mm",
                   probe->probe + 1, plane_kind_key(kind), axes[0], probe->at.a * 1e3,
                   axes[1], probe->at.b * 1e3);
    sink_print(sink, "  %s\n", place);
    number_quantity(probe->potential, probe->potential_err, magnetic ? "A" : "V", text,
                    sizeof text);
    sink_print(sink, "      potential %s", text);
    for (int k = 0; k < 2; k++) {
        number_quantity(probe->field[k], probe->field_err[k], magnetic ? "T" : "V/m",
                        text, sizeof text);
        sink_print(sink, ", %s_%s %s", magnetic ? "B" : "E", axes[k], text);
    }
    const struct plane *plane = &geometry->planes[kind];
    if (probe->part >= 0 && (size_t)probe->part < plane->part_count)
        sink_print(sink, "\n      inside %s", plane->parts[probe->part].name);
    sink_print(sink, "\n");
}

static void write_probes(struct sink *sink, const struct result *result)
{
    if (!result->probe_count)
        return;
    sheet_heading(sink, "Probes");
    for (size_t k = 0; k < result->probe_count; k++)
        write_probe(sink, result->geometry, &result->probes[k]);
}

static void write_level(struct sink *sink, const struct quality *quality, int level,
                        int levels)
{
    sink_print(sink,
               "      grid %d of %d: %8d unknowns, residual %.1e, "
               "1/cond %.1e, flux off %.1e\n",
               level + 1, levels, quality->unknowns, quality->residual, quality->rcond,
               quality->flux_imbalance);
}

static void write_open(struct sink *sink, const struct open_test *open)
{
    char text[SHEET_TEXT];
    (void)snprintf(
        text, sizeof text,
        "open sides: the earth of the supplies (zero potential) stands %.3g m away. "
        "Moved twice as far (on grid %d) it marks %d figures as unsettled; the others "
        "move by at most %.1e of their scale (%s). %.3g times its movement is part of "
        "the uncertainty of each",
        open->distance, open->level + 1, open->unsettled, open->moved,
        open->moved_most ? open->moved_most : "none does", open->factor);
    sheet_wrap(sink, SHEET_NOTE_INDENT, text);
}

/* Of the finest grid; rows add up to round-off wherever there are capacitances. */
static void write_reciprocity(struct sink *sink, const struct quality *quality)
{
    if (quality->row_sum > 0)
        sink_print(sink,
                   "      capacitances: C_ij - C_ji up to %.1e, row sums up to %.1e of "
                   "the largest\n",
                   quality->reciprocity, quality->row_sum);
}

static void write_plane(struct sink *sink, enum plane_kind kind,
                        const struct plane_result *plane)
{
    if (!plane->present) {
        sink_print(sink, "  %d %s: not in the file\n", kind + 1, plane_kind_key(kind));
        return;
    }
    sink_print(sink, "  %d %s (%s, %s), finest grid %d by %d lines\n", kind + 1,
               plane_kind_key(kind), axis_key(plane_kind_axis(kind, 0)),
               axis_key(plane_kind_axis(kind, 1)), plane->grid.na, plane->grid.nb);
    for (int k = 0; k < plane->levels; k++)
        write_level(sink, &plane->quality[k], k, plane->levels);
    write_reciprocity(sink, &plane->quality[plane->levels - 1]);
    if (plane->open.done)
        write_open(sink, &plane->open);
}

static void write_assumptions(struct sink *sink, const struct result *result)
{
    sheet_heading(sink, "What solving in two dimensions takes for granted");
    for (int k = 0; k < PLANE_KINDS; k++) {
        if (!result->planes[k].present)
            continue;
        sink_print(sink, "  %s\n", plane_kind_key((enum plane_kind)k));
        sheet_wrap(sink, SHEET_NOTE_INDENT, words_assumption((enum plane_kind)k));
    }
}

static void write_cautions(struct sink *sink)
{
    sheet_heading(sink, "Cautions");
    for (size_t k = 0; words_caution(k); k++)
        sheet_wrap(sink, 2, words_caution(k));
}

static void write_aim(struct sink *sink, const struct accuracy_item *item)
{
    sheet_title(sink, item->name);
    if (item->stands)
        sink_print(sink, "%.2e of its %s%s\n", item->reached,
                   item->of_limit ? "limit" : "value", item->met ? "" : ", NOT MET");
    else
        sink_print(sink, "does not stand, NOT MET\n");
}

/* What was asked beside what came of it, figure by figure and plane by plane. */
static void write_accuracy(struct sink *sink, const struct result *result)
{
    const struct accuracy *accuracy = &result->accuracy;
    char text[2 * SHEET_TEXT];
    if (accuracy->state == ACCURACY_NOT_ASKED)
        return;
    sheet_heading(sink, "Accuracy asked for");
    accuracy_sentence(accuracy, text, sizeof text);
    sheet_wrap(sink, 2, text);
    for (size_t k = 0; k < accuracy->count; k++)
        write_aim(sink, &accuracy->items[k]);
    sink_print(sink, "  lines after %d round%s of refinement\n", accuracy->rounds,
               accuracy->rounds == 1 ? "" : "s");
    for (int k = 0; k < PLANE_KINDS; k++) {
        if (!result->planes[k].present)
            continue;
        accuracy_refined(&accuracy->planes[k], text, sizeof text);
        sink_print(sink, "    %s\n", plane_kind_key((enum plane_kind)k));
        sheet_wrap(sink, SHEET_NOTE_INDENT, text);
    }
}

void sheet_write(struct sink *sink, const struct result *result)
{
    const struct geometry *geometry = result->geometry;
    sheet_wrap(sink, 0, geometry->title ? geometry->title : "(untitled)");
    sink_print(sink, "geometry file %s, evengap %s\n", words_base_name(geometry->path),
               EVENGAP_VERSION);
    write_verdict(sink, &result->verdict);
    write_field_cautions(sink, &result->cautions);
    sink_print(sink, "\nx along the electric field, y from pole to pole, z along the "
                     "beam. 1.234(5) means\n1.234 with an uncertainty of 0.005. The "
                     "last column names the planes used.\n");
    if (result->planes[PLANE_ELECTRIC_TURNED].present)
        sink_print(sink, "r is the distance from the axis z.\n");
    sheet_figures(sink, &result->figures);
    write_probes(sink, result);
    sheet_heading(sink, "Planes and grids");
    for (int k = 0; k < PLANE_KINDS; k++)
        write_plane(sink, (enum plane_kind)k, &result->planes[k]);
    write_accuracy(sink, result);
    write_assumptions(sink, result);
    write_cautions(sink);
}
