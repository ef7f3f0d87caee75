/* SPDX-License-Identifier: GPL-3.0-or-later */

#include <string.h>

#include "output/command.h"
#include "shared/mem.h"
#include "tests/support/assert_close.h"

#define WORDS_MOST 16

/* Parses "evengap" followed by the words of a line. */
static enum status parse(const char *line, struct command *command,
                         struct messages *messages)
{
    static char text[256];
    char *argv[WORDS_MOST] = {text};
    int argc = 0;
    (void)snprintf(text, sizeof text, "evengap %s", line);
    for (char *word = strtok(text, " "); word; word = strtok(NULL, " "))
        argv[argc++] = word;
    return command_parse(argc, argv, command, messages);
}

static void test_options_may_follow_the_file(void **state)
{
    (void)state;
    struct command command;
    assert_int_equal(parse("run --grids 2 f.yaml --fineness=1.75 --within 2.5e-6 "
                           "--quiet --output d",
                           &command, NULL),
                     STATUS_OK);
    assert_int_equal(command.kind, COMMAND_RUN);
    assert_string_equal(command.file, "f.yaml");
    assert_string_equal(command.output, "d");
    assert_close(command.fineness, 1.75, 0, 0);
    assert_int_equal(command.grids, 2);
    assert_close(command.within, 2.5e-6, 0, 0);
    assert_true(command.quiet);
}

static void test_dashes_end_the_options(void **state)
{
    (void)state;
    struct command command;
    assert_int_equal(parse("draw -- --quiet", &command, NULL), STATUS_OK);
    assert_string_equal(command.file, "--quiet");
    assert_false(command.quiet);
}

static void test_help_has_a_topic(void **state)
{
    (void)state;
    struct command command;
    assert_int_equal(parse("--help", &command, NULL), STATUS_OK);
    assert_int_equal(command.topic, COMMAND_HELP);
    assert_int_equal(parse("run f.yaml --help", &command, NULL), STATUS_OK);
    assert_int_equal(command.kind, COMMAND_HELP);
    assert_int_equal(command.topic, COMMAND_RUN);
    assert_non_null(strstr(command_help(command.topic), "--grids"));
    assert_null(strstr(command_help(COMMAND_DRAW), "--grids"));
}

static void test_mistakes_name_the_nearest_word(void **state)
{
    (void)state;
    static const char *const rows[][2] = {
        {"rnu f.yaml", "unknown command 'rnu'; did you mean 'run'?"},
        {"darw f.yaml", "did you mean 'draw'?"},
        {"--versoin", "did you mean '--version'?"},
        {"trampoline f.yaml", "see evengap --help"},
        {"run f.yaml --outptu d", "did you mean '--output'?"},
        {"run f.yaml --fine=2", "did you mean '--fineness'?"},
        {"draw f.yaml --grids 2", "unknown option '--grids'"},
        {"run", "evengap run needs a geometry file"},
        {"run a.yaml b.yaml", "more than one geometry file"},
        {"run f.yaml --output", "--output needs a value"},
        {"run f.yaml --quiet=yes", "--quiet takes no value"},
        {"run f.yaml --fineness 0", "number from 0.1 to 20, not '0'"},
        {"run f.yaml --fineness nan", "not 'nan'"},
        {"run f.yaml --fineness 2x", "not '2x'"},
        {"run f.yaml --within 0", "--within takes a number from 1e-12 to 0.1, not '0'"},
        {"run f.yaml --within 0.2", "not '0.2'"},
        {"run f.yaml --within nan", "not 'nan'"},
        {"run f.yaml --within 1e-13", "not '1e-13'"},
        {"run f.yaml --within", "--within needs a value"},
        {"run f.yaml --withn 1e-3", "did you mean '--within'?"},
        {"draw f.yaml --within 1e-3", "unknown option '--within'"},
        {"run f.yaml --grids 4", "from 2 to 3, not '4'"},
        {"run f.yaml --grids 2.5", "not '2.5'"},
        {"run f.yaml --grids 1", "from 2 to 3, not '1'"},
        {"", "nothing to do"},
    };
    for (size_t k = 0; k < sizeof rows / sizeof rows[0]; k++) {
        struct command command;
        struct messages messages = {0};
        assert_int_equal(parse(rows[k][0], &command, &messages), STATUS_INPUT);
        assert_int_equal(messages.errors, 1);
        if (!strstr(messages.items[0].text, rows[k][1]))
            fail_msg("'%s' gave '%s', want '%s'", rows[k][0], messages.items[0].text,
                     rows[k][1]);
        messages_free(&messages);
    }
}

static void test_folder_takes_the_place_of_the_suffix(void **state)
{
    (void)state;
    static const char *const rows[][2] = {
        {"a/b.c/filter.yaml", "a/b.c/filter.result"},
        {"a.b/filter", "a.b/filter.result"},
        {".hidden", ".hidden.result"},
        {"x.tar.yaml", "x.tar.result"},
    };
    for (size_t k = 0; k < sizeof rows / sizeof rows[0]; k++) {
        struct command command = {.kind = COMMAND_RUN, .file = rows[k][0]};
        char *folder = command_folder(&command);
        assert_string_equal(folder, rows[k][1]);
        mem_free(folder);
    }
    struct command drawing = {.kind = COMMAND_DRAW, .file = "f.yaml"};
    char *folder = command_folder(&drawing);
    assert_string_equal(folder, "f.drawing");
    mem_free(folder);
}

static void test_every_status_has_its_exit_code(void **state)
{
    (void)state;
    assert_int_equal(command_exit_code(STATUS_OK, true), 0);
    assert_int_equal(command_exit_code(STATUS_OK, false), 1);
    assert_int_equal(command_exit_code(STATUS_INPUT, true), 2);
    assert_int_equal(command_exit_code(STATUS_SINGULAR, true), 3);
    assert_int_equal(command_exit_code(STATUS_UNTRUSTED, true), 3);
    assert_int_equal(command_exit_code(STATUS_MEMORY, true), 3);
    assert_int_equal(command_exit_code(STATUS_SIZE, true), 3);
    assert_int_equal(command_exit_code(STATUS_WRITE, true), 4);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_options_may_follow_the_file),
        cmocka_unit_test(test_dashes_end_the_options),
        cmocka_unit_test(test_help_has_a_topic),
        cmocka_unit_test(test_mistakes_name_the_nearest_word),
        cmocka_unit_test(test_folder_takes_the_place_of_the_suffix),
        cmocka_unit_test(test_every_status_has_its_exit_code),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
