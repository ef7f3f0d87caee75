/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Outlines through points: corners, roundings, and what is refused. */

#include "tests/mesh/test_shape_cases.h"

static void test_l_contains_what_its_boxes_say(void **state)
{
    struct shape shape = l_shape(0);
    unsigned seed = 13;

    (void)state;
    for (int i = 0; i < 2000; i++) {
        double a = random_between(&seed, -0.002, 0.014);
        double b = random_between(&seed, -0.002, 0.013);
        bool want =
            a > 0 && b > 0 && ((a < 0.012 && b < 0.005) || (a < 0.0047 && b < 0.011));
        assert_int_equal(shape_contains(&shape, at(a, b), 1e-15), want);
    }
    shape_free(&shape);
}

static void test_sense_of_the_points_does_not_matter(void **state)
{
    struct vec2 backwards[L_COUNT];
    struct shape shape[2];

    (void)state;
    for (int i = 0; i < L_COUNT; i++)
        backwards[i] = l_points[L_COUNT - 1 - i];
    shape[0] = l_shape(0.0009);
    shape[1] = polygon(backwards, L_COUNT, 0.0009);
    for (int i = 0; i < 2; i++) {
        assert_closed(&shape[i]);
        assert_true(SOLID(shape[i], 0.003, 0.003));
        assert_false(SOLID(shape[i], 0.0001, 0.0001)); /* rounded away */
        assert_true(SOLID(shape[i], 0.0048, 0.0051));  /* filled by the fillet */
        assert_false(SOLID(shape[i], 0.008, 0.008));
        shape_free(&shape[i]);
    }
}

/* Rounding a corner of angle w takes r^2 (cot(w/2) - (pi - w)/2) of area; the length
 * of an outline tells its arcs are the right ones: 2 (cot(w/2) - (pi - w)/2) r each. */
static void test_rounded_triangle_has_the_length_of_its_arcs(void **state)
{
    const struct vec2 points[3] = {{0.001, 0.002}, {0.023, 0.007}, {0.009, 0.019}};
    struct shape sharp = polygon(points, 3, 0);
    struct shape round = polygon(points, 3, 0.0011);
    double less = 0;

    (void)state;
    for (int i = 0; i < 3; i++) {
        struct vec2 u = vec2_sub(points[(i + 1) % 3], points[i]);
        struct vec2 v = vec2_sub(points[(i + 2) % 3], points[i]);
        double w = acos(vec2_dot(u, v) / vec2_length(u) / vec2_length(v));
        less += (2 / tan(w / 2) - (PI - w)) * 0.0011;
    }
    assert_closed(&round);
    assert_arcs_consistent(&round);
    assert_close(outline_length(&round.outlines[0]),
                 outline_length(&sharp.outlines[0]) - less, 1e-13, 0);
    shape_free(&sharp);
    shape_free(&round);
}

static void test_rounding_that_just_fits_drops_the_lines(void **state)
{
    const struct vec2 square[4] = {{0.1, 0.2}, {0.4, 0.2}, {0.4, 0.5}, {0.1, 0.5}};
    struct shape shape = polygon(square, 4, 0.15);

    (void)state;
    assert_int_equal(shape.outlines[0].count, 4);
    assert_closed(&shape);
    assert_arcs_consistent(&shape);
    shape_free(&shape);
}

static void test_smooth_outline_can_be_rounded(void **state)
{
    struct vec2 points[90];
    struct shape shape;

    (void)state;
    for (int i = 0; i < 90; i++)
        points[i] = at(0.01 * cos(i * PI / 45), 0.006 * sin(i * PI / 45));
    shape = polygon(points, 90, 0.001);
    assert_closed(&shape);
    assert_int_equal(shape.outlines[0].count, 180);
    assert_true(SOLID(shape, 0.005, 0.001));
    shape_free(&shape);
}

struct refusal {
    const char *what;
    struct vec2 points[6];
    size_t count;
    double rounding;
    size_t bad;
};

