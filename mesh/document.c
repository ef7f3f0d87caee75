/* SPDX-License-Identifier: GPL-3.0-or-later */
/* libfyaml turns the text into a flat run of events; the tree is built from them with
 * an explicit stack. Its own document builder is not used: here every node keeps its
 * place, aliases share nodes instead of copying them, and depth and size are bounded
 * while reading, so a small hostile file cannot grow into a large tree. */
#include "mesh/document.h"

#include <string.h>

#include <libfyaml.h>

#include "mesh/document_text.h"
#include "shared/mem.h"

#define ANCHORS_MAX 256

struct anchor {
    char *name;
    struct node *node;
};

struct builder {
    const char *source;
    size_t length;
    struct document *document;
    struct mistakes *mistakes;
    bool out_of_memory;
    bool document_seen;
    struct place last;                     /* place of the latest event that has one */
    struct node *open[DOCUMENT_DEPTH_MAX]; /* the containers being filled */
    struct node *key[DOCUMENT_DEPTH_MAX];  /* key waiting for its value, or NULL */
    int depth;
    struct anchor anchors[ANCHORS_MAX];
    size_t anchor_count;
};

static bool no_memory(struct builder *builder)
{
    builder->out_of_memory = true;
    return false;
}

/* Appends a node to an array that doubles whenever its count is a power of two. */
static bool append_node(struct node ***array, size_t count, struct node *node)
{
    if ((count & (count - 1)) == 0) {
        size_t capacity = count == 0 ? 1 : 2 * count;
        struct node **grown = mem_resize(*array, capacity, sizeof(struct node *));
        if (grown == NULL)
            return false;
        *array = grown;
    }
    (*array)[count] = node;
    return true;
}

static struct node *new_node(struct builder *builder, enum node_kind kind)
{
    struct document *document = builder->document;
    struct node *node = MEM_NEW(1, struct node);
    if (node == NULL || !append_node(&document->nodes, document->node_count, node)) {
        mem_free(node);
        no_memory(builder);
        return NULL;
    }
    document->node_count++;
    node->kind = kind;
    node->place = builder->last;
    node->weight = 1;
    return node;
}

/* Events without a mark (nothing written) keep the place of the event before. */
static void note_place(struct builder *builder, struct fy_event *event)
{
    const struct fy_mark *mark = fy_event_start_mark(event);
    if (mark != NULL)
        builder->last = (struct place){mark->line + 1, mark->column + 1};
}

/* The tree is built on, so that further mistakes are found in the same run. */
static void report_twice(struct builder *builder, const struct node *mapping,
                         const struct node *key)
{
    for (size_t k = 0; k < mapping->count; k++) {
        if (strcmp(mapping->keys[k]->text, key->text) != 0)
            continue;
        (void)mistakes_add(builder->mistakes, key->place,
                           "the key \"%.60s\" is there twice; expected it once; found "
                           "it before in line %d",
                           key->text, mapping->keys[k]->place.line);
        return;
    }
}

static bool add_key(struct builder *builder, struct node *mapping, struct node *key)
{
    if (key->kind != NODE_SCALAR)
        return mistakes_add(builder->mistakes, key->place,
                            "a key is made of several items; expected plain text");
    if (mapping->count >= DOCUMENT_KEYS_MAX)
        return mistakes_add(builder->mistakes, key->place,
                            "too many keys in one place; expected at most %d",
                            DOCUMENT_KEYS_MAX);
    report_twice(builder, mapping, key);
    if (!append_node(&mapping->keys, mapping->count, key))
        return no_memory(builder);
    builder->key[builder->depth - 1] = key;
    return true;
}

static bool add_item(struct builder *builder, struct node *parent, struct node *item)
{
    if (!append_node(&parent->items, parent->count, item))
        return no_memory(builder);
    parent->count++;
    builder->key[builder->depth - 1] = NULL;
    return true;
}

/* Hangs a finished node into the container that is open. */
static bool attach(struct builder *builder, struct node *node)
{
    if (builder->depth == 0) {
        builder->document->root = node;
        return true;
    }
    struct node *parent = builder->open[builder->depth - 1];
    struct node *key = builder->key[builder->depth - 1];
    if (parent->kind == NODE_MAPPING && key == NULL)
        return add_key(builder, parent, node);
    parent->weight += node->weight;
    if (parent->weight > DOCUMENT_NODES_MAX)
        return mistakes_add(builder->mistakes, node->place,
                            "the file holds too many items; expected at most %d, "
                            "counting what every alias stands for",
                            DOCUMENT_NODES_MAX);
    return add_item(builder, parent, node);
}

