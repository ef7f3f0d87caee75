/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Plain HTML without scripts. Text from the geometry file goes through one escaping
 * function; pictures are embedded as base64, so that the identifiers inside one picture
 * cannot clash with those of another. */

#include "output/report.h"

#include <errno.h>
#include <stdio.h>
#include <string.h>

#include "output/number.h"
#include "output/plot_convergence.h"
#include "output/words.h"
#include "shared/mem.h"
#include "solver/figures_conductor.h"

#define MATRIX_NAME 256

static const char style[] =
    "body{font-family:sans-serif;max-width:70em;margin:2em auto;padding:0 1em;"
    "color:#111;background:#fff}"
    "table{border-collapse:collapse}"
    "td,th{border:1px solid #999;padding:.25em .6em;text-align:left;"
    "vertical-align:top}"
    "td.n{text-align:right;white-space:nowrap}"
    ".verdict{font-size:1.2em;border:2px solid #111;padding:.5em 1em}"
    "img{max-width:100%;height:auto;border:1px solid #ccc}";

static void print_text(struct sink *sink, const char *text)
{
    for (; text && *text; text++) {
        switch (*text) {
        case '<':
            sink_print(sink, "&lt;");
            break;
        case '>':
            sink_print(sink, "&gt;");
            break;
        case '&':
            sink_print(sink, "&amp;");
            break;
        case '"':
            sink_print(sink, "&quot;");
            break;
        default:
            sink_print(sink, "%c", *text);
        }
    }
}

static void print_element(struct sink *sink, const char *tag, const char *text)
{
    sink_print(sink, "<%s>", tag);
    print_text(sink, text);
    sink_print(sink, "</%s>", tag);
}

static void print_limits(struct sink *sink, const struct verdict *verdict)
{
    sink_print(sink, "<table>\n<tr><th>limit</th><th>asked</th><th>found</th>"
                     "<th>met</th><th>why</th></tr>\n");
    for (size_t k = 0; k < verdict->count; k++) {
        const struct verdict_item *item = &verdict->items[k];
        const struct limit_rule *rule = geometry_limit_rule(item->limit);
        char allowed[NUMBER_TEXT], found[NUMBER_TEXT] = "not known";
        number_quantity(item->allowed, 0, rule->unit, allowed, sizeof allowed);
        if (item->judged)
            number_quantity(item->value, item->uncertainty, rule->unit, found,
                            sizeof found);
        sink_print(sink,
                   "<tr><td>%s</td><td>%s %s</td><td class=\"n\">%s</td>"
                   "<td>%s</td>",
                   words_limit(item->limit), rule->at_least ? "at least" : "at most",
                   allowed, found, item->met ? "yes" : "<b>NO</b>");
        print_element(sink, "td", item->reason);
        sink_print(sink, "</tr>\n");
    }
    sink_print(sink, "</table>\n");
}

static void print_field_cautions(struct sink *sink, const struct cautions *cautions)
{
    if (cautions->count == 0)
        return;
    sink_print(sink, "<h2>Cautions on these fields</h2>\n<ul>\n");
    for (size_t k = 0; k < cautions->count; k++) {
        print_element(sink, "li", cautions->items[k].text);
        sink_print(sink, "\n");
    }
    sink_print(sink, "</ul>\n<p>%s</p>\n", CAUTIONS_STANDING);
}

static void print_planes(struct sink *sink, unsigned planes)
{
    const char *gap = "";
    sink_print(sink, "<td>");
    for (unsigned k = 0; k < PLANE_KINDS; k++) {
        if (!(planes & (1U << k)))
            continue;
        sink_print(sink, "%s%s", gap, plane_kind_key((enum plane_kind)k));
        gap = ", ";
    }
    sink_print(sink, "</td>");
}

static void print_figure(struct sink *sink, const struct figure *figure)
{
    char value[NUMBER_TEXT] = "missing";
    if (figure->state != FIGURE_MISSING)
        number_quantity(figure->value, figure->uncertainty, figure->unit, value,
                        sizeof value);
    sink_print(sink, "<tr><td>");
    print_text(sink, figure->title);
    if (figure->subject) {
        sink_print(sink, ", ");
        print_text(sink, figure->subject);
    }
    sink_print(sink, "</td><td class=\"n\">%s%s</td>", value,
               figure->state == FIGURE_UNSETTLED ? " unsettled" : "");
    print_planes(sink, figure->planes);
    print_element(sink, "td", figure->note);
    sink_print(sink, "</tr>\n");
}

static bool has_group(const struct figures *figures, int group)
{
    for (size_t k = 0; k < figures->count; k++)
        if ((int)figures->items[k].group == group)
            return true;
    return false;
}