static const struct refusal refusals[] = {
    {"two points", {{0, 0}, {0.01, 0}}, 2, 0, 0},
    {"equal neighbours", {{0, 0}, {0.01, 0}, {0.01, 0}, {0, 0.01}}, 4, 0, 2},
    {"equal neighbours, clockwise", {{0, 0}, {0, 0.01}, {0, 0.01}, {0.01, 0}}, 4, 0, 2},
    {"last is first", {{0, 0}, {0.01, 0}, {0.01, 0.02}, {0, 0}}, 4, 0, 3},
    {"rounding too large",
     {{0, 0}, {0.01, 0}, {0.01, 0.004}, {0.011, 0.02}, {0, 0.02}},
     5,
     0.0045,
     1},
    {"roundings that overlap",
     {{0, 0}, {0.01, 0}, {0.01, 0.01}, {0, 0.01}},
     4,
     0.006,
     0},
    {"spike", {{0, 0}, {0.02, 0}, {0.01, 0}, {0.01, 0.01}}, 4, 0, 1},
    {"negative rounding", {{0, 0}, {0.01, 0}, {0, 0.01}}, 3, -1e-9, 0},
};

static void test_bad_polygons_name_the_point(void **state)
{
    (void)state;
    for (size_t i = 0; i < sizeof refusals / sizeof *refusals; i++) {
        const struct refusal *r = &refusals[i];
        struct shape shape;
        size_t bad = 99;
        enum status status =
            shape_init_polygon(&shape, r->points, r->count, r->rounding, &bad);
        if (status != STATUS_SIZE || bad != r->bad)
            fail_msg("%s: status %d, point %zu", r->what, (int)status, bad);
        assert_int_equal(shape.count, 0);
    }
}

/* Any of several points may be to blame for these. */
static void test_degenerate_polygons_are_refused(void **state)
{
    const struct vec2 line[4] = {{0, 0}, {0.01, 0.01}, {0.02, 0.02}, {0.005, 0.005}};
    const struct vec2 bow[4] = {{0, 0}, {0.02, 0.01}, {0.02, 0}, {0, 0.013}};
    const struct vec2 spike[4] = {{0, 0}, {0.01, 0}, {0.02, 0}, {0.01, 0}};
    const struct vec2 pinch[6] = {{0, 0},    {0.02, 0},     {0.02, 0.01},
                                  {0.01, 0}, {0.005, 0.01}, {0, 0.01}};
    const struct vec2 hole[3] = {{0, 0}, {(double)NAN, 0}, {0, 0.01}};
    struct shape shape;
    size_t bad = 99;

    (void)state;
    assert_int_equal(shape_init_polygon(&shape, line, 4, 0, &bad), STATUS_SIZE);
    assert_int_equal(shape_init_polygon(&shape, bow, 4, 0, &bad), STATUS_SIZE);
    assert_int_equal(shape_init_polygon(&shape, spike, 4, 0, &bad), STATUS_SIZE);
    assert_int_equal(shape_init_polygon(&shape, pinch, 6, 0, &bad), STATUS_SIZE);
    assert_int_equal(shape_init_polygon(&shape, hole, 3, 0, &bad), STATUS_SIZE);
    assert_int_equal(bad, 1);
    assert_int_equal(shape_init_polygon(&shape, line, 3, (double)NAN, NULL),
                     STATUS_SIZE);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_l_contains_what_its_boxes_say),
        cmocka_unit_test(test_sense_of_the_points_does_not_matter),
        cmocka_unit_test(test_rounded_triangle_has_the_length_of_its_arcs),
        cmocka_unit_test(test_rounding_that_just_fits_drops_the_lines),
        cmocka_unit_test(test_smooth_outline_can_be_rounded),
        cmocka_unit_test(test_bad_polygons_name_the_point),
        cmocka_unit_test(test_degenerate_polygons_are_refused),
    };

    return cmocka_run_group_tests(tests, NULL, NULL);
}
