/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Whatever happens, the user's previous folder is either untouched or replaced whole. */

#define _XOPEN_SOURCE 700 /* NOLINT: symlink, setrlimit */

#include <signal.h>
#include <stdlib.h>
#include <string.h>
#include <sys/resource.h>
#include <sys/stat.h>
#include <unistd.h>

#include "output/folder.h"
#include "shared/mem.h"
#include "tests/output/fixture.h"
#include "tests/support/assert_close.h"

#define MARKER "{\"evengap\": 1, \"kind\": \"summary\", \"files\": "
#define LISTED MARKER "[\"summary.json\", \"data.txt\"]}"

static enum status write_file(struct folder *folder, const char *name, const char *text,
                              struct messages *messages)
{
    struct sink sink;
    enum status status = folder_open(folder, name, &sink, messages);
    if (status)
        return status;
    sink_print(&sink, "%s", text);
    return sink_close(&sink, messages);
}

/* A whole write of the folder "out" holding data.txt with the given text. */
static enum status write_folder(struct fixture *fixture, const char *text)
{
    struct folder folder;
    struct messages *messages = &fixture->messages;
    enum status status =
        folder_begin(&folder, fixture_path(fixture, "out"), "summary", messages);
    if (!status)
        status = write_file(&folder, "data.txt", text, messages);
    if (!status)
        status = write_file(&folder, FOLDER_MARKER_FILE, LISTED, messages);
    if (!status)
        status = folder_commit(&folder, messages);
    folder_free(&folder);
    return status;
}

static void check_data(const struct fixture *fixture, const char *want)
{
    char *text = fixture_read(fixture_path(fixture, "out/data.txt"));
    assert_non_null(text);
    assert_string_equal(text, want);
    free(text);
}

static void test_new_folder_appears_whole(void **state)
{
    struct fixture *fixture = *state;
    assert_int_equal(write_folder(fixture, "first"), STATUS_OK);
    check_data(fixture, "first");
    assert_int_equal(fixture_entries(fixture->folder), 1);
    assert_int_equal(fixture_entries(fixture_path(fixture, "out")), 2);
}

static void test_own_folder_is_replaced_and_nothing_left(void **state)
{
    struct fixture *fixture = *state;
    assert_int_equal(write_folder(fixture, "first"), STATUS_OK);
    assert_int_equal(write_folder(fixture, "second"), STATUS_OK);
    check_data(fixture, "second");
    assert_int_equal(fixture_entries(fixture->folder), 1);
}

static void test_abandoned_folder_leaves_the_previous_one(void **state)
{
    struct fixture *fixture = *state;
    struct folder folder;
    assert_int_equal(write_folder(fixture, "first"), STATUS_OK);
    assert_int_equal(
        folder_begin(&folder, fixture_path(fixture, "out"), "summary", NULL),
        STATUS_OK);
    assert_int_equal(write_file(&folder, "data.txt", "half", NULL), STATUS_OK);
    folder_free(&folder);
    folder_free(&folder);
    check_data(fixture, "first");
    assert_int_equal(fixture_entries(fixture->folder), 1);
}

static void refused(struct fixture *fixture, const char *name, const char *words)
{
    size_t before = fixture->messages.count;
    assert_int_equal(
        folder_check(fixture_path(fixture, name), "summary", &fixture->messages),
        STATUS_WRITE);
    assert_int_equal(fixture->messages.count, before + 1);
    assert_non_null(strstr(fixture->messages.items[before].text, words));
}

static void test_foreign_things_are_refused(void **state)
{
    struct fixture *fixture = *state;
    assert_int_equal(mkdir(fixture_path(fixture, "strange"), 0777), 0);
    fixture_write(fixture_path(fixture, "strange/thesis.tex"), "work of years");
    refused(fixture, "strange", "'thesis.tex', which evengap did not write");
    refused(fixture, "strange/thesis.tex", "not a folder");
    refused(fixture, "nowhere/out", "No such file");
    fixture_write(fixture_path(fixture, "strange/summary.json"), "{\"kind\": 1}");
    refused(fixture, "strange", "which evengap did not write");
    assert_int_equal(symlink("nowhere", fixture_path(fixture, "dangling")), 0);
    refused(fixture, "dangling", "not a folder");
}

static void test_stranger_among_own_files_is_refused(void **state)
{
    struct fixture *fixture = *state;
    assert_int_equal(write_folder(fixture, "first"), STATUS_OK);
    fixture_write(fixture_path(fixture, "out/notes.txt"), "mine");
    refused(fixture, "out", "'notes.txt'");
    assert_int_equal(write_folder(fixture, "second"), STATUS_WRITE);
    check_data(fixture, "first");
    assert_int_equal(fixture_entries(fixture->folder), 1);
}

