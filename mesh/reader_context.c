/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The small pieces every section is made of. Each reports its own mistakes, so the
 * sections only have to decide whether they can go on. */
#include "mesh/reader_context.h"

#include <stdio.h>
#include <string.h>

#include "mesh/expression.h"
#include "shared/mem.h"

#define WORDS_MAX 64

const struct wanted wanted_length = {{1, 0, 0, 0, 0}, "a length such as 4 mm"};
const struct wanted wanted_number = {{0, 0, 0, 0, 0}, "a number such as 0.5"};
const struct wanted wanted_angle = {{0, 0, 0, 0, 0}, "an angle such as 3 deg"};

bool reader_no_memory(struct reader *reader)
{
    reader->out_of_memory = true;
    return false;
}

bool reader_expected(struct reader *reader, const struct node *node, const char *what,
                     const char *expected)
{
    const char *found = node->kind == NODE_MAPPING    ? "keys with values"
                        : node->kind == NODE_SEQUENCE ? "a list"
                        : node_is_empty(node)         ? "nothing"
                                                      : node->text;
    return mistakes_add(&reader->mistakes, node->place,
                        "\"%s\" does not fit; expected %s; found %.80s", what, expected,
                        found);
}

static void list_keys(char *text, size_t size, const char *const *keys)
{
    size_t used = 0;
    for (size_t k = 0; keys[k] != NULL && used < size; k++)
        used += (size_t)snprintf(text + used, size - used, "%s%s", k > 0 ? ", " : "",
                                 keys[k]);
}

static void report_key(struct reader *reader, const struct node *key, const char *what,
                       const char *const *keys)
{
    char list[400] = "";
    size_t count = 0;
    while (keys[count] != NULL)
        count++;
    list_keys(list, sizeof list, keys);
    const char *nearest = nearest_word(key->text, keys, count);
    if (nearest != NULL)
        (void)mistakes_add(&reader->mistakes, key->place,
                           "unknown key \"%.60s\" in \"%s\"; expected one of %s; did "
                           "you mean \"%s\"?",
                           key->text, what, list, nearest);
    else
        (void)mistakes_add(&reader->mistakes, key->place,
                           "unknown key in \"%s\"; expected one of %s; found \"%.60s\"",
                           what, list, key->text);
}

bool reader_mapping(struct reader *reader, const struct node *node, const char *what,
                    const char *const *keys)
{
    if (node_is_empty(node))
        return true;
    if (node->kind != NODE_MAPPING)
        return reader_expected(reader, node, what, "keys with values");
    bool ok = true;
    for (size_t k = 0; k < node->count; k++) {
        size_t j = 0;
        while (keys[j] != NULL && strcmp(keys[j], node->keys[k]->text) != 0)
            j++;
        if (keys[j] != NULL)
            continue;
        report_key(reader, node->keys[k], what, keys);
        ok = false;
    }
    return ok;
}

bool reader_list(struct reader *reader, const struct node *node, const char *what)
{
    return node->kind == NODE_SEQUENCE ||
           reader_expected(reader, node, what, "a list [ ... ]");
}

bool reader_name(struct reader *reader, const struct node *node, const char *what,
                 char **name)
{
    if (node->kind != NODE_SCALAR || node->text[0] == '\0' ||
        strpbrk(node->text, "\n\t") != NULL)
        return reader_expected(reader, node, what, "one line of text");
    *name = mem_text(node->text);
    return *name != NULL || reader_no_memory(reader);
}

static bool report_dimension(struct reader *reader, const struct node *node,
                             const char *what, const char *expected,
                             const struct affine *value)
{
    char words[WORDS_MAX];
    dimension_describe(value->constant.dimension, words, sizeof words);
    return mistakes_add(&reader->mistakes, node->place,
                        "\"%s\" is of the wrong kind; expected %s; found %.80s, which "
                        "is %s",
                        what, expected, node->text, words);
}

/* A bare zero fits any dimension. */
static bool fits(const struct affine *value, struct dimension dimension)
{
    return affine_is_bare_zero(value) ||
           dimension_equal(value->constant.dimension, dimension);
}

bool reader_quantity(struct reader *reader, const struct node *node, const char *what,
                     const struct wanted *wanted, double *value)
{
    struct affine result;
    *value = 0;
    if (node->kind != NODE_SCALAR || node_is_empty(node))
        return reader_expected(reader, node, what, wanted->expected);
    if (!expression_evaluate(&reader->symbols, node, false, &result))
        return false;
    if (!fits(&result, wanted->dimension))
        return report_dimension(reader, node, what, wanted->expected, &result);
    *value = result.constant.value;
    return true;
}

bool reader_positive(struct reader *reader, const struct node *node, const char *what,
                     const struct wanted *wanted, double *value)
{
    if (!reader_quantity(reader, node, what, wanted, value))
        return false;
    if (*value > 0)
        return true;
    char expected[2 * WORDS_MAX];
    (void)snprintf(expected, sizeof expected, "%s, greater than 0", wanted->expected);
    return reader_expected(reader, node, what, expected);
}

