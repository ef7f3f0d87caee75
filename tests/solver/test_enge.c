/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Enge functions: coefficients found again, errors told as they are, and ends that have
 * none told with their reason. */

#include "tests/support/assert_close.h"

#include <string.h>

#include "shared/mem.h"
#include "solver/enge.h"
#include "solver/figure_maker.h"
#include "tests/support/scene.h"

enum { COUNT = 173 };

#define FROM (-1.9)
#define TO   2.3

static double s[COUNT], f[COUNT];

/* Written out, unlike in enge.c. */
static double plain_enge(const double a[ENGE_TERMS], double x)
{
    return 1.0 / (1.0 + exp(a[0] + a[1] * x + a[2] * pow(x, 2) + a[3] * pow(x, 3) +
                            a[4] * pow(x, 4) + a[5] * pow(x, 5)));
}

static void sample(const double a[ENGE_TERMS])
{
    for (int k = 0; k < COUNT; k++) {
        s[k] = FROM + (TO - FROM) * k / (COUNT - 1);
        f[k] = plain_enge(a, s[k]);
    }
}

static const double SIX[ENGE_TERMS] = {0.2383, 3.917, -1.391, 1.1207, 0.217, 0.0931};
static const double FOUR[ENGE_TERMS] = {-0.137, 4.713, -0.871, 0.6329, 0.0, 0.0};

/* The iteration stops at changes of 1e-10; the worst direction is a thousand times
 * softer. */
#define FOUND_AGAIN 1e-7

static void test_six_coefficients_are_found_again(void **state)
{
    (void)state;
    struct enge fit;
    sample(SIX);
    assert_int_equal(enge_fit(s, f, COUNT, &fit), STATUS_OK);
    assert_int_equal(fit.terms, 6);
    for (int n = 0; n < ENGE_TERMS; n++)
        assert_close(fit.a[n], SIX[n], 0.0, FOUND_AGAIN);
    assert_at_most(fit.largest, 1e-10);
}

static void test_four_coefficients_are_found_again(void **state)
{
    (void)state;
    struct enge fit;
    sample(FOUR);
    assert_int_equal(enge_fit(s, f, COUNT, &fit), STATUS_OK);
    for (int n = 0; n < ENGE_TERMS; n++)
        assert_close(fit.a[n], FOUR[n], 0.0, FOUND_AGAIN);
}

static void test_error_of_the_fit_is_told_as_it_is(void **state)
{
    (void)state;
    struct enge fit;
    double sum = 0.0, largest = 0.0, at = 0.0;
    sample(SIX);
    for (int k = 0; k < COUNT; k++) /* a bump that six terms cannot follow */
        f[k] += 7e-3 * exp(-pow((s[k] - 0.43) / 0.11, 2));
    assert_int_equal(enge_fit(s, f, COUNT, &fit), STATUS_OK);
    for (int k = 0; k < COUNT; k++) {
        const double miss = fabs(plain_enge(fit.a, s[k]) - f[k]);
        sum += miss * miss;
        if (miss > largest) {
            largest = miss;
            at = s[k];
        }
    }
    assert_close(fit.largest, largest, 1e-9, 0.0);
    assert_close(fit.largest_at, at, 1e-12, 0.0);
    assert_close(fit.rms, sqrt(sum / COUNT), 1e-9, 0.0);
    assert_true(largest > 2e-3 && largest < 7e-3);
}

static double squares(const double a[ENGE_TERMS])
{
    double sum = 0.0;
    for (int k = 0; k < COUNT; k++)
        sum += pow(plain_enge(a, s[k]) - f[k], 2);
    return sum;
}

static void test_no_neighbour_of_the_fit_is_better(void **state)
{
    (void)state;
    struct enge fit;
    sample(SIX);
    for (int k = 0; k < COUNT; k++)
        f[k] += 4e-3 * exp(-pow((s[k] - 0.43) / 0.11, 2));
    assert_int_equal(enge_fit(s, f, COUNT, &fit), STATUS_OK);
    assert_int_equal(fit.terms, 6);
    for (int n = 0; n < ENGE_TERMS; n++)
        for (int sign = -1; sign <= 1; sign += 2) {
            double near[ENGE_TERMS];
            memcpy(near, fit.a, sizeof near);
            near[n] += sign * 1e-4;
            assert_true(squares(near) > squares(fit.a));
        }
}

