/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Limits against made-up figures. */

#include "tests/support/assert_close.h"

#include <string.h>

#include "shared/mem.h"
#include "solver/verdict.h"

/* A geometry with one limit and a result with figures to be added. */
struct bench {
    struct geometry geometry;
    struct result result;
};

static void bench_begin(struct bench *b, enum limit_kind limit, double allowed)
{
    memset(b, 0, sizeof *b);
    b->result.geometry = &b->geometry;
    b->geometry.limits[limit].present = true;
    b->geometry.limits[limit].value = allowed;
}

static void bench_add(struct bench *b, const char *name, double value,
                      double uncertainty, enum figure_state state)
{
    const struct figure figure = {.name = name,
                                  .title = name,
                                  .unit = "1",
                                  .state = state,
                                  .value = value,
                                  .uncertainty = uncertainty};
    assert_int_equal(figures_add(&b->result.figures, &figure, NULL,
                                 state == FIGURE_GOOD ? NULL : "why not"),
                     STATUS_OK);
}

static const struct verdict_item *bench_judge(struct bench *b)
{
    assert_int_equal(verdict_judge(&b->result), STATUS_OK);
    assert_int_equal(b->result.verdict.count, 1);
    const struct verdict_item *item = &b->result.verdict.items[0];
    assert_non_null(item->reason);
    assert_int_equal(item->met, b->result.verdict.all_met);
    return item;
}

static void bench_end(struct bench *b)
{
    verdict_free(&b->result.verdict);
    verdict_free(&b->result.verdict);
    figures_free(&b->result.figures);
}

/* One figure against one limit. */
static void assert_verdict(enum limit_kind limit, const char *name, double allowed,
                           double value, double uncertainty, bool met,
                           const char *reason)
{
    struct bench b;
    bench_begin(&b, limit, allowed);
    bench_add(&b, name, value, uncertainty, FIGURE_GOOD);
    const struct verdict_item *item = bench_judge(&b);
    assert_true(item->judged);
    assert_int_equal(item->met, met);
    assert_close(item->value, fabs(value), 0.0, 0.0);
    assert_true(item->allowed == allowed && item->limit == limit);
    if (strstr(item->reason, reason) == NULL)
        fail_msg("\"%s\" is not in: %s", reason, item->reason);
    bench_end(&b);
}

static void test_at_most_holds_with_its_uncertainty(void **state)
{
    (void)state;
    assert_verdict(LIMIT_KICK, "kick", 1e-3, 0.8e-3, 0.1e-3, true, "holds with");
    assert_verdict(LIMIT_KICK, "kick", 1e-3, -0.8e-3, 0.1e-3, true, "holds with");
}

static void test_at_most_holds_only_without_its_uncertainty(void **state)
{
    (void)state;
    assert_verdict(LIMIT_KICK, "kick", 1e-3, 0.8e-3, 0.3e-3, false, "only without");
}

static void test_at_most_is_exceeded_either_way_round(void **state)
{
    (void)state;
    assert_verdict(LIMIT_KICK, "kick", 1e-3, 1.2e-3, 0.1e-3, false, "beyond");
    assert_verdict(LIMIT_KICK, "kick", 1e-3, -1.2e-3, 0.1e-3, false, "beyond");
    assert_verdict(LIMIT_KICK, "kick", 1e-3, 1.2e-3, 0.5e-3, false, "beyond");
}

static void test_at_least_judges_the_other_way(void **state)
{
    (void)state;
    assert_verdict(LIMIT_FLAT_LENGTH, "flat_length", 20e-3, 24e-3, 1e-3, true,
                   "holds with");
    assert_verdict(LIMIT_FLAT_LENGTH, "flat_length", 20e-3, 24e-3, 5e-3, false,
                   "only without");
    assert_verdict(LIMIT_FLAT_LENGTH, "flat_length", 20e-3, 18e-3, 1e-3, false,
                   "beyond");
    assert_verdict(LIMIT_RESOLUTION, "mass_resolution", 250.0, 251.0, 0.5, true,
                   "holds with");
    assert_verdict(LIMIT_EVEN_RADIUS, "even_radius", 3e-3, 2e-3, 0.0, false, "beyond");
}

static void test_every_limit_finds_its_figure(void **state)
{
    (void)state;
    static const char *const names[LIMIT_KINDS] = {"ratio_error_peak_across",
                                                   "flat_length",
                                                   "even_radius",
                                                   "detuning",
                                                   "length_mismatch",
                                                   "kick",
                                                   "offset",
                                                   "mass_resolution",
                                                   "surface_field"};
    for (int k = 0; k < LIMIT_KINDS; k++) {
        const bool least = geometry_limit_rule((enum limit_kind)k)->at_least;
        assert_verdict((enum limit_kind)k, names[k], 2.0, least ? 3.0 : 1.0, 0.5, true,
                       "holds with");
    }
}

