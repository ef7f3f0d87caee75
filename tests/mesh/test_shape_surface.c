/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Points of the surface. */

#include "tests/mesh/test_shape_cases.h"

struct surface {
    struct surface_point *items;
    size_t count;
};

static struct surface surface_of(const struct shape *shape, double spacing)
{
    struct surface s;

    assert_int_equal(shape_surface(shape, spacing, &s.items, &s.count), STATUS_OK);
    return s;
}

static void finish(struct shape *shape, struct surface *surface)
{
    mem_free(surface->items);
    shape_free(shape);
}

/* Solid just inside, free just outside, normal of length one. */
static void assert_on_surface(const struct shape *shape, const struct surface *surface)
{
    for (size_t i = 0; i < surface->count; i++) {
        const struct surface_point *p = &surface->items[i];
        struct vec2 step = vec2_scale(p->normal, 1e-8);
        assert_close(vec2_length(p->normal), 1, 1e-14, 0);
        assert_true(shape_contains(shape, vec2_sub(p->at, step), 0));
        assert_false(shape_contains(shape, vec2_add(p->at, step), 0));
    }
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

static void test_normals_point_out_of_the_solid(void **state)
{
    struct shape shape[4] = {ring(), notched_box(), l_shape(0.0011), busy_shape()};

    (void)state;
    for (int i = 0; i < 4; i++) {
        struct surface surface = surface_of(&shape[i], 0.00013);
        assert_true(surface.count > 300);
        assert_on_surface(&shape[i], &surface);
        shape_mirror(&shape[i], false, true);
        mem_free(surface.items);
        surface = surface_of(&shape[i], 0.0007);
        assert_on_surface(&shape[i], &surface);
        finish(&shape[i], &surface);
    }
}

/* An edge of length L gives ceil(L / spacing) points. */
static void test_box_has_its_perimeter_in_steps(void **state)
{
    struct shape shape = box(0, 0, 0.020, 0.010, 0);
    struct surface surface = surface_of(&shape, 0.0007);

    (void)state;
    assert_int_equal(surface.count, 2 * (29 + 15));
    for (size_t i = 0; i < surface.count; i++)
        assert_true(isinf(surface.items[i].radius));
    finish(&shape, &surface);
}

static void test_corner_distance_of_a_box_is_to_its_nearest_corner(void **state)
{
    struct shape shape = box(0, 0, 0.020, 0.010, 0);
    struct surface surface = surface_of(&shape, 0.0007);

    (void)state;
    for (size_t i = 0; i < surface.count; i++) {
        struct vec2 p = surface.items[i].at;
        double want = hypot(fmin(p.a, 0.020 - p.a), fmin(p.b, 0.010 - p.b));
        assert_close(surface.items[i].corner_distance, want, 1e-14, 0);
    }
    finish(&shape, &surface);
}

static void test_hollow_corners_do_not_stand_out(void **state)
{
    struct shape shape = box(0, 0, 0.020, 0.010, 0.001);
    struct surface surface;

    (void)state;
    take(&shape, box(0.008, 0.004, 0.012, 0.007, 0));
    surface = surface_of(&shape, 0.0007);
    for (size_t i = 0; i < surface.count; i++)
        assert_true(isinf(surface.items[i].corner_distance));
    finish(&shape, &surface);
}

static void test_ring_has_the_radii_of_its_circles(void **state)
{
    struct shape shape = ring();
    struct surface surface = surface_of(&shape, 0.0004);
    double outer = 0;
    double inner = 0;

    (void)state;
    for (size_t i = 0; i < surface.count; i++) {
        const struct surface_point *p = &surface.items[i];
        struct vec2 d = vec2_sub(p->at, at(0.0031, -0.0017));
        bool is_outer = vec2_length(d) > 0.01;
        assert_close(vec2_length(d), p->radius, 1e-14, 0);
        assert_close(vec2_dot(d, p->normal), is_outer ? p->radius : -p->radius, 1e-14,
                     0);
        outer += is_outer;
        inner += !is_outer;
    }
    assert_true(outer == 4 * ceil(0.5 * PI * 0.0123 / 0.0004));
    assert_true(inner == 4 * ceil(0.5 * PI * 0.0077 / 0.0004));
    finish(&shape, &surface);
}

static void test_points_are_at_most_a_spacing_apart(void **state)
{
    struct shape shape = busy_shape();
    struct surface fine = surface_of(&shape, 0.00005);
    struct surface coarse = surface_of(&shape, 0.0009);

    (void)state;
    for (size_t i = 0; i < fine.count; i++) {
        double nearest = (double)INFINITY;
        for (size_t k = 0; k < coarse.count; k++) {
            struct vec2 d = vec2_sub(coarse.items[k].at, fine.items[i].at);
            nearest = fmin(nearest, vec2_length(d));
        }
        assert_at_most(nearest, 0.00045);
    }
    mem_free(fine.items);
    finish(&shape, &coarse);
}

static void test_same_arguments_give_the_same_points(void **state)
{
    struct shape shape = busy_shape();
    struct surface first = surface_of(&shape, 0.0003);
    struct surface again = surface_of(&shape, 0.0003);

    (void)state;
    assert_int_equal(first.count, again.count);
    for (size_t i = 0; i < first.count; i++)
        assert_true(first.items[i].at.a == again.items[i].at.a &&
                    first.items[i].at.b == again.items[i].at.b);
    mem_free(again.items);
    finish(&shape, &first);
}

/* Chords of a circle tell its radius, exactly when they are equal. */
static void test_chords_of_a_circle_have_its_radius(void **state)
{
    struct vec2 points[72];
    struct shape shape;
    struct surface surface;

    (void)state;
    for (int i = 0; i < 72; i++)
        points[i] = at(0.013 * cos(i * PI / 36), 0.013 * sin(i * PI / 36));
    shape = polygon(points, 72, 0);
    surface = surface_of(&shape, 0.0004);
    for (size_t i = 0; i < surface.count; i++)
        assert_close(surface.items[i].radius, 0.013, 1e-12, 0);
    finish(&shape, &surface);
}

/* A long face between two curves of short chords stays flat. */
static void test_face_beside_chords_stays_flat(void **state)
{
    struct vec2 points[38];
    struct shape shape;
    struct surface surface;
    int flat = 0;

    (void)state;
    for (int i = 0; i < 19; i++) {
        double angle = (i - 9) * PI / 18;
        points[i] = at(0.02 + 0.003 * cos(angle), 0.003 * sin(angle));
        points[19 + i] = at(-0.02 - 0.003 * cos(angle), -0.003 * sin(angle));
    }
    shape = polygon(points, 38, 0);
    surface = surface_of(&shape, 0.0002);
    for (size_t i = 0; i < surface.count; i++) {
        bool is_flat = fabs(surface.items[i].at.a) < 0.02;
        flat += is_flat;
        assert_int_equal(isinf(surface.items[i].radius) != 0, is_flat);
    }
    assert_int_equal(flat, 400);
    finish(&shape, &surface);
}

/* Two points a sixth of the chord from its ends, whatever the spacing. */
static void test_chords_of_a_curve_have_two_points(void **state)
{
    struct vec2 points[72];
    struct shape shape;
    struct surface surface;
    const double chord = 2 * 0.013 * sin(PI / 72);

    (void)state;
    for (int i = 0; i < 72; i++)
        points[i] = at(0.013 * cos(i * PI / 36), 0.013 * sin(i * PI / 36));
    shape = polygon(points, 72, 0);
    surface = surface_of(&shape, 0.00001);
    assert_int_equal(surface.count, 144);
    for (size_t i = 0; i < surface.count; i++) {
        const struct surface_point *p = &surface.items[i];
        const double middle = 0.013 * cos(PI / 72);
        assert_close(vec2_length(p->at), hypot(middle, chord / 3), 1e-12, 0);
        assert_true(p->reach == 0 && p->bend == 0);
    }
    finish(&shape, &surface);
}

static void assert_on_a_circle(const struct surface_point *p, double s)
{
    const struct vec2 place = surface_point_along(p, s);
    const bool is_outer = p->radius > 0.01;
    assert_close(vec2_length(vec2_sub(place, at(0.0031, -0.0017))), p->radius, 1e-14,
                 0);
    assert_close(p->bend, (is_outer ? 1 : -1) / p->radius, 1e-14, 0);
    assert_close(vec2_length(vec2_sub(place, p->at)),
                 2 * p->radius * sin(fabs(s) / (2 * p->radius)), 1e-9, 1e-18);
}

static void test_stretches_follow_arcs_exactly(void **state)
{
    struct shape shape = ring();
    struct surface surface = surface_of(&shape, 0.0031);
    double length = 0;

    (void)state;
    for (size_t i = 0; i < surface.count; i++) {
        const struct surface_point *p = &surface.items[i];
        length += 2 * p->reach;
        assert_on_a_circle(p, p->reach);
        assert_on_a_circle(p, -0.37 * p->reach);
    }
    assert_close(length, 2 * PI * (0.0123 + 0.0077), 1e-13, 0);
    finish(&shape, &surface);
}

/* Each stretch ends where the next begins, anticlockwise; four times it turns a corner. */
static void test_stretches_of_a_box_join(void **state)
{
    struct shape shape = box(0, 0, 0.020, 0.010, 0.002);
    struct surface surface = surface_of(&shape, 0.0007);

    (void)state;
    for (size_t i = 0; i < surface.count; i++) {
        const struct surface_point *p = &surface.items[i];
        const struct surface_point *q = &surface.items[(i + 1) % surface.count];
        struct vec2 apart = vec2_sub(surface_point_along(p, p->reach),
                                     surface_point_along(q, -q->reach));
        assert_close(vec2_length(apart), 0, 0, 1e-16);
    }
    finish(&shape, &surface);
}

static void test_nearest_sharp_corner_is_named(void **state)
{
    struct shape shape = box(0, 0, 0.020, 0.010, 0);
    struct surface surface = surface_of(&shape, 0.0007);

    (void)state;
    for (size_t i = 0; i < surface.count; i++) {
        const struct surface_point *p = &surface.items[i];
        struct vec2 corner =
            at(p->at.a > 0.010 ? 0.020 : 0, p->at.b > 0.005 ? 0.010 : 0);
        if (fabs(p->at.a - 0.010) > 1e-9 && fabs(p->at.b - 0.005) > 1e-9)
            assert_close(vec2_length(vec2_sub(p->corner, corner)), 0, 0, 1e-16);
        assert_close(vec2_length(vec2_sub(p->at, p->corner)), p->corner_distance, 1e-14,
                     0);
    }
    finish(&shape, &surface);
}

static void test_bad_spacings_are_refused(void **state)
{
    struct shape shape = ring();
    struct surface s;

    (void)state;
    assert_int_equal(shape_surface(&shape, 0, &s.items, &s.count), STATUS_SIZE);
    assert_int_equal(shape_surface(&shape, -1, &s.items, &s.count), STATUS_SIZE);
    assert_int_equal(shape_surface(&shape, 1e-14, &s.items, &s.count), STATUS_SIZE);
    assert_int_equal(shape_surface(&shape, (double)NAN, &s.items, &s.count),
                     STATUS_SIZE);
    assert_null(s.items);
    assert_int_equal(s.count, 0);
    shape_free(&shape);
}

static void test_every_failed_allocation_is_reported(void **state)
{
    struct shape shape = busy_shape();
    struct surface s;
    enum status status = STATUS_MEMORY;
    int failures = 0;

    (void)state;
    for (long k = 1; status != STATUS_OK; k++) {
        mem_fail_at(k);
        status = shape_surface(&shape, 0.001, &s.items, &s.count);
        mem_fail_at(0);
        failures += status == STATUS_MEMORY;
        assert_true(status == STATUS_OK || (s.count == 0 && s.items == NULL));
    }
    assert_true(failures >= 6);
    finish(&shape, &s);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_normals_point_out_of_the_solid),
        cmocka_unit_test(test_box_has_its_perimeter_in_steps),
        cmocka_unit_test(test_corner_distance_of_a_box_is_to_its_nearest_corner),
        cmocka_unit_test(test_hollow_corners_do_not_stand_out),
        cmocka_unit_test(test_ring_has_the_radii_of_its_circles),
        cmocka_unit_test(test_points_are_at_most_a_spacing_apart),
        cmocka_unit_test(test_same_arguments_give_the_same_points),
        cmocka_unit_test(test_chords_of_a_circle_have_its_radius),
        cmocka_unit_test(test_face_beside_chords_stays_flat),
        cmocka_unit_test(test_chords_of_a_curve_have_two_points),
        cmocka_unit_test(test_stretches_follow_arcs_exactly),
        cmocka_unit_test(test_stretches_of_a_box_join),
        cmocka_unit_test(test_nearest_sharp_corner_is_named),
        cmocka_unit_test(test_bad_spacings_are_refused),
        cmocka_unit_test(test_every_failed_allocation_is_reported),
    };

    return cmocka_run_group_tests(tests, NULL, NULL);
}
