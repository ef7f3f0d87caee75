/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Do two shapes meet? */

#include "tests/mesh/test_shape_cases.h"

/* Frees both. Asked both ways round; the place given must belong to both. */
static void assert_meets(const char *what, struct shape p, struct shape q, bool want)
{
    const struct shape *pair[3] = {&p, &q, &p};

    for (int i = 0; i < 2; i++) {
        struct vec2 where = at((double)NAN, (double)NAN);
        bool meets = !want;
        assert_int_equal(shape_meets(pair[i], pair[i + 1], TOLERANCE, &meets, &where),
                         STATUS_OK);
        if (meets != want)
            fail_msg("%s: %s", what, meets ? "meet" : "do not meet");
        if (meets)
            assert_true(shape_contains(&p, where, TOLERANCE) &&
                        shape_contains(&q, where, TOLERANCE));
    }
    shape_free(&p);
    shape_free(&q);
}

static void test_boxes(void **state)
{
    const double r = 0.001;

    (void)state;
    assert_meets("apart", box(0, 0, 1, 1, 0), box(1.1, 0, 2, 1, 0), false);
    assert_meets("sharing a face", box(0, 0, 1, 1, 0), box(1, 0, 2, 1, 0), true);
    assert_meets("sharing part of a face", box(0, 0, 1, 1, 0), box(1, 0.3, 2, 0.6, 0),
                 true);
    assert_meets("corner to corner", box(0, 0, 1, 1, 0), box(1, 1, 2, 2, 0), true);
    assert_meets("rounded corners facing", box(0, 0, 1, 1, r), box(1, 1, 2, 2, r),
                 false);
    assert_meets("crossing", box(0, 0, 1, 1, 0), box(0.4, -1, 0.6, 2, 0), true);
    assert_meets("inside", box(0, 0, 1, 1, 0), box(0.4, 0.4, 0.6, 0.6, r), true);
    assert_meets("the same", box(0, 0, 1, 1, r), box(0, 0, 1, 1, r), true);
    assert_meets("overlapping bounds only", l_shape(0),
                 box(0.006, 0.006, 0.02, 0.02, 0), false);
}

static void test_gaps_near_the_tolerance(void **state)
{
    const double t = TOLERANCE;

    (void)state;
    assert_meets("gap half a tolerance", box(0, 0, 1, 1, 0),
                 box(1 + 0.5 * t, 0.2, 2, 0.8, 0), true);
    assert_meets("gap two tolerances", box(0, 0, 1, 1, 0),
                 box(1 + 2 * t, 0.2, 2, 0.8, 0), false);
    assert_meets("discs half a tolerance apart", disc(0, 0, 0.3),
                 disc((0.5 + 0.5 * t) * cos(0.4), (0.5 + 0.5 * t) * sin(0.4), 0.2),
                 true);
    assert_meets("discs five tolerances apart", disc(0, 0, 0.3),
                 disc((0.5 + 5 * t) * cos(0.4), (0.5 + 5 * t) * sin(0.4), 0.2), false);
}

static void test_discs(void **state)
{
    (void)state;
    assert_meets("apart", disc(0, 0, 0.3), disc(0.45, 0.45, 0.3), false);
    assert_meets("tangent on an axis", disc(0, 0, 0.3), disc(0.5, 0, 0.2), true);
    assert_meets("tangent off the axes", disc(0, 0, 0.3), disc(0.4, 0.3, 0.2), true);
    assert_meets("crossing", disc(0, 0, 0.3), disc(0.35, 0.2, 0.2), true);
    assert_meets("inside", disc(0, 0, 0.3), disc(0.05, 0.02, 0.2), true);
    assert_meets("concentric", disc(0, 0, 0.3), disc(0, 0, 0.2), true);
    assert_meets("the same", disc(0.1, 0.2, 0.3), disc(0.1, 0.2, 0.3), true);
    assert_meets("tangent to a face", disc(0, 0, 0.3), box(-1, 0.3, 0.7, 1, 0), true);
    assert_meets("short of a face", disc(0, 0, 0.3), box(-1, 0.3001, 0.7, 1, 0), false);
    assert_meets("short of a corner", disc(0, 0, 0.3), box(0.22, 0.22, 1, 1, 0), false);
    assert_meets("over a corner", disc(0, 0, 0.3), box(0.21, 0.21, 1, 1, 0), true);
}