static void test_missing_figure_does_not_meet_a_limit(void **state)
{
    (void)state;
    struct bench b;
    bench_begin(&b, LIMIT_OFFSET, 1e-3);
    bench_add(&b, "offset", 0.0, 0.0, FIGURE_MISSING);
    const struct verdict_item *item = bench_judge(&b);
    assert_false(item->judged);
    assert_false(item->met);
    assert_non_null(strstr(item->reason, "why not"));
    bench_end(&b);
}

static void test_unsettled_figure_does_not_meet_a_limit(void **state)
{
    (void)state;
    struct bench b;
    bench_begin(&b, LIMIT_OFFSET, 1e-3);
    bench_add(&b, "offset", 1e-9, 1e-9, FIGURE_UNSETTLED);
    const struct verdict_item *item = bench_judge(&b);
    assert_false(item->judged);
    assert_false(item->met);
    bench_end(&b);
}

static void test_limit_without_any_figure_is_not_met(void **state)
{
    (void)state;
    struct bench b;
    bench_begin(&b, LIMIT_OFFSET, 1e-3);
    const struct verdict_item *item = bench_judge(&b);
    assert_null(item->figure);
    assert_false(item->judged);
    assert_false(item->met);
    bench_end(&b);
}

static void test_worst_of_several_figures_is_judged(void **state)
{
    (void)state;
    struct bench b;
    bench_begin(&b, LIMIT_SURFACE_FIELD, 5e6);
    bench_add(&b, "surface_field", 1e6, 0.1e6, FIGURE_GOOD);
    bench_add(&b, "surface_field", 4.5e6, 0.6e6, FIGURE_GOOD);
    bench_add(&b, "surface_field", 4.6e6, 0.1e6, FIGURE_GOOD);
    const struct verdict_item *item = bench_judge(&b);
    assert_close(item->value, 4.5e6, 0.0, 0.0);
    assert_false(item->met);
    bench_end(&b);
}

static void test_one_unsettled_figure_of_several_spoils_the_limit(void **state)
{
    (void)state;
    struct bench b;
    bench_begin(&b, LIMIT_SURFACE_FIELD, 5e6);
    bench_add(&b, "surface_field", 1e6, 0.1e6, FIGURE_GOOD);
    bench_add(&b, "surface_field", 2e6, 0.1e6, FIGURE_UNSETTLED);
    assert_false(bench_judge(&b)->met);
    bench_end(&b);
}

/* Comparisons must reject what is no number, wherever it stands in the list. */
static void test_not_a_number_does_not_meet_a_limit(void **state)
{
    (void)state;
    for (int at = 0; at < 2; at++) {
        struct bench b;
        bench_begin(&b, LIMIT_SURFACE_FIELD, 5e6);
        bench_add(&b, "surface_field", at == 0 ? (double)NAN : 1e6, 0.0, FIGURE_GOOD);
        bench_add(&b, "surface_field", at == 1 ? (double)NAN : 1e6, 0.0, FIGURE_GOOD);
        assert_false(bench_judge(&b)->met);
        bench_end(&b);
    }
}

static void test_no_limits_are_all_met(void **state)
{
    (void)state;
    struct bench b;
    memset(&b, 0, sizeof b);
    b.result.geometry = &b.geometry;
    assert_int_equal(verdict_judge(&b.result), STATUS_OK);
    assert_true(b.result.verdict.all_met && b.result.verdict.count == 0);
    bench_end(&b);
}

static void test_failed_allocation_is_reported(void **state)
{
    (void)state;
    struct bench b;
    bench_begin(&b, LIMIT_KICK, 1e-3);
    bench_add(&b, "kick", 0.0, 0.0, FIGURE_GOOD);
    mem_fail_at(1);
    assert_int_equal(verdict_judge(&b.result), STATUS_MEMORY);
    mem_fail_at(0);
    bench_end(&b);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_at_most_holds_with_its_uncertainty),
        cmocka_unit_test(test_at_most_holds_only_without_its_uncertainty),
        cmocka_unit_test(test_at_most_is_exceeded_either_way_round),
        cmocka_unit_test(test_at_least_judges_the_other_way),
        cmocka_unit_test(test_every_limit_finds_its_figure),
        cmocka_unit_test(test_missing_figure_does_not_meet_a_limit),
        cmocka_unit_test(test_unsettled_figure_does_not_meet_a_limit),
        cmocka_unit_test(test_limit_without_any_figure_is_not_met),
        cmocka_unit_test(test_worst_of_several_figures_is_judged),
        cmocka_unit_test(test_one_unsettled_figure_of_several_spoils_the_limit),
        cmocka_unit_test(test_not_a_number_does_not_meet_a_limit),
        cmocka_unit_test(test_no_limits_are_all_met),
        cmocka_unit_test(test_failed_allocation_is_reported),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
