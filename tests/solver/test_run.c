/* SPDX-License-Identifier: GPL-3.0-or-later */

/* The main job on a small filter with all four planes, and on parts of it. */

#include "tests/support/assert_close.h"
#include "tests/support/small_filter.h"

#include <string.h>

#include "shared/mem.h"
#include "solver/extrapolate.h"
#include "solver/plane_solution.h"
#include "solver/run.h"

static void run(const struct geometry *g, int levels, struct result *result)
{
    const struct run_options options = {.levels = levels};
    struct messages messages = {0};
    assert_int_equal(run_geometry(g, &options, result, &messages), STATUS_OK);
    assert_int_equal(messages.errors, 0);
    messages_free(&messages);
}

/* The whole small filter, run once for the tests that only look at it. */
static struct geometry whole_geometry;
static struct result whole;

static int run_whole(void **state)
{
    (void)state;
    small_filter(&whole_geometry);
    run(&whole_geometry, 3, &whole);
    return 0;
}

static int free_whole(void **state)
{
    (void)state;
    result_free(&whole);
    result_free(&whole);
    geometry_free(&whole_geometry);
    return 0;
}

static const struct figure *good(const struct result *r, const char *name)
{
    const struct figure *f = figures_find(&r->figures, name, NULL);
    if (f == NULL || f->state != FIGURE_GOOD)
        fail_msg("%s is %s", name, f == NULL ? "not there" : f->note);
    return f;
}

/* A figure that is told to depend on the ends of the path: no clamp ends the fields of the
 * small filter. */
static const struct figure *loose(const struct result *r, const char *name)
{
    const struct figure *f = figures_find(&r->figures, name, NULL);
    assert_non_null(f);
    assert_int_equal(f->state, FIGURE_UNSETTLED);
    assert_ptr_equal(strstr(f->note, "depends on its limits: "), f->note);
    assert_true(f->uncertainty >= 0.0 && f->value != 0.0);
    return f;
}

static void test_all_planes_are_solved_on_all_grids(void **state)
{
    (void)state;
    for (int k = 0; k < PLANE_KINDS; k++) {
        const struct plane_result *p = &whole.planes[k];
        assert_int_equal(p->present, whole_geometry.planes[k].present);
        if (!p->present)
            continue;
        assert_int_equal(p->levels, 3);
        assert_true(p->grid.na > 20 && p->potential != NULL && p->field_a != NULL);
        for (int l = 0; l < 3; l++) {
            assert_at_most(p->quality[l].residual, 1e-12);
            assert_at_most(p->quality[l].flux_imbalance, 1e-9);
            assert_true(p->quality[l].rcond > 1e-12);
        }
        assert_true(p->quality[2].unknowns > 10 * p->quality[0].unknowns);
    }
}

static void test_every_figure_has_its_words_and_a_number_or_a_reason(void **state)
{
    (void)state;
    assert_true(whole.figures.count > 60);
    for (size_t k = 0; k < whole.figures.count; k++) {
        const struct figure *f = &whole.figures.items[k];
        assert_true(strlen(f->name) > 0 && strlen(f->title) > 0 && strlen(f->unit) > 0);
        assert_true(isfinite(f->value));
        if (f->state != FIGURE_GOOD)
            assert_non_null(f->note);
        else
            assert_true(isfinite(f->uncertainty) && f->uncertainty >= 0.0);
        assert_int_equal(f->planes == 0, f->group == FIGURE_BEAM);
    }
}

static void test_figures_of_the_whole_filter_are_there(void **state)
{
    (void)state;
    static const char *const names[] = {"wanted_speed",
                                        "magnetic_rigidity",
                                        "electric_rigidity",
                                        "centre_electric_field",
                                        "centre_flux_density",
                                        "centre_pass_speed",
                                        "balanced_speed",
                                        "detuning",
                                        "flat_length",
                                        "ratio_error_peak_along",
                                        "ratio_error_rms_along",
                                        "force_imbalance_peak",
                                        "kick",
                                        "offset",
                                        "cyclotron_radius",
                                        "speed_dispersion",
                                        "mass_resolution",
                                        "even_radius",
                                        "ratio_error_peak_across",
                                        "expansion_difference",
                                        "charge",
                                        "capacitance",
                                        "stored_energy",
                                        "flux"};
    for (size_t k = 0; k < sizeof names / sizeof *names; k++)
        (void)good(&whole, names[k]);
}

