/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "tests/support/assert_close.h"

#include <string.h>

#include "shared/status.h"

static void test_every_status_has_its_own_sentence(void **state)
{
    (void)state;
    for (int k = 0; k < STATUS_COUNT; k++) {
        const char *text = status_text((enum status)k);
        assert_non_null(text);
        assert_string_not_equal(text, status_text(STATUS_COUNT));
        for (int j = 0; j < k; j++)
            assert_string_not_equal(text, status_text((enum status)j));
    }
}

static void test_no_sentence_ends_with_a_full_stop(void **state)
{
    (void)state;
    for (int k = 0; k < STATUS_COUNT; k++) {
        const char *text = status_text((enum status)k);
        assert_true(strlen(text) > 0 && text[strlen(text) - 1] != '.');
    }
}

static void test_unknown_status_is_told(void **state)
{
    (void)state;
    assert_string_equal(status_text(STATUS_COUNT), "unknown status");
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_every_status_has_its_own_sentence),
        cmocka_unit_test(test_no_sentence_ends_with_a_full_stop),
        cmocka_unit_test(test_unknown_status_is_told),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
