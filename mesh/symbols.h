/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_MESH_SYMBOLS_H
#define EVENGAP_MESH_SYMBOLS_H

/* The names an expression may use: values, evaluated when first asked for so that their
 * order in the file does not matter, and supplies. */

#include <stdbool.h>
#include <stddef.h>

#include "mesh/affine.h"
#include "mesh/document.h"
#include "mesh/mistakes.h"
#include "shared/quantity.h"

#define SYMBOLS_DEPTH_MAX 48 /* parentheses and values inside each other */

enum symbol_state {
    SYMBOL_NEW,     /* not evaluated yet */
    SYMBOL_OPEN,    /* being evaluated: meeting it again is a circle */
    SYMBOL_KNOWN,   /* value is there */
    SYMBOL_MISTAKEN /* a mistake has been reported; uses stay silent */
};

struct symbol {
    const char *name;              /* borrowed */
    const struct node *definition; /* borrowed */
    int supply;                    /* index of the supply, or -1 for a value */
    enum symbol_state state;
    struct quantity value; /* values: SI; supplies: their setting */
};

/* Caller-owned; zeroed is valid apart from the borrowed pointers. */
struct symbols {
    struct symbol *items; /* [count] */
    size_t count;
    const struct units *units;      /* borrowed */
    struct mistakes *mistakes;      /* borrowed */
    int depth;                      /* parentheses and values open now */
    size_t open[SYMBOLS_DEPTH_MAX]; /* values being evaluated, outermost first */
    int open_count;
};

/** Appends a name; the table must not hold it yet. False if memory ran out. */
bool symbols_add(struct symbols *symbols, const char *name,
                 const struct node *definition, int supply);

/** The symbol of that name (length letters); NULL if there is none. */
struct symbol *symbols_find(const struct symbols *symbols, const char *name,
                            size_t length);

/** Evaluates a value unless that is done. False after a mistake has been reported, now
 *  or before. `use` is the place that asks, for a circle of values. */
bool symbols_evaluate(struct symbols *symbols, struct symbol *symbol, struct place use);

/** True if name may be used for a value or supply: letters, digits and _, no digit
 *  first, not a function or pi. */
bool symbols_name_is_fit(const char *name);

/** Empties; safe on zeroed and twice. */
void symbols_free(struct symbols *symbols);

#endif