static bool is_in_matrix(const struct figure *figure)
{
    return strcmp(figure->name, "capacitance_matrix") == 0 &&
           figure->state != FIGURE_MISSING;
}

static void print_entry(struct sink *sink, const struct figure *entry)
{
    char value[NUMBER_TEXT] = "missing";
    if (entry->state != FIGURE_MISSING)
        number_quantity(entry->value, entry->uncertainty, entry->unit, value,
                        sizeof value);
    sink_print(sink, "<td class=\"n\">%s%s</td>", value,
               entry->state == FIGURE_UNSETTLED ? " unsettled" : "");
}

static void print_matrix(struct sink *sink, const struct figures *figures,
                         enum plane_kind kind)
{
    struct matrix_view view;
    char name[MATRIX_NAME];
    if (!matrix_find(figures, kind, &view))
        return;
    sink_print(sink,
               "<p>%s, capacitance matrix: charge of one conductor per volt on "
               "another, all else earthed</p>\n<table>\n<tr><th></th>",
               plane_kind_key(kind));
    for (size_t j = 0; j < view.count; j++) {
        matrix_name(&view, j, name, sizeof name);
        print_element(sink, "th", name);
    }
    sink_print(sink, "</tr>\n");
    for (size_t i = 0; i < view.count; i++) {
        matrix_name(&view, i, name, sizeof name);
        sink_print(sink, "<tr>");
        print_element(sink, "th", name);
        for (size_t j = 0; j < view.count; j++)
            print_entry(sink, matrix_entry(&view, i, j));
        sink_print(sink, "</tr>\n");
    }
    sink_print(sink, "</table>\n");
}

static void print_figures(struct sink *sink, const struct figures *figures)
{
    for (int group = 0; group < FIGURE_GROUPS; group++) {
        if (!has_group(figures, group))
            continue;
        print_element(sink, "h2", words_group((enum figure_group)group));
        sink_print(sink, "\n<table>\n<tr><th>figure</th><th>value</th>"
                         "<th>planes</th><th>note</th></tr>\n");
        for (size_t k = 0; k < figures->count; k++)
            if ((int)figures->items[k].group == group &&
                !words_is_zero_term(&figures->items[k]) &&
                !is_in_matrix(&figures->items[k]))
                print_figure(sink, &figures->items[k]);
        sink_print(sink, "</table>\n");
        for (int k = 0; group == FIGURE_HARDWARE && k < PLANE_KINDS; k++)
            print_matrix(sink, figures, (enum plane_kind)k);
    }
}

/* Three bytes become four letters; a short last group is padded with '='. */
static void print_base64(struct sink *sink, const unsigned char *bytes, size_t count)
{
    static const char letters[] =
        "ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+/";
    for (size_t k = 0; k < count; k += 3) {
        unsigned group = (unsigned)bytes[k] << 16;
        if (k + 1 < count)
            group |= (unsigned)bytes[k + 1] << 8;
        if (k + 2 < count)
            group |= bytes[k + 2];
        char four[4] = {letters[group >> 18], letters[group >> 12 & 63],
                        k + 1 < count ? letters[group >> 6 & 63] : '=',
                        k + 2 < count ? letters[group & 63] : '='};
        sink_bytes(sink, four, sizeof four);
    }
}

static enum status print_file(struct sink *sink, FILE *file, const char *path,
                              struct messages *messages)
{
    enum { CHUNK = 3 * 4096 }; /* a multiple of 3: only the last one is padded */
    unsigned char *bytes = MEM_NEW(CHUNK, unsigned char);
    if (!bytes)
        return STATUS_MEMORY;
    size_t count;
    while ((count = fread(bytes, 1, CHUNK, file)))
        print_base64(sink, bytes, count);
    mem_free(bytes);
    if (!ferror(file))
        return STATUS_OK;
    messages_add(messages, SEVERITY_ERROR, (struct place){0, 0}, "cannot read %s",
                 path);
    return STATUS_WRITE;
}

static enum status print_picture(struct sink *sink, const struct folder *folder,
                                 const char *name, struct messages *messages)
{
    char *path = folder_path(folder, name);
    if (!path)
        return STATUS_MEMORY;
    enum status status = STATUS_WRITE;
    FILE *file = fopen(path, "rb");
    if (file) {
        sink_print(sink, "<p><img alt=\"%s\" src=\"data:image/svg+xml;base64,", name);
        status = print_file(sink, file, path, messages);
        sink_print(sink, "\"></p>\n");
        if (words_picture(name))
            print_element(sink, "p", words_picture(name));
        (void)fclose(file);
    } else {
        messages_add(messages, SEVERITY_ERROR, (struct place){0, 0},
                     "cannot read %s: %s", path, strerror(errno));
    }
    mem_free(path);
    return status;
}

