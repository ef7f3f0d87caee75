/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Key points: where they are, what they snap and how much space is free there. */

#include "tests/mesh/test_shape_cases.h"

struct keys {
    struct key_point *items;
    size_t count;
};

static struct keys keys_of(const struct shape *shape)
{
    struct keys keys;

    assert_int_equal(shape_key_points(shape, &keys.items, &keys.count), STATUS_OK);
    return keys;
}

enum kind { SHARP, ROUND, FLAT };

static enum kind kind_of(const struct key_point *key)
{
    if (key->radius == 0)
        return SHARP;
    return isinf(key->radius) ? FLAT : ROUND;
}

static void assert_counts(const struct keys *keys, int sharp, int round, int flat)
{
    int n[3] = {0, 0, 0};

    for (size_t i = 0; i < keys->count; i++)
        n[kind_of(&keys->items[i])]++;
    if (n[SHARP] != sharp || n[ROUND] != round || n[FLAT] != flat)
        fail_msg("%d sharp, %d round, %d flat; want %d, %d, %d", n[SHARP], n[ROUND],
                 n[FLAT], sharp, round, flat);
}

/* The one key point at p. */
static struct key_point key_at(const struct keys *keys, double a, double b)
{
    struct key_point key = {.free_angle = -1};
    int found = 0;

    for (size_t i = 0; i < keys->count; i++)
        if (hypot(keys->items[i].at.a - a, keys->items[i].at.b - b) < 1e-12) {
            key = keys->items[i];
            found++;
        }
    if (found != 1)
        fail_msg("%d key points at (%g, %g)", found, a, b);
    return key;
}

static void assert_corner(const struct keys *keys, double a, double b, double free)
{
    struct key_point key = key_at(keys, a, b);

    assert_close(key.free_angle, free, 1e-9, 0);
    assert_true(key.radius == 0 && key.snap_a && key.snap_b);
}

static void assert_smooth(const struct keys *keys, double a, double b, double radius,
                          bool snap_a)
{
    struct key_point key = key_at(keys, a, b);

    assert_close(key.free_angle, PI, 0, 0);
    assert_true(key.radius == radius);
    assert_int_equal(key.snap_a, snap_a);
    assert_int_equal(key.snap_b, !snap_a);
}

static void finish(struct shape *shape, struct keys *keys)
{
    mem_free(keys->items);
    shape_free(shape);
}

static void test_sharp_box_has_square_corners_and_flat_faces(void **state)
{
    struct shape shape = box(-0.0123, 0.0041, 0.0371, 0.0095, 0);
    struct keys keys = keys_of(&shape);

    (void)state;
    assert_counts(&keys, 4, 0, 4);
    assert_corner(&keys, -0.0123, 0.0041, 1.5 * PI);
    assert_corner(&keys, 0.0371, 0.0041, 1.5 * PI);
    assert_corner(&keys, 0.0371, 0.0095, 1.5 * PI);
    assert_corner(&keys, -0.0123, 0.0095, 1.5 * PI);
    assert_smooth(&keys, 0.0124, 0.0041, (double)INFINITY, false);
    assert_smooth(&keys, 0.0371, 0.0068, (double)INFINITY, true);
    finish(&shape, &keys);
}

static void test_rounded_box_snaps_where_its_arcs_begin_and_end(void **state)
{
    struct shape shape = box(0.001, 0.002, 0.021, 0.012, 0.003);
    struct keys keys = keys_of(&shape);

    (void)state;
    assert_counts(&keys, 0, 8, 4);
    assert_smooth(&keys, 0.004, 0.002, 0.003, false);
    assert_smooth(&keys, 0.018, 0.012, 0.003, false);
    assert_smooth(&keys, 0.001, 0.005, 0.003, true);
    assert_smooth(&keys, 0.021, 0.009, 0.003, true);
    finish(&shape, &keys);
}

