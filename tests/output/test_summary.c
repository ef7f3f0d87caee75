/* SPDX-License-Identifier: GPL-3.0-or-later */

#include <jansson.h>
#include <stdlib.h>
#include <string.h>

#include "output/summary.h"
#include "shared/mem.h"
#include "tests/output/fixture.h"
#include "tests/support/assert_close.h"

static char file_a[] = "path.csv", file_b[] = "summary.json";
static char *const files[] = {file_a, file_b};

static char *write_text(const struct result *result)
{
    struct capture capture;
    capture_open(&capture);
    assert_int_equal(summary_write(&capture.sink, result, files, 2), STATUS_OK);
    capture_close(&capture);
    return capture.text;
}

static json_t *write_and_load(const struct fixture *fixture)
{
    char *text = write_text(&fixture->result);
    json_t *root = json_loads(text, JSON_REJECT_DUPLICATES, NULL);
    assert_non_null(root);
    free(text);
    return root;
}

static const char *text_of(const json_t *object, const char *key)
{
    return json_string_value(json_object_get(object, key));
}

static void check_number(const json_t *object, const char *key, double want)
{
    const json_t *value = json_object_get(object, key);
    assert_true(json_is_number(value));
    assert_close(json_number_value(value), want, 1e-15, 0);
}

static void test_head_names_file_without_folders(void **state)
{
    json_t *root = write_and_load(*state);
    assert_int_equal(json_integer_value(json_object_get(root, "evengap")), 1);
    assert_string_equal(text_of(root, "kind"), "summary");
    assert_string_equal(text_of(root, "geometry"), "bench filter.yaml");
    assert_string_equal(text_of(root, "title"), "Bench filter \"A\" <2 keV> & more");
    assert_int_equal(json_array_size(json_object_get(root, "files")), 2);
    json_decref(root);
}

static void test_every_figure_reads_back(void **state)
{
    const struct fixture *fixture = *state;
    json_t *root = write_and_load(fixture);
    json_t *array = json_object_get(root, "figures");
    assert_int_equal(json_array_size(array), fixture->result.figures.count);
    for (size_t k = 0; k < fixture->result.figures.count; k++) {
        const struct figure *figure = &fixture->result.figures.items[k];
        json_t *object = json_array_get(array, k);
        assert_string_equal(text_of(object, "name"), figure->name);
        assert_string_equal(text_of(object, "unit"), figure->unit);
        if (figure->state != FIGURE_MISSING) {
            check_number(object, "value", figure->value);
            check_number(object, "uncertainty", figure->uncertainty);
        }
        const json_t *grids = json_object_get(object, "grids");
        assert_true(json_is_array(grids));
        assert_int_equal(json_array_size(grids), figure->grid_count);
        for (int l = 0; l < figure->grid_count; l++)
            assert_close(json_number_value(json_array_get(grids, (size_t)l)),
                         figure->grids[l], 1e-15, 0);
    }
    json_t *planes = json_object_get(json_array_get(array, 1), "planes");
    assert_int_equal(json_array_size(planes), 2);
    assert_string_equal(json_string_value(json_array_get(planes, 1)), "magnetic_along");
    json_decref(root);
}

static void test_missing_figure_is_null_with_reason(void **state)
{
    json_t *root = write_and_load(*state);
    json_t *object = json_array_get(json_object_get(root, "figures"), 4);
    assert_string_equal(text_of(object, "state"), "missing");
    assert_true(json_is_null(json_object_get(object, "value")));
    assert_true(json_is_null(json_object_get(object, "uncertainty")));
    assert_non_null(strstr(text_of(object, "note"), "needs plane electric_across"));
    assert_string_equal(text_of(object, "subject"), "upper plate");
    json_decref(root);
}

static void test_probes_read_back_by_axis(void **state)
{
    json_t *root = write_and_load(*state);
    json_t *probe = json_array_get(json_object_get(root, "probes"), 0);
    assert_string_equal(text_of(probe, "plane"), "electric_along");
    check_number(json_object_get(probe, "place"), "z", 0.0123);
    check_number(json_object_get(probe, "place"), "x", 0.0021);
    check_number(probe, "potential", -11.565);
    check_number(json_object_get(probe, "field"), "x", 5506.9);
    check_number(json_object_get(probe, "field_uncertainty"), "z", 0.2);
    assert_true(json_is_null(json_object_get(probe, "part")));
    probe = json_array_get(json_object_get(root, "probes"), 1);
    assert_string_equal(text_of(probe, "field_unit"), "T");
    assert_string_equal(text_of(probe, "part"), "north pole");
    json_decref(root);
}

static void test_unjudged_limit_has_no_value(void **state)
{
    json_t *root = write_and_load(*state);
    json_t *verdict = json_object_get(root, "verdict");
    assert_true(json_is_false(json_object_get(verdict, "within_limits")));
    json_t *limits = json_object_get(verdict, "limits");
    check_number(json_array_get(limits, 0), "value", 8.13e-4);
    json_t *kick = json_array_get(limits, 1);
    assert_true(json_is_null(json_object_get(kick, "value")));
    assert_true(json_is_false(json_object_get(kick, "judged")));
    check_number(kick, "allowed", 1.5e-3);
    assert_string_equal(text_of(kick, "unit"), "rad");
    json_decref(root);
}

static void test_name_that_is_not_utf8_stays_readable(void **state)
{
    struct fixture *fixture = *state;
    char *kept = fixture->geometry.path;
    char odd[] = "a\xff"
                 "b.yaml";
    fixture->geometry.path = odd;
    json_t *root = write_and_load(fixture);
    assert_string_equal(text_of(root, "geometry"), "a?b.yaml");
    json_decref(root);
    fixture->geometry.path = kept;
}

static void *counted_new(size_t size)
{
    return mem_new(size, 1);
}

static void test_each_failed_allocation_is_reported(void **state)
{
    const struct fixture *fixture = *state;
    json_set_alloc_funcs(counted_new, mem_free);
    enum status status = STATUS_MEMORY;
    long k = 0;
    while (status == STATUS_MEMORY && k < 100000) {
        struct capture capture;
        capture_open(&capture);
        mem_fail_at(++k);
        status = summary_write(&capture.sink, &fixture->result, files, 2);
        mem_fail_at(0);
        capture_close(&capture);
        capture_free(&capture);
    }
    json_set_alloc_funcs(malloc, free);
    assert_int_equal(status, STATUS_OK);
    assert_true(k > 100); /* the failures did reach the library */
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_head_names_file_without_folders),
        cmocka_unit_test(test_every_figure_reads_back),
        cmocka_unit_test(test_missing_figure_is_null_with_reason),
        cmocka_unit_test(test_probes_read_back_by_axis),
        cmocka_unit_test(test_unjudged_limit_has_no_value),
        cmocka_unit_test(test_name_that_is_not_utf8_stays_readable),
        cmocka_unit_test(test_each_failed_allocation_is_reported),
    };
    return cmocka_run_group_tests(tests, fixture_setup, fixture_teardown);
}