/* The plates have sharp corners, and the file gives no edge radius. */
static void test_surface_field_of_sharp_corners_is_marked(void **state)
{
    (void)state;
    const struct figure *f = figures_find(&whole.figures, "surface_field", NULL);
    assert_non_null(f);
    assert_int_equal(f->state, FIGURE_UNSETTLED);
    assert_non_null(strstr(f->note, "no limit exists beside a sharp corner"));
    assert_true(f->value > 1e4 && f->value < 1e5);
}

static void test_lengths_without_clamps_depend_on_their_limits(void **state)
{
    (void)state;
    static const char *const names[] = {"effective_length_electric",
                                        "effective_length_magnetic",
                                        "edge_entrance_electric",
                                        "edge_exit_magnetic",
                                        "fringe_integral_exit_electric",
                                        "length_mismatch",
                                        "exit_mismatch",
                                        "shape_mismatch"};
    for (size_t k = 0; k < sizeof names / sizeof *names; k++)
        (void)loose(&whole, names[k]);
}

/* got and want within the uncertainties that the figures claim. */
static void assert_agree(double got, double want, double uncertainty)
{
    assert_close(got, want, 1e-12, uncertainty);
}

static void test_figures_agree_with_each_other(void **state)
{
    (void)state;
    const struct figure *e = good(&whole, "centre_electric_field");
    const struct figure *b = good(&whole, "centre_flux_density");
    const struct figure *u = good(&whole, "centre_pass_speed");
    const struct figure *balanced = good(&whole, "balanced_speed");
    const struct figure *le = loose(&whole, "effective_length_electric");
    const struct figure *lb = loose(&whole, "effective_length_magnetic");
    const struct figure *mismatch = loose(&whole, "length_mismatch");
    const struct figure *detuning = good(&whole, "detuning");
    assert_agree(u->value, e->value / b->value,
                 u->uncertainty + fabs(u->value) * (e->uncertainty / fabs(e->value) +
                                                    b->uncertainty / fabs(b->value)));
    assert_agree(mismatch->value, le->value - lb->value,
                 mismatch->uncertainty + le->uncertainty + lb->uncertainty);
    assert_agree(balanced->value / good(&whole, "wanted_speed")->value - 1.0,
                 detuning->value, 2.0 * detuning->uncertainty);
    assert_agree(balanced->value / u->value, le->value / lb->value,
                 2.0 * (detuning->uncertainty + le->uncertainty / le->value +
                        lb->uncertainty / lb->value));
    assert_at_most(mismatch->uncertainty, 1e-3 * le->value);
}

/* Plates at +-155.5 V, 20 mm apart: a little below V/d. */
static void test_centre_field_is_a_little_below_that_of_endless_plates(void **state)
{
    (void)state;
    const double e = good(&whole, "centre_electric_field")->value;
    assert_true(e > -311.0 / 20e-3 && e < -0.998 * 311.0 / 20e-3);
}

static void test_charges_of_twins_are_opposite(void **state)
{
    (void)state;
    const struct figure *up = figures_find(&whole.figures, "charge", "upper plate");
    const struct figure *low = figures_find(&whole.figures, "charge", "lower plate");
    assert_close(up->value, -low->value, 1e-9, 0.0);
    assert_true(up->value > 0.0);
}

static void test_profile_runs_along_the_path(void **state)
{
    (void)state;
    const struct profile *p = &whole.profile;
    const size_t middle = p->count / 2;
    assert_true(p->present && p->has_bundle);
    assert_true(p->z[0] == -60e-3 && p->z[p->count - 1] == 60e-3);
    assert_close(p->z[middle], 0.0, 0.0, 1e-12);
    assert_close(p->e_x[middle], good(&whole, "centre_electric_field")->value, 1e-9,
                 0.0);
    assert_close(p->b_y[middle], good(&whole, "centre_flux_density")->value, 1e-9, 0.0);
    assert_close(p->ratio_error[middle], 0.0, 0.0, 1e-9);
    for (size_t k = 0; k < p->count; k++) {
        assert_close(p->e_x[k], p->e_x[p->count - 1 - k], 1e-7, 1e-3);
        assert_true(p->e_x_err[k] >= 0.0 && p->b_y_err[k] >= 0.0);
        if (p->defined[k])
            assert_true(p->bundle_low[k] <= p->ratio_error[k] &&
                        p->ratio_error[k] <= p->bundle_high[k]);
    }
}