static void test_disc_snaps_its_four_tangents(void **state)
{
    struct shape shape = disc(0.0031, -0.0017, 0.0123);
    struct keys keys;

    (void)state;
    for (int i = 0; i < 2; i++) {
        keys = keys_of(&shape);
        assert_counts(&keys, 0, 4, 0);
        assert_smooth(&keys, 0.0154, -0.0017, 0.0123, true);
        assert_smooth(&keys, -0.0092, -0.0017, 0.0123, true);
        assert_smooth(&keys, 0.0031, 0.0106, 0.0123, false);
        assert_smooth(&keys, 0.0031, -0.0140, 0.0123, false);
        mem_free(keys.items);
        shape_turn(&shape, 0.83, at(0.0031, -0.0017)); /* ends move, tops do not */
    }
    shape_free(&shape);
}

static void test_bore_snaps_like_a_disc(void **state)
{
    struct shape shape = ring();
    struct keys keys = keys_of(&shape);

    (void)state;
    assert_counts(&keys, 0, 8, 0);
    assert_smooth(&keys, 0.0031 + 0.0077, -0.0017, 0.0077, true);
    assert_smooth(&keys, 0.0031, -0.0017 - 0.0077, 0.0077, false);
    finish(&shape, &keys);
}

static void test_notch_has_hollow_and_solid_corners(void **state)
{
    struct shape shape = notched_box();
    struct keys keys = keys_of(&shape);

    (void)state;
    /* top face in two pieces; three more faces, floor and two walls of the notch */
    assert_counts(&keys, 8, 0, 8);
    assert_corner(&keys, 0.007, 0.006, 0.5 * PI);
    assert_corner(&keys, 0.013, 0.006, 0.5 * PI);
    assert_corner(&keys, 0.007, 0.010, 1.5 * PI);
    assert_corner(&keys, 0.013, 0.010, 1.5 * PI);
    assert_smooth(&keys, 0.0035, 0.010, (double)INFINITY, false);
    assert_smooth(&keys, 0.0165, 0.010, (double)INFINITY, false);
    assert_smooth(&keys, 0.007, 0.008, (double)INFINITY, true);
    finish(&shape, &keys);
}

static void test_polygon_corners_have_their_angles(void **state)
{
    const struct vec2 p[4] = {{0, 0}, {0.011, 0.001}, {0.005, 0.004}, {0.002, 0.013}};
    struct shape shape = polygon(p, 4, 0);
    struct keys keys = keys_of(&shape);

    (void)state;
    assert_counts(&keys, 4, 0, 0);
    for (int i = 0; i < 4; i++) {
        struct vec2 u = vec2_sub(p[i], p[(i + 3) % 4]);
        struct vec2 v = vec2_sub(p[(i + 1) % 4], p[i]);
        double turn = atan2(vec2_cross(u, v), vec2_dot(u, v));
        assert_corner(&keys, p[i].a, p[i].b, PI + turn);
    }
    finish(&shape, &keys);
}

static void test_inner_corner_of_an_l_is_hollow(void **state)
{
    struct shape shape = l_shape(0);
    struct keys keys = keys_of(&shape);

    (void)state;
    assert_counts(&keys, 6, 0, 6);
    assert_corner(&keys, 0.0047, 0.005, 0.5 * PI);
    finish(&shape, &keys);
}

static void test_rounded_l_has_no_corner(void **state)
{
    struct shape shape = l_shape(0.0011);
    struct keys keys = keys_of(&shape);

    (void)state;
    assert_counts(&keys, 0, 12, 6);
    assert_smooth(&keys, 0.0047, 0.0061, 0.0011, true); /* the hollow arc's ends */
    assert_smooth(&keys, 0.0058, 0.005, 0.0011, false);
    finish(&shape, &keys);
}

/* Corners of 36 chords turn by 10 degrees, of 16 by 22.5. */
static void test_gentle_corners_are_smooth(void **state)
{
    const int counts[2] = {36, 16};
    const int corners[2] = {0, 16};
    struct vec2 points[36];

    (void)state;
    for (int k = 0; k < 2; k++) {
        struct shape shape;
        struct keys keys;
        for (int i = 0; i < counts[k]; i++) {
            double angle = 2 * PI * (i + 0.2) / counts[k];
            points[i] = at(0.013 * cos(angle), 0.013 * sin(angle));
        }
        shape = polygon(points, (size_t)counts[k], 0);
        keys = keys_of(&shape);
        assert_counts(&keys, corners[k], 0, 0);
        finish(&shape, &keys);
    }
}