static bool register_anchor(struct builder *builder, struct fy_event *event,
                            struct node *node)
{
    struct fy_token *token = fy_event_get_anchor_token(event);
    if (token == NULL)
        return true;
    if (builder->anchor_count == ANCHORS_MAX)
        return mistakes_add(builder->mistakes, node->place,
                            "too many anchors; expected at most %d", ANCHORS_MAX);
    char *name = token_text(token);
    if (name == NULL)
        return no_memory(builder);
    builder->anchors[builder->anchor_count++] = (struct anchor){name, node};
    return true;
}

static bool refuse_tag(struct builder *builder, struct fy_event *event)
{
    if (fy_event_get_tag_token(event) == NULL)
        return true;
    return mistakes_add(builder->mistakes, builder->last,
                        "a YAML tag has no meaning here; expected the value without a "
                        "word that starts with \"!\"");
}

static bool open_container(struct builder *builder, struct fy_event *event,
                           enum node_kind kind)
{
    if (builder->depth == DOCUMENT_DEPTH_MAX)
        return mistakes_add(builder->mistakes, builder->last,
                            "items are nested too deep; expected at most %d levels",
                            DOCUMENT_DEPTH_MAX);
    struct node *node = new_node(builder, kind);
    if (node == NULL || !refuse_tag(builder, event) ||
        !register_anchor(builder, event, node))
        return false;
    builder->open[builder->depth] = node;
    builder->key[builder->depth] = NULL;
    builder->depth++;
    return true;
}

static bool close_container(struct builder *builder)
{
    builder->depth--;
    return attach(builder, builder->open[builder->depth]);
}

static bool add_scalar(struct builder *builder, struct fy_event *event)
{
    struct node *node = new_node(builder, NODE_SCALAR);
    if (node == NULL || !refuse_tag(builder, event) ||
        !register_anchor(builder, event, node))
        return false;
    if (!scalar_text(fy_event_get_token(event), builder->source, builder->length, node))
        return no_memory(builder);
    if (!text_is_printable(node->text))
        return mistakes_add(builder->mistakes, node->place,
                            "the text holds a control character; expected text that "
                            "can be printed");
    return attach(builder, node);
}

static bool add_alias(struct builder *builder, struct fy_event *event)
{
    builder->last.column--; /* the library's mark is behind the "*" */
    char *name = token_text(fy_event_get_token(event));
    if (name == NULL)
        return no_memory(builder);
    struct node *target = NULL;
    for (size_t k = 0; k < builder->anchor_count; k++) /* the latest one counts */
        if (strcmp(builder->anchors[k].name, name) == 0)
            target = builder->anchors[k].node;
    bool loop = false;
    for (int k = 0; k < builder->depth; k++)
        loop = loop || builder->open[k] == target;
    bool ok = target != NULL && !loop;
    if (!ok)
        (void)mistakes_add(builder->mistakes, builder->last,
                           loop
                               ? "the alias \"*%.60s\" stands inside its own anchor"
                               : "the alias \"*%.60s\" has no anchor; expected \"&%s\" "
                                 "before it",
                           name, name);
    mem_free(name);
    return ok && attach(builder, target);
}

static bool start_document(struct builder *builder)
{
    if (builder->document_seen)
        return mistakes_add(builder->mistakes, builder->last,
                            "a second document starts here; expected one document in "
                            "the file");
    builder->document_seen = true;
    return true;
}

static bool take_event(struct builder *builder, struct fy_event *event)
{
    note_place(builder, event);
    switch (event->type) {
    case FYET_DOCUMENT_START:
        return start_document(builder);
    case FYET_MAPPING_START:
        return open_container(builder, event, NODE_MAPPING);
    case FYET_SEQUENCE_START:
        return open_container(builder, event, NODE_SEQUENCE);
    case FYET_MAPPING_END:
    case FYET_SEQUENCE_END:
        return close_container(builder);
    case FYET_SCALAR:
        return add_scalar(builder, event);
    case FYET_ALIAS:
        return add_alias(builder, event);
    default:
        return true;
    }
}

