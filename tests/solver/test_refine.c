/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Refinement to an accuracy that was asked for: what is refined, where it stops, and what
 * is said about it. */

#include "tests/support/assert_close.h"
#include "tests/support/small_filter.h"

#include <math.h>
#include <string.h>

#include "shared/mem.h"
#include "solver/run.h"

/* Runs with the given options; the result must be freed. */
static void run(const struct geometry *g, const struct run_options *options,
                struct result *result, struct messages *messages)
{
    assert_int_equal(run_geometry(g, options, result, messages), STATUS_OK);
    assert_int_equal(messages->errors, 0);
}

/* The small filter with one limit only. */
static void filter_with_limit(enum limit_kind kind, double value, struct geometry *g)
{
    small_filter(g);
    memset(g->limits, 0, sizeof g->limits);
    g->limits[kind] = (struct limit){.present = true, .value = value};
}

static bool says(const struct messages *messages, const char *text)
{
    for (size_t k = 0; k < messages->count; k++)
        if (messages->items[k].severity == SEVERITY_WARNING &&
            strstr(messages->items[k].text, text) != NULL)
            return true;
    return false;
}

static void test_nothing_is_asked_unless_it_is(void **state)
{
    (void)state;
    struct geometry g;
    struct result r;
    struct messages messages = {0};
    small_filter(&g);
    run(&g, &(struct run_options){.levels = 2, .fineness = 0.3}, &r, &messages);
    assert_int_equal(r.accuracy.state, ACCURACY_NOT_ASKED);
    assert_true(r.accuracy.count == 0 && messages.count == 0);
    result_free(&r);
    geometry_free(&g);
}

/* The footprint is judged in the cross-section: the planes along the beam stay as they
 * were, to the last unknown. */
static void test_only_planes_that_matter_are_refined(void **state)
{
    (void)state;
    struct geometry g;
    struct result plain, r;
    struct messages messages = {0};
    filter_with_limit(LIMIT_RATIO_ERROR, 0.1, &g);
    run(&g, &(struct run_options){.levels = 3}, &plain, &messages);
    run(&g, &(struct run_options){.levels = 3, .within = 2e-5}, &r, &messages);
    assert_int_equal(r.accuracy.state, ACCURACY_MET);
    assert_true(r.accuracy.of_limits && r.accuracy.count == 1 && r.accuracy.rounds > 0);
    assert_true(r.accuracy.items[0].met && r.accuracy.items[0].reached <= 2e-5);
    int refined = 0;
    for (int k = 0; k < PLANE_KINDS; k++) {
        const struct accuracy_plane *p = &r.accuracy.planes[k];
        const bool same =
            r.planes[k].quality[2].unknowns == plain.planes[k].quality[2].unknowns;
        assert_int_equal(same, p->factor == 1.0 && p->part_count == 0);
        assert_true(same || plane_kind_is_across((enum plane_kind)k));
        refined += !same;
    }
    assert_true(refined > 0 && messages.count == 0);
    result_free(&plain);
    result_free(&r);
    geometry_free(&g);
}

/* The value refined to, judged by a finer family: further off than the plain one only if
 * the refinement went wrong. */
static void test_refined_value_agrees_with_finer_grids(void **state)
{
    (void)state;
    struct geometry g;
    struct result fine, r;
    struct messages messages = {0};
    filter_with_limit(LIMIT_RATIO_ERROR, 0.1, &g);
    run(&g, &(struct run_options){.fineness = 1.5}, &fine, &messages);
    run(&g, &(struct run_options){.levels = 3, .within = 2e-5}, &r, &messages);
    const struct figure *want =
        figures_find(&fine.figures, "ratio_error_peak_across", NULL);
    const struct figure *got =
        figures_find(&r.figures, "ratio_error_peak_across", NULL);
    assert_close(got->value, want->value, 0.0, got->uncertainty + want->uncertainty);
    result_free(&fine);
    result_free(&r);
    geometry_free(&g);
}