/* Extrapolated here from three solves of the plane alone. */
static void test_probe_reads_the_extrapolated_field(void **state)
{
    (void)state;
    double potential[3], field[2][3];
    for (int l = 0; l < 3; l++) {
        struct plane_solution s;
        struct field_value v;
        assert_int_equal(
            plane_solve(&whole_geometry, PLANE_ELECTRIC_ALONG,
                        &(struct grid_request){.fineness = 0.5, .level = l}, &s, NULL),
            STATUS_OK);
        assert_int_equal(field_at(s.field, (struct vec2){4e-3, 1e-3}, &v), STATUS_OK);
        potential[l] = v.potential;
        field[0][l] = -v.gradient.a;
        field[1][l] = -v.gradient.b;
        plane_solution_free(&s);
    }
    const struct probe_reading *r = &whole.probes[0];
    assert_true(r->plane == PLANE_ELECTRIC_ALONG && r->probe == 0 && r->part == -1);
    assert_close(r->potential, extrapolate(potential, 3, 0.0).value, 1e-12, 0.0);
    for (int k = 0; k < 2; k++)
        assert_close(r->field[k], extrapolate(field[k], 3, 0.0).value, 1e-12, 1e-9);
}

/* The third probe names no plane and no z: both electric planes read it (inside the
 * plate), and both magnetic ones. */
static void test_probe_without_a_plane_is_read_wherever_it_fits(void **state)
{
    (void)state;
    int seen[PLANE_KINDS] = {0};
    for (size_t k = 0; k < whole.probe_count; k++) {
        const struct probe_reading *r = &whole.probes[k];
        if (r->probe != 2)
            continue;
        seen[r->plane]++;
        if (!plane_kind_is_magnetic(r->plane)) {
            assert_int_equal(r->part, 0);
            assert_close(r->potential, 155.5, 1e-12, 0.0);
            assert_true(r->field[0] == 0.0 && r->field[1] == 0.0);
        }
    }
    for (int k = 0; k < PLANE_KINDS; k++)
        assert_int_equal(seen[k], whole_geometry.planes[k].present);
}

static size_t lattice_index(const struct lattice_field *l, int x, int y, int z)
{
    return ((size_t)z * (size_t)l->n[AXIS_Y] + (size_t)y) * (size_t)l->n[AXIS_X] +
           (size_t)x;
}

static void test_lattice_has_the_shape_that_was_asked_for(void **state)
{
    (void)state;
    const struct lattice_field *l = &whole.lattice;
    assert_true(l->present && l->has_electric && l->has_magnetic);
    assert_int_equal(l->electric_from, PLANE_ELECTRIC_ALONG);
    assert_int_equal(l->magnetic_from, PLANE_MAGNETIC_ALONG);
    assert_true(l->n[AXIS_X] == 25 && l->n[AXIS_Y] == 5 && l->n[AXIS_Z] == 31);
    assert_close(l->origin[AXIS_Z], -60e-3, 1e-12, 0.0);
    assert_close(l->step[AXIS_X], 1e-3, 1e-12, 0.0);
}

/* Node (x, y, z) = (1, 1, 4) mm is where the first two probes stand. */
static void test_lattice_holds_the_field_of_the_probes(void **state)
{
    (void)state;
    const struct lattice_field *l = &whole.lattice;
    const struct probe_reading *e = &whole.probes[0], *b = &whole.probes[1];
    const size_t n = lattice_index(l, 13, 3, 16);
    assert_int_equal(b->plane, PLANE_MAGNETIC_ALONG);
    assert_close(l->e[AXIS_Z][n], e->field[0], 1e-9, 1e-9);
    assert_close(l->e[AXIS_X][n], e->field[1], 1e-9, 0.0);
    assert_true(l->e[AXIS_Y][n] == 0.0);
    assert_close(l->b[AXIS_Z][n], b->field[0], 1e-9, 1e-15);
    assert_close(l->b[AXIS_Y][n], b->field[1], 1e-9, 0.0);
    assert_true(l->b[AXIS_X][n] == 0.0 && l->solid[n] == 0);
}

