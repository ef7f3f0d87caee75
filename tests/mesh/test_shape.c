/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Shapes as values: construction, cuts, copies, motions, bounds, membership. */

#include "tests/mesh/test_shape_cases.h"

static void test_sharp_box_has_four_lines(void **state)
{
    struct shape shape = box(-0.0123, 0.004, 0.0371, 0.0095, 0);

    (void)state;
    assert_int_equal(shape.count, 1);
    assert_int_equal(shape.outlines[0].count, 4);
    assert_closed(&shape);
    assert_close(outline_length(&shape.outlines[0]), 2 * (0.0494 + 0.0055), 1e-14, 0);
    shape_free(&shape);
}

static void test_rounded_box_is_closed_and_tangent(void **state)
{
    struct shape shape = box(-0.0123, 0.004, 0.0371, 0.0095, 0.0013);

    (void)state;
    assert_int_equal(shape.outlines[0].count, 8);
    assert_closed(&shape);
    assert_arcs_consistent(&shape);
    assert_close(outline_length(&shape.outlines[0]),
                 2 * (0.0494 + 0.0055) - (8 - 2 * PI) * 0.0013, 1e-14, 0);
    shape_free(&shape);
}

static void test_box_rounded_by_half_its_side_drops_the_face(void **state)
{
    struct shape flat = box(0.1, 0.1, 0.3, 0.2 + 0.1, 0.1);
    struct shape half = box(0, 0.1, 0.7, 0.3, 0.1);

    (void)state;
    assert_int_equal(flat.outlines[0].count, 4);
    assert_int_equal(half.outlines[0].count, 6);
    assert_closed(&flat);
    assert_closed(&half);
    shape_free(&flat);
    shape_free(&half);
}

static void test_bad_boxes_are_refused(void **state)
{
    struct shape shape;
    struct vec2 low = at(0.001, 0.002);
    struct vec2 high = at(0.005, 0.004);

    (void)state;
    assert_int_equal(shape_init_box(&shape, low, high, 0.00101), STATUS_SIZE);
    assert_int_equal(shape_init_box(&shape, low, high, -1e-6), STATUS_SIZE);
    assert_int_equal(shape_init_box(&shape, low, high, (double)NAN), STATUS_SIZE);
    assert_int_equal(shape_init_box(&shape, high, low, 0), STATUS_SIZE);
    assert_int_equal(shape_init_box(&shape, low, at(0.005, 0.002), 0), STATUS_SIZE);
    high.a = (double)INFINITY;
    assert_int_equal(shape_init_box(&shape, low, high, 0), STATUS_SIZE);
    low.a = (double)NAN;
    assert_int_equal(shape_init_box(&shape, low, high, 0), STATUS_SIZE);
    assert_int_equal(shape.count, 0);
}

static void test_bad_discs_are_refused(void **state)
{
    struct shape shape;

    (void)state;
    assert_int_equal(shape_init_disc(&shape, at(0, 0), 0), STATUS_SIZE);
    assert_int_equal(shape_init_disc(&shape, at(0, 0), -0.01), STATUS_SIZE);
    assert_int_equal(shape_init_disc(&shape, at(0, 0), (double)NAN), STATUS_SIZE);
    assert_int_equal(shape_init_disc(&shape, at((double)NAN, 0), 0.01), STATUS_SIZE);
    assert_int_equal(shape_init_disc(&shape, at(0, (double)INFINITY), 0.01),
                     STATUS_SIZE);
    assert_int_equal(shape.count, 0);
}

static void test_disc_contains_what_its_radius_says(void **state)
{
    struct shape shape = disc(0.013, -0.021, 0.0057);
    unsigned seed = 11;

    (void)state;
    assert_closed(&shape);
    assert_arcs_consistent(&shape);
    for (int i = 0; i < 2000; i++) {
        double a = random_between(&seed, 0.006, 0.020);
        double b = random_between(&seed, -0.028, -0.014);
        double r = hypot(a - 0.013, b + 0.021);
        if (fabs(r - 0.0057) > 1e-9)
            assert_int_equal(SOLID(shape, a, b), r < 0.0057);
    }
    shape_free(&shape);
}

