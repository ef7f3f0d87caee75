/* SPDX-License-Identifier: GPL-3.0-or-later */

/* An accuracy that was asked for, as the writers show it. */

#include <jansson.h>
#include <stdlib.h>
#include <string.h>

#include "output/sheet.h"
#include "output/summary.h"
#include "tests/output/fixture.h"
#include "tests/support/assert_close.h"

static char kick[] = "kick of the wanted particle",
            field[] = "surface field (lower pole)";
static char plate[] = "upper plate and 1 alike";

/* Asked of two figures, met by one; one plane refined. The result borrows all of it. */
static struct accuracy_item items[] = {
    {kick, true, true, 3.25e-6, false},
    {field, true, false, 4.5e-7, true},
};
static struct accuracy_part parts[] = {{plate, 2.125}};

static void ask(struct result *result, enum accuracy_state state)
{
    result->accuracy = (struct accuracy){.state = state,
                                         .within = 1e-6,
                                         .of_limits = true,
                                         .rounds = 3,
                                         .memory_budget = 2e9,
                                         .items = items,
                                         .count = 2};
    for (int k = 0; k < PLANE_KINDS; k++)
        result->accuracy.planes[k].factor = 1.0;
    result->accuracy.planes[PLANE_ELECTRIC_ALONG] =
        (struct accuracy_plane){1.25, parts, 1};
}

/* Nothing of the above belongs to the result. */
static void forget(struct result *result)
{
    memset(&result->accuracy, 0, sizeof result->accuracy);
}

static char *sheet_of(const struct result *result)
{
    struct capture capture;
    capture_open(&capture);
    sheet_write(&capture.sink, result);
    capture_close(&capture);
    return capture.text;
}

static json_t *summary_of(const struct result *result)
{
    struct capture capture;
    capture_open(&capture);
    assert_int_equal(summary_write(&capture.sink, result, NULL, 0), STATUS_OK);
    capture_close(&capture);
    json_t *root = json_loads(capture.text, JSON_REJECT_DUPLICATES, NULL);
    assert_non_null(root);
    free(capture.text);
    return root;
}

static void test_sheet_says_which_and_what_was_refined(void **state)
{
    struct result *result = &((struct fixture *)*state)->result;
    ask(result, ACCURACY_MEMORY);
    char *text = sheet_of(result);
    assert_non_null(
        strstr(text, "within 1e-06: not met: memory budget of 2 GB spent;"));
    assert_non_null(strstr(text, "3.25e-06 of its limit, NOT MET"));
    assert_non_null(strstr(text, "4.50e-07 of its value\n"));
    assert_non_null(strstr(text, "3 rounds of refinement"));
    assert_non_null(strstr(text, "upper plate and 1 alike x2.12; all lines x1.25"));
    assert_non_null(strstr(text, "as the file says"));
    for (char *line = text; *line; line += strcspn(line, "\n") + 1)
        assert_in_range(strcspn(line, "\n"), 0, 88);
    free(text);
    forget(result);
}

static void test_sheet_is_silent_unless_asked(void **state)
{
    char *text = sheet_of(&((struct fixture *)*state)->result);
    assert_null(strstr(text, "Accuracy asked for"));
    free(text);
}

static void test_summary_holds_figures_and_planes(void **state)
{
    struct result *result = &((struct fixture *)*state)->result;
    ask(result, ACCURACY_SLOW);
    json_t *root = summary_of(result);
    const json_t *accuracy = json_object_get(root, "accuracy");
    const json_t *figures = json_object_get(accuracy, "figures");
    const json_t *first = json_array_get(figures, 0);
    const json_t *plane = json_array_get(json_object_get(accuracy, "refined"), 0);
    const json_t *part = json_array_get(json_object_get(plane, "parts"), 0);
    assert_string_equal(json_string_value(json_object_get(accuracy, "state")), "slow");
    assert_int_equal(json_array_size(figures), 2);
    assert_close(json_real_value(json_object_get(first, "reached")), 3.25e-6, 1e-15, 0);
    assert_string_equal(json_string_value(json_object_get(first, "relative_to")),
                        "limit");
    assert_true(json_is_false(json_object_get(first, "met")));
    assert_close(json_real_value(json_object_get(plane, "all_lines")), 1.25, 1e-15, 0);
    assert_close(json_real_value(json_object_get(part, "factor")), 2.125, 1e-15, 0);
    json_decref(root);
    forget(result);
}

static void test_summary_without_is_null(void **state)
{
    json_t *root = summary_of(&((struct fixture *)*state)->result);
    assert_true(json_is_null(json_object_get(root, "accuracy")));
    json_decref(root);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_sheet_says_which_and_what_was_refined),
        cmocka_unit_test(test_sheet_is_silent_unless_asked),
        cmocka_unit_test(test_summary_holds_figures_and_planes),
        cmocka_unit_test(test_summary_without_is_null),
    };
    return cmocka_run_group_tests(tests, fixture_setup, fixture_teardown);
}
