/* SPDX-License-Identifier: GPL-3.0-or-later */

/* How far knobs are turned, on errors and costs made by hand. */

#include "tests/support/assert_close.h"

#include <math.h>
#include <string.h>

#include "solver/turning.h"

enum { KNOBS = 4, AIMS = 2 };

struct bench {
    double errors[KNOBS][AIMS];
    struct knob items[KNOBS];
    struct knobs knobs;
    struct aim aim_items[AIMS];
    struct aims aims;
};

/* Two planes with a part each: parts account for 2/3 and 5/6 of the first figure; the
 * second depends on the second plane alone. */
static void bench_fill(struct bench *b)
{
    static const double errors[KNOBS][AIMS] = {
        {3e-5, 0.0}, {2e-5, 0.0}, {6e-5, 7e-5}, {5e-5, 7e-5}};
    static const double costs[KNOBS] = {8000.0, 1700.0, 9000.0, 2300.0};
    memset(b, 0, sizeof *b);
    memcpy(b->errors, errors, sizeof errors);
    for (int k = 0; k < KNOBS; k++)
        b->items[k] =
            (struct knob){.plane = k < 2 ? PLANE_ELECTRIC_ALONG : PLANE_MAGNETIC_ALONG,
                          .part = k % 2 == 0 ? KNOB_ALL_LINES : 0,
                          .cost = costs[k],
                          .error = b->errors[k]};
    b->knobs = (struct knobs){b->items, KNOBS, KNOBS};
    for (int k = 0; k < AIMS; k++)
        b->aim_items[k] = (struct aim){.size = 1.0, .stands = true, .stood = true};
    b->aims = (struct aims){b->aim_items, AIMS, AIMS, true};
}

/* Factor on the lines near the part of a plane, and error of the first figure left. */
static double near_part(const struct bench *b, size_t plane)
{
    return b->items[2 * plane].turn * b->items[2 * plane + 1].turn;
}

static double left(const struct bench *b)
{
    const double rest[2] = {1e-5, 1e-5}, part[2] = {2e-5, 5e-5};
    double sum = 0.0;
    for (size_t p = 0; p < 2; p++)
        sum += rest[p] * pow(b->items[2 * p].turn, -KNOB_ORDER) +
               part[p] * pow(near_part(b, p), -KNOB_ORDER);
    return sum / 9e-5;
}

static void test_met_figures_turn_nothing(void **state)
{
    (void)state;
    struct bench b;
    bench_fill(&b);
    b.aim_items[0].reached = b.aim_items[1].reached = 0.9e-6;
    assert_int_equal(turning_choose(&b.knobs, &b.aims, 1e-6), STATUS_OK);
    for (int k = 0; k < KNOBS; k++)
        assert_true(b.items[k].turn == 1.0);
}

/* The stationary point of the sum of costs: F^5 in the ratio of error to cost. */
static void test_lines_are_added_where_they_help_most(void **state)
{
    (void)state;
    struct bench b;
    bench_fill(&b);
    b.aim_items[0].reached = 4e-6;
    assert_int_equal(turning_choose(&b.knobs, &b.aims, 1e-6), STATUS_OK);
    const double f0 = near_part(&b, 0), f1 = near_part(&b, 1);
    assert_true(f1 > f0 && f0 > b.items[0].turn);
    assert_close(pow(f1 / f0, KNOB_ORDER + 2.0), (5e-5 / 2300.0) / (2e-5 / 1700.0),
                 1e-6, 0.0);
}

static void test_target_is_met_with_a_margin(void **state)
{
    (void)state;
    struct bench b;
    bench_fill(&b);
    b.aim_items[0].reached = 4e-6;
    assert_int_equal(turning_choose(&b.knobs, &b.aims, 1e-6), STATUS_OK);
    assert_true(left(&b) < 0.25 && left(&b) > 0.1);
}

static void test_figure_of_one_plane_leaves_the_other_alone(void **state)
{
    (void)state;
    struct bench b;
    bench_fill(&b);
    b.aim_items[1].reached = 3e-6;
    assert_int_equal(turning_choose(&b.knobs, &b.aims, 1e-6), STATUS_OK);
    assert_true(b.items[0].turn == 1.0 && b.items[1].turn == 1.0);
    assert_true(b.items[2].turn == 1.0); /* the part accounts for all of it */
    assert_close(pow(b.items[3].turn, -KNOB_ORDER), 0.7 / 3.0, 1e-9, 0.0);
}

/* A thousand times short: one round does not try to make up for all of it. */
static void test_one_round_goes_no_further_than_twofold(void **state)
{
    (void)state;
    struct bench b;
    bench_fill(&b);
    b.aim_items[0].reached = 1e-3;
    assert_int_equal(turning_choose(&b.knobs, &b.aims, 1e-6), STATUS_OK);
    assert_true(left(&b) <= 0.125 * (1.0 + 1e-9));
    for (size_t p = 0; p < 2; p++)
        assert_true(near_part(&b, p) <= 3.0);
}

static void test_figure_that_stood_is_tried_again(void **state)
{
    (void)state;
    struct bench b;
    bench_fill(&b);
    b.aim_items[0].stands = false;
    assert_int_equal(turning_choose(&b.knobs, &b.aims, 1e-6), STATUS_OK);
    assert_true(near_part(&b, 1) > 1.2);
    b.aim_items[0].stood = false; /* one that never stood is not */
    assert_int_equal(turning_choose(&b.knobs, &b.aims, 1e-6), STATUS_OK);
    assert_true(near_part(&b, 1) == 1.0);
}

/* Open sides, say: no line changes anything. */
static void test_error_that_no_knob_moves_turns_nothing(void **state)
{
    (void)state;
    struct bench b;
    bench_fill(&b);
    memset(b.errors, 0, sizeof b.errors);
    b.aim_items[0].reached = 4e-6;
    assert_int_equal(turning_choose(&b.knobs, &b.aims, 1e-6), STATUS_OK);
    for (int k = 0; k < KNOBS; k++)
        assert_true(b.items[k].turn == 1.0);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_met_figures_turn_nothing),
        cmocka_unit_test(test_lines_are_added_where_they_help_most),
        cmocka_unit_test(test_target_is_met_with_a_margin),
        cmocka_unit_test(test_figure_of_one_plane_leaves_the_other_alone),
        cmocka_unit_test(test_one_round_goes_no_further_than_twofold),
        cmocka_unit_test(test_figure_that_stood_is_tried_again),
        cmocka_unit_test(test_error_that_no_knob_moves_turns_nothing),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