/* Signed distance to a rounded box in closed form. */
static double rounded_box_distance(double a, double b, double half_a, double half_b,
                                   double r)
{
    double da = fabs(a) - (half_a - r);
    double db = fabs(b) - (half_b - r);

    return hypot(fmax(da, 0), fmax(db, 0)) + fmin(fmax(da, db), 0) - r;
}

static void test_rounded_box_contains_what_its_distance_says(void **state)
{
    struct shape shape = box(-0.0091, -0.0043, 0.0091, 0.0043, 0.0019);
    unsigned seed = 12;

    (void)state;
    for (int i = 0; i < 4000; i++) {
        double a = random_between(&seed, -0.011, 0.011);
        double b = random_between(&seed, -0.006, 0.006);
        double d = rounded_box_distance(a, b, 0.0091, 0.0043, 0.0019);
        assert_int_equal(shape_contains(&shape, at(a, b), 1e-4), d < 1e-4);
    }
    shape_free(&shape);
}

static void test_points_on_the_surface_belong_to_the_shape(void **state)
{
    struct shape shape = ring();

    (void)state;
    for (int i = 0; i < 360; i++) {
        double c = cos(i * PI / 180);
        double s = sin(i * PI / 180);
        assert_true(SOLID(shape, 0.0031 + 0.0123 * c, -0.0017 + 0.0123 * s));
        assert_true(SOLID(shape, 0.0031 + 0.0077 * c, -0.0017 + 0.0077 * s));
        assert_true(SOLID(shape, 0.0031 + 0.01 * c, -0.0017 + 0.01 * s));
        assert_false(SOLID(shape, 0.0031 + 0.0124 * c, -0.0017 + 0.0124 * s));
        assert_false(SOLID(shape, 0.0031 + 0.0076 * c, -0.0017 + 0.0076 * s));
    }
    shape_free(&shape);
}

static void test_tolerance_widens_the_shape(void **state)
{
    struct shape shape = notched_box();

    (void)state;
    assert_true(SOLID(shape, 0.020 + 0.9 * TOLERANCE, 0.003));
    assert_false(SOLID(shape, 0.020 + 1.5 * TOLERANCE, 0.003));
    assert_true(SOLID(shape, 0.007 + 0.9 * TOLERANCE, 0.008));
    assert_false(SOLID(shape, 0.007 + 1.5 * TOLERANCE, 0.008));
    assert_true(SOLID(shape, 0.007, 0.010)); /* edge of the notch */
    assert_true(SOLID(shape, 0.013, 0.010));
    assert_false(SOLID(shape, 0.010, 0.010));
    shape_free(&shape);
}

static void test_points_that_are_no_numbers_are_outside(void **state)
{
    struct shape shape = ring();
    struct shape empty = {0};

    (void)state;
    assert_false(SOLID(shape, (double)NAN, 0));
    assert_false(SOLID(shape, 0, (double)INFINITY));
    assert_false(SOLID(empty, 0, 0));
    shape_free(&shape);
}

/* A cut flush with three faces must not leave a film standing there. */
static void test_flush_cut_leaves_no_film(void **state)
{
    struct shape shape = box(0, 0, 0.020, 0.010, 0);

    (void)state;
    take(&shape, box(0, 0.006, 0.020, 0.010, 0));
    assert_false(SOLID(shape, 0, 0.008));
    assert_false(SOLID(shape, 0.011, 0.010));
    assert_false(SOLID(shape, 0.020, 0.010));
    assert_true(SOLID(shape, 0, 0.006));
    assert_true(SOLID(shape, 0.013, 0.006));
    assert_true(SOLID(shape, 0.020, 0.003));
    shape_free(&shape);
}

static void test_cuts_side_by_side_leave_no_film(void **state)
{
    struct shape shape = box(0, 0, 0.020, 0.010, 0);

    (void)state;
    take(&shape, box(0.004, 0.002, 0.010, 0.008, 0));
    take(&shape, box(0.010, 0.002, 0.015, 0.008, 0));
    assert_false(SOLID(shape, 0.010, 0.005));
    assert_true(SOLID(shape, 0.010, 0.008));
    assert_true(SOLID(shape, 0.015, 0.005));
    shape_free(&shape);
}