static bool is_picture(const char *name)
{
    size_t length = strlen(name);
    return length > 4 && strcmp(name + length - 4, ".svg") == 0;
}

/* The pictures that come first, in this order. */
static const char *const first_pictures[] = {"path.svg", "ratio_map.svg",
                                             "convergence.svg"};
#define FIRST_PICTURES (sizeof first_pictures / sizeof first_pictures[0])

static bool comes_first(const char *name)
{
    for (size_t f = 0; f < FIRST_PICTURES; f++)
        if (strcmp(name, first_pictures[f]) == 0)
            return true;
    return false;
}

static enum status print_pictures(struct sink *sink, const struct folder *folder,
                                  struct messages *messages)
{
    enum status status = STATUS_OK;
    for (size_t f = 0; f < FIRST_PICTURES; f++)
        for (size_t k = 0; !status && k < folder->count; k++)
            if (strcmp(folder->names[k], first_pictures[f]) == 0)
                status = print_picture(sink, folder, first_pictures[f], messages);
    for (size_t k = 0; !status && k < folder->count; k++)
        if (is_picture(folder->names[k]) && !comes_first(folder->names[k]))
            status = print_picture(sink, folder, folder->names[k], messages);
    return status;
}

static void print_trust(struct sink *sink, const struct result *result)
{
    sink_print(sink,
               "<h2>What solving in two dimensions takes for granted</h2>\n<ul>\n");
    for (int k = 0; k < PLANE_KINDS; k++)
        if (result->planes[k].present)
            sink_print(sink, "<li>%s: %s.</li>\n", plane_kind_key((enum plane_kind)k),
                       words_assumption((enum plane_kind)k));
    sink_print(sink, "</ul>\n<h2>Cautions</h2>\n<ul>\n");
    for (size_t k = 0; words_caution(k); k++)
        sink_print(sink, "<li>%s</li>\n", words_caution(k));
    sink_print(sink, "</ul>\n");
}

/* Says why a picture that is always looked for is not there. */
static void print_no_convergence(struct sink *sink, const struct result *result)
{
    const struct figure *chosen[CONVERGENCE_MOST];
    if (convergence_choose(result, chosen) == 0)
        sink_print(sink, "<p>There is no convergence plot: no main figure changes from "
                         "grid to grid.</p>\n");
}

static void print_accuracy(struct sink *sink, const struct accuracy *accuracy)
{
    char line[1024];
    if (accuracy->state == ACCURACY_NOT_ASKED)
        return;
    accuracy_sentence(accuracy, line, sizeof line);
    sink_print(sink, "<p>Accuracy asked for: ");
    print_text(sink, line);
    sink_print(sink, "</p>\n");
}

static void print_head(struct sink *sink, const struct result *result)
{
    const char *title = result->geometry->title;
    char line[256];
    words_verdict(&result->verdict, line, sizeof line);
    sink_print(sink, "<!DOCTYPE html>\n<html lang=\"en\">\n<head>\n"
                     "<meta charset=\"utf-8\">\n");
    print_element(sink, "title", title ? title : "evengap");
    sink_print(sink, "\n<style>%s</style>\n</head>\n<body>\n", style);
    print_element(sink, "h1", title ? title : "(untitled)");
    sink_print(sink, "\n<p class=\"verdict\">Verdict: %s</p>\n", line);
    if (result->verdict.count)
        print_limits(sink, &result->verdict);
    print_accuracy(sink, &result->accuracy);
    print_field_cautions(sink, &result->cautions);
    sink_print(sink, "<p>Geometry file ");
    print_text(sink, words_base_name(result->geometry->path));
    sink_print(sink,
               ", evengap %s. x along the electric field, y from pole to pole, z "
               "along the beam%s. 1.234(5) means 1.234 with an uncertainty of "
               "0.005.</p>\n",
               EVENGAP_VERSION,
               result->planes[PLANE_ELECTRIC_TURNED].present
                   ? ", r the distance from the axis z"
                   : "");
}

enum status report_write(struct folder *folder, const struct result *result,
                         struct messages *messages)
{
    struct sink sink = {0};
    enum status status = folder_open(folder, "report.html", &sink, messages);
    if (status)
        return status;
    print_head(&sink, result);
    status = print_pictures(&sink, folder, messages);
    print_no_convergence(&sink, result);
    print_figures(&sink, &result->figures);
    print_trust(&sink, result);
    sink_print(&sink, "</body>\n</html>\n");
    if (!status)
        status = sink_close(&sink, messages);
    sink_drop(&sink);
    return status;
}
