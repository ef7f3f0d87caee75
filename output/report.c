/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Plain HTML without scripts. Text from the geometry file goes through one escaping
 * function; pictures are embedded as base64, so that the identifiers inside one picture
 * cannot clash with those of another. */

#include "output/report.h"

#include <errno.h>
#include <stdio.h>
#include <string.h>

#include "output/number.h"
#include "output/words.h"
#include "shared/mem.h"

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
                !words_is_zero_term(&figures->items[k]))
                print_figure(sink, &figures->items[k]);
        sink_print(sink, "</table>\n");
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

static enum status print_pictures(struct sink *sink, const struct folder *folder,
                                  struct messages *messages)
{
    static const char *const first[] = {"path.svg", "ratio_map.svg"};
    enum status status = STATUS_OK;
    for (size_t f = 0; f < 2; f++)
        for (size_t k = 0; !status && k < folder->count; k++)
            if (strcmp(folder->names[k], first[f]) == 0)
                status = print_picture(sink, folder, first[f], messages);
    for (size_t k = 0; !status && k < folder->count; k++)
        if (is_picture(folder->names[k]) && strcmp(folder->names[k], first[0]) != 0 &&
            strcmp(folder->names[k], first[1]) != 0)
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
    sink_print(sink, "<p>Geometry file ");
    print_text(sink, words_base_name(result->geometry->path));
    sink_print(sink,
               ", evengap %s. x along the electric field, y from pole to pole, z "
               "along the beam. 1.234(5) means 1.234 with an uncertainty of "
               "0.005.</p>\n",
               EVENGAP_VERSION);
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
    print_figures(&sink, &result->figures);
    print_trust(&sink, result);
    sink_print(&sink, "</body>\n</html>\n");
    if (!status)
        status = sink_close(&sink, messages);
    sink_drop(&sink);
    return status;
}
