/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Solid stretches of grid lines. */

#include "tests/mesh/test_shape_cases.h"

struct spans {
    struct span *items;
    size_t capacity;
    size_t count;
};

static void spans_on(struct spans *spans, const struct shape *shape, int axis,
                     double line)
{
    assert_int_equal(shape_spans(shape, axis, line, TOLERANCE, &spans->items,
                                 &spans->capacity, &spans->count),
                     STATUS_OK);
}

/* want: n pairs low, high. */
static void assert_spans(const struct shape *shape, int axis, double line,
                         const double *want, size_t n, double bound)
{
    struct spans spans = {0};

    spans_on(&spans, shape, axis, line);
    if (spans.count != n)
        fail_msg("%zu spans on axis %d at %g, want %zu", spans.count, axis, line, n);
    for (size_t i = 0; i < n; i++) {
        assert_close(spans.items[i].low, want[2 * i], 0, bound);
        assert_close(spans.items[i].high, want[2 * i + 1], 0, bound);
    }
    mem_free(spans.items);
}

#define ASSERT_SPANS(shape, axis, line, bound, ...)                                    \
    do {                                                                               \
        const double want_[] = {__VA_ARGS__};                                          \
        assert_spans(&(shape), (axis), (line), want_, sizeof want_ / 16, (bound));     \
    } while (0)

static void test_box_is_solid_on_its_faces(void **state)
{
    struct shape shape = box(-0.0123, 0.0041, 0.0371, 0.0095, 0);
    const double lines[] = {0.0041, 0.0041 + 1e-12, 0.0063, 0.0095, 0.0095 - 1e-12};

    (void)state;
    for (size_t i = 0; i < 5; i++)
        ASSERT_SPANS(shape, 0, lines[i], 0, -0.0123, 0.0371);
    ASSERT_SPANS(shape, 1, -0.0123, 0, 0.0041, 0.0095);
    ASSERT_SPANS(shape, 1, 0.0371, 0, 0.0041, 0.0095);
    ASSERT_SPANS(shape, 1, 0.01, 0, 0.0041, 0.0095);
    shape_free(&shape);
}

static void test_lines_off_the_box_are_free(void **state)
{
    struct shape shape = box(-0.0123, 0.0041, 0.0371, 0.0095, 0);

    (void)state;
    assert_spans(&shape, 0, 0.0041 - 2 * TOLERANCE, NULL, 0, 0);
    assert_spans(&shape, 0, 0.0095 + 2 * TOLERANCE, NULL, 0, 0);
    assert_spans(&shape, 1, 0.0371 + 2 * TOLERANCE, NULL, 0, 0);
    assert_spans(&shape, 1, -0.0123 - 2 * TOLERANCE, NULL, 0, 0);
    shape_free(&shape);
}

static void test_rounded_box_ends_its_face_at_the_arc(void **state)
{
    struct shape shape = box(0.001, 0.002, 0.021, 0.012, 0.003);
    double dip = 0.003 - sqrt(0.003 * 0.003 - 0.002 * 0.002);

    (void)state;
    ASSERT_SPANS(shape, 0, 0.012, 1e-17, 0.004, 0.018);
    ASSERT_SPANS(shape, 0, 0.002, 1e-17, 0.004, 0.018);
    ASSERT_SPANS(shape, 1, 0.001, 1e-17, 0.005, 0.009);
    ASSERT_SPANS(shape, 0, 0.007, 0, 0.001, 0.021);
    ASSERT_SPANS(shape, 0, 0.011, 1e-17, 0.001 + dip, 0.021 - dip);
    ASSERT_SPANS(shape, 1, 0.002, 1e-17, 0.002 + dip, 0.012 - dip);
    shape_free(&shape);
}

static void test_disc_gives_its_chords(void **state)
{
    struct shape shape = disc(0.0031, -0.0017, 0.0123);

    (void)state;
    for (int i = -40; i <= 40; i++) {
        double d = 0.0123 * i / 41.0;
        double half = sqrt((0.0123 - d) * (0.0123 + d));
        ASSERT_SPANS(shape, 0, -0.0017 + d, 2e-17, 0.0031 - half, 0.0031 + half);
        ASSERT_SPANS(shape, 1, 0.0031 + d, 2e-17, -0.0017 - half, -0.0017 + half);
    }
    shape_free(&shape);
}

