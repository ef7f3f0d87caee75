/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "tests/support/assert_close.h"

#include "mesh/lines.h"
#include "shared/constants.h"
#include "shared/mem.h"

static const struct line_spacing SPACING = {11e-3, 7.3e-3, 80e-3};

static const struct key_line KEYS[] = {{-57.3e-3, 5.0 / 9.0, 0.0, 1.0},
                                       {57.3e-3, 5.0 / 9.0, 0.0, 1.0},
                                       {20e-3, 0.0, 0.0, 1.0}};

static void build(int level, double **lines, int *count)
{
    assert_int_equal(
        lines_build(-0.15, 0.15, KEYS, 3, SPACING, 1e-9, level, lines, count),
        STATUS_OK);
}

static void test_levels_nest_to_the_last_bit(void **state)
{
    (void)state;
    double *coarse, *fine;
    int n, m;
    build(0, &coarse, &n);
    build(1, &fine, &m);
    assert_int_equal(m, 2 * n - 1);
    for (int k = 0; k < n; k++)
        assert_true(coarse[k] == fine[2 * (size_t)k]);
    mem_free(coarse);
    mem_free(fine);
}

static void test_lines_increase_and_hold_the_keys(void **state)
{
    (void)state;
    double *lines;
    int n, found = 0;
    build(2, &lines, &n);
    for (int k = 1; k < n; k++)
        assert_true(lines[k] > lines[k - 1]);
    for (int k = 0; k < n; k++)
        for (int i = 0; i < 3; i++)
            found += lines[k] == KEYS[i].at;
    assert_int_equal(found, 3);
    assert_true(lines[0] == -0.15 && lines[n - 1] == 0.15);
    mem_free(lines);
}

/* The distance of line k from a key grows as k^(1/(1 - mu)), here k^(9/4). */
static void test_spacing_follows_the_power_law(void **state)
{
    (void)state;
    double *lines;
    int n, k = 0;
    build(4, &lines, &n);
    while (lines[k] != KEYS[1].at)
        k++;
    double ratio = (lines[k + 4] - lines[k]) / (lines[k + 2] - lines[k]);
    assert_close(ratio, pow(2.0, 9.0 / 4.0), 1e-3, 0.0);
    mem_free(lines);
}

static void test_symmetric_keys_give_symmetric_lines(void **state)
{
    (void)state;
    double *lines;
    int n;
    assert_int_equal(lines_build(-0.15, 0.15, KEYS, 2, SPACING, 1e-9, 1, &lines, &n),
                     STATUS_OK);
    for (int k = 0; k < n; k++)
        assert_close(lines[k], -lines[n - 1 - k], 0.0, 1e-14);
    mem_free(lines);
}

static void test_close_keys_merge(void **state)
{
    (void)state;
    const struct key_line pair[] = {{0.01, 0.5, 0.0, 1.0},
                                    {0.01 + 1e-12, 0.5, 0.0, 1.0}};
    double *lines;
    int n;
    assert_int_equal(lines_build(0.0, 0.03, pair, 2, SPACING, 1e-9, 0, &lines, &n),
                     STATUS_OK);
    for (int k = 1; k < n; k++)
        assert_true(lines[k] - lines[k - 1] > 1e-9);
    mem_free(lines);
}

static const struct line_tail TAIL = {0.3, 2.385, 1.0};

static void build_open(bool high, double reach, int level, double **lines, int *count)
{
    struct line_tail tail = TAIL;
    tail.reach = reach;
    build(level, lines, count);
    assert_int_equal(lines_extend(lines, count, high, tail, level), STATUS_OK);
}

static void test_tail_keeps_the_lines_that_are_there(void **state)
{
    (void)state;
    double *plain, *low, *high;
    int n, m;
    build(1, &plain, &n);
    build_open(false, 1.0, 1, &low, &m);
    assert_true(m > n + 10);
    for (int k = 0; k < n; k++)
        assert_true(low[m - n + k] == plain[k]);
    build_open(true, 1.0, 1, &high, &m);
    for (int k = 0; k < n; k++)
        assert_true(high[k] == plain[k]);
    mem_free(plain);
    mem_free(low);
    mem_free(high);
}

