/* SPDX-License-Identifier: GPL-3.0-or-later */
/* From text to geometry: parse the YAML tree, then read it section by section. Values
 * and supplies come first, whatever their place in the file, as everything else may use
 * them. A section that is wrong leaves its part of the geometry empty and the reading
 * goes on, so that one run shows all mistakes. */
#include "mesh/reader.h"

#include <string.h>

#include "mesh/reader_sections.h"
#include "mesh/text_file.h"
#include "shared/mem.h"

#define FORMAT_VERSION "1"
#define MEMORY_DEFAULT 2e9 /* B */

static void read_version(struct reader *reader, const struct node *root)
{
    const struct node *node = node_find(root, "evengap");
    if (node == NULL)
        (void)mistakes_add(&reader->mistakes, root->place,
                           "the version of the file format is missing; expected the "
                           "line \"evengap: %s\"",
                           FORMAT_VERSION);
    else if (node->kind != NODE_SCALAR || strcmp(node->text, FORMAT_VERSION) != 0)
        reader_expected(reader, node, "evengap",
                        "the file format version " FORMAT_VERSION);
}

static void read_root(struct reader *reader, const struct node *root)
{
    static const char *const keys[] = {"evengap",   "title",   "values", "beam",
                                       "supplies",  "planes",  "probes", "limits",
                                       "reference", "lattice", "grid",   NULL};
    (void)reader_mapping(reader, root, "geometry file", keys);
    read_version(reader, root);
    if (node_find(root, "title") != NULL)
        (void)reader_name(reader, node_find(root, "title"), "title",
                          &reader->geometry->title);
    reader_values(reader, node_find(root, "values"));
    reader_supplies(reader, node_find(root, "supplies"));
    reader_beam(reader, node_find(root, "beam"));
    reader_planes(reader, node_find(root, "planes"));
    reader_probes(reader, node_find(root, "probes"));
    reader_limits(reader, node_find(root, "limits"));
    reader_reference(reader, node_find(root, "reference"));
    reader_lattice(reader, node_find(root, "lattice"));
    reader_grid(reader, node_find(root, "grid"));
}

static void set_defaults(struct geometry *geometry)
{
    geometry->fineness = 1;
    geometry->memory_budget = MEMORY_DEFAULT;
    for (int k = 0; k < PLANE_KINDS; k++)
        geometry->planes[k].kind = (enum plane_kind)k;
}

/* The units table, or a message that it cannot be had. */
static enum status open_units(struct reader *reader)
{
    const char *reason = NULL;
    enum status status = units_create(&reader->units, &reason);
    if (status == STATUS_INPUT)
        (void)mistakes_add(&reader->mistakes, (struct place){0, 0},
                           "units cannot be read; found: %s", reason);
    reader->symbols.units = reader->units;
    reader->symbols.mistakes = &reader->mistakes;
    return status;
}

static enum status read_text(struct reader *reader, const char *path, const char *text,
                             size_t length)
{
    enum status status =
        document_parse(text, length, &reader->document, &reader->mistakes);
    if (status == STATUS_OK)
        status = open_units(reader);
    if (status != STATUS_OK)
        return status;
    set_defaults(reader->geometry);
    reader->geometry->path = mem_text(path);
    if (reader->geometry->path == NULL && path != NULL)
        return STATUS_MEMORY;
    read_root(reader, reader->document.root);
    if (reader->out_of_memory)
        return STATUS_MEMORY;
    return reader->mistakes.count > 0 ? STATUS_INPUT : STATUS_OK;
}

enum status reader_read_text(const char *path, const char *text, size_t length,
                             struct geometry *geometry, struct messages *messages)
{
    *geometry = (struct geometry){0};
    struct reader *reader = MEM_NEW(1, struct reader);
    if (reader == NULL)
        return STATUS_MEMORY;
    reader->mistakes.messages = messages;
    reader->geometry = geometry;
    int lost = messages != NULL ? messages->lost : 0;
    enum status status = read_text(reader, path, text, length);
    if (messages != NULL && messages->lost > lost)
        status = STATUS_MEMORY; /* a mistake without its message is no answer */
    if (status != STATUS_OK)
        geometry_free(geometry);
    symbols_free(&reader->symbols);
    units_destroy(&reader->units);
    document_free(&reader->document);
    mem_free(reader);
    return status;
}

static enum status read_source(const char *path, struct geometry *geometry,
                               struct messages *messages)
{
    char *text = NULL;
    size_t length = 0;
    const char *reason = NULL;
    enum status status =
        text_file_read(path, DOCUMENT_BYTES_MAX, &text, &length, &reason);
    if (status == STATUS_INPUT)
        messages_add(messages, SEVERITY_ERROR, (struct place){0, 0},
                     "the geometry file cannot be read; found: %s", reason);
    if (status != STATUS_OK)
        return status;
    messages_set_source(messages, path, text);
    status = reader_read_text(path, text, length, geometry, messages);
    mem_free(text);
    return status;
}

enum status reader_read_file(const char *path, struct geometry *geometry,
                             struct messages *messages)
{
    *geometry = (struct geometry){0};
    int lost = messages != NULL ? messages->lost : 0;
    messages_set_source(messages, path, NULL);
    enum status status = read_source(path, geometry, messages);
    if (messages == NULL || messages->lost == lost)
        return status;
    geometry_free(geometry);
    return STATUS_MEMORY;
}
