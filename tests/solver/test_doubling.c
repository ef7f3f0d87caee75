/* SPDX-License-Identifier: GPL-3.0-or-later */

/* What the doubling test makes of figures, profile and probes before and after; a run of
 * a geometry with open sides. */

#include "tests/support/assert_close.h"

#include <string.h>

#include "shared/mem.h"
#include "solver/doubling.h"
#include "solver/run.h"
#include "tests/support/scene.h"

#define KIND   PLANE_ELECTRIC_ALONG
#define FACTOR 3.0

static struct figure figure_of(const char *name, double value, double scale)
{
    return (struct figure){.name = name,
                           .title = name,
                           .unit = "m",
                           .planes = 1u << KIND,
                           .value = value,
                           .uncertainty = 1e-5,
                           .scale = scale};
}

static void add(struct figures *figures, struct figure figure, const char *note)
{
    assert_int_equal(figures_add(figures, &figure, NULL, note), STATUS_OK);
}

/* A figure that hardly moves, one that moves, one judged by a scale of its own, one of a
 * plane without open sides, one that is missing. */
static void fill(struct figures *figures, double shift)
{
    struct figure other = figure_of("closed", 5.0 + 100.0 * shift, 0.0);
    struct figure missing = figure_of("missing", 0.0, 0.0);
    other.planes = 1u << PLANE_MAGNETIC_ALONG;
    missing.state = FIGURE_MISSING;
    add(figures, figure_of("firm", 7.0 + shift, 0.0), "a note");
    add(figures, figure_of("moves", 2.0 + 100.0 * shift, 0.0), "a note");
    add(figures, figure_of("scaled", 1e-9 + shift, 2.5), NULL);
    add(figures, other, NULL);
    add(figures, missing, "not there");
}

struct lists {
    struct figures near, far, combined;
    struct plane_result planes[PLANE_KINDS];
};

static void begin(struct lists *l)
{
    memset(l, 0, sizeof *l);
    l->planes[KIND].open = (struct open_test){.done = true, .factor = FACTOR};
    fill(&l->near, 0.0);
    fill(&l->far, 1e-4);
    fill(&l->combined, 0.0);
}

static void end(struct lists *l)
{
    figures_free(&l->near);
    figures_free(&l->far);
    figures_free(&l->combined);
}

static void test_movement_widens_the_uncertainty(void **state)
{
    (void)state;
    struct lists l;
    begin(&l);
    assert_int_equal(doubling_figures(&l.near, &l.far, l.planes, &l.combined),
                     STATUS_OK);
    for (size_t k = 0; k < 3; k += 2) {
        assert_int_equal(l.combined.items[k].state, FIGURE_GOOD);
        assert_close(l.combined.items[k].uncertainty, 1e-5 + FACTOR * 1e-4, 1e-9, 0.0);
    }
    assert_true(l.combined.items[3].uncertainty == 1e-5);
    assert_int_equal(l.combined.items[4].state, FIGURE_MISSING);
    assert_string_equal(l.combined.items[0].note, "a note");
    end(&l);
}

static void test_figure_that_moves_is_unsettled_and_says_so(void **state)
{
    (void)state;
    struct lists l;
    begin(&l);
    assert_int_equal(doubling_figures(&l.near, &l.far, l.planes, &l.combined),
                     STATUS_OK);
    const struct figure *f = &l.combined.items[1];
    assert_int_equal(f->state, FIGURE_UNSETTLED);
    assert_string_equal(f->note,
                        "moves by 0.5 % when the open sides are moved twice as "
                        "far away; a note");
    assert_close(f->uncertainty, 1e-5 + FACTOR * 1e-2, 1e-9, 0.0);
    end(&l);
}

static void test_largest_movement_is_that_of_a_figure_that_stands(void **state)
{
    (void)state;
    struct lists l;
    begin(&l);
    assert_int_equal(doubling_figures(&l.near, &l.far, l.planes, &l.combined),
                     STATUS_OK);
    const struct open_test *open = &l.planes[KIND].open;
    assert_int_equal(open->unsettled, 1);
    assert_close(open->moved, 1e-4 / 2.5, 1e-9, 0.0);
    assert_string_equal(open->moved_most, "scaled");
    assert_true(l.planes[PLANE_MAGNETIC_ALONG].open.moved == 0.0);
    end(&l);
}

static void test_figure_that_goes_missing_is_unsettled(void **state)
{
    (void)state;
    struct lists l;
    begin(&l);
    l.far.items[0].state = FIGURE_MISSING;
    assert_int_equal(doubling_figures(&l.near, &l.far, l.planes, &l.combined),
                     STATUS_OK);
    assert_int_equal(l.combined.items[0].state, FIGURE_UNSETTLED);
    end(&l);
}

static void test_lists_of_different_length_are_not_trusted(void **state)
{
    (void)state;
    struct lists l;
    begin(&l);
    add(&l.far, figure_of("extra", 1.0, 0.0), NULL);
    assert_int_equal(doubling_figures(&l.near, &l.far, l.planes, &l.combined),
                     STATUS_UNTRUSTED);
    end(&l);
}

static void test_failed_allocation_is_reported(void **state)
{
    (void)state;
    struct lists l;
    begin(&l);
    mem_fail_at(1);
    assert_int_equal(doubling_figures(&l.near, &l.far, l.planes, &l.combined),
                     STATUS_MEMORY);
    mem_fail_at(0);
    end(&l);
}

