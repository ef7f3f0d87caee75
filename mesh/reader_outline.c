/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Outlines: points written in the geometry file, or a two-column text file beside it.
 * Lines of such a file hold two numbers apart by blanks or a comma; "#" starts a
 * comment. */
#include <ctype.h>
#include <math.h>
#include <stdio.h>
#include <string.h>

#include "mesh/expression.h"
#include "mesh/reader_sections.h"
#include "mesh/text_file.h"
#include "shared/mem.h"

#define FILE_BYTES_MAX 4000000
#define POINTS_MAX     5000 /* of one outline */

/* Points while they are read. */
struct point_list {
    struct vec2 *items; /* [count] */
    size_t count;
};

static bool add_point(struct reader *reader, const struct node *node,
                      struct point_list *list, struct vec2 point)
{
    if (list->count == POINTS_MAX)
        return mistakes_add(&reader->mistakes, node->place,
                            "the outline has too many points; expected at most %d",
                            POINTS_MAX);
    struct vec2 *grown =
        reader_grow(reader, list->items, list->count, sizeof(struct vec2));
    if (grown == NULL)
        return false;
    list->items = grown;
    list->items[list->count++] = point;
    return true;
}

static bool read_pairs(struct reader *reader, const struct node *node,
                       struct point_list *list)
{
    for (size_t k = 0; k < node->count; k++) {
        const struct node *pair = node->items[k];
        struct vec2 point;
        if (pair->kind != NODE_SEQUENCE || pair->count != 2)
            return reader_expected(reader, pair, "outline",
                                   "a point of two lengths, such as [0 mm, 5 mm]");
        if (!reader_quantity(reader, pair->items[0], "outline", &wanted_length,
                             &point.a) ||
            !reader_quantity(reader, pair->items[1], "outline", &wanted_length,
                             &point.b) ||
            !add_point(reader, node, list, point))
            return false;
    }
    return true;
}

static bool signed_number(const char **at, double *value)
{
    const char *c = *at;
    double sign = *c == '-' ? -1 : 1;
    if (*c == '-' || *c == '+')
        c++;
    if (!expression_number(&c, value) || !isfinite(*value))
        return false;
    *value *= sign;
    *at = c;
    return true;
}

static const char *skip_blanks(const char *at)
{
    while (*at == ' ' || *at == '\t' || *at == '\r')
        at++;
    return at;
}

/* One line with two numbers; a line of blanks and comment gives *empty. */
static bool parse_line(const char *at, struct vec2 *point, bool *empty)
{
    at = skip_blanks(at);
    *empty = *at == '\0' || *at == '\n' || *at == '#';
    if (*empty)
        return true;
    if (!signed_number(&at, &point->a))
        return false;
    const char *separator = at;
    at = skip_blanks(at);
    if (*at == ',')
        at = skip_blanks(at + 1);
    if (at == separator || !signed_number(&at, &point->b))
        return false;
    at = skip_blanks(at);
    return *at == '\0' || *at == '\n' || *at == '#';
}

static bool parse_lines(struct reader *reader, const struct node *name,
                        const char *text, double unit, struct point_list *list)
{
    int line = 1;
    for (const char *at = text; at != NULL; line++) {
        struct vec2 point = {0, 0};
        bool empty;
        if (!parse_line(at, &point, &empty))
            return mistakes_add(&reader->mistakes, name->place,
                                "line %d of the outline file \"%.80s\" cannot be read; "
                                "expected two numbers; found \"%.*s\"",
                                line, name->text, (int)strcspn(at, "\r\n"), at);
        if (!empty && !add_point(reader, name, list, vec2_scale(point, unit)))
            return false;
        at = strchr(at, '\n');
        if (at != NULL)
            at++;
    }
    return true;
}

/* Path of a file beside the geometry file. */
static char *path_beside(const char *geometry_path, const char *name)
{
    const char *slash = geometry_path != NULL ? strrchr(geometry_path, '/') : NULL;
    if (slash == NULL || name[0] == '/')
        return mem_text(name);
    int folder = (int)(slash - geometry_path) + 1;
    size_t size = (size_t)folder + strlen(name) + 1;
    char *path = mem_new(size, 1);
    if (path != NULL)
        (void)snprintf(path, size, "%.*s%s", folder, geometry_path, name);
    return path;
}

static bool read_named_file(struct reader *reader, const struct node *name, double unit,
                            struct point_list *list)
{
    char *text = NULL;
    size_t length = 0;
    const char *reason = NULL;
    char *path = path_beside(reader->geometry->path, name->text);
    if (path == NULL)
        return reader_no_memory(reader);
    enum status status = text_file_read(path, FILE_BYTES_MAX, &text, &length, &reason);
    mem_free(path);
    bool ok = status == STATUS_OK;
    if (status == STATUS_MEMORY)
        reader_no_memory(reader);
    else if (!ok)
        (void)mistakes_add(&reader->mistakes, name->place,
                           "the outline file \"%.80s\" cannot be read; expected a text "
                           "file beside the geometry file; found: %s",
                           name->text, reason);
    else if (strlen(text) != length)
        ok = mistakes_add(&reader->mistakes, name->place,
                          "the outline file \"%.80s\" is no text file", name->text);
    ok = ok && parse_lines(reader, name, text, unit, list);
    mem_free(text);
    return ok;
}

/* {file: name, unit: mm} */
static bool read_file(struct reader *reader, const struct node *node,
                      struct point_list *list)
{
    static const char *const keys[] = {"file", "unit", NULL};
    const struct node *file = node_find(node, "file");
    const struct node *unit_node = node_find(node, "unit");
    struct quantity unit;
    if (!reader_mapping(reader, node, "outline", keys))
        return false;
    if (file == NULL || unit_node == NULL)
        return mistakes_add(&reader->mistakes, node->place,
                            "the outline is not complete; expected {file: name, unit: "
                            "mm}; missing: %s",
                            file == NULL ? "file" : "unit");
    if (file->kind != NODE_SCALAR || file->text[0] == '\0')
        return reader_expected(reader, file, "file", "the name of a file");
    if (unit_node->kind != NODE_SCALAR || unit_node->text[0] == '\0' ||
        units_lookup(reader->units, unit_node->text, &unit) != STATUS_OK ||
        !dimension_equal(unit.dimension, DIMENSION_LENGTH))
        return reader_expected(reader, unit_node, "unit",
                               "a unit of length such as mm");
    return read_named_file(reader, file, unit.value, list);
}

bool reader_outline(struct reader *reader, const struct node *node,
                    struct vec2 **points, size_t *count)
{
    struct point_list list = {NULL, 0};
    *points = NULL;
    *count = 0;
    bool ok = node->kind == NODE_SEQUENCE  ? read_pairs(reader, node, &list)
              : node->kind == NODE_MAPPING ? read_file(reader, node, &list)
                                           : reader_expected(reader, node, "outline",
                                                             "a list of points, or "
                                                             "{file: name, unit: mm}");
    if (!ok) {
        mem_free(list.items);
        return false;
    }
    *points = list.items;
    *count = list.count;
    return true;
}
