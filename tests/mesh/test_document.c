/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "tests/support/assert_close.h"

#include <stdio.h>
#include <string.h>

#include "mesh/document.h"
#include "shared/mem.h"

struct fixture {
    struct document document;
    struct messages messages;
    struct mistakes mistakes;
};

static int set_up(void **state)
{
    static struct fixture fixture;
    memset(&fixture, 0, sizeof fixture);
    fixture.mistakes.messages = &fixture.messages;
    *state = &fixture;
    return 0;
}

static int tear_down(void **state)
{
    struct fixture *fixture = *state;
    document_free(&fixture->document);
    document_free(&fixture->document);
    messages_free(&fixture->messages);
    return 0;
}

static enum status parse(struct fixture *fixture, const char *text)
{
    document_free(&fixture->document);
    return document_parse(text, strlen(text), &fixture->document, &fixture->mistakes);
}

/* The text is refused, the first message being at a place and holding `part`. */
static void assert_refused(struct fixture *fixture, const char *text, int line,
                           int column, const char *part)
{
    size_t count = fixture->messages.count;
    assert_int_equal(parse(fixture, text), STATUS_INPUT);
    assert_null(fixture->document.root);
    assert_true(fixture->messages.count > count);
    const struct message *message = &fixture->messages.items[count];
    if (strstr(message->text, part) == NULL)
        fail_msg("\"%s\" does not hold \"%s\"", message->text, part);
    assert_int_equal(message->place.line, line);
    assert_int_equal(message->place.column, column);
}

static void test_tree_keeps_order_text_and_places(void **state)
{
    struct fixture *fixture = *state;
    assert_int_equal(
        parse(fixture, "one: 1 # first\ntwo:\n  - \xC2\xB5m\n  - {k: 'v'}\n"),
        STATUS_OK);
    const struct node *two = node_find(fixture->document.root, "two");
    assert_int_equal(two->kind, NODE_SEQUENCE);
    assert_string_equal(two->items[0]->text, "\xC2\xB5m");
    const struct node *value = node_find(two->items[1], "k");
    assert_string_equal(value->text, "v");
    assert_int_equal(value->place.line, 4);
    assert_int_equal(value->place.column, 10);
    assert_true(value->literal && value->quoted);
    assert_null(node_find(fixture->document.root, "three"));
}

static void test_nothing_written_is_empty(void **state)
{
    struct fixture *fixture = *state;
    assert_int_equal(parse(fixture, "a:\nb: ''\n"), STATUS_OK);
    const struct node *root = fixture->document.root;
    assert_true(node_is_empty(node_find(root, "a")));
    assert_int_equal(node_find(root, "a")->place.line, 1);
    assert_false(node_is_empty(node_find(root, "b")));
}

static void test_text_over_several_lines_is_not_literal(void **state)
{
    struct fixture *fixture = *state;
    assert_int_equal(parse(fixture, "a: one\n  two\nb: |\n  x\n  y\n"), STATUS_OK);
    const struct node *root = fixture->document.root;
    assert_string_equal(node_find(root, "a")->text, "one two");
    assert_false(node_find(root, "a")->literal);
    assert_string_equal(node_find(root, "b")->text, "x\ny");
}

static void test_alias_is_the_node_of_its_anchor(void **state)
{
    struct fixture *fixture = *state;
    assert_int_equal(parse(fixture, "a: &x [1, 2]\nb: *x\n"), STATUS_OK);
    const struct node *root = fixture->document.root;
    assert_ptr_equal(node_find(root, "a"), node_find(root, "b"));
}

static void test_aliases_that_go_astray_are_refused(void **state)
{
    assert_refused(*state, "a: *x\n", 1, 4, "has no anchor");
    assert_refused(*state, "a: &x\n  b: *x\n", 2, 6, "inside its own anchor");
}

static void test_aliases_cannot_grow_without_bound(void **state)
{
    char text[4000] = "a0: &a0 [x, x, x, x, x, x, x, x, x, x]\n";
    for (int k = 1; k < 9; k++) {
        size_t used = strlen(text);
        int a = k - 1;
        (void)snprintf(text + used, sizeof text - used,
                       "a%d: &a%d [*a%d, *a%d, *a%d, *a%d, *a%d, *a%d]\n", k, k, a, a,
                       a, a, a, a);
    }
    assert_refused(*state, text, 7, 9, "too many items");
}