static void test_probes_are_widened_by_their_plane(void **state)
{
    (void)state;
    struct plane_result planes[PLANE_KINDS] = {{0}};
    planes[KIND].open = (struct open_test){.done = true, .factor = FACTOR};
    struct probe_reading probes[2] = {
        {.plane = KIND, .potential_err = 0.5, .field_err = {0.25, 0.125}},
        {.plane = PLANE_MAGNETIC_ALONG, .potential_err = 0.5}};
    const struct probe_reading moved[2] = {
        {.plane = KIND, .potential_err = 1.0, .field_err = {2.0, 4.0}},
        {.plane = PLANE_MAGNETIC_ALONG, .potential_err = 1.0}};
    doubling_probes(moved, 2, planes, probes);
    assert_close(probes[0].potential_err, 0.5 + FACTOR, 1e-15, 0.0);
    assert_close(probes[0].field_err[0], 0.25 + 2.0 * FACTOR, 1e-15, 0.0);
    assert_close(probes[0].field_err[1], 0.125 + 4.0 * FACTOR, 1e-15, 0.0);
    assert_true(probes[1].potential_err == 0.5);
}

/* Two plates between a mirror and open space, and a wall that carries on beside it. */
static void open_scene(struct geometry *g)
{
    scene_begin(g, 300.0, false);
    struct plane *p = scene_plane(g, KIND, 0.0, 60e-3, -30e-3, 30e-3);
    p->sides[SIDE_A_LOW].kind = SIDE_MIRROR;
    p->sides[SIDE_A_HIGH].kind = SIDE_OPEN;
    scene_wall(p, SIDE_B_HIGH, 0.0, 0.1);
    scene_box(p, "upper", 0.5, 0.0, 40e-3, 10e-3, 14e-3, 1e-3);
    scene_box(p, "lower", -0.5, 0.0, 40e-3, -14e-3, -10e-3, 1e-3);
    g->fineness = 0.5;
    g->beam.has_path = true;
    g->beam.path_to = 60e-3;
    g->probes = MEM_NEW(1, struct probe);
    g->probe_count = 1;
    g->probes[0] = (struct probe){.z = 50e-3, .x = 3e-3};
}

static void run(const struct geometry *g, struct result *r)
{
    const struct run_options options = {.levels = 2};
    assert_int_equal(run_geometry(g, &options, r, NULL), STATUS_OK);
}

static void test_run_shows_the_region_as_drawn(void **state)
{
    (void)state;
    struct geometry g;
    struct result r;
    open_scene(&g);
    run(&g, &r);
    const struct plane_result *p = &r.planes[KIND];
    assert_true(p->open.done && p->open.level == 0);
    assert_true(p->open.distance > 300.0 * 60e-3);
    assert_true(p->grid.a[0] == 0.0 && p->grid.a[p->grid.na - 1] == 60e-3);
    assert_true(p->quality[1].unknowns > p->grid.free_count);
    const int last = p->grid.na * p->grid.nb - 1;
    assert_close(p->potential[last], 30.0, 1e-12, 0.0); /* end of the upper wall */
    result_free(&r);
    geometry_free(&g);
}

/* A wall that does not end at zero drives a field far outside, so that something is
 * left to move. */
static void test_wall_beside_an_open_side_goes_on_with_its_end_value(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    open_scene(&g);
    assert_int_equal(
        plane_solve(&g, KIND, &(struct grid_request){.fineness = 0.5}, &s, NULL),
        STATUS_OK);
    for (int i = 0; i + 1 < s.grid.na; i++) {
        const double want = 30.0 * fmin(s.grid.a[i] / 60e-3, 1.0);
        assert_close(s.phi[(s.grid.nb - 1) * s.grid.na + i], want, 1e-12, 1e-12);
    }
    plane_solution_free(&s);
    geometry_free(&g);
}

/* Between walls the field far outside does not depend on where the earth stands. */
static void test_profile_and_probes_are_widened_but_little_between_walls(void **state)
{
    (void)state;
    struct geometry g;
    struct result r;
    open_scene(&g);
    run(&g, &r);
    assert_at_most(r.planes[KIND].open.moved, 1e-8);
    assert_int_equal(r.planes[KIND].open.unsettled, 0);
    assert_int_equal(r.probe_count, 1);
    assert_true(r.probes[0].potential_err > 0.0);
    result_free(&r);
    geometry_free(&g);
}

static void test_every_failed_allocation_of_an_open_run_is_reported(void **state)
{
    (void)state;
    struct geometry g;
    const struct run_options options = {.levels = 2, .fineness = 0.1};
    enum status status = STATUS_MEMORY;
    open_scene(&g);
    for (long k = 1; status != STATUS_OK; k += k < 40 ? 1 : k / 8) {
        struct result r;
        mem_fail_at(k);
        status = run_geometry(&g, &options, &r, NULL);
        mem_fail_at(0);
        assert_true(status == STATUS_OK || status == STATUS_MEMORY);
        result_free(&r);
    }
    geometry_free(&g);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_movement_widens_the_uncertainty),
        cmocka_unit_test(test_figure_that_moves_is_unsettled_and_says_so),
        cmocka_unit_test(test_largest_movement_is_that_of_a_figure_that_stands),
        cmocka_unit_test(test_figure_that_goes_missing_is_unsettled),
        cmocka_unit_test(test_lists_of_different_length_are_not_trusted),
        cmocka_unit_test(test_failed_allocation_is_reported),
        cmocka_unit_test(test_probes_are_widened_by_their_plane),
        cmocka_unit_test(test_run_shows_the_region_as_drawn),
        cmocka_unit_test(test_wall_beside_an_open_side_goes_on_with_its_end_value),
        cmocka_unit_test(test_profile_and_probes_are_widened_but_little_between_walls),
        cmocka_unit_test(test_every_failed_allocation_of_an_open_run_is_reported),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