static void test_cut_is_copied(void **state)
{
    struct shape shape = box(0, 0, 0.02, 0.01, 0);
    struct shape bore = disc(0.01, 0.005, 0.002);

    (void)state;
    assert_int_equal(shape_cut(&shape, &bore), STATUS_OK);
    assert_int_equal(shape_cut(&bore, &shape), STATUS_SIZE); /* has a cut itself */
    shape_mirror(&bore, true, true);
    shape_free(&bore);
    assert_int_equal(shape_cut(&shape, &bore), STATUS_SIZE); /* empty */
    assert_int_equal(shape_cut(&bore, &shape), STATUS_SIZE);
    assert_false(SOLID(shape, 0.01, 0.005));
    assert_true(SOLID(shape, 0.0125, 0.005));
    shape_free(&shape);
}

static void test_copy_is_deep(void **state)
{
    struct shape shape = ring();
    struct shape copy;
    struct shape empty = {0};

    (void)state;
    assert_int_equal(shape_copy(&copy, &shape), STATUS_OK);
    shape_free(&shape);
    assert_int_equal(copy.count, 2);
    assert_true(SOLID(copy, 0.0031 + 0.01, -0.0017));
    assert_false(SOLID(copy, 0.0031, -0.0017));
    shape_free(&copy);
    assert_int_equal(shape_copy(&copy, &empty), STATUS_OK);
    assert_int_equal(copy.count, 0);
    shape_free(&copy);
}

/* Membership must follow the motion; both samples share their points. */
static void assert_same_membership(const struct shape *moved, const struct shape *shape,
                                   struct vec2 (*back)(struct vec2))
{
    unsigned seed = 14;
    int solid = 0;

    for (int i = 0; i < 3000; i++) {
        double a = random_between(&seed, -0.03, 0.03);
        double b = random_between(&seed, -0.03, 0.03);
        bool want = shape_contains(shape, back(at(a, b)), 1e-12);
        assert_int_equal(shape_contains(moved, at(a, b), 1e-12), want);
        solid += want;
    }
    assert_true(solid > 50 && solid < 2900);
}

static struct vec2 flip_a(struct vec2 p)
{
    return at(-p.a, p.b);
}

static struct vec2 flip_both(struct vec2 p)
{
    return at(-p.a, -p.b);
}

static struct vec2 turn_back(struct vec2 p)
{
    double c = cos(0.7);
    double s = sin(0.7);
    struct vec2 d = vec2_sub(p, at(0.002, 0.001));

    return at(0.002 + c * d.a + s * d.b, 0.001 - s * d.a + c * d.b);
}

static struct shape odd_shape(void)
{
    struct shape shape = l_shape(0.0011);

    take(&shape, disc(0.0085, 0.0027, 0.0013));
    return shape;
}

static void test_mirror_moves_every_point(void **state)
{
    struct shape shape = odd_shape();
    struct shape moved = odd_shape();

    (void)state;
    shape_mirror(&moved, true, false);
    assert_closed(&moved);
    assert_arcs_consistent(&moved);
    assert_same_membership(&moved, &shape, flip_a);
    shape_mirror(&moved, false, true);
    assert_closed(&moved);
    assert_arcs_consistent(&moved);
    assert_same_membership(&moved, &shape, flip_both);
    shape_free(&shape);
    shape_free(&moved);
}

static void test_turn_moves_every_point(void **state)
{
    struct shape shape = odd_shape();
    struct shape moved = odd_shape();

    (void)state;
    shape_turn(&moved, 0.7, at(0.002, 0.001));
    assert_closed(&moved);
    assert_arcs_consistent(&moved);
    assert_same_membership(&moved, &shape, turn_back);
    shape_free(&shape);
    shape_free(&moved);
}

static void test_mirrored_twice_is_bit_for_bit_the_same(void **state)
{
    struct shape shape = odd_shape();
    struct shape twice = odd_shape();

    (void)state;
    shape_mirror(&twice, true, false);
    shape_mirror(&twice, true, false);
    for (size_t o = 0; o < shape.count; o++)
        for (size_t k = 0; k < shape.outlines[o].count; k++) {
            const struct edge *p = &shape.outlines[o].edges[k];
            const struct edge *q = &twice.outlines[o].edges[k];
            assert_true(p->start.a == q->start.a && p->start.b == q->start.b);
            assert_true(p->centre.a == q->centre.a && p->centre.b == q->centre.b);
            assert_true(p->radius == q->radius && p->sweep == q->sweep);
        }
    shape_free(&shape);
    shape_free(&twice);
}