static void test_lattice_marks_what_is_solid(void **state)
{
    (void)state;
    const struct lattice_field *l = &whole.lattice;
    const size_t in = lattice_index(l, 24, 2, 15), out = lattice_index(l, 24, 2, 30);
    assert_true(l->solid[in] == 1 && l->e[AXIS_X][in] == 0.0); /* x = 12 mm, z = 0 */
    assert_true(l->solid[out] == 0 && l->e[AXIS_X][out] != 0.0);
    for (int y = 0; y < 5; y++) /* E does not depend on y, B not on x */
        assert_true(l->e[AXIS_X][lattice_index(l, 3, y, 9)] ==
                    l->e[AXIS_X][lattice_index(l, 3, 0, 9)]);
    for (int x = 0; x < 25; x++)
        assert_true(l->b[AXIS_Y][lattice_index(l, x, 1, 9)] ==
                    l->b[AXIS_Y][lattice_index(l, 0, 1, 9)]);
}

static void test_verdict_judges_the_limits_of_the_file(void **state)
{
    (void)state;
    assert_int_equal(whole.verdict.count, 3);
    assert_false(whole.verdict.all_met); /* a flat length of 1 m cannot be had */
    for (size_t k = 0; k < 3; k++) {
        const struct verdict_item *item = &whole.verdict.items[k];
        assert_true(item->judged);
        assert_int_equal(item->met, item->limit != LIMIT_FLAT_LENGTH);
    }
}

static bool same_bits(const double *p, const double *q, size_t n)
{
    return (p == NULL) == (q == NULL) &&
           (p == NULL || memcmp(p, q, n * sizeof *p) == 0);
}

static void assert_same(const struct result *r, const struct result *s)
{
    const size_t points = (size_t)(25 * 5 * 31);
    assert_int_equal(r->figures.count, s->figures.count);
    for (size_t k = 0; k < r->figures.count; k++) {
        const struct figure *p = &r->figures.items[k], *q = &s->figures.items[k];
        assert_string_equal(p->name, q->name);
        assert_true(same_bits(&p->value, &q->value, 1));
        assert_true(same_bits(&p->uncertainty, &q->uncertainty, 1));
    }
    assert_true(
        same_bits(r->profile.ratio_error, s->profile.ratio_error, r->profile.count));
    assert_true(same_bits(r->lattice.e[AXIS_X], s->lattice.e[AXIS_X], points));
    assert_true(same_bits(r->lattice.b[AXIS_Y], s->lattice.b[AXIS_Y], points));
    for (int k = 0; k < PLANE_KINDS; k++) {
        const struct plane_result *p = &r->planes[k], *q = &s->planes[k];
        const size_t nodes = (size_t)p->grid.na * (size_t)p->grid.nb;
        assert_int_equal(p->grid.na, q->grid.na);
        assert_true(same_bits(p->potential, q->potential, nodes));
        assert_true(same_bits(p->field_b, q->field_b, nodes));
    }
}

static void test_two_runs_give_the_same_bits(void **state)
{
    (void)state;
    struct result one, two;
    const struct run_options options = {.levels = 2, .fineness = 0.3};
    assert_int_equal(run_geometry(&whole_geometry, &options, &one, NULL), STATUS_OK);
    assert_int_equal(run_geometry(&whole_geometry, &options, &two, NULL), STATUS_OK);
    assert_same(&one, &two);
    result_free(&one);
    result_free(&two);
}

/* With only some planes: what needs a plane that is not there is missing with a reason
 * that names it, and nothing that stands claims to come from it. */
static void run_subset(unsigned planes, struct geometry *g, struct result *r)
{
    small_filter(g);
    for (int k = 0; k < PLANE_KINDS; k++)
        g->planes[k].present = (planes & (1u << k)) != 0;
    g->probe_count = 0;
    g->lattice.present = false;
    const struct run_options options = {.levels = 2, .fineness = 0.3};
    assert_int_equal(run_geometry(g, &options, r, NULL), STATUS_OK);
    for (size_t k = 0; k < r->figures.count; k++) {
        const struct figure *f = &r->figures.items[k];
        if (f->state == FIGURE_MISSING) {
            assert_true(f->value == 0.0 && f->note != NULL);
        } else {
            assert_int_equal(f->planes & ~planes, 0);
        }
    }
}