/* A disc of radius r from which all above the line b = c is taken: chord and arc
 * enclose pi - acos(c/r) of solid, nearly straight for a shallow cut. */
static void test_cut_across_a_disc_has_sharp_crossings(void **state)
{
    double r = 0.009;
    double c = 0.004;
    double half = sqrt(r * r - c * c);
    struct shape shape = disc(0, 0, r);
    struct keys keys;

    (void)state;
    take(&shape, box(-0.02, c, 0.02, 0.03, 0));
    keys = keys_of(&shape);
    assert_counts(&keys, 2, 3, 1);
    assert_corner(&keys, half, c, PI + acos(c / r));
    assert_corner(&keys, -half, c, PI + acos(c / r));
    assert_smooth(&keys, 0, c, (double)INFINITY, false);
    assert_smooth(&keys, 0, -r, r, false);
    finish(&shape, &keys);
}

static void test_overlapping_bores_cross_in_ridges(void **state)
{
    double r = 0.005;
    double h = 0.004;
    double tip = sqrt(r * r - h * h);
    struct shape shape = box(-0.02, -0.02, 0.02, 0.02, 0);
    struct keys keys;

    (void)state;
    take(&shape, disc(-h, 0.003, r));
    take(&shape, disc(h, 0.003, r));
    keys = keys_of(&shape);
    assert_counts(&keys, 6, 6, 4); /* each bore loses the side inside the other */
    assert_corner(&keys, 0, 0.003 + tip, 2 * PI - 2 * acos(h / r));
    finish(&shape, &keys);
}

static void test_removed_corners_give_no_key_point(void **state)
{
    struct shape shape = box(0, 0, 0.020, 0.010, 0);
    struct keys keys;

    (void)state;
    take(&shape, box(0.015, 0.004, 0.030, 0.030, 0)); /* takes the top right corner */
    keys = keys_of(&shape);
    assert_counts(&keys, 6, 0, 6);
    assert_corner(&keys, 0.015, 0.004, 0.5 * PI);
    assert_corner(&keys, 0.015, 0.010, 1.5 * PI);
    assert_corner(&keys, 0.020, 0.004, 1.5 * PI);
    finish(&shape, &keys);
}

static void test_flush_cuts_give_no_corner_in_the_air(void **state)
{
    struct shape shape = box(0, 0, 0.020, 0.010, 0);
    struct keys keys;

    (void)state;
    take(&shape, box(0, 0.006, 0.010, 0.010, 0));
    take(&shape, box(0.010, 0.006, 0.015, 0.010, 0));
    keys = keys_of(&shape);
    assert_counts(&keys, 6, 0, 7); /* the step is made of two faces */
    assert_corner(&keys, 0, 0.006, 1.5 * PI);
    assert_corner(&keys, 0.015, 0.006, 0.5 * PI);
    assert_corner(&keys, 0.015, 0.010, 1.5 * PI);
    finish(&shape, &keys);
}

static void test_cut_that_only_touches_changes_nothing(void **state)
{
    const struct vec2 tip[3] = {{0.012, 0.010}, {0.015, 0.013}, {0.011, 0.014}};
    struct shape shape = box(0, 0, 0.020, 0.010, 0);
    struct keys keys;

    (void)state;
    take(&shape, polygon(tip, 3, 0));
    keys = keys_of(&shape);
    assert_counts(&keys, 4, 0, 4);
    assert_smooth(&keys, 0.010, 0.010, (double)INFINITY, false);
    finish(&shape, &keys);
}

static void test_turned_box_keeps_its_corners(void **state)
{
    struct shape shape = box(0.0013, 0.0027, 0.0171, 0.0083, 0);
    struct keys keys;

    (void)state;
    shape_turn(&shape, 0.41, at(0.0013, 0.0027));
    keys = keys_of(&shape);
    assert_counts(&keys, 4, 0, 0);
    assert_corner(&keys, 0.0013 + 0.0158 * cos(0.41), 0.0027 + 0.0158 * sin(0.41),
                  1.5 * PI);
    finish(&shape, &keys);
}

static struct shape busy_shape(void)
{
    struct shape shape = box(-0.015, -0.012, 0.014, 0.013, 0.004);