/* On the tangent the chord shrinks to a point; an error of 1e-18 m in the line is
 * sqrt(2 * 0.0123 * 1e-18) = 1.6e-10 m along it. */
static void test_disc_touches_its_tangents(void **state)
{
    struct shape shape = disc(0.0031, -0.0017, 0.0123);

    (void)state;
    ASSERT_SPANS(shape, 0, -0.0017 + 0.0123, 1e-9, 0.0031, 0.0031);
    ASSERT_SPANS(shape, 0, -0.0017 - 0.0123, 1e-9, 0.0031, 0.0031);
    ASSERT_SPANS(shape, 1, 0.0031 + 0.0123, 1e-9, -0.0017, -0.0017);
    ASSERT_SPANS(shape, 1, 0.0031 - 0.0123, 1e-9, -0.0017, -0.0017);
    assert_spans(&shape, 0, -0.0017 + 0.0123 + 2 * TOLERANCE, NULL, 0, 0);
    shape_free(&shape);
}

static void test_ring_is_solid_at_the_top_of_its_bore(void **state)
{
    struct shape shape = ring();
    double outer = sqrt(0.0123 * 0.0123 - 0.0077 * 0.0077);
    double h_out = sqrt(0.0123 * 0.0123 - 0.005 * 0.005);
    double h_in = sqrt(0.0077 * 0.0077 - 0.005 * 0.005);

    (void)state;
    ASSERT_SPANS(shape, 0, -0.0017 + 0.0077, 1e-16, 0.0031 - outer, 0.0031 + outer);
    ASSERT_SPANS(shape, 1, 0.0031 - 0.0077, 1e-16, -0.0017 - outer, -0.0017 + outer);
    ASSERT_SPANS(shape, 0, -0.0017 + 0.005, 1e-16, 0.0031 - h_out, 0.0031 - h_in,
                 0.0031 + h_in, 0.0031 + h_out);
    shape_free(&shape);
}

static void test_notch_is_open_above_its_floor(void **state)
{
    struct shape shape = notched_box();

    (void)state;
    ASSERT_SPANS(shape, 0, 0.006, 0, 0, 0.020); /* its floor */
    ASSERT_SPANS(shape, 0, 0.010, 0, 0, 0.007, 0.013, 0.020);
    ASSERT_SPANS(shape, 0, 0.008, 0, 0, 0.007, 0.013, 0.020);
    ASSERT_SPANS(shape, 1, 0.007, 0, 0, 0.010); /* its walls */
    ASSERT_SPANS(shape, 1, 0.013, 0, 0, 0.010);
    ASSERT_SPANS(shape, 1, 0.010, 0, 0, 0.006);
    assert_spans(&shape, 0, 0.012, NULL, 0, 0); /* the cut beyond the body */
    shape_free(&shape);
}

static void test_coincident_faces_leave_no_film(void **state)
{
    struct shape shape = box(0, 0, 0.020, 0.010, 0);

    (void)state;
    take(&shape, box(0, 0.006, 0.010, 0.010, 0));
    take(&shape, box(0.1 - 0.09, 0.006, 0.015, 0.010, 0)); /* 0.01 within rounding */
    ASSERT_SPANS(shape, 0, 0.008, 0, 0.015, 0.020);
    ASSERT_SPANS(shape, 0, 0.010, 0, 0.015, 0.020);
    ASSERT_SPANS(shape, 0, 0.006, 0, 0, 0.020);
    ASSERT_SPANS(shape, 1, 0, 0, 0, 0.006);
    ASSERT_SPANS(shape, 1, 0.010, 0, 0, 0.006);
    ASSERT_SPANS(shape, 1, 0.015, 0, 0, 0.010);
    shape_free(&shape);
}