static void assert_missing(const struct result *r, const char *name, const char *plane)
{
    const struct figure *f = figures_find(&r->figures, name, NULL);
    assert_non_null(f);
    assert_int_equal(f->state, FIGURE_MISSING);
    if (strstr(f->note, plane) == NULL)
        fail_msg("%s does not name %s: %s", name, plane, f->note);
}

static void test_electric_along_alone(void **state)
{
    (void)state;
    struct geometry g;
    struct result r;
    run_subset(1u << PLANE_ELECTRIC_ALONG, &g, &r);
    (void)good(&r, "centre_electric_field");
    (void)loose(&r, "effective_length_electric");
    assert_missing(&r, "centre_flux_density", "magnetic_along");
    assert_missing(&r, "balanced_speed", "magnetic_along");
    assert_missing(&r, "kick", "magnetic_along");
    assert_missing(&r, "effective_length_magnetic", "magnetic_along");
    assert_missing(&r, "length_mismatch", "magnetic_along");
    assert_missing(&r, "ratio_error_peak_across", "magnetic");
    assert_missing(&r, "expansion_magnetic", "across");
    assert_true(r.profile.present && r.profile.b_y == NULL);
    assert_false(r.planes[PLANE_MAGNETIC_ALONG].present);
    assert_false(r.verdict.all_met);
    result_free(&r);
    geometry_free(&g);
}

/* A limit of 1 m on a mismatch of some millimetres: not judged, so not met. */
static void test_limit_on_a_length_without_clamps_fails(void **state)
{
    (void)state;
    struct geometry g;
    struct result r;
    small_filter(&g);
    g.limits[LIMIT_LENGTH_MISMATCH] = (struct limit){.present = true, .value = 1.0};
    const struct run_options options = {.levels = 2, .fineness = 0.3};
    assert_int_equal(run_geometry(&g, &options, &r, NULL), STATUS_OK);
    const struct verdict_item *item = NULL;
    for (size_t k = 0; k < r.verdict.count; k++)
        if (r.verdict.items[k].limit == LIMIT_LENGTH_MISMATCH)
            item = &r.verdict.items[k];
    assert_true(item != NULL && !item->judged && !item->met);
    assert_true(item != NULL && strstr(item->reason, "depends on its limits") != NULL);
    result_free(&r);
    geometry_free(&g);
}

static void test_along_planes_stand_in_for_the_cross_section(void **state)
{
    (void)state;
    struct geometry g;
    struct result r;
    run_subset((1u << PLANE_ELECTRIC_ALONG) | (1u << PLANE_MAGNETIC_ALONG), &g, &r);
    (void)good(&r, "kick");
    (void)good(&r, "ratio_error_peak_across");
    assert_missing(&r, "expansion_electric", "across");
    assert_missing(&r, "expansion_difference", "magnetic_across");
    assert_missing(&r, "centre_electric_field_across", "electric_across");
    result_free(&r);
    geometry_free(&g);
}

static void test_across_planes_alone(void **state)
{
    (void)state;
    struct geometry g;
    struct result r;
    run_subset((1u << PLANE_ELECTRIC_ACROSS) | (1u << PLANE_MAGNETIC_ACROSS), &g, &r);
    (void)good(&r, "even_radius");
    (void)good(&r, "expansion_difference");
    assert_missing(&r, "centre_electric_field", "electric_along");
    assert_missing(&r, "kick", "electric_along");
    assert_missing(&r, "balanced_speed", "electric_along");
    assert_false(r.profile.present && r.profile.e_x != NULL);
    result_free(&r);
    geometry_free(&g);
}

static void test_names_and_order_of_figures_do_not_depend_on_the_grid(void **state)
{
    (void)state;
    struct result other;
    const struct run_options options = {.levels = 2, .fineness = 0.31};
    assert_int_equal(run_geometry(&whole_geometry, &options, &other, NULL), STATUS_OK);
    assert_int_equal(other.figures.count, whole.figures.count);
    for (size_t k = 0; k < other.figures.count; k++)
        assert_string_equal(other.figures.items[k].name, whole.figures.items[k].name);
    result_free(&other);
}