static struct shape tube(double inner)
{
    struct shape shape = disc(0.01, 0.02, 0.4);

    take(&shape, disc(0.01, 0.02, inner));
    return shape;
}

static void test_parts_in_a_bore(void **state)
{
    (void)state;
    assert_meets("free in the bore", tube(0.3), disc(0.05, 0.04, 0.2), false);
    assert_meets("concentric, free", tube(0.3), disc(0.01, 0.02, 0.29), false);
    assert_meets("filling the bore", tube(0.3), disc(0.01, 0.02, 0.3), true);
    assert_meets("touching the bore", tube(0.3), disc(0.11, 0.02, 0.2), true);
    assert_meets("through the wall", tube(0.3), box(0.1, 0, 0.5, 0.04, 0), true);
    assert_meets("box free in the bore", tube(0.3), box(-0.1, -0.1, 0.1, 0.1, 0.01),
                 false);
    assert_meets("within the wall", tube(0.3), disc(0.36, 0.02, 0.02), true);
    assert_meets("around the tube", tube(0.3), box(-1, -1, 1, 1, 0), true);
    assert_meets("tube in a tube", tube(0.35), tube(0.3), true);
}

static void test_tubes_one_in_the_other(void **state)
{
    struct shape inner = disc(0.01, 0.02, 0.29);

    (void)state;
    take(&inner, disc(0.01, 0.02, 0.2));
    assert_meets("nested", tube(0.3), inner, false);
}

/* All corners of either shape are cut away; they meet in the middle only. */
static void test_shapes_whose_corners_are_gone(void **state)
{
    struct shape p = box(0, 0, 0.3, 0.1, 0);
    struct shape q = box(0.1, -0.1, 0.2, 0.2, 0);

    (void)state;
    take(&p, box(-0.1, -0.1, 0.05, 0.3, 0));
    take(&p, box(0.25, -0.1, 0.4, 0.3, 0));
    take(&q, box(0, -0.2, 0.3, -0.05, 0));
    take(&q, box(0, 0.15, 0.3, 0.3, 0));
    assert_meets("cross", p, q, true);
}

/* A square left between four cuts: no end of an edge is near it. */
static struct shape island(void)
{
    struct shape shape = box(0, 0, 1, 1, 0);

    take(&shape, box(-1, -1, 0.45, 2, 0));
    take(&shape, box(0.55, -1, 2, 2, 0));
    take(&shape, box(-1, -1, 2, 0.45, 0));
    take(&shape, box(-1, 0.55, 2, 2, 0));
    return shape;
}

static void test_island_between_cuts(void **state)
{
    (void)state;
    assert_meets("around it", island(), disc(0.5, 0.5, 0.4), true);
    assert_meets("on it", island(), disc(0.5, 0.5, 0.01), true);
    assert_meets("beside it", island(), disc(0.2, 0.5, 0.2), false);
}

static void test_parts_in_a_notch(void **state)
{
    (void)state;
    assert_meets("free in the notch", notched_box(), box(0.008, 0.007, 0.012, 0.02, 0),
                 false);
    assert_meets("on the floor", notched_box(), box(0.008, 0.006, 0.012, 0.02, 0),
                 true);
    assert_meets("filling it", notched_box(), box(0.007, 0.006, 0.013, 0.010, 0), true);
    assert_meets("lid over it", notched_box(), box(0.005, 0.010, 0.015, 0.012, 0),
                 true);
    assert_meets("plug within it", notched_box(), box(0.008, 0.010, 0.012, 0.012, 0),
                 false);
    assert_meets("filling flush cuts", notched_box(),
                 box(0.009, 0.0065, 0.011, 0.01, 0), false);
}

/* The contact of two faces lies where one of them is cut away. */
static void test_contact_that_was_cut_away(void **state)
{
    struct shape p = box(0, 0, 1, 1, 0);

    (void)state;
    take(&p, box(0.9, 0.2, 1.5, 0.8, 0));
    assert_meets("facing the notch", p, box(1, 0.3, 2, 0.7, 0), false);
    p = box(0, 0, 1, 1, 0);
    take(&p, box(0.9, 0.2, 1.5, 0.8, 0));
    assert_meets("reaching its rim", p, box(1, 0.3, 2, 0.85, 0), true);
}

