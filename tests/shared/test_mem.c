/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "tests/support/assert_close.h"

#include <string.h>

#include "shared/mem.h"

static void test_new_array_is_zeroed(void **state)
{
    (void)state;
    double *array = MEM_NEW(7, double);
    assert_non_null(array);
    for (int k = 0; k < 7; k++)
        assert_close(array[k], 0, 0, 0);
    mem_free(array);
}

static void test_empty_array_can_be_freed(void **state)
{
    (void)state;
    char *array = MEM_NEW(0, char);
    assert_non_null(array);
    mem_free(array);
    mem_free(NULL);
}

static void test_overflowing_size_is_refused(void **state)
{
    (void)state;
    assert_null(mem_new(SIZE_MAX / 2, 3));
    int *kept = MEM_NEW(1, int);
    assert_non_null(kept);
    kept[0] = 41;
    assert_null(mem_resize(kept, SIZE_MAX / 2, 3));
    assert_int_equal(kept[0], 41);
    mem_free(kept);
}

static void test_resize_keeps_what_was_there(void **state)
{
    (void)state;
    int *array = MEM_NEW(2, int);
    assert_non_null(array);
    array[1] = 23;
    int *grown = mem_resize(array, 2000, sizeof(int));
    assert_non_null(grown);
    assert_int_equal(grown[1], 23);
    mem_free(grown);
}

static void test_text_is_copied(void **state)
{
    (void)state;
    char text[] = "upper plate";
    char *copy = mem_text(text);
    text[0] = 'U';
    assert_string_equal(copy, "upper plate");
    mem_free(copy);
    assert_null(mem_text(NULL));
}

static void test_kth_request_fails_once(void **state)
{
    (void)state;
    mem_fail_at(2);
    void *first = mem_new(1, 1), *second = mem_new(1, 1), *third = mem_new(1, 1);
    assert_non_null(first);
    assert_null(second);
    assert_non_null(third);
    mem_free(first);
    mem_free(third);
}

static void test_failure_can_be_switched_off(void **state)
{
    (void)state;
    mem_fail_at(1);
    mem_fail_at(0);
    void *array = mem_new(1, 1);
    assert_non_null(array);
    mem_free(array);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_new_array_is_zeroed),
        cmocka_unit_test(test_empty_array_can_be_freed),
        cmocka_unit_test(test_overflowing_size_is_refused),
        cmocka_unit_test(test_resize_keeps_what_was_there),
        cmocka_unit_test(test_text_is_copied),
        cmocka_unit_test(test_kth_request_fails_once),
        cmocka_unit_test(test_failure_can_be_switched_off),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