/* What a progress callback saw. */
struct watch {
    double last, drop;
    int calls, empty;
};

static void note_progress(void *context, const char *stage, double fraction)
{
    struct watch *w = context;
    w->calls++;
    w->empty += stage[0] == '\0';
    w->drop = fmax(w->drop, w->last - fraction);
    w->last = fraction;
}

static void test_progress_only_grows(void **state)
{
    (void)state;
    struct watch w = {0.0, 0.0, 0, 0};
    struct result r;
    const struct run_options options = {
        .levels = 2, .fineness = 0.3, .progress = note_progress, .context = &w};
    assert_int_equal(run_geometry(&whole_geometry, &options, &r, NULL), STATUS_OK);
    assert_true(w.calls >= 8 && w.empty == 0);
    assert_at_most(w.drop, 1e-12);
    assert_true(w.last > 0.5 && w.last <= 1.0);
    result_free(&r);
}

static void test_grid_beyond_the_memory_budget_is_an_input_error(void **state)
{
    (void)state;
    struct geometry g;
    struct result r;
    struct messages messages = {0};
    const struct run_options options = {0};
    small_filter(&g);
    g.memory_budget = 1e5;
    assert_int_equal(run_geometry(&g, &options, &r, &messages), STATUS_INPUT);
    assert_true(messages.errors == 1);
    /* the planes are judged in order */
    assert_non_null(strstr(messages.items[0].text, "electric_along:"));
    result_free(&r);
    messages_free(&messages);
    geometry_free(&g);
}

/* Requests to fail are taken with growing strides: the first ones one by one, later one
 * in six of those passed. */
static void test_failed_allocations_are_reported(void **state)
{
    (void)state;
    struct geometry g;
    enum status status = STATUS_MEMORY;
    long k = 0;
    int failures = 0;
    small_filter(&g);
    const struct run_options options = {.levels = 2, .fineness = 0.1};
    while (status != STATUS_OK) {
        struct result r;
        struct messages messages = {0};
        k += 1 + k / 6;
        mem_fail_at(k);
        status = run_geometry(&g, &options, &r, &messages);
        mem_fail_at(0);
        if (status != STATUS_OK)
            assert_int_equal(status, STATUS_MEMORY);
        failures += status != STATUS_OK;
        result_free(&r);
        messages_free(&messages);
    }
    assert_true(failures > 30);
    geometry_free(&g);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_all_planes_are_solved_on_all_grids),
        cmocka_unit_test(test_every_figure_has_its_words_and_a_number_or_a_reason),
        cmocka_unit_test(test_figures_of_the_whole_filter_are_there),
        cmocka_unit_test(test_surface_field_of_sharp_corners_is_marked),
        cmocka_unit_test(test_lengths_without_clamps_depend_on_their_limits),
        cmocka_unit_test(test_figures_agree_with_each_other),
        cmocka_unit_test(test_centre_field_is_a_little_below_that_of_endless_plates),
        cmocka_unit_test(test_charges_of_twins_are_opposite),
        cmocka_unit_test(test_profile_runs_along_the_path),
        cmocka_unit_test(test_probe_reads_the_extrapolated_field),
        cmocka_unit_test(test_probe_without_a_plane_is_read_wherever_it_fits),
        cmocka_unit_test(test_lattice_has_the_shape_that_was_asked_for),
        cmocka_unit_test(test_lattice_holds_the_field_of_the_probes),
        cmocka_unit_test(test_lattice_marks_what_is_solid),
        cmocka_unit_test(test_verdict_judges_the_limits_of_the_file),
        cmocka_unit_test(test_two_runs_give_the_same_bits),
        cmocka_unit_test(test_electric_along_alone),
        cmocka_unit_test(test_limit_on_a_length_without_clamps_fails),
        cmocka_unit_test(test_along_planes_stand_in_for_the_cross_section),
        cmocka_unit_test(test_across_planes_alone),
        cmocka_unit_test(test_names_and_order_of_figures_do_not_depend_on_the_grid),
        cmocka_unit_test(test_progress_only_grows),
        cmocka_unit_test(test_grid_beyond_the_memory_budget_is_an_input_error),
        cmocka_unit_test(test_failed_allocations_are_reported),
    };
    return cmocka_run_group_tests(tests, run_whole, free_whole);
}