/* What the library found wrong, in our form. */
static void report_syntax(struct builder *builder, struct fy_diag *diag)
{
    void *at = NULL;
    size_t before = builder->mistakes->count;
    const struct fy_diag_error *error;
    while ((error = fy_diag_errors_iterate(diag, &at)) != NULL)
        (void)mistakes_add(builder->mistakes,
                           (struct place){error->line, error->column},
                           "the file is not valid YAML; found: %s", error->msg);
    if (builder->mistakes->count == before)
        (void)mistakes_add(builder->mistakes, builder->last,
                           "the file is not valid YAML; found the mistake after this "
                           "place");
}

static bool read_events(struct builder *builder, struct fy_parser *parser,
                        struct fy_diag *diag)
{
    if (fy_parser_set_string(parser, builder->source, builder->length) != 0)
        return no_memory(builder);
    bool ok = true;
    struct fy_event *event;
    while (ok && (event = fy_parser_parse(parser)) != NULL) {
        ok = take_event(builder, event);
        fy_parser_event_free(parser, event);
    }
    if (ok && fy_parser_get_stream_error(parser)) {
        report_syntax(builder, diag);
        ok = false;
    }
    return ok;
}

static void swallow(struct fy_diag *diag, void *user, const char *text, size_t length)
{
    (void)diag, (void)user, (void)text, (void)length; /* the library must not print */
}

static bool run_parser(struct builder *builder)
{
    struct fy_diag_cfg diag_options;
    fy_diag_cfg_default(&diag_options);
    diag_options.fp = NULL;
    diag_options.output_fn = swallow;
    struct fy_diag *diag = fy_diag_create(&diag_options);
    if (diag == NULL)
        return no_memory(builder);
    fy_diag_set_collect_errors(diag, true);
    const struct fy_parse_cfg options = {
        .flags = (enum fy_parse_cfg_flags)(FYPCF_QUIET | FYPCF_COLLECT_DIAG |
                                           FYPCF_DISABLE_MMAP_OPT | FYPCF_JSON_NONE |
                                           FYPCF_DEFAULT_VERSION_1_2),
        .diag = diag};
    struct fy_parser *parser = fy_parser_create(&options);
    bool ok = parser != NULL ? read_events(builder, parser, diag) : no_memory(builder);
    if (parser != NULL)
        fy_parser_destroy(parser);
    fy_diag_destroy(diag);
    return ok;
}

static bool check_root(struct builder *builder)
{
    const struct node *root = builder->document->root;
    if (root == NULL || node_is_empty(root))
        return mistakes_add(builder->mistakes, (struct place){0, 0},
                            "the file is empty; expected a geometry file that starts "
                            "with \"evengap: 1\"");
    if (root->kind != NODE_MAPPING)
        return mistakes_add(builder->mistakes, root->place,
                            "this is no geometry file; expected keys with values, such "
                            "as \"evengap: 1\"");
    return true;
}

enum status document_parse(const char *text, size_t length, struct document *document,
                           struct mistakes *mistakes)
{
    *document = (struct document){0};
    if (!text_is_readable(text, length, mistakes))
        return STATUS_INPUT;
    struct builder *builder = MEM_NEW(1, struct builder);
    if (builder == NULL)
        return STATUS_MEMORY;
    builder->source = text;
    builder->length = length;
    builder->document = document;
    builder->mistakes = mistakes;
    bool ok = run_parser(builder) && check_root(builder);
    enum status status = builder->out_of_memory ? STATUS_MEMORY
                         : ok                   ? STATUS_OK
                                                : STATUS_INPUT;
    for (size_t k = 0; k < builder->anchor_count; k++)
        mem_free(builder->anchors[k].name);
    mem_free(builder);
    if (status != STATUS_OK)
        document_free(document);
    return status;
}

const struct node *node_find(const struct node *mapping, const char *key)
{
    if (mapping == NULL || mapping->kind != NODE_MAPPING)
        return NULL;
    for (size_t k = 0; k < mapping->count; k++)
        if (strcmp(mapping->keys[k]->text, key) == 0)
            return mapping->items[k];
    return NULL;
}

bool node_is_empty(const struct node *node)
{
    return node->kind == NODE_SCALAR && !node->quoted && node->text[0] == '\0';
}

void document_free(struct document *document)
{
    for (size_t k = 0; k < document->node_count; k++) {
        struct node *node = document->nodes[k];
        mem_free(node->text);
        mem_free(node->keys);
        mem_free(node->items);
        mem_free(node);
    }
    mem_free(document->nodes);
    *document = (struct document){0};
}
