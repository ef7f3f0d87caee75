/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_MESH_READER_CONTEXT_H
#define EVENGAP_MESH_READER_CONTEXT_H

/* What the readers of the sections of a geometry file share: the state of one reading
 * and the reading of keys, names, quantities and intervals. Only for reader*.c.
 *
 * Functions that return bool give false after a mistake has been reported or memory
 * ran out; `what` names the thing read in messages ("rounding"). */

#include <stdbool.h>
#include <stddef.h>

#include "mesh/document.h"
#include "mesh/geometry.h"
#include "mesh/mistakes.h"
#include "mesh/symbols.h"

struct reader {
    struct document document;
    struct mistakes mistakes;
    struct units *units;
    struct symbols symbols;
    struct geometry *geometry;
    bool out_of_memory;
};

/* A kind of quantity: its dimension, and words for it with an example. */
struct wanted {
    struct dimension dimension;
    const char *expected;
};

extern const struct wanted wanted_length;
extern const struct wanted wanted_number;
extern const struct wanted wanted_angle;

/** Notes that memory ran out; false. */
bool reader_no_memory(struct reader *reader);

/** Reports what was expected at a node and what is there instead; false. */
bool reader_expected(struct reader *reader, const struct node *node, const char *what,
                     const char *expected);

/** True if node is a mapping with no keys but those listed (NULL-terminated). Every
 *  unknown key is reported with the nearest one. An empty scalar counts as a mapping
 *  without keys. */
bool reader_mapping(struct reader *reader, const struct node *node, const char *what,
                    const char *const *keys);

/** True if node is a list. */
bool reader_list(struct reader *reader, const struct node *node, const char *what);

/** Copies a name: one line of text that is not empty. */
bool reader_name(struct reader *reader, const struct node *node, const char *what,
                 char **name);

/** Evaluates an expression of the dimension wanted, in SI. */
bool reader_quantity(struct reader *reader, const struct node *node, const char *what,
                     const struct wanted *wanted, double *value);

/** The same, and the value must be greater than 0. */
bool reader_positive(struct reader *reader, const struct node *node, const char *what,
                     const struct wanted *wanted, double *value);

/** Angle in rad; a bare number other than 0 is refused. */
bool reader_angle(struct reader *reader, const struct node *node, const char *what,
                  double *value);

/** [from, to] with from < to, lengths. */
bool reader_interval(struct reader *reader, const struct node *node, const char *what,
                     double *from, double *to);

/** Position with a plane's axes as keys, both required. */
bool reader_point(struct reader *reader, const struct node *node, const char *what,
                  enum plane_kind kind, struct vec2 *point);

/** Potential linear in the supplies, in V or A by the kind of plane; potential->gain is
 *  allocated. Marks the supplies it uses. An empty node is 0 where empty_is_zero. */
bool reader_potential(struct reader *reader, const struct node *node, const char *what,
                      enum plane_kind kind, bool empty_is_zero,
                      struct linear *potential);

/** Potential of 0; potential->gain is allocated. */
bool reader_zero_potential(struct reader *reader, struct linear *potential);

/** Array with room for one more item of `size` bytes behind the first `count`, that item
 *  zeroed; it doubles at every power of two. NULL (array untouched) if memory ran out. */
void *reader_grow(struct reader *reader, void *array, size_t count, size_t size);

#endif
