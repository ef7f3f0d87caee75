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

void sheet_write(struct sink *sink, const struct result *result)
{
    const struct geometry *geometry = result->geometry;
    sheet_wrap(sink, 0, geometry->title ? geometry->title : "(untitled)");
    sink_print(sink, "geometry file %s, evengap %s\n", words_base_name(geometry->path),
               EVENGAP_VERSION);
    write_verdict(sink, &result->verdict);
    sink_print(sink, "\nx along the electric field, y from pole to pole, z along the "
                     "beam. 1.234(5) means\n1.234 with an uncertainty of 0.005. The "
                     "last column names the planes used.\n");
    sheet_figures(sink, &result->figures);
    write_probes(sink, result);
    sheet_heading(sink, "Planes and grids");
    for (int k = 0; k < PLANE_KINDS; k++)
        write_plane(sink, (enum plane_kind)k, &result->planes[k]);
    write_assumptions(sink, result);
    write_cautions(sink);
}