static void test_memory_budget_is_kept_and_named(void **state)
{
    (void)state;
    struct geometry g;
    struct result r;
    struct messages messages = {0};
    char text[1000];
    filter_with_limit(LIMIT_KICK, 1e-3, &g);
    g.memory_budget = 60e6;
    run(&g, &(struct run_options){.levels = 3, .fineness = 0.4, .within = 1e-9}, &r,
        &messages);
    assert_int_equal(r.accuracy.state, ACCURACY_MEMORY);
    assert_true(says(&messages, "memory budget of 0.06 GB spent"));
    assert_true(says(&messages, "kick of the wanted particle stands at"));
    for (int k = 0; k < PLANE_KINDS; k++) {
        const struct grid *grid = &r.planes[k].grid;
        if (r.planes[k].present)
            assert_true(1500.0 * grid->na * grid->nb <= g.memory_budget);
    }
    accuracy_sentence(&r.accuracy, text, sizeof text);
    assert_string_equal(text, messages.items[0].text);
    messages_free(&messages);
    result_free(&r);
    geometry_free(&g);
}

/* No clamp ends the fields: no grid settles the mismatch, and none is tried. */
static void test_figure_that_does_not_stand_is_named_at_once(void **state)
{
    (void)state;
    struct geometry g;
    struct result r;
    struct messages messages = {0};
    filter_with_limit(LIMIT_LENGTH_MISMATCH, 1.0, &g);
    run(&g, &(struct run_options){.levels = 3, .fineness = 0.3, .within = 1e-6}, &r,
        &messages);
    assert_int_equal(r.accuracy.state, ACCURACY_UNSETTLED);
    assert_int_equal(r.accuracy.rounds, 0);
    assert_true(says(&messages, "length mismatch L_E - L_B does not stand"));
    assert_false(r.accuracy.items[0].met);
    messages_free(&messages);
    result_free(&r);
    geometry_free(&g);
}

static void test_without_limits_main_figures_and_probes_are_asked(void **state)
{
    (void)state;
    struct geometry g;
    struct result r;
    struct messages messages = {0};
    int figures = 0, probes = 0;
    small_filter(&g);
    memset(g.limits, 0, sizeof g.limits);
    run(&g, &(struct run_options){.levels = 3, .fineness = 0.4, .within = 0.05}, &r,
        &messages);
    assert_int_equal(r.accuracy.state, ACCURACY_MET);
    assert_false(r.accuracy.of_limits);
    for (size_t k = 0; k < r.accuracy.count; k++) {
        probes += strncmp(r.accuracy.items[k].name, "field at probe", 14) == 0;
        figures += strcmp(r.accuracy.items[k].name,
                          "pass speed E/B at the reference point") == 0;
    }
    /* the third probe stands in the plate, where the electric field is nothing */
    assert_true(figures == 1 && probes == 4);
    messages_free(&messages);
    result_free(&r);
    geometry_free(&g);
}

static void test_two_refinements_give_the_same_bits(void **state)
{
    (void)state;
    struct geometry g;
    struct result r[2];
    struct messages messages = {0};
    filter_with_limit(LIMIT_RATIO_ERROR, 0.1, &g);
    for (int k = 0; k < 2; k++)
        run(&g, &(struct run_options){.levels = 2, .fineness = 0.4, .within = 1e-3},
            &r[k], &messages);
    assert_true(r[0].accuracy.rounds > 0 && r[0].figures.count == r[1].figures.count);
    for (size_t k = 0; k < r[0].figures.count; k++) {
        const struct figure *p = &r[0].figures.items[k], *q = &r[1].figures.items[k];
        assert_memory_equal(&p->value, &q->value, sizeof p->value);
        assert_memory_equal(&p->uncertainty, &q->uncertainty, sizeof p->uncertainty);
    }
    messages_free(&messages);
    result_free(&r[0]);
    result_free(&r[1]);
    geometry_free(&g);
}

/* What a progress callback saw. */
struct watch {
    double last, drop;
    int rounds;
};

static void note_progress(void *context, const char *stage, double fraction)
{
    struct watch *w = context;
    w->rounds += strncmp(stage, "refinement ", 11) == 0;
    w->drop = fmax(w->drop, w->last - fraction);
    w->last = fraction;
}