    take(&shape, disc(-0.003, 0.002, 0.0041));
    take(&shape, disc(0.001, 0.0045, 0.0039));
    take(&shape, box(0.008, -0.02, 0.011, 0.001, 0.001));
    take(&shape, l_shape(0));
    return shape;
}

static void test_mirror_image_has_mirrored_key_points(void **state)
{
    struct shape shape = busy_shape();
    struct shape image = busy_shape();
    struct keys keys = keys_of(&shape);
    struct keys mirrored;

    (void)state;
    shape_mirror(&image, true, false);
    mirrored = keys_of(&image);
    assert_int_equal(mirrored.count, keys.count);
    assert_true(keys.count > 15);
    for (size_t i = 0; i < keys.count; i++) {
        const struct key_point *key = &keys.items[i];
        struct key_point other = key_at(&mirrored, -key->at.a, key->at.b);
        assert_close(other.free_angle, key->free_angle, 1e-9, 0);
        assert_true(other.radius == key->radius);
        assert_true(other.snap_a == key->snap_a && other.snap_b == key->snap_b);
    }
    mem_free(mirrored.items);
    shape_free(&image);
    finish(&shape, &keys);
}

static void test_key_points_lie_on_the_surface(void **state)
{
    struct shape shape = busy_shape();
    struct keys keys = keys_of(&shape);

    (void)state;
    for (size_t i = 0; i < keys.count; i++) {
        struct vec2 p = keys.items[i].at;
        int solid = 0;
        assert_true(shape_contains(&shape, p, TOLERANCE));
        for (int k = 0; k < 360; k++) {
            double angle = (k + 0.5) * PI / 180;
            struct vec2 step = {1e-8 * cos(angle), 1e-8 * sin(angle)};
            solid += shape_contains(&shape, vec2_add(p, step), 0);
        }
        assert_close((360 - solid) * PI / 180, keys.items[i].free_angle, 0, 0.02);
    }
    finish(&shape, &keys);
}

static void test_empty_shape_has_none(void **state)
{
    struct shape shape = {0};
    struct keys keys = keys_of(&shape);

    (void)state;
    assert_null(keys.items);
    assert_int_equal(keys.count, 0);
}

static void test_every_failed_allocation_is_reported(void **state)
{
    struct shape shape = busy_shape();
    struct keys keys;
    enum status status = STATUS_MEMORY;
    int failures = 0;

    (void)state;
    for (long k = 1; status != STATUS_OK; k++) {
        mem_fail_at(k);
        status = shape_key_points(&shape, &keys.items, &keys.count);
        mem_fail_at(0);
        failures += status == STATUS_MEMORY;
        assert_true(status == STATUS_OK || (keys.count == 0 && keys.items == NULL));
    }
    assert_true(failures >= 3);
    finish(&shape, &keys);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_sharp_box_has_square_corners_and_flat_faces),
        cmocka_unit_test(test_rounded_box_snaps_where_its_arcs_begin_and_end),
        cmocka_unit_test(test_disc_snaps_its_four_tangents),
        cmocka_unit_test(test_bore_snaps_like_a_disc),
        cmocka_unit_test(test_notch_has_hollow_and_solid_corners),
        cmocka_unit_test(test_polygon_corners_have_their_angles),
        cmocka_unit_test(test_inner_corner_of_an_l_is_hollow),
        cmocka_unit_test(test_rounded_l_has_no_corner),
        cmocka_unit_test(test_gentle_corners_are_smooth),
        cmocka_unit_test(test_cut_across_a_disc_has_sharp_crossings),
        cmocka_unit_test(test_overlapping_bores_cross_in_ridges),
        cmocka_unit_test(test_removed_corners_give_no_key_point),
        cmocka_unit_test(test_flush_cuts_give_no_corner_in_the_air),
        cmocka_unit_test(test_cut_that_only_touches_changes_nothing),
        cmocka_unit_test(test_turned_box_keeps_its_corners),
        cmocka_unit_test(test_mirror_image_has_mirrored_key_points),
        cmocka_unit_test(test_key_points_lie_on_the_surface),
        cmocka_unit_test(test_empty_shape_has_none),
        cmocka_unit_test(test_every_failed_allocation_is_reported),
    };

    return cmocka_run_group_tests(tests, NULL, NULL);
}