static void test_quarter_turn_keeps_faces_on_the_axes(void **state)
{
    struct shape shape = box(0.0013, 0.0027, 0.0171, 0.0083, 0);

    (void)state;
    shape_turn(&shape, PI / 2, at(0.0007, -0.0011));
    for (size_t k = 0; k < 4; k++) {
        struct vec2 d =
            vec2_sub(shape.outlines[0].edges[k].end, shape.outlines[0].edges[k].start);
        assert_true(d.a == 0 || d.b == 0);
    }
    shape_free(&shape);
}

static void test_bounds_hold_round_tops(void **state)
{
    struct shape shape = disc(0.0031, -0.0017, 0.0123);
    struct vec2 low;
    struct vec2 high;

    (void)state;
    shape_turn(&shape, 0.3, at(0.0031, -0.0017));
    take(&shape, disc(0.1, 0.1, 0.01)); /* cuts do not count */
    shape_bounds(&shape, &low, &high);
    assert_close(low.a, 0.0031 - 0.0123, 0, 1e-16);
    assert_close(high.a, 0.0031 + 0.0123, 0, 1e-16);
    assert_close(low.b, -0.0017 - 0.0123, 0, 1e-16);
    assert_close(high.b, -0.0017 + 0.0123, 0, 1e-16);
    shape_free(&shape);
    shape_bounds(&shape, &low, &high);
    assert_true(low.a == 0 && high.b == 0);
}

static enum status make_and_copy(struct shape *shape, struct shape *copy)
{
    struct shape bore = {0};
    enum status status = shape_init_polygon(shape, l_points, L_COUNT, 0.001, NULL);

    *copy = (struct shape){0};
    if (status == STATUS_OK)
        status = shape_init_disc(&bore, at(0.003, 0.003), 0.001);
    if (status == STATUS_OK)
        status = shape_cut(shape, &bore);
    if (status == STATUS_OK)
        status = shape_copy(copy, shape);
    shape_free(&bore);
    return status;
}

static void test_every_failed_allocation_is_reported(void **state)
{
    struct shape shape;
    struct shape copy;
    enum status status = STATUS_MEMORY;
    int failures = 0;

    (void)state;
    for (long k = 1; status != STATUS_OK; k++) {
        mem_fail_at(k);
        status = make_and_copy(&shape, &copy);
        mem_fail_at(0);
        failures += status == STATUS_MEMORY;
        assert_true(status == STATUS_OK || status == STATUS_MEMORY);
        shape_free(&shape);
        shape_free(&copy);
        shape_free(&copy);
    }
    assert_int_equal(failures, 11);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_sharp_box_has_four_lines),
        cmocka_unit_test(test_rounded_box_is_closed_and_tangent),
        cmocka_unit_test(test_box_rounded_by_half_its_side_drops_the_face),
        cmocka_unit_test(test_bad_boxes_are_refused),
        cmocka_unit_test(test_bad_discs_are_refused),
        cmocka_unit_test(test_disc_contains_what_its_radius_says),
        cmocka_unit_test(test_rounded_box_contains_what_its_distance_says),
        cmocka_unit_test(test_points_on_the_surface_belong_to_the_shape),
        cmocka_unit_test(test_tolerance_widens_the_shape),
        cmocka_unit_test(test_points_that_are_no_numbers_are_outside),
        cmocka_unit_test(test_flush_cut_leaves_no_film),
        cmocka_unit_test(test_cuts_side_by_side_leave_no_film),
        cmocka_unit_test(test_cut_is_copied),
        cmocka_unit_test(test_copy_is_deep),
        cmocka_unit_test(test_mirror_moves_every_point),
        cmocka_unit_test(test_turn_moves_every_point),
        cmocka_unit_test(test_mirrored_twice_is_bit_for_bit_the_same),
        cmocka_unit_test(test_quarter_turn_keeps_faces_on_the_axes),
        cmocka_unit_test(test_bounds_hold_round_tops),
        cmocka_unit_test(test_every_failed_allocation_is_reported),
    };

    return cmocka_run_group_tests(tests, NULL, NULL);
}
