/* SPDX-License-Identifier: GPL-3.0-or-later */

/* What is said of an accuracy that was asked for. */

#include "tests/support/assert_close.h"

#include <string.h>

#include "solver/accuracy.h"

static char kick[] = "kick", offset[] = "offset", length[] = "length mismatch";

static void assert_sentence(enum accuracy_state state, struct accuracy_item *items,
                            size_t count, const char *want)
{
    const struct accuracy accuracy = {.state = state,
                                      .within = 1e-6,
                                      .rounds = 6,
                                      .memory_budget = 2e9,
                                      .items = items,
                                      .count = count};
    char text[400];
    accuracy_sentence(&accuracy, text, sizeof text);
    assert_string_equal(text, want);
}

static void test_met_names_the_figure_furthest_off(void **state)
{
    (void)state;
    struct accuracy_item items[] = {{kick, true, true, 2.5e-7, true},
                                    {offset, true, false, 8.25e-7, true}};
    assert_sentence(ACCURACY_MET, items, 2,
                    "within 1e-06: met; offset stands at 8.25e-07 of its value");
}

static void test_budget_spent_names_how_far_it_got(void **state)
{
    (void)state;
    struct accuracy_item items[] = {{kick, true, true, 3e-6, false},
                                    {offset, true, true, 2e-7, true}};
    assert_sentence(
        ACCURACY_MEMORY, items, 2,
        "within 1e-06: not met: memory budget of 2 GB spent; kick stands at "
        "3.00e-06 of its limit");
    assert_sentence(
        ACCURACY_ROUNDS, items, 1,
        "within 1e-06: not met: 6 rounds of refinement spent; kick stands at "
        "3.00e-06 of its limit");
}

static void test_figures_that_do_not_stand_are_all_named(void **state)
{
    (void)state;
    struct accuracy_item items[] = {{length, false, true, 0.0, false},
                                    {kick, true, true, 3e-7, true},
                                    {offset, false, true, 0.0, false}};
    assert_sentence(ACCURACY_UNSETTLED, items, 3,
                    "within 1e-06: not met: no grid meets it for figures that do not "
                    "stand; length mismatch does not stand; offset does not stand");
}

static void test_without_figures_there_is_a_reason(void **state)
{
    (void)state;
    assert_sentence(ACCURACY_NO_FIGURE, NULL, 0,
                    "within 1e-06: not met: there is no figure to ask it of");
    assert_sentence(ACCURACY_NOT_ASKED, NULL, 0, "");
}

static void test_long_texts_are_cut_off(void **state)
{
    (void)state;
    struct accuracy_item item = {kick, true, true, 3e-6, false};
    const struct accuracy accuracy = {
        .state = ACCURACY_SLOW, .within = 1e-6, .items = &item, .count = 1};
    char text[20];
    memset(text, 'x', sizeof text);
    accuracy_sentence(&accuracy, text, sizeof text - 1);
    assert_string_equal(text, "within 1e-06: not ");
    assert_int_equal(text[sizeof text - 1], 'x');
}

static void test_refined_lists_parts_and_lines(void **state)
{
    (void)state;
    struct accuracy_part parts[] = {{kick, 2.0}, {offset, 1.5}};
    char text[100];
    accuracy_refined(&(struct accuracy_plane){1.25, parts, 2}, text, sizeof text);
    assert_string_equal(text, "kick x2, offset x1.5; all lines x1.25");
    accuracy_refined(&(struct accuracy_plane){1.25, NULL, 0}, text, sizeof text);
    assert_string_equal(text, "all lines x1.25");
    accuracy_refined(&(struct accuracy_plane){1.0, NULL, 0}, text, sizeof text);
    assert_string_equal(text, "as the file says");
}

static void test_every_state_has_a_key_of_its_own(void **state)
{
    (void)state;
    for (int k = 0; k <= ACCURACY_NO_FIGURE; k++)
        for (int j = 0; j < k; j++)
            assert_string_not_equal(accuracy_key((enum accuracy_state)k),
                                    accuracy_key((enum accuracy_state)j));
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_met_names_the_figure_furthest_off),
        cmocka_unit_test(test_budget_spent_names_how_far_it_got),
        cmocka_unit_test(test_figures_that_do_not_stand_are_all_named),
        cmocka_unit_test(test_without_figures_there_is_a_reason),
        cmocka_unit_test(test_long_texts_are_cut_off),
        cmocka_unit_test(test_refined_lists_parts_and_lines),
        cmocka_unit_test(test_every_state_has_a_key_of_its_own),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