bool reader_angle(struct reader *reader, const struct node *node, const char *what,
                  double *value)
{
    double number = 0;
    const char *at = node->kind == NODE_SCALAR ? node->text : "";
    at += strspn(at, "-+ ");
    if (expression_number(&at, &number) && *at == '\0' && number != 0)
        return reader_expected(reader, node, what, wanted_angle.expected);
    return reader_quantity(reader, node, what, &wanted_angle, value);
}

bool reader_interval(struct reader *reader, const struct node *node, const char *what,
                     double *from, double *to)
{
    *from = *to = 0;
    if (node->kind != NODE_SEQUENCE || node->count != 2)
        return reader_expected(reader, node, what, "two lengths [from, to]");
    bool ok = reader_quantity(reader, node->items[0], what, &wanted_length, from);
    ok = reader_quantity(reader, node->items[1], what, &wanted_length, to) && ok;
    if (!ok || *from < *to)
        return ok;
    return mistakes_add(&reader->mistakes, node->place,
                        "\"%s\" ends before it starts; expected [from, to] with from "
                        "below to; found %g mm to %g mm",
                        what, *from * 1e3, *to * 1e3);
}

bool reader_point(struct reader *reader, const struct node *node, const char *what,
                  enum plane_kind kind, struct vec2 *point)
{
    const char *const keys[] = {axis_key(plane_kind_axis(kind, 0)),
                                axis_key(plane_kind_axis(kind, 1)), NULL};
    double at[2] = {0, 0};
    bool ok = reader_mapping(reader, node, what, keys);
    for (int k = 0; ok && k < 2; k++) {
        const struct node *item = node_find(node, keys[k]);
        if (item == NULL)
            return mistakes_add(&reader->mistakes, node->place,
                                "\"%s\" lacks a coordinate; expected {%s: ..., %s: "
                                "...}",
                                what, keys[0], keys[1]);
        ok = reader_quantity(reader, item, keys[k], &wanted_length, &at[k]);
    }
    *point = (struct vec2){at[0], at[1]};
    return ok;
}

/* The wrong dimension of a potential; names a supply of the wrong kind. */
static bool report_potential(struct reader *reader, const struct node *node,
                             const char *what, bool magnetic,
                             const struct affine *value)
{
    const struct geometry *geometry = reader->geometry;
    const char *expected = magnetic ? "ampere-turns linear in supplies, such as coil/2 "
                                      "or 100 A"
                                    : "a voltage linear in supplies, such as plates/2 "
                                      "or 10 V";
    for (int s = 0; s < value->supplies; s++)
        if (value->gain[s] != 0 && geometry->supplies[s].is_current != magnetic)
            return mistakes_add(&reader->mistakes, node->place,
                                "\"%s\" is of the wrong kind; expected %s; found the "
                                "supply \"%s\", which is set in %s",
                                what, expected, geometry->supplies[s].name,
                                magnetic ? "V" : "A");
    return report_dimension(reader, node, what, expected, value);
}

static bool keep_potential(struct reader *reader, const struct affine *value,
                           struct linear *potential)
{
    struct geometry *geometry = reader->geometry;
    potential->constant = value->constant.value;
    potential->gain = MEM_NEW(geometry->supply_count, double);
    if (potential->gain == NULL)
        return reader_no_memory(reader);
    for (int s = 0; s < value->supplies; s++) {
        potential->gain[s] = value->gain[s];
        geometry->supplies[s].used |= value->gain[s] != 0;
    }
    return true;
}

bool reader_potential(struct reader *reader, const struct node *node, const char *what,
                      enum plane_kind kind, bool empty_is_zero,
                      struct linear *potential)
{
    bool magnetic = plane_kind_is_magnetic(kind);
    struct affine value = affine_number(0, DIMENSION_NONE);
    bool empty = empty_is_zero && node_is_empty(node);
    if (!empty && !expression_evaluate(&reader->symbols, node, true, &value))
        return false;
    if (!fits(&value, magnetic ? DIMENSION_AMPERE : DIMENSION_VOLT))
        return report_potential(reader, node, what, magnetic, &value);
    return keep_potential(reader, &value, potential);
}

bool reader_zero_potential(struct reader *reader, struct linear *potential)
{
    const struct affine zero = affine_number(0, DIMENSION_NONE);
    return keep_potential(reader, &zero, potential);
}

void *reader_grow(struct reader *reader, void *array, size_t count, size_t size)
{
    if ((count & (count - 1)) == 0)
        array = mem_resize(array, count == 0 ? 1 : 2 * count, size);
    if (array == NULL)
        reader_no_memory(reader);
    else
        memset((char *)array + count * size, 0, size);
    return array;
}
