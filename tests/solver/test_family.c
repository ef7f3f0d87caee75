/* SPDX-License-Identifier: GPL-3.0-or-later */

#include "tests/support/assert_close.h"

#include <string.h>

#include "shared/mem.h"
#include "solver/family.h"

enum { LEVELS = 3, FIGURES = 5 };

static struct figure figure_of(const char *name, double value)
{
    return (struct figure){.name = name,
                           .title = name,
                           .unit = "m",
                           .group = FIGURE_ALONG,
                           .planes = 1u << PLANE_ELECTRIC_ALONG,
                           .value = value};
}

static void add(struct figures *figures, struct figure figure, const char *note)
{
    assert_int_equal(figures_add(figures, &figure, "subject", note), STATUS_OK);
}

/* A clean series, one that swings, one that misses on the middle grid, one from the
 * input alone, one that vanishes against its scale. */
static void family(struct figures levels[LEVELS])
{
    static const double swings[LEVELS] = {1.0, 2.0, 1.2},
                        small[LEVELS] = {1e-7, -2e-7, 3e-7};
    memset(levels, 0, LEVELS * sizeof *levels);
    for (int l = 0; l < LEVELS; l++) {
        const double h2 = ldexp(1.0, -2 * l);
        struct figure missing = figure_of("missing", l == 1 ? 0.0 : 3.0);
        struct figure exact = figure_of("exact", 2.385),
                      tiny = figure_of("tiny", small[l]);
        missing.state = l == 1 ? FIGURE_MISSING : FIGURE_GOOD;
        exact.planes = 0;
        tiny.scale = 1.0;
        add(&levels[l], figure_of("clean", 7.0 + 0.2 * h2),
            l == 2 ? "finest" : "coarser");
        add(&levels[l], figure_of("swings", swings[l]), "a note");
        add(&levels[l], missing, NULL);
        add(&levels[l], exact, NULL);
        add(&levels[l], tiny, NULL);
    }
}

static void family_free(struct figures levels[LEVELS])
{
    for (int l = 0; l < LEVELS; l++)
        figures_free(&levels[l]);
}

static void test_figures_are_combined_one_by_one(void **state)
{
    (void)state;
    struct figures levels[LEVELS], combined;
    family(levels);
    assert_int_equal(family_figures(levels, LEVELS, &combined), STATUS_OK);
    assert_int_equal(combined.count, FIGURES);
    const struct figure *clean = &combined.items[0], *exact = &combined.items[3];
    assert_int_equal(clean->state, FIGURE_GOOD);
    assert_close(clean->value, 7.0, 1e-14, 0.0);
    assert_true(clean->uncertainty > 0.0);
    assert_string_equal(clean->note, "finest");
    assert_string_equal(clean->subject, "subject");
    assert_true(exact->value == 2.385 && exact->uncertainty == 0.0);
    figures_free(&combined);
    family_free(levels);
}

static void test_figures_keep_the_values_of_their_grids(void **state)
{
    (void)state;
    struct figures levels[LEVELS], combined;
    family(levels);
    assert_int_equal(family_figures(levels, LEVELS, &combined), STATUS_OK);
    for (size_t k = 0; k < FIGURES; k++) {
        const struct figure *figure = &combined.items[k];
        const bool has_grids = figure->state != FIGURE_MISSING && figure->planes != 0;
        assert_int_equal(figure->grid_count, has_grids ? LEVELS : 0);
        for (int l = 0; l < figure->grid_count; l++)
            assert_true(figure->grids[l] == levels[l].items[k].value);
    }
    figures_free(&combined);
    family_free(levels);
}

static void test_figure_that_swings_is_unsettled_and_shows_its_values(void **state)
{
    (void)state;
    struct figures levels[LEVELS], combined;
    family(levels);
    assert_int_equal(family_figures(levels, LEVELS, &combined), STATUS_OK);
    const struct figure *swings = figures_find(&combined, "swings", NULL);
    assert_int_equal(swings->state, FIGURE_UNSETTLED);
    assert_non_null(strstr(swings->note, "1, 2, 1.2"));
    assert_non_null(strstr(swings->note, "a note"));
    figures_free(&combined);
    family_free(levels);
}