static void test_twice_the_reach_only_adds_lines(void **state)
{
    (void)state;
    double *once, *twice;
    int n, m;
    build_open(true, 1.0, 1, &once, &n);
    build_open(true, 2.0, 1, &twice, &m);
    assert_true(m > n);
    for (int k = 0; k < n; k++)
        assert_true(once[k] == twice[k]);
    assert_true(once[n - 1] - 0.15 >= TAIL.distance);
    assert_true(twice[m - 1] - 0.15 >= 2.0 * (once[n - 1] - 0.15));
    assert_true(twice[m - 1] - 0.15 < 2.0 * exp(TAIL.growth) * (once[n - 1] - 0.15));
    mem_free(once);
    mem_free(twice);
}

static void test_levels_of_a_tail_nest(void **state)
{
    (void)state;
    double *coarse, *fine;
    int n, m;
    for (int high = 0; high < 2; high++) {
        build_open(high == 1, 2.0, 1, &coarse, &n);
        build_open(high == 1, 2.0, 2, &fine, &m);
        assert_int_equal(m, 2 * n - 1);
        for (int k = 0; k < n; k++)
            assert_true(coarse[k] == fine[2 * (size_t)k]);
        mem_free(coarse);
        mem_free(fine);
    }
}

/* The first interval is about the last one before the end; far out they grow by
 * exp(growth). */
static void test_tail_grows_from_the_last_interval(void **state)
{
    (void)state;
    double *lines;
    int n, k = 0;
    build_open(true, 1.0, 0, &lines, &n);
    while (lines[k] != 0.15)
        k++;
    const double before = lines[k] - lines[k - 1], after = lines[k + 1] - lines[k];
    assert_close(after, before * expm1(TAIL.growth) / TAIL.growth, 1e-12, 0.0);
    assert_close((lines[n - 1] - lines[n - 2]) / (lines[n - 2] - lines[n - 3]),
                 exp(TAIL.growth), 1e-12, 0.0);
    mem_free(lines);
}

static void test_bad_tails_are_refused(void **state)
{
    (void)state;
    const struct line_tail bad[] = {{0.0, 1.0, 1.0},
                                    {0.3, -1.0, 1.0},
                                    {0.3, 1.0, 0.0},
                                    {0.3, 1.0, (double)NAN},
                                    {1e-12, 1e9, 1.0}};
    double *lines;
    int n;
    build(0, &lines, &n);
    const int had = n;
    for (size_t k = 0; k < sizeof bad / sizeof *bad; k++)
        assert_int_equal(lines_extend(&lines, &n, true, bad[k], 0), STATUS_SIZE);
    assert_int_equal(lines_extend(&lines, &n, true, TAIL, 10), STATUS_SIZE);
    mem_fail_at(1);
    assert_int_equal(lines_extend(&lines, &n, true, TAIL, 0), STATUS_MEMORY);
    mem_fail_at(0);
    assert_true(n == had && lines[n - 1] == 0.15);
    mem_free(lines);
}

/* Lines of KEYS with the middle key crowded by a factor. */
static void build_crowded(double factor, int level, double **lines, int *count)
{
    struct key_line keys[3];
    for (int k = 0; k < 3; k++)
        keys[k] = KEYS[k];
    keys[1].crowding = factor;
    assert_int_equal(
        lines_build(-0.15, 0.15, keys, 3, SPACING, 1e-9, level, lines, count),
        STATUS_OK);
}

static int count_between(const double *lines, int n, double low, double high)
{
    int count = 0;
    for (int k = 0; k < n; k++)
        count += lines[k] >= low && lines[k] < high;
    return count;
}