/* With a_5 < 0 the function rises again outside, here beyond s = 3. */
static void test_negative_leading_coefficient_is_left_out(void **state)
{
    (void)state;
    static const double turning[ENGE_TERMS] = {0.0148, 5.155, -0.206,
                                               1.363,  0.124, -0.211};
    struct enge fit;
    sample(turning);
    assert_int_equal(enge_fit(s, f, COUNT, &fit), STATUS_OK);
    assert_int_equal(fit.terms, 4);
    assert_true(fit.a[3] > 0.0 && fit.a[4] == 0.0 && fit.a[5] == 0.0);
    assert_true(fit.largest > 1e-5);
    assert_true(enge_value(turning, 5.0) > 0.99 && enge_value(fit.a, 5.0) < 1e-6);
}

static void assert_refused(int count, enum status want)
{
    static const struct enge none;
    struct enge fit;
    memset(&fit, 1, sizeof fit);
    assert_int_equal(enge_fit(s, f, count, &fit), want);
    assert_memory_equal(&fit, &none, sizeof fit);
}

static void test_what_does_not_fall_is_refused(void **state)
{
    (void)state;
    static const double rising[ENGE_TERMS] = {0.1, -3.1, 0.0, 0.0, 0.0, 0.0};
    sample(rising);
    assert_refused(COUNT, STATUS_UNTRUSTED);
    for (int k = 0; k < COUNT; k++)
        f[k] = 1.0;
    assert_refused(COUNT, STATUS_UNTRUSTED);
    sample(SIX);
    f[COUNT / 2] = (double)NAN;
    assert_refused(COUNT, STATUS_UNTRUSTED);
    assert_refused(2 * ENGE_TERMS - 1, STATUS_SIZE);
}

static void test_value_far_out_does_not_overflow(void **state)
{
    (void)state;
    assert_true(enge_value(SIX, 1e30) == 0.0);
    assert_true(enge_value(SIX, -1e30) == 1.0);
    assert_close(enge_value(SIX, 0.37), plain_enge(SIX, 0.37), 1e-14, 0.0);
    assert_close(enge_value(SIX, -0.71), plain_enge(SIX, -0.71), 1e-14, 0.0);
}

static void test_each_allocation_may_fail(void **state)
{
    (void)state;
    struct enge fit;
    enum status status = STATUS_MEMORY;
    sample(SIX);
    for (long k = 1; status == STATUS_MEMORY; k++) {
        assert_true(k < 20);
        mem_fail_at(k);
        status = enge_fit(s, f, COUNT, &fit);
        mem_fail_at(0);
        assert_true(status == STATUS_OK || fit.terms == 0);
    }
    assert_int_equal(status, STATUS_OK);
    assert_close(fit.a[1], SIX[1], 0.0, FOUND_AGAIN);
}

/* Plates 20 mm apart from -50 to 50 mm in an earthed box. */
static void plates_scene(struct geometry *g, double half, bool lower)
{
    scene_begin(g, 230.0, false);
    struct plane *p = scene_plane(g, PLANE_ELECTRIC_ALONG, -half, half, -40e-3, 40e-3);
    scene_box(p, "upper", 0.5, -50e-3, 50e-3, 10e-3, 14e-3, 1e-3);
    if (lower)
        scene_box(p, "lower", -0.5, -50e-3, 50e-3, -14e-3, -10e-3, 1e-3);
}

/* The figures over the path from `from` to `to`, one grid. */
static void enge_of(const struct geometry *g, double from, double to,
                    struct figures *figures)
{
    struct geometry with_path = *g;
    struct plane_solution plane;
    struct path path;
    with_path.beam.has_path = true;
    with_path.beam.path_from = from;
    with_path.beam.path_to = to;
    memset(figures, 0, sizeof *figures);
    assert_int_equal(plane_solve(g, PLANE_ELECTRIC_ALONG,
                                 &(struct grid_request){.fineness = 0.5, .level = 0},
                                 &plane, NULL),
                     STATUS_OK);
    struct view view = {.geometry = &with_path};
    view.planes[PLANE_ELECTRIC_ALONG] = &plane;
    assert_int_equal(path_sample(&view, &path), STATUS_OK);
    assert_int_equal(figures_enge(&view, &path, figures), STATUS_OK);
    path_free(&path);
    plane_solution_free(&plane);
}