static void test_deep_nesting_is_refused(void **state)
{
    char text[100] = "a: ";
    memset(text + 3, '[', DOCUMENT_DEPTH_MAX);
    assert_refused(*state, text, 1, 3 + DOCUMENT_DEPTH_MAX, "nested too deep");
}

static void test_key_that_is_there_twice_is_reported(void **state)
{
    struct fixture *fixture = *state;
    assert_int_equal(parse(fixture, "a: 1\nb: 2\na: 3\n"), STATUS_OK);
    assert_int_equal(fixture->mistakes.count, 1);
    assert_int_equal(fixture->messages.items[0].place.line, 3);
    assert_non_null(strstr(fixture->messages.items[0].text, "before in line 1"));
}

static void test_syntax_mistakes_become_messages(void **state)
{
    assert_refused(*state, "a: [1, 2\nb: 3\n", 3, 1, "not valid YAML");
    assert_refused(*state, "a: b: c\n", 1, 5, "not valid YAML");
    assert_refused(*state, "a: 1\nb: }\n", 2, 4, "not valid YAML");
}

static void test_unusual_documents_are_refused(void **state)
{
    assert_refused(*state, "", 0, 0, "the file is empty");
    assert_refused(*state, "# only a comment\n", 0, 0, "the file is empty");
    assert_refused(*state, "- a\n- b\n", 1, 1, "no geometry file");
    assert_refused(*state, "just words\n", 1, 1, "no geometry file");
    assert_refused(*state, "a: 1\n---\nb: 2\n", 2, 1, "second document");
    assert_refused(*state, "a: !!str 1\n", 1, 10, "tag");
    assert_refused(*state, "? [a, b]\n: 1\n", 1, 3, "key is made of several");
}

static void test_binary_files_are_refused(void **state)
{
    assert_refused(*state, "a: 1\nb: \x01\n", 2, 0, "0x01");
    assert_refused(*state, "\xFF\xFE", 1, 0, "0xFF");
    assert_refused(*state, "a: \xC0\xAF\n", 1, 0, "0xC0");     /* overlong "/" */
    assert_refused(*state, "a: \xED\xA0\x80\n", 1, 0, "0xED"); /* half a pair */
    assert_refused(*state, "a: \xE2\x82", 1, 0, "0xE2");       /* cut short */
    assert_refused(*state, "a: \"\\e[1m\"\n", 1, 5, "control character");
    assert_refused(*state, "a: \"x\\0y\"\n", 1, 5, "control character");
}

static void test_every_lack_of_memory_is_told(void **state)
{
    struct fixture *fixture = *state;
    const char *text = "a: &x [1, 2]\nb: *x\nc: {d: 'e', f: }\n";
    enum status status = STATUS_MEMORY;
    long k = 0;
    while (status == STATUS_MEMORY) {
        assert_null(fixture->document.root);
        mem_fail_at(++k);
        status = parse(fixture, text);
        mem_fail_at(0);
    }
    assert_int_equal(status, STATUS_OK);
    assert_true(k > 20);
}

#define CASE(test) cmocka_unit_test_setup_teardown(test, set_up, tear_down)

int main(void)
{
    const struct CMUnitTest tests[] = {
        CASE(test_tree_keeps_order_text_and_places),
        CASE(test_nothing_written_is_empty),
        CASE(test_text_over_several_lines_is_not_literal),
        CASE(test_alias_is_the_node_of_its_anchor),
        CASE(test_aliases_that_go_astray_are_refused),
        CASE(test_aliases_cannot_grow_without_bound),
        CASE(test_deep_nesting_is_refused),
        CASE(test_key_that_is_there_twice_is_reported),
        CASE(test_syntax_mistakes_become_messages),
        CASE(test_unusual_documents_are_refused),
        CASE(test_binary_files_are_refused),
        CASE(test_every_lack_of_memory_is_told),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