/* A ridge between two round cuts that ends in a point on the line. */
static void test_ridge_between_cuts_reaches_its_tip(void **state)
{
    struct shape shape = box(-0.02, -0.02, 0.02, 0.02, 0);
    double r = 0.005;
    double h = 0.004;
    double tip = sqrt(r * r - h * h);

    (void)state;
    take(&shape, disc(-h, 0.003, r));
    take(&shape, disc(h, 0.003, r));
    ASSERT_SPANS(shape, 0, 0.003 - tip, 1e-15, -0.02, -2 * h, 0, 0, 2 * h, 0.02);
    shape_free(&shape);
}

static void test_corners_on_the_line_are_points(void **state)
{
    const struct vec2 diamond[4] = {
        {0.003, 0}, {0.007, 0.005}, {0.003, 0.011}, {-0.002, 0.004}};
    struct shape shape = polygon(diamond, 4, 0);

    (void)state;
    ASSERT_SPANS(shape, 0, 0, 0, 0.003, 0.003);
    ASSERT_SPANS(shape, 0, 0.011, 0, 0.003, 0.003);
    ASSERT_SPANS(shape, 1, -0.002, 0, 0.004, 0.004);
    ASSERT_SPANS(shape, 1, 0.007, 0, 0.005, 0.005);
    ASSERT_SPANS(shape, 0, 0.005, 1e-17, -0.002 + 0.005 / 7, 0.007);
    shape_free(&shape);
}

/* Slanted faces are crossed where they cross the line, whatever the tolerance. */
static void test_slanted_faces_are_exact(void **state)
{
    const struct vec2 points[4] = {{0, 0}, {0.011, 0}, {0.017, 0.007}, {0.001, 0.007}};
    struct shape shape = polygon(points, 4, 0);
    struct spans spans = {0};

    (void)state;
    for (int i = 0; i <= 70; i++) {
        double b = 0.007 * i / 70.0;
        assert_int_equal(shape_spans(&shape, 0, b, 1e-7, &spans.items, &spans.capacity,
                                     &spans.count),
                         STATUS_OK);
        assert_int_equal(spans.count, 1);
        assert_close(spans.items[0].low, b / 7, 1e-15, 1e-18);
        assert_close(spans.items[0].high, 0.011 + 6 * b / 7, 1e-15, 0);
    }
    mem_free(spans.items);
    shape_free(&shape);
}

/* A face tilted by less than the tolerance over its whole length. */
static void test_nearly_level_face_is_on_its_line(void **state)
{
    const struct vec2 points[4] = {
        {0, 0}, {0.03, 0}, {0.03, 0.01 + 4e-12}, {0, 0.01 - 4e-12}};
    struct shape shape = polygon(points, 4, 0);

    (void)state;
    ASSERT_SPANS(shape, 0, 0.01, 1e-15, 0, 0.03);
    ASSERT_SPANS(shape, 0, 0.01 + 2e-12, 1e-15, 0, 0.03);
    ASSERT_SPANS(shape, 0, 0.01 - 2e-12, 1e-15, 0, 0.03);
    shape_free(&shape);
}

/* The floor of a cut falls by two tolerances over the length of the line; a tolerance
 * below the line the body reaches to 10 mm, on the line it is gone. */
static void test_stretch_that_ends_just_below_the_line_stays_in_the_body(void **state)
{
    const double t = TOLERANCE;
    const struct vec2 wedge[4] = {
        {-0.01, 0.005}, {0.03, 0.005 - 2 * t}, {0.03, 0.02}, {-0.01, 0.02}};
    struct shape shape = box(0, 0, 0.02, 0.01, 0);

    (void)state;
    take(&shape, polygon(wedge, 4, 0));
    ASSERT_SPANS(shape, 0, 0.005, 1e-7, 0, 0.01);
    shape_free(&shape);
}

/* Integral of the solid widths by the midpoint rule with n lines. */
static double area_by_spans(const struct shape *shape, int axis, int n)
{
    struct spans spans = {0};
    struct vec2 low;
    struct vec2 high;
    double from;
    double step;
    double sum = 0;

    shape_bounds(shape, &low, &high);
    from = axis == 0 ? low.b : low.a;
    step = ((axis == 0 ? high.b : high.a) - from) / n;
    for (int i = 0; i < n; i++) {
        spans_on(&spans, shape, axis, from + (i + 0.5) * step);
        for (size_t k = 0; k < spans.count; k++)
            sum += step * (spans.items[k].high - spans.items[k].low);
    }
    mem_free(spans.items);
    return sum;
}