static void test_ends_of_symmetric_plates_are_alike(void **state)
{
    (void)state;
    static const char *const names[ENGE_TERMS] = {"a0", "a1", "a2", "a3", "a4", "a5"};
    struct geometry g;
    struct figures figures;
    plates_scene(&g, 90e-3, true);
    enge_of(&g, -90e-3, 90e-3, &figures);
    assert_int_equal(figures.count, 4 * (1 + ENGE_TERMS));
    for (int n = 0; n < ENGE_TERMS; n++) {
        const struct figure *p =
            figures_find(&figures, "enge_electric_entrance", names[n]);
        const struct figure *q = figures_find(&figures, "enge_electric_exit", names[n]);
        assert_int_equal(p->state, q->state);
        assert_close(p->value, q->value, 1e-6, 1e-6);
    }
    const struct figure *error =
        figures_find(&figures, "enge_error_electric_exit", NULL);
    assert_non_null(strstr(error->note, "s = -2 to "));
    assert_non_null(strstr(error->note, "gaps of 20 mm outward"));
    assert_true(error->value > 1e-5 && error->value < 2e-2);
    figures_free(&figures);
    geometry_free(&g);
}

static void assert_all_missing(const struct figures *figures, const char *electric,
                               const char *magnetic)
{
    assert_int_equal(figures->count, 4 * (1 + ENGE_TERMS));
    for (size_t k = 0; k < figures->count; k++) {
        const struct figure *p = &figures->items[k];
        const bool is_electric = strstr(p->name, "electric") != NULL;
        assert_int_equal(p->state, FIGURE_MISSING);
        assert_non_null(strstr(p->note, is_electric ? electric : magnetic));
    }
}

static void test_gap_and_end_that_are_not_there_are_named(void **state)
{
    (void)state;
    struct geometry g;
    struct figures figures;
    plates_scene(&g, 90e-3, false);
    enge_of(&g, -90e-3, 90e-3, &figures);
    assert_all_missing(&figures, "sets a gap", "needs magnetic_along");
    figures_free(&figures);
    geometry_free(&g);
    plates_scene(&g, 90e-3, true);
    enge_of(&g, -45e-3, 45e-3, &figures);
    assert_all_missing(&figures, "path ends before", "needs magnetic_along");
    figures_free(&figures);
    geometry_free(&g);
}

static void test_end_too_near_to_the_reference_point_is_named(void **state)
{
    (void)state;
    struct geometry g;
    struct figures figures;
    plates_scene(&g, 56e-3, true);
    g.reference_z = 49e-3;
    enge_of(&g, -56e-3, 56e-3, &figures);
    const struct figure *p = figures_find(&figures, "enge_error_electric_exit", NULL);
    assert_int_equal(p->state, FIGURE_MISSING);
    assert_non_null(strstr(p->note, "half a gap"));
    figures_free(&figures);
    geometry_free(&g);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_six_coefficients_are_found_again),
        cmocka_unit_test(test_four_coefficients_are_found_again),
        cmocka_unit_test(test_error_of_the_fit_is_told_as_it_is),
        cmocka_unit_test(test_no_neighbour_of_the_fit_is_better),
        cmocka_unit_test(test_negative_leading_coefficient_is_left_out),
        cmocka_unit_test(test_what_does_not_fall_is_refused),
        cmocka_unit_test(test_value_far_out_does_not_overflow),
        cmocka_unit_test(test_each_allocation_may_fail),
        cmocka_unit_test(test_ends_of_symmetric_plates_are_alike),
        cmocka_unit_test(test_gap_and_end_that_are_not_there_are_named),
        cmocka_unit_test(test_end_too_near_to_the_reference_point_is_named),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
