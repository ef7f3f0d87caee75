/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_TESTS_MESH_TEST_CHECK_TEXT_H
#define EVENGAP_TESTS_MESH_TEST_CHECK_TEXT_H

/* Geometry texts held against the check of a geometry as a whole. */

#include "tests/support/assert_close.h"

#include <stdio.h>
#include <string.h>

#include "mesh/geometry_check.h"
#include "mesh/reader.h"

/* Reads a text that the reader takes, and checks it. */
static inline enum status check(const char *text, struct messages *messages)
{
    struct geometry geometry;
    char whole[4000];
    (void)snprintf(whole, sizeof whole, "evengap: 1\n%s", text);
    enum status status =
        reader_read_text("t.yaml", whole, strlen(whole), &geometry, messages);
    if (status != STATUS_OK)
        fail_msg("the reader refused: %s", messages->items[0].text);
    status = geometry_check(&geometry, messages);
    geometry_free(&geometry);
    return status;
}

static inline void assert_fine(const char *text)
{
    struct messages messages = {0};
    if (check(text, &messages) != STATUS_OK)
        fail_msg("%s", messages.items[0].text);
    assert_int_equal(messages.count, 0);
    messages_free(&messages);
}

/* The check gives one error, in a line of the text (counted from 2), with all parts. */
static inline void assert_mistake(const char *text, int line, const char *first,
                                  const char *second)
{
    struct messages messages = {0};
    if (check(text, &messages) != STATUS_INPUT)
        fail_msg("accepted: %s", text);
    if (messages.count != 1)
        fail_msg("%zu messages, the last: %s", messages.count,
                 messages.items[messages.count - 1].text);
    const char *got = messages.items[0].text;
    if (strstr(got, first) == NULL || strstr(got, second) == NULL)
        fail_msg("\"%s\" lacks \"%s\" or \"%s\"", got, first, second);
    assert_int_equal(messages.items[0].place.line, line);
    messages_free(&messages);
}

#endif