static void test_folder_of_the_other_command_is_refused(void **state)
{
    struct fixture *fixture = *state;
    assert_int_equal(write_folder(fixture, "first"), STATUS_OK);
    assert_int_equal(folder_check(fixture_path(fixture, "out"), "drawing", NULL),
                     STATUS_WRITE);
}

static void test_empty_folder_and_slash_and_link_are_taken(void **state)
{
    struct fixture *fixture = *state;
    assert_int_equal(mkdir(fixture_path(fixture, "out"), 0777), 0);
    assert_int_equal(folder_check(fixture_path(fixture, "out///"), "summary", NULL),
                     STATUS_OK);
    assert_int_equal(symlink("out", fixture_path(fixture, "link")), 0);
    struct folder folder;
    assert_int_equal(
        folder_begin(&folder, fixture_path(fixture, "link"), "summary", NULL),
        STATUS_OK);
    assert_int_equal(write_file(&folder, "data.txt", "through a link", NULL),
                     STATUS_OK);
    assert_int_equal(folder_commit(&folder, NULL), STATUS_OK);
    folder_free(&folder);
    check_data(fixture, "through a link");
}

static void test_name_of_this_folder_is_refused(void **state)
{
    (void)state;
    assert_int_equal(folder_check("", "summary", NULL), STATUS_WRITE);
    assert_int_equal(folder_check("..", "summary", NULL), STATUS_WRITE);
}

static void test_file_limit_reports_reason_and_keeps_previous(void **state)
{
    struct fixture *fixture = *state;
    assert_int_equal(write_folder(fixture, "first"), STATUS_OK);
    char *big = calloc(1, 300001);
    memset(big, 'x', 300000);
    struct rlimit kept, small;
    assert_int_equal(getrlimit(RLIMIT_FSIZE, &kept), 0);
    small = kept;
    small.rlim_cur = 100000;
    (void)signal(SIGXFSZ, SIG_IGN);
    assert_int_equal(setrlimit(RLIMIT_FSIZE, &small), 0);
    enum status status = write_folder(fixture, big);
    assert_int_equal(setrlimit(RLIMIT_FSIZE, &kept), 0);
    free(big);
    assert_int_equal(status, STATUS_WRITE);
    const char *text = fixture->messages.items[0].text;
    assert_non_null(strstr(text, "data.txt"));
    assert_non_null(strstr(text, "File too large"));
    check_data(fixture, "first");
    assert_int_equal(fixture_entries(fixture->folder), 1);
}

static void test_full_disk_is_reported_on_close(void **state)
{
    struct fixture *fixture = *state;
    FILE *full = fopen("/dev/full", "w");
    assert_non_null(full);
    struct sink sink;
    sink_wrap(&sink, full);
    sink_print(&sink, "%s", "a few bytes that wait in the buffer");
    assert_int_equal(sink_close(&sink, &fixture->messages), STATUS_WRITE);
    assert_non_null(strstr(fixture->messages.items[0].text, "No space left"));
    (void)fclose(full);
}

static void test_each_failed_allocation_keeps_previous(void **state)
{
    struct fixture *fixture = *state;
    assert_int_equal(write_folder(fixture, "first"), STATUS_OK);
    enum status status = STATUS_MEMORY;
    long k = 0;
    while (status == STATUS_MEMORY && k < 1000) {
        check_data(fixture, "first");
        mem_fail_at(++k);
        status = write_folder(fixture, "second");
        mem_fail_at(0);
        assert_int_equal(fixture_entries(fixture->folder), 1);
    }
    assert_int_equal(status, STATUS_OK);
    assert_true(k > 5);
    check_data(fixture, "second");
}

#define EACH(test)                                                                     \
    cmocka_unit_test_setup_teardown(test, fixture_setup, fixture_teardown)

int main(void)
{
    const struct CMUnitTest tests[] = {
        EACH(test_new_folder_appears_whole),
        EACH(test_own_folder_is_replaced_and_nothing_left),
        EACH(test_abandoned_folder_leaves_the_previous_one),
        EACH(test_foreign_things_are_refused),
        EACH(test_stranger_among_own_files_is_refused),
        EACH(test_folder_of_the_other_command_is_refused),
        EACH(test_empty_folder_and_slash_and_link_are_taken),
        EACH(test_name_of_this_folder_is_refused),
        EACH(test_file_limit_reports_reason_and_keeps_previous),
        EACH(test_full_disk_is_reported_on_close),
        EACH(test_each_failed_allocation_keeps_previous),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
