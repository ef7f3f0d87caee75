/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "tests/support/assert_close.h"

#include <string.h>

#include "shared/mem.h"
#include "shared/message.h"

static void assert_shown(const struct messages *messages, size_t k, const char *want)
{
    char *text = messages_format(messages, k);
    assert_non_null(text);
    assert_string_equal(text, want);
    mem_free(text);
}

static void test_place_line_and_caret_are_shown(void **state)
{
    (void)state;
    struct messages messages = {0};
    messages_set_source(&messages, "a.yaml", "one: 1\ntwo: 2\nthree: 3\n");
    messages_add(&messages, SEVERITY_ERROR, (struct place){2, 6}, "%d is wrong", 2);
    assert_shown(&messages, 0,
                 "a.yaml:2:6: error: 2 is wrong\n"
                 "  two: 2\n"
                 "       ^");
    messages_free(&messages);
}

static void test_place_of_whole_file_shows_no_line(void **state)
{
    (void)state;
    struct messages messages = {0};
    messages_set_source(&messages, "a.yaml", "one: 1\n");
    messages_add(&messages, SEVERITY_WARNING, (struct place){0, 0}, "odd");
    assert_shown(&messages, 0, "a.yaml: warning: odd");
    messages_free(&messages);
}

static void test_message_without_file_or_source_is_plain(void **state)
{
    (void)state;
    struct messages messages = {0};
    messages_add(&messages, SEVERITY_NOTE, (struct place){0, 0}, "hint");
    messages_add(&messages, SEVERITY_ERROR, (struct place){3, 4}, "bad");
    assert_shown(&messages, 0, "note: hint");
    assert_shown(&messages, 1, "3:4: error: bad");
    messages_free(&messages);
}

static void test_caret_counts_characters_and_keeps_tabs(void **state)
{
    (void)state;
    struct messages messages = {0};
    messages_set_source(&messages, NULL, "\t\xC2\xB5 = 4 V");
    messages_add(&messages, SEVERITY_ERROR, (struct place){1, 4}, "bad");
    assert_shown(&messages, 0, "1:4: error: bad\n  \t\xC2\xB5 = 4 V\n  \t  ^");
    messages_free(&messages);
}

static void test_place_beyond_the_file_is_harmless(void **state)
{
    (void)state;
    struct messages messages = {0};
    messages_set_source(&messages, "a.yaml", "one: 1\n");
    messages_add(&messages, SEVERITY_ERROR, (struct place){99, 3}, "far");
    messages_add(&messages, SEVERITY_ERROR, (struct place){1, 50}, "wide");
    assert_shown(&messages, 0, "a.yaml:99:3: error: far");
    assert_shown(&messages, 1, "a.yaml:1:50: error: wide\n  one: 1\n        ^");
    messages_free(&messages);
}

static void test_long_line_is_shown_around_the_caret(void **state)
{
    (void)state;
    char line[1001] = "";
    struct messages messages = {0};
    memset(line, 'x', 1000);
    line[500] = 'Y';
    messages_set_source(&messages, NULL, line);
    messages_add(&messages, SEVERITY_ERROR, (struct place){1, 501}, "bad");
    char *text = messages_format(&messages, 0);
    assert_non_null(text);
    const char *first = strchr(text, '\n');
    const char *second = strchr(first + 1, '\n');
    assert_true(strlen(text) < 300);
    assert_int_equal(strchr(first, 'Y') - first, strchr(second, '^') - second);
    mem_free(text);
    messages_free(&messages);
}

static void test_control_characters_do_not_reach_the_terminal(void **state)
{
    (void)state;
    struct messages messages = {0};
    messages_add(&messages, SEVERITY_ERROR, (struct place){0, 0}, "a\x1b[31mb");
    assert_shown(&messages, 0, "error: a?[31mb");
    messages_free(&messages);
}

static void test_only_errors_are_counted_as_errors(void **state)
{
    (void)state;
    struct messages messages = {0};
    for (int k = 0; k < 9; k++)
        messages_add(&messages, k % 3 == 0 ? SEVERITY_ERROR : SEVERITY_WARNING,
                     (struct place){k, 1}, "%d", k);
    assert_int_equal(messages.count, 9);
    assert_int_equal(messages.errors, 3);
    assert_string_equal(messages.items[7].text, "7");
    messages_free(&messages);
    messages_free(&messages);
}

static void test_nobody_listening_is_fine(void **state)
{
    (void)state;
    messages_add(NULL, SEVERITY_ERROR, (struct place){1, 1}, "bad");
    messages_set_source(NULL, "a", "b");
    messages_free(NULL);
}

static void test_lack_of_memory_counts_lost_messages(void **state)
{
    (void)state;
    for (long k = 1; k <= 2; k++) { /* the text, then the list */
        struct messages messages = {0};
        mem_fail_at(k);
        messages_add(&messages, SEVERITY_ERROR, (struct place){1, 1}, "bad");
        mem_fail_at(0);
        assert_int_equal(messages.lost, 1);
        assert_int_equal(messages.count, 0);
        messages_free(&messages);
    }
}

static void test_lack_of_memory_while_showing_gives_null(void **state)
{
    (void)state;
    struct messages messages = {0};
    messages_set_source(&messages, "a.yaml", "one: 1\n");
    messages_add(&messages, SEVERITY_ERROR, (struct place){1, 1}, "bad");
    for (long k = 1; k <= 2; k++) {
        mem_fail_at(k);
        assert_null(messages_format(&messages, 0));
    }
    mem_fail_at(0);
    messages_free(&messages);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_place_line_and_caret_are_shown),
        cmocka_unit_test(test_place_of_whole_file_shows_no_line),
        cmocka_unit_test(test_message_without_file_or_source_is_plain),
        cmocka_unit_test(test_caret_counts_characters_and_keeps_tabs),
        cmocka_unit_test(test_place_beyond_the_file_is_harmless),
        cmocka_unit_test(test_long_line_is_shown_around_the_caret),
        cmocka_unit_test(test_control_characters_do_not_reach_the_terminal),
        cmocka_unit_test(test_only_errors_are_counted_as_errors),
        cmocka_unit_test(test_nobody_listening_is_fine),
        cmocka_unit_test(test_lack_of_memory_counts_lost_messages),
        cmocka_unit_test(test_lack_of_memory_while_showing_gives_null),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
