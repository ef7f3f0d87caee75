/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The schema for editors names the same keys as the reader: an unknown key makes the
 * reader list the keys it knows, and that list is compared with the schema. */
#include "tests/support/assert_close.h"

#include <stdio.h>
#include <string.h>

#include "mesh/document.h"
#include "mesh/reader.h"
#include "mesh/text_file.h"
#include "shared/mem.h"

struct fixture {
    struct document schema;
    char *text;
};

static int set_up(void **state)
{
    static struct fixture fixture;
    struct messages messages = {0};
    struct mistakes mistakes = {.messages = &messages};
    size_t length = 0;
    const char *reason = NULL;
    if (text_file_read(SOURCE_DIR "/geometries/schema.yaml", DOCUMENT_BYTES_MAX,
                       &fixture.text, &length, &reason) != STATUS_OK ||
        document_parse(fixture.text, length, &fixture.schema, &mistakes) != STATUS_OK)
        return -1;
    *state = &fixture;
    return mistakes.count == 0 ? 0 : -1;
}

static int tear_down(void **state)
{
    struct fixture *fixture = *state;
    document_free(&fixture->schema);
    mem_free(fixture->text);
    return 0;
}

/* Node under a path of keys such as "properties/beam/properties". */
static const struct node *walk(const struct node *node, const char *path)
{
    char key[40];
    while (*path != '\0' && node != NULL) {
        size_t length = strcspn(path, "/");
        (void)snprintf(key, sizeof key, "%.*s", (int)length, path);
        node = node_find(node, key);
        path += length + (path[length] == '/');
    }
    return node;
}

/* Keys of a schema node as the reader would list them, sorted out one by one: every
 * schema key is in the list, and the list holds no other. */
static void assert_same_keys(const struct node *keys, const char *message)
{
    char list[400];
    const char *start = strstr(message, "expected one of ");
    assert_non_null(start);
    start += strlen("expected one of ");
    (void)snprintf(list, sizeof list, " %.*s,", (int)strcspn(start, ";"), start);
    size_t commas = 0;
    for (const char *c = list; *c != '\0'; c++)
        commas += *c == ',';
    assert_non_null(keys);
    assert_int_equal(commas, keys->count);
    for (size_t k = 0; k < keys->count; k++) {
        char word[60];
        (void)snprintf(word, sizeof word, " %s,", keys->keys[k]->text);
        if (strstr(list, word) == NULL)
            fail_msg("\"%s\" is not in \"%s\"", keys->keys[k]->text, list);
    }
}

static void compare(struct fixture *fixture, const char *path, const char *text)
{
    struct geometry geometry;
    struct messages messages = {0};
    assert_int_equal(reader_read_text("t", text, strlen(text), &geometry, &messages),
                     STATUS_INPUT);
    size_t k = 0;
    while (k < messages.count && strstr(messages.items[k].text, "qqqq") == NULL)
        k++;
    assert_true(k < messages.count);
    assert_same_keys(walk(fixture->schema.root, path), messages.items[k].text);
    messages_free(&messages);
}

static void test_sections_have_the_keys_of_the_reader(void **state)
{
    compare(*state, "properties", "qqqq: 1\n");
    compare(*state, "properties/beam/properties", "beam: {qqqq: 1}\n");
    compare(*state, "properties/beam/properties/path/properties",
            "beam: {path: {qqqq: 1}}\n");
    compare(*state, "properties/beam/properties/slit/properties",
            "beam: {slit: {qqqq: 1}}\n");
    compare(*state, "properties/planes/properties", "planes: {qqqq: 1}\n");
    compare(*state, "properties/probes/items/properties", "probes: [{qqqq: 1}]\n");
    compare(*state, "properties/limits/properties", "limits: {qqqq: 1}\n");
    compare(*state, "properties/lattice/properties", "lattice: {qqqq: 1}\n");
    compare(*state, "properties/grid/properties", "grid: {qqqq: 1}\n");
}

static void test_planes_and_parts_have_the_keys_of_the_reader(void **state)
{
    compare(*state, "$defs/plane/properties", "planes: {electric_along: {qqqq: 1}}\n");
    compare(*state, "$defs/part/properties",
            "planes: {electric_along: {parts: {a: {qqqq: 1}}}}\n");
    compare(*state, "$defs/cut/properties",
            "planes: {electric_along: {parts: {a: {disc: {z: 0, x: 0, radius: 1 m}, "
            "cut: {qqqq: 1}}}}}\n");
    compare(*state, "$defs/twin/properties",
            "planes: {electric_along: {parts: {a: {clamp: , disc: {z: 0, x: 0, radius: "
            "1 m}, twin: {qqqq: 1}}}}}\n");
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_sections_have_the_keys_of_the_reader),
        cmocka_unit_test(test_planes_and_parts_have_the_keys_of_the_reader),
    };
    return cmocka_run_group_tests(tests, set_up, tear_down);
}