static void test_progress_only_grows(void **state)
{
    (void)state;
    struct geometry g;
    struct result r;
    struct watch w = {0.0, 0.0, 0};
    struct messages messages = {0};
    filter_with_limit(LIMIT_RATIO_ERROR, 0.1, &g);
    run(&g,
        &(struct run_options){.levels = 2,
                              .fineness = 0.4,
                              .within = 1e-3,
                              .progress = note_progress,
                              .context = &w},
        &r, &messages);
    assert_true(w.rounds > 4);
    assert_at_most(w.drop, 1e-12);
    assert_true(w.last > 0.8 && w.last <= 1.0);
    messages_free(&messages);
    result_free(&r);
    geometry_free(&g);
}

/* Open sides: what the distance adds to an uncertainty no grid takes away. */
static void test_error_of_open_sides_ends_the_refinement(void **state)
{
    (void)state;
    struct geometry g;
    struct result r;
    struct messages messages = {0};
    filter_with_limit(LIMIT_SURFACE_FIELD, 1e4, &g);
    for (int k = 0; k < PLANE_KINDS; k++)
        g.planes[k].present = k == PLANE_ELECTRIC_ALONG;
    g.lattice.present = false;
    g.probe_count = 0;
    struct plane *plane = &g.planes[PLANE_ELECTRIC_ALONG];
    for (int s = 0; s < SIDE_COUNT; s++)
        plane->sides[s].kind = SIDE_OPEN;
    plane->parts[0].potential.gain[0] *=
        3.0; /* a net charge, whose field reaches far */
    run(&g, &(struct run_options){.levels = 3, .fineness = 0.3, .within = 1e-9}, &r,
        &messages);
    assert_true(r.accuracy.state != ACCURACY_MET);
    assert_true(r.accuracy.rounds <= 6 && messages.count == 1);
    messages_free(&messages);
    result_free(&r);
    geometry_free(&g);
}

/* Each allocation in turn, in steps that grow: nothing leaks, nothing is half done. */
static void test_failed_allocations_are_reported(void **state)
{
    (void)state;
    struct geometry g;
    filter_with_limit(LIMIT_RATIO_ERROR, 0.1, &g);
    for (int k = 0; k < PLANE_KINDS; k++)
        g.planes[k].present =
            g.planes[k].present && plane_kind_is_across((enum plane_kind)k);
    g.lattice.present = false;
    g.probe_count = 0;
    const struct run_options options = {.levels = 2, .fineness = 0.2, .within = 3e-3};
    int failures = 0, rounds = 0;
    for (long k = 1; k < 4000000 && rounds == 0; k += 1 + k / 6) {
        struct result r;
        struct messages messages = {0};
        mem_fail_at(k);
        const enum status status = run_geometry(&g, &options, &r, &messages);
        /* a failed solve of a finer grid is no failure of the run */
        const bool complete =
            status == STATUS_OK && r.accuracy.state != ACCURACY_UNSOLVED;
        mem_fail_at(0);
        assert_true(status == STATUS_OK || status == STATUS_MEMORY);
        failures += !complete;
        rounds = complete ? r.accuracy.rounds : 0;
        result_free(&r);
        messages_free(&messages);
    }
    assert_true(failures > 30 && rounds > 0);
    geometry_free(&g);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_nothing_is_asked_unless_it_is),
        cmocka_unit_test(test_only_planes_that_matter_are_refined),
        cmocka_unit_test(test_refined_value_agrees_with_finer_grids),
        cmocka_unit_test(test_memory_budget_is_kept_and_named),
        cmocka_unit_test(test_figure_that_does_not_stand_is_named_at_once),
        cmocka_unit_test(test_without_limits_main_figures_and_probes_are_asked),
        cmocka_unit_test(test_two_refinements_give_the_same_bits),
        cmocka_unit_test(test_progress_only_grows),
        cmocka_unit_test(test_error_of_open_sides_ends_the_refinement),
        cmocka_unit_test(test_failed_allocations_are_reported),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
