/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Which figures are shown, and that gnuplot is told the very numbers of these figures: a
 * program in its place returns the script as the picture. */

#include <stdlib.h>
#include <string.h>

#include "output/plot_convergence.h"
#include "shared/mem.h"
#include "tests/output/fixture.h"
#include "tests/support/assert_close.h"

/* Draws into a staged folder; the text of convergence.svg, NULL without one. */
static char *draw(struct fixture *fixture, bool *drawn)
{
    struct folder folder = {0};
    assert_int_equal(folder_begin(&folder, fixture_path(fixture, "out"), "summary",
                                  &fixture->messages),
                     STATUS_OK);
    assert_int_equal(
        plot_convergence(&folder, &fixture->result, drawn, &fixture->messages),
        STATUS_OK);
    char *path = folder_path(&folder, "convergence.svg");
    char *text = fixture_read(path);
    assert_int_equal(folder.count, *drawn);
    mem_free(path);
    folder_free(&folder);
    return text;
}

/* Start of the rows of a figure in a data block. */
static char *rows_of(char *script, const char *block, const char *name)
{
    char mark[80];
    char *at = strstr(script, block);
    assert_non_null(at);
    (void)snprintf(mark, sizeof mark, "# %s\n", name);
    at = strstr(at, mark);
    assert_non_null(at);
    return at + strlen(mark);
}

static void check_figure(char *script, const struct figure *figure)
{
    double size = figure->scale > 0 ? figure->scale : fabs(figure->value);
    char *at = rows_of(script, "$grids << EOD", figure->name);
    for (int k = 0; k < figure->grid_count; k++) {
        double spacing = strtod(at, &at), departure = strtod(at, &at);
        double want = fabs(figure->grids[k] - figure->value) / size;
        assert_close(spacing, exp2(figure->grid_count - 1 - k), 0, 0);
        if (want > 0)
            assert_close(departure, want, 1e-8, 0);
        else
            assert_true(isnan(departure));
    }
    at = rows_of(script, "$margins << EOD", figure->name);
    (void)strtod(at, &at);
    assert_close(strtod(at, &at), figure->uncertainty / size, 1e-8, 0);
}

static const struct figure *find(const struct fixture *fixture, const char *name)
{
    const struct figure *figure = figures_find(&fixture->result.figures, name, NULL);
    assert_non_null(figure);
    return figure;
}

static void test_gnuplot_is_told_the_numbers_of_the_figures(void **state)
{
    struct fixture *fixture = *state;
    bool drawn;
    fixture_show_scripts(fixture);
    fixture->result.verdict.items[1].figure = find(fixture, "fringe_integral");
    char *script = draw(fixture, &drawn);
    assert_true(drawn);
    check_figure(script, find(fixture, "even_radius"));
    check_figure(script, find(fixture, "fringe_integral"));
    check_figure(script, find(fixture, "centre_pass_speed"));
    free(script);
}

static void test_only_what_does_not_settle_is_dashed(void **state)
{
    struct fixture *fixture = *state;
    bool drawn;
    fixture_show_scripts(fixture);
    char *script = draw(fixture, &drawn);
    assert_null(strstr(script, "dt (9,6)"));
    assert_null(strstr(script, "Dashed"));
    free(script);
    fixture->result.verdict.items[1].figure = find(fixture, "fringe_integral");
    script = draw(fixture, &drawn);
    assert_non_null(strstr(script, "dt (9,6)"));
    assert_non_null(strstr(script, "Dashed: the grids do not converge on it."));
    assert_non_null(strstr(script, "No point at the finest grid"));
    free(script);
}

static void test_figures_of_limits_come_first_and_twins_once(void **state)
{
    struct fixture *fixture = *state;
    struct result *result = &fixture->result;
    const struct figure *chosen[CONVERGENCE_MOST];
    struct figure twin = *find(fixture, "even_radius");
    result->verdict.items[1].figure = &twin;
    assert_int_equal(convergence_choose(result, chosen), 2);
    assert_ptr_equal(chosen[0], result->verdict.items[0].figure);
    assert_ptr_equal(chosen[1], find(fixture, "centre_pass_speed"));
}

/* After figures were added: the list may have moved. */
static void forget_limits(struct result *result)
{
    for (size_t k = 0; k < result->verdict.count; k++)
        result->verdict.items[k].figure = NULL;
}

static void test_no_more_figures_than_fit_are_chosen(void **state)
{
    static const char *const names[] = {
        "balanced_speed",        "effective_length_electric",
        "surface_field",         "effective_length_magnetic",
        "centre_electric_field", "centre_electric_field_across",
        "centre_flux_density",   "centre_flux_density_across"};
    struct fixture *fixture = *state;
    struct result *result = &fixture->result;
    const struct figure *chosen[CONVERGENCE_MOST];
    struct figure figure = *find(fixture, "even_radius");
    for (size_t k = 0; k < sizeof names / sizeof names[0]; k++) {
        figure.name = names[k];
        assert_int_equal(figures_add(&result->figures, &figure, NULL, NULL), STATUS_OK);
    }
    forget_limits(result);
    assert_int_equal(convergence_choose(result, chosen), CONVERGENCE_MOST);
    assert_string_equal(chosen[0]->name, "centre_pass_speed");
    assert_string_equal(chosen[4]->name, "surface_field");
}