/* Two discs meet if their centres are no further apart than their radii add up to. */
static void test_random_discs_meet_by_distance(void **state)
{
    unsigned seed = 31;
    int meeting = 0;

    (void)state;
    for (int i = 0; i < 400; i++) {
        double a = random_between(&seed, -1, 1);
        double b = random_between(&seed, -1, 1);
        double r = random_between(&seed, 0.05, 0.6);
        bool want = hypot(a - 0.1, b + 0.2) <= r + 0.3;
        meeting += want;
        assert_meets("random discs", disc(a, b, r), disc(0.1, -0.2, 0.3), want);
    }
    assert_true(meeting > 100 && meeting < 300);
}

/* A disc meets a tube unless it is within the bore or beyond the rim. */
static void test_random_discs_meet_a_tube_by_distance(void **state)
{
    unsigned seed = 32;
    int meeting = 0;

    (void)state;
    for (int i = 0; i < 400; i++) {
        double a = random_between(&seed, -0.6, 0.6);
        double b = random_between(&seed, -0.6, 0.6);
        double r = random_between(&seed, 0.02, 0.2);
        double d = hypot(a - 0.01, b - 0.02);
        bool want = d + r >= 0.3 && d - r <= 0.4;
        meeting += want;
        assert_meets("random disc", disc(a, b, r), tube(0.3), want);
    }
    assert_true(meeting > 100 && meeting < 350);
}

/* If any point of a dense sample belongs to both, they meet; if they do not meet, no
 * point may. */
static void test_turned_shapes_meet_if_a_sample_does(void **state)
{
    unsigned seed = 33;
    int apart = 0;

    (void)state;
    for (int i = 0; i < 60; i++) {
        struct shape p = notched_box();
        struct shape q = l_shape(i % 2 == 0 ? 0 : 0.0011);
        bool sampled = false;
        shape_turn(&q, random_between(&seed, 0, 6), at(0, 0));
        shape_turn(&q, random_between(&seed, 0, 6), at(0.012, 0.009));
        for (int k = 0; k < 4000 && !sampled; k++) {
            struct vec2 x =
                at(random_between(&seed, 0, 0.02), random_between(&seed, 0, 0.01));
            sampled = shape_contains(&p, x, 0) && shape_contains(&q, x, 0);
        }
        apart += !sampled;
        if (sampled)
            assert_meets("sampled", p, q, true);
        else {
            bool meets;
            assert_int_equal(shape_meets(&p, &q, 0, &meets, NULL), STATUS_OK);
            assert_false(meets); /* an overlap of 1e-3 of the box would be missed */
            shape_free(&p);
            shape_free(&q);
        }
    }
    assert_true(apart > 5 && apart < 55);
}

static void test_bad_tolerances_are_refused(void **state)
{
    struct shape p = disc(0, 0, 0.3);
    struct shape empty = {0};
    bool meets = true;

    (void)state;
    assert_int_equal(shape_meets(&p, &p, -1, &meets, NULL), STATUS_SIZE);
    assert_false(meets);
    assert_int_equal(shape_meets(&p, &p, (double)NAN, &meets, NULL), STATUS_SIZE);
    assert_int_equal(shape_meets(&p, &empty, TOLERANCE, &meets, NULL), STATUS_OK);
    assert_false(meets);
    shape_free(&p);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_boxes),
        cmocka_unit_test(test_gaps_near_the_tolerance),
        cmocka_unit_test(test_discs),
        cmocka_unit_test(test_parts_in_a_bore),
        cmocka_unit_test(test_tubes_one_in_the_other),
        cmocka_unit_test(test_shapes_whose_corners_are_gone),
        cmocka_unit_test(test_island_between_cuts),
        cmocka_unit_test(test_parts_in_a_notch),
        cmocka_unit_test(test_contact_that_was_cut_away),
        cmocka_unit_test(test_random_discs_meet_by_distance),
        cmocka_unit_test(test_random_discs_meet_a_tube_by_distance),
        cmocka_unit_test(test_turned_shapes_meet_if_a_sample_does),
        cmocka_unit_test(test_bad_tolerances_are_refused),
    };

    return cmocka_run_group_tests(tests, NULL, NULL);
}
