/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_MESH_DOCUMENT_H
#define EVENGAP_MESH_DOCUMENT_H

/* A YAML document as a tree of mappings, sequences and scalars, each with its place in
 * the file. An alias is the very node of its anchor, so the tree may share branches but
 * has no loops. Numbers, units and keys mean nothing here. */

#include <stdbool.h>
#include <stddef.h>

#include "mesh/mistakes.h"
#include "shared/attributes.h"
#include "shared/message.h"
#include "shared/status.h"

#define DOCUMENT_DEPTH_MAX 24      /* mappings and sequences inside each other */
#define DOCUMENT_NODES_MAX 1000000 /* nodes, counted again for every alias */
#define DOCUMENT_KEYS_MAX  4096    /* keys of one mapping */
#define DOCUMENT_BYTES_MAX 4000000 /* length of the text */

enum node_kind { NODE_SCALAR, NODE_MAPPING, NODE_SEQUENCE };

struct node {
    enum node_kind kind;
    struct place place;
    char *text;         /* scalars: NUL-terminated, UTF-8, no control characters but
                            tab and newline; else NULL */
    bool literal;       /* scalars: text stands in the file at `place` letter by letter,
                            so character k of text is at column + k */
    bool quoted;        /* scalars: written in quotes or as a block */
    struct node **keys; /* mappings: [count] scalars; else NULL */
    struct node **items; /* [count] values of a mapping, items of a sequence */
    size_t count;
    size_t weight; /* nodes below and including this one, aliases expanded */
};

/* Caller-owned; zeroed is empty. */
struct document {
    struct node **nodes; /* [node_count] all nodes, each once */
    size_t node_count;
    struct node *root; /* a mapping; NULL when empty */
};

/** Parses one YAML 1.2 document whose root is a mapping. Mistakes (syntax, tags, loops
 *  of aliases, too deep or too large a tree, text that is not UTF-8) are added to
 *  mistakes and give STATUS_INPUT with an empty document; STATUS_MEMORY. A key that is
 *  there twice is added to mistakes too, but the tree is built (with both). */
enum status document_parse(const char *text, size_t length, struct document *document,
                           struct mistakes *mistakes) MUST_CHECK;

/** Value of a key of a mapping; NULL if it has none or the node is no mapping. */
const struct node *node_find(const struct node *mapping, const char *key);

/** True for a scalar with nothing written. */
bool node_is_empty(const struct node *node);

/** Empties; safe on zeroed and twice. */
void document_free(struct document *document);

#endif