static void test_highest_surface_field_is_the_one_shown(void **state)
{
    struct fixture *fixture = *state;
    struct result *result = &fixture->result;
    const struct figure *chosen[CONVERGENCE_MOST];
    struct figure figure = *find(fixture, "even_radius");
    figure.name = "surface_field";
    for (int k = 0; k < 3; k++) {
        figure.value = k == 1 ? -2.51e-3 : 2.17e-3;
        assert_int_equal(figures_add(&result->figures, &figure, k == 1 ? "b" : "a", ""),
                         STATUS_OK);
    }
    forget_limits(result);
    assert_int_equal(convergence_choose(result, chosen), 2);
    assert_string_equal(chosen[1]->subject, "b");
}

static void leave_nothing_to_show(struct result *result)
{
    for (size_t k = 0; k < result->figures.count; k++)
        result->figures.items[k].grid_count = 0;
}

static void test_nothing_to_show_draws_nothing(void **state)
{
    struct fixture *fixture = *state;
    bool drawn = true;
    leave_nothing_to_show(&fixture->result);
    assert_null(draw(fixture, &drawn));
    assert_false(drawn);
    assert_int_equal(fixture->messages.count, 0);
}

static void test_grids_that_agree_have_nothing_to_show(void **state)
{
    struct fixture *fixture = *state;
    const struct figure *chosen[CONVERGENCE_MOST];
    for (size_t k = 0; k < fixture->result.figures.count; k++) {
        struct figure *figure = &fixture->result.figures.items[k];
        for (int l = 0; l < figure->grid_count; l++)
            figure->grids[l] = figure->value * (1 + 1e-12 * l);
    }
    assert_int_equal(convergence_choose(&fixture->result, chosen), 0);
}

static void test_size_is_scale_value_or_largest_grid(void **state)
{
    (void)state;
    struct figure figure = {.value = -2.5, .grid_count = 2, .grids = {0.3, -0.4}};
    assert_close(convergence_size(&figure), 2.5, 0, 0);
    assert_close(convergence_departure(&figure, 0), 2.8 / 2.5, 1e-15, 0);
    figure.scale = 10;
    assert_close(convergence_departure(&figure, 1), 0.21, 1e-15, 0);
    figure.scale = figure.value = 0;
    assert_close(convergence_size(&figure), 0.4, 0, 0);
    figure.grids[0] = figure.grids[1] = 0;
    assert_close(convergence_departure(&figure, 1), 0, 0, 0);
}

static void test_long_names_are_cut_short(void **state)
{
    struct fixture *fixture = *state;
    struct figure *figure = &fixture->result.figures.items[1];
    bool drawn;
    fixture_show_scripts(fixture);
    assert_string_equal(figure->name, "centre_pass_speed");
    mem_free(figure->subject);
    figure->subject =
        mem_text("\xc3\xa4\xc3\xb6\xc3\xbc, a plate with a very long name");
    char *script = draw(fixture, &drawn);
    assert_non_null(strstr(script,
                           "'pass speed at the centre, \xc3\xa4\xc3\xb6\xc3\xbc, a "
                           "plate with...'"));
    free(script);
}

static void test_without_gnuplot_a_warning_says_so(void **state)
{
    struct fixture *fixture = *state;
    bool drawn;
    fixture_show_scripts(fixture);
    assert_int_equal(remove(fixture_path(fixture, "bin/gnuplot")), 0);
    assert_null(draw(fixture, &drawn));
    assert_false(drawn);
    assert_int_equal(fixture->messages.count, 1);
    assert_non_null(
        strstr(fixture->messages.items[0].text, "convergence.svg is not drawn"));
}

#define EACH(test)                                                                     \
    cmocka_unit_test_setup_teardown(test, fixture_setup, fixture_teardown)

int main(void)
{
    const struct CMUnitTest tests[] = {
        EACH(test_gnuplot_is_told_the_numbers_of_the_figures),
        EACH(test_only_what_does_not_settle_is_dashed),
        EACH(test_figures_of_limits_come_first_and_twins_once),
        EACH(test_no_more_figures_than_fit_are_chosen),
        EACH(test_highest_surface_field_is_the_one_shown),
        EACH(test_nothing_to_show_draws_nothing),
        EACH(test_grids_that_agree_have_nothing_to_show),
        EACH(test_size_is_scale_value_or_largest_grid),
        EACH(test_long_names_are_cut_short),
        EACH(test_without_gnuplot_a_warning_says_so),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