/* Square-root ends of the widths make the rule converge with order 3/2: 3960 lines
 * leave a few times 3960^-1.5 = 4e-6. The number puts the steps of the L's widths, at
 * 5/11 of its height and 47/120 of its breadth, between two lines. */
static void test_areas_of_round_shapes_converge(void **state)
{
    struct shape shape[3] = {ring(), box(0.001, 0.002, 0.021, 0.012, 0.003),
                             l_shape(0.0011)};
    double square = 4 - PI; /* what rounding takes, or fills, at four corners */
    double want[3] = {PI * (0.0123 * 0.0123 - 0.0077 * 0.0077),
                      0.020 * 0.010 - square * 0.003 * 0.003,
                      0.012 * 0.005 + 0.0047 * 0.006 - square * 0.0011 * 0.0011};

    (void)state;
    for (int i = 0; i < 3; i++) {
        assert_close(area_by_spans(&shape[i], 0, 3960), want[i], 1e-5, 0);
        assert_close(area_by_spans(&shape[i], 1, 3960), want[i], 1e-5, 0);
        shape_free(&shape[i]);
    }
}

/* Widths of a polygon are linear between its corners: one line between each pair of
 * corner levels gives the area exactly. */
static void test_area_of_a_polygon_is_exact(void **state)
{
    const struct vec2 p[5] = {
        {0, 0}, {0.011, 0.001}, {0.017, 0.007}, {0.006, 0.003}, {0.001, 0.009}};
    const double levels[5] = {0, 0.001, 0.003, 0.007, 0.009};
    struct shape shape = polygon(p, 5, 0);
    struct spans spans = {0};
    double area = 0;
    double twice = 0;

    (void)state;
    for (int i = 0; i < 5; i++)
        twice += vec2_cross(p[i], p[(i + 1) % 5]);
    for (int i = 0; i < 4; i++) {
        spans_on(&spans, &shape, 0, 0.5 * (levels[i] + levels[i + 1]));
        for (size_t k = 0; k < spans.count; k++)
            area += (levels[i + 1] - levels[i]) *
                    (spans.items[k].high - spans.items[k].low);
    }
    assert_close(area, 0.5 * twice, 1e-14, 0);
    mem_free(spans.items);
    shape_free(&shape);
}

static struct shape many_cuts(void)
{
    struct shape shape = box(-0.015, -0.012, 0.014, 0.013, 0.004);

    take(&shape, disc(-0.003, 0.002, 0.0041));
    take(&shape, disc(0.001, 0.0045, 0.0039));
    take(&shape, box(0.008, -0.02, 0.011, 0.001, 0.001));
    take(&shape, l_shape(0.0007));
    shape_turn(&shape, 0.37, at(0.001, 0.002));
    return shape;
}

static void assert_spans_agree(const struct shape *shape, struct vec2 p)
{
    for (int axis = 0; axis < 2; axis++) {
        struct spans spans = {0};
        double x = axis == 0 ? p.a : p.b;
        bool solid = false;
        spans_on(&spans, shape, axis, axis == 0 ? p.b : p.a);
        for (size_t k = 0; k < spans.count; k++) {
            assert_true(spans.items[k].low <= spans.items[k].high);
            assert_true(k == 0 || spans.items[k - 1].high < spans.items[k].low);
            solid = solid || (x >= spans.items[k].low && x <= spans.items[k].high);
        }
        if (solid != shape_contains(shape, p, 0))
            fail_msg("(%.17g, %.17g) on axis %d", p.a, p.b, axis);
        mem_free(spans.items);
    }
}

static void test_spans_agree_with_contains(void **state)
{
    struct shape shape[4] = {ring(), notched_box(), l_shape(0.0011), many_cuts()};
    unsigned seed = 21;

    (void)state;
    for (int i = 0; i < 4; i++) {
        for (int k = 0; k < 1500; k++)
            assert_spans_agree(&shape[i], at(random_between(&seed, -0.02, 0.022),
                                             random_between(&seed, -0.02, 0.022)));
        shape_free(&shape[i]);
    }
}