static void test_figure_missing_on_one_grid_is_missing(void **state)
{
    (void)state;
    struct figures levels[LEVELS], combined;
    family(levels);
    assert_int_equal(family_figures(levels, LEVELS, &combined), STATUS_OK);
    const struct figure *missing = figures_find(&combined, "missing", NULL);
    assert_int_equal(missing->state, FIGURE_MISSING);
    assert_true(missing->value == 0.0 && missing->uncertainty == 0.0);
    figures_free(&combined);
    family_free(levels);
}

static void test_figure_that_vanishes_against_its_scale_is_good(void **state)
{
    (void)state;
    struct figures levels[LEVELS], combined;
    family(levels);
    assert_int_equal(family_figures(levels, LEVELS, &combined), STATUS_OK);
    const struct figure *tiny = figures_find(&combined, "tiny", NULL);
    assert_int_equal(tiny->state, FIGURE_GOOD);
    assert_at_most(fabs(tiny->value), tiny->uncertainty);
    figures_free(&combined);
    family_free(levels);
}

static void test_lists_of_different_length_are_not_trusted(void **state)
{
    (void)state;
    struct figures levels[LEVELS], combined;
    family(levels);
    add(&levels[2], figure_of("extra", 1.0), NULL);
    assert_int_equal(family_figures(levels, LEVELS, &combined), STATUS_UNTRUSTED);
    assert_int_equal(combined.count, 0);
    family_free(levels);
}

static void test_two_grids_are_a_family_too(void **state)
{
    (void)state;
    struct figures levels[LEVELS], combined;
    family(levels);
    assert_int_equal(family_figures(levels + 1, 2, &combined), STATUS_OK);
    assert_close(combined.items[0].value, 7.0, 1e-14, 0.0);
    figures_free(&combined);
    family_free(levels);
}

static void test_arrays_are_combined_element_by_element(void **state)
{
    (void)state;
    const double a[2] = {3.0 + 0.4, -1.0 + 0.16}, b[2] = {3.0 + 0.1, -1.0 + 0.04};
    const double c[2] = {3.0 + 0.025, -1.0 + 0.01};
    const double *const levels[LEVELS] = {a, b, c};
    double value[2], uncertainty[2];
    family_array(levels, LEVELS, 2, 3.0, value, uncertainty);
    assert_close(value[0], 3.0, 1e-14, 0.0);
    assert_close(value[1], -1.0, 1e-14, 0.0);
    assert_true(uncertainty[0] > uncertainty[1] && uncertainty[1] > 0.0);
    family_array(levels, LEVELS, 2, 3.0, value, NULL);
    assert_close(value[1], -1.0, 1e-14, 0.0);
}

static void test_every_failed_allocation_is_reported(void **state)
{
    (void)state;
    struct figures levels[LEVELS], combined;
    enum status status = STATUS_MEMORY;
    long k = 0;
    family(levels);
    while (status == STATUS_MEMORY) {
        mem_fail_at(++k);
        status = family_figures(levels, LEVELS, &combined);
        mem_fail_at(0);
        assert_int_equal(combined.count, status == STATUS_OK ? FIGURES : 0);
        figures_free(&combined);
    }
    assert_int_equal(status, STATUS_OK);
    assert_true(k > FIGURES);
    family_free(levels);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_figures_are_combined_one_by_one),
        cmocka_unit_test(test_figures_keep_the_values_of_their_grids),
        cmocka_unit_test(test_figure_that_swings_is_unsettled_and_shows_its_values),
        cmocka_unit_test(test_figure_missing_on_one_grid_is_missing),
        cmocka_unit_test(test_figure_that_vanishes_against_its_scale_is_good),
        cmocka_unit_test(test_lists_of_different_length_are_not_trusted),
        cmocka_unit_test(test_two_grids_are_a_family_too),
        cmocka_unit_test(test_arrays_are_combined_element_by_element),
        cmocka_unit_test(test_every_failed_allocation_is_reported),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