static void test_crowding_adds_lines_near_its_key_only(void **state)
{
    (void)state;
    double *plain, *crowded;
    int n, m;
    build(3, &plain, &n);
    build_crowded(2.0, 3, &crowded, &m);
    assert_close(count_between(crowded, m, 50e-3, 65e-3),
                 2.0 * count_between(plain, n, 50e-3, 65e-3), 0.15, 0.0);
    assert_close(count_between(crowded, m, -65e-3, -50e-3),
                 count_between(plain, n, -65e-3, -50e-3), 0.1, 0.0);
    assert_close(count_between(crowded, m, -0.15, -0.1),
                 count_between(plain, n, -0.15, -0.1), 0.1, 0.0);
    mem_free(plain);
    mem_free(crowded);
}

static void test_crowded_levels_nest(void **state)
{
    (void)state;
    double *coarse, *fine;
    int n, m;
    build_crowded(1.7, 0, &coarse, &n);
    build_crowded(1.7, 1, &fine, &m);
    assert_int_equal(m, 2 * n - 1);
    for (int k = 0; k < n; k++)
        assert_true(coarse[k] == fine[2 * (size_t)k]);
    mem_free(coarse);
    mem_free(fine);
}

static void test_no_crowding_counts_as_one(void **state)
{
    (void)state;
    double *plain, *zero;
    int n, m;
    build(1, &plain, &n);
    build_crowded(0.0, 1, &zero, &m);
    assert_int_equal(n, m);
    for (int k = 0; k < n; k++)
        assert_true(plain[k] == zero[k]);
    mem_free(plain);
    mem_free(zero);
}

static void test_corner_powers(void **state)
{
    (void)state;
    assert_close(lines_corner_power(1.5 * PI), 5.0 / 9.0, 1e-15, 0.0);
    assert_close(lines_corner_power(2.0 * PI), 2.0 / 3.0, 1e-15, 0.0);
    assert_close(lines_corner_power(0.5 * PI), 0.0, 0.0, 0.0);
}

static void test_bad_input_is_refused(void **state)
{
    (void)state;
    double *lines;
    int n;
    assert_int_equal(lines_build(1.0, 1.0, NULL, 0, SPACING, 0.0, 0, &lines, &n),
                     STATUS_SIZE);
    assert_int_equal(
        lines_build(0.0, (double)NAN, NULL, 0, SPACING, 0.0, 0, &lines, &n),
        STATUS_SIZE);
    const struct line_spacing absurd = {1.0, 1e-30, 1.0};
    assert_int_equal(lines_build(0.0, 1.0, KEYS, 3, absurd, 0.0, 0, &lines, &n),
                     STATUS_SIZE);
    assert_null(lines);
}

static void test_every_failed_allocation_is_reported(void **state)
{
    (void)state;
    double *lines = NULL;
    int n;
    enum status status = STATUS_MEMORY;
    for (long k = 1; status != STATUS_OK; k++) {
        mem_fail_at(k);
        status = lines_build(-0.15, 0.15, KEYS, 3, SPACING, 1e-9, 0, &lines, &n);
        mem_fail_at(0);
        assert_true(status == STATUS_OK || (status == STATUS_MEMORY && lines == NULL));
    }
    mem_free(lines);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_levels_nest_to_the_last_bit),
        cmocka_unit_test(test_lines_increase_and_hold_the_keys),
        cmocka_unit_test(test_spacing_follows_the_power_law),
        cmocka_unit_test(test_symmetric_keys_give_symmetric_lines),
        cmocka_unit_test(test_close_keys_merge),
        cmocka_unit_test(test_tail_keeps_the_lines_that_are_there),
        cmocka_unit_test(test_twice_the_reach_only_adds_lines),
        cmocka_unit_test(test_levels_of_a_tail_nest),
        cmocka_unit_test(test_tail_grows_from_the_last_interval),
        cmocka_unit_test(test_bad_tails_are_refused),
        cmocka_unit_test(test_crowding_adds_lines_near_its_key_only),
        cmocka_unit_test(test_crowded_levels_nest),
        cmocka_unit_test(test_no_crowding_counts_as_one),
        cmocka_unit_test(test_corner_powers),
        cmocka_unit_test(test_bad_input_is_refused),
        cmocka_unit_test(test_every_failed_allocation_is_reported),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