static void test_spans_follow_a_mirror(void **state)
{
    struct shape shape = many_cuts();
    struct shape image = many_cuts();
    unsigned seed = 22;

    (void)state;
    shape_mirror(&image, true, false);
    for (int i = 0; i < 300; i++) {
        struct spans p = {0};
        struct spans q = {0};
        double b = random_between(&seed, -0.02, 0.02);
        spans_on(&p, &shape, 0, b);
        spans_on(&q, &image, 0, b);
        assert_int_equal(p.count, q.count);
        for (size_t k = 0; k < p.count; k++) {
            assert_close(q.items[p.count - 1 - k].high, -p.items[k].low, 0, 1e-16);
            assert_close(q.items[p.count - 1 - k].low, -p.items[k].high, 0, 1e-16);
        }
        mem_free(p.items);
        mem_free(q.items);
    }
    shape_free(&shape);
    shape_free(&image);
}

static void test_bad_lines_are_refused(void **state)
{
    struct shape shape = ring();
    struct spans s = {.count = 99};

    (void)state;
#define STATUS_OF(axis, at, tolerance)                                                 \
    shape_spans(&shape, (axis), (at), (tolerance), &s.items, &s.capacity, &s.count)
    assert_int_equal(STATUS_OF(2, 0, TOLERANCE), STATUS_SIZE);
    assert_int_equal(s.count, 0);
    assert_int_equal(STATUS_OF(0, (double)NAN, TOLERANCE), STATUS_SIZE);
    assert_int_equal(STATUS_OF(0, (double)INFINITY, TOLERANCE), STATUS_SIZE);
    assert_int_equal(STATUS_OF(1, 0, -TOLERANCE), STATUS_SIZE);
    assert_int_equal(STATUS_OF(1, 0, (double)NAN), STATUS_SIZE);
    assert_int_equal(STATUS_OF(1, 0, 0), STATUS_OK);
#undef STATUS_OF
    mem_free(s.items);
    shape_free(&shape);
}

static void test_every_failed_allocation_is_reported(void **state)
{
    struct shape shape = many_cuts();
    struct spans spans = {0};
    enum status status = STATUS_MEMORY;
    int failures = 0;

    (void)state;
    for (long k = 1; status != STATUS_OK; k++) {
        mem_fail_at(k);
        status = shape_spans(&shape, 0, 0.003, TOLERANCE, &spans.items, &spans.capacity,
                             &spans.count);
        mem_fail_at(0);
        failures += status == STATUS_MEMORY;
        assert_true(status == STATUS_OK ? spans.count > 0 : spans.count == 0);
        mem_free(spans.items);
        spans = (struct spans){0};
    }
    assert_true(failures >= 2);
    shape_free(&shape);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_box_is_solid_on_its_faces),
        cmocka_unit_test(test_lines_off_the_box_are_free),
        cmocka_unit_test(test_rounded_box_ends_its_face_at_the_arc),
        cmocka_unit_test(test_disc_gives_its_chords),
        cmocka_unit_test(test_disc_touches_its_tangents),
        cmocka_unit_test(test_ring_is_solid_at_the_top_of_its_bore),
        cmocka_unit_test(test_notch_is_open_above_its_floor),
        cmocka_unit_test(test_coincident_faces_leave_no_film),
        cmocka_unit_test(test_ridge_between_cuts_reaches_its_tip),
        cmocka_unit_test(test_corners_on_the_line_are_points),
        cmocka_unit_test(test_slanted_faces_are_exact),
        cmocka_unit_test(test_nearly_level_face_is_on_its_line),
        cmocka_unit_test(test_stretch_that_ends_just_below_the_line_stays_in_the_body),
        cmocka_unit_test(test_areas_of_round_shapes_converge),
        cmocka_unit_test(test_area_of_a_polygon_is_exact),
        cmocka_unit_test(test_spans_agree_with_contains),
        cmocka_unit_test(test_spans_follow_a_mirror),
        cmocka_unit_test(test_bad_lines_are_refused),
        cmocka_unit_test(test_every_failed_allocation_is_reported),
    };

    return cmocka_run_group_tests(tests, NULL, NULL);
}
