/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Named values and supplies. All names are entered before any is evaluated, so that
 * their order in the file does not matter. */
#include <stdio.h>
#include <string.h>

#include "mesh/expression.h"
#include "mesh/reader_sections.h"
#include "shared/mem.h"

static bool enter_name(struct reader *reader, const struct node *key,
                       const struct node *definition, int supply)
{
    struct symbols *symbols = &reader->symbols;
    if (!symbols_name_is_fit(key->text))
        return mistakes_add(
            &reader->mistakes, key->place,
            "this cannot be a name; expected letters, digits and _, no "
            "digit first, and no word of expressions such as min or pi; "
            "found \"%.60s\"",
            key->text);
    const struct symbol *other = symbols_find(symbols, key->text, strlen(key->text));
    if (other != NULL && (other->supply < 0) == (supply < 0))
        return false; /* the same key twice, reported with the tree */
    if (other != NULL)
        return mistakes_add(&reader->mistakes, key->place,
                            "the supply \"%s\" has the name of a value; expected "
                            "another name; found the value in line %d",
                            key->text, other->definition->place.line);
    return symbols_add(symbols, key->text, definition, supply) ||
           reader_no_memory(reader);
}

static bool keep_value(struct reader *reader, const struct symbol *symbol)
{
    struct geometry *geometry = reader->geometry;
    struct named_value *value = &geometry->values[geometry->value_count];
    value->name = mem_text(symbol->name);
    if (value->name == NULL)
        return reader_no_memory(reader);
    value->value = symbol->value.value;
    value->place = symbol->definition->place;
    geometry->value_count++;
    return true;
}

static void evaluate_values(struct reader *reader)
{
    struct symbols *symbols = &reader->symbols;
    reader->geometry->values = MEM_NEW(symbols->count, struct named_value);
    if (reader->geometry->values == NULL) {
        reader_no_memory(reader);
        return;
    }
    for (size_t k = 0; k < symbols->count && !reader->out_of_memory; k++) {
        struct symbol *symbol = &symbols->items[k];
        if (symbols_evaluate(symbols, symbol, symbol->definition->place))
            (void)keep_value(reader, symbol);
    }
}

void reader_values(struct reader *reader, const struct node *node)
{
    if (node == NULL || node_is_empty(node))
        return;
    if (node->kind != NODE_MAPPING) {
        reader_expected(reader, node, "values", "names with expressions");
        return;
    }
    for (size_t k = 0; k < node->count && !reader->out_of_memory; k++)
        (void)enter_name(reader, node->keys[k], node->items[k], -1);
    if (!reader->out_of_memory)
        evaluate_values(reader);
}

/* Setting and kind of a supply; the symbol stays mistaken if they cannot be had. */
static void read_setting(struct reader *reader, const struct node *node,
                         struct supply *supply, struct symbol *symbol)
{
    struct affine setting;
    symbol->state = SYMBOL_MISTAKEN;
    if (!expression_evaluate(&reader->symbols, node, false, &setting))
        return;
    struct dimension dimension = setting.constant.dimension;
    supply->is_current = dimension_equal(dimension, DIMENSION_AMPERE);
    supply->setting = setting.constant.value;
    if (supply->is_current || dimension_equal(dimension, DIMENSION_VOLT)) {
        symbol->state = SYMBOL_KNOWN;
        symbol->value = setting.constant;
        return;
    }
    reader_expected(reader, node, supply->name,
                    "a setting in V, or in A for ampere-turns, such as 110 V");
}

static bool read_supply(struct reader *reader, const struct node *key,
                        const struct node *node)
{
    struct geometry *geometry = reader->geometry;
    size_t s = geometry->supply_count;
    if (s == SUPPLIES_MAX)
        return mistakes_add(&reader->mistakes, key->place,
                            "too many supplies; expected at most %d", SUPPLIES_MAX);
    if (!enter_name(reader, key, node, (int)s))
        return !reader->out_of_memory;
    struct supply *supply = &geometry->supplies[s];
    supply->name = mem_text(key->text);
    if (supply->name == NULL)
        return reader_no_memory(reader);
    supply->place = key->place;
    geometry->supply_count++;
    read_setting(reader, node, supply,
                 symbols_find(&reader->symbols, key->text, strlen(key->text)));
    return true;
}

void reader_supplies(struct reader *reader, const struct node *node)
{
    if (node == NULL || node_is_empty(node))
        return;
    if (node->kind != NODE_MAPPING) {
        reader_expected(reader, node, "supplies", "names with settings");
        return;
    }
    reader->geometry->supplies = MEM_NEW(SUPPLIES_MAX, struct supply);
    if (reader->geometry->supplies == NULL) {
        reader_no_memory(reader);
        return;
    }
    for (size_t k = 0; k < node->count; k++)
        if (!read_supply(reader, node->keys[k], node->items[k]))
            return;
}
