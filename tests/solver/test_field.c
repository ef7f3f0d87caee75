/* SPDX-License-Identifier: GPL-3.0-or-later */

/* The interpolated field: gradient and potential agree, nothing jumps at cell borders,
 * parts and the outside are told apart, and what lies behind a thin plate is not seen. */

#include "tests/support/assert_close.h"

#include "shared/constants.h"
#include "shared/mem.h"
#include "solver/plane_solution.h"
#include "tests/support/scene.h"

#define KIND  PLANE_ELECTRIC_ACROSS
#define VOLTS 385.7

/* A rounded bar and a rod in an earthed region 38 mm by 26 mm. */
static void rods(struct geometry *g, struct plane_solution *s)
{
    scene_begin(g, VOLTS, false);
    struct plane *p = scene_plane(g, KIND, -7e-3, 31e-3, -9e-3, 17e-3);
    scene_box(p, "bar", 1.0, -3e-3, 2e-3, 4e-3, 9e-3, 1e-3);
    scene_disc(p, "rod", -0.6, 14.3e-3, 3.1e-3, 4.7e-3);
    assert_int_equal(plane_solve(g, KIND,
                                 &(struct grid_request){.fineness = 1.0, .level = 1}, s,
                                 NULL),
                     STATUS_OK);
}

static struct field_value value_at(const struct plane_solution *s, double a, double b)
{
    struct field_value v;
    assert_int_equal(field_at(s->field, (struct vec2){a, b}, &v), STATUS_OK);
    return v;
}

/* A turned plane with a ball on the axis and a rounded rod that ends on it. */
static void ball_and_rod(struct geometry *g, struct plane_solution *s)
{
    scene_begin(g, VOLTS, false);
    struct plane *p = scene_turned(g, -7e-3, 31e-3, 0.0, 17e-3);
    scene_disc(p, "ball", -0.6, 14.3e-3, 0.0, 4.7e-3);
    scene_box(p, "rod", 1.0, -9e-3, -2e-3, -4e-3, 4e-3, 1.3e-3);
    assert_int_equal(plane_solve(g, PLANE_ELECTRIC_TURNED,
                                 &(struct grid_request){.fineness = 1.0, .level = 1}, s,
                                 NULL),
                     STATUS_OK);
}

static struct vec2 scatter(int k)
{
    return (struct vec2){12e-3 + 18.5e-3 * sin(2.385 * k),
                         4e-3 + 12.5e-3 * sin(1.711 * k)};
}

/* Central differences of the potential with error h^2 plus round-off/h; points whose
 * stencil reaches into another cell are still covered (two continuous derivatives). */
static void gradient_is_that_of_the_potential(const struct plane_solution *s)
{
    const double h = 1e-6;
    int free_points = 0;
    for (int k = 0; k < 300; k++) {
        const struct vec2 p = scatter(k);
        const struct field_value v = value_at(s, p.a, p.b);
        const struct field_value e = value_at(s, p.a + h, p.b);
        const struct field_value w = value_at(s, p.a - h, p.b);
        const struct field_value n = value_at(s, p.a, p.b + h);
        const struct field_value o = value_at(s, p.a, p.b - h);
        if (v.part >= 0 || e.part >= 0 || w.part >= 0 || n.part >= 0 || o.part >= 0)
            continue;
        free_points++;
        assert_close((e.potential - w.potential) / (2.0 * h), v.gradient.a, 0.0,
                     1e-5 * VOLTS / 5e-3);
        assert_close((n.potential - o.potential) / (2.0 * h), v.gradient.b, 0.0,
                     1e-5 * VOLTS / 5e-3);
    }
    assert_true(free_points > 150);
}

static void test_gradient_is_that_of_the_potential(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    rods(&g, &s);
    gradient_is_that_of_the_potential(&s);
    plane_solution_free(&s);
    geometry_free(&g);
    ball_and_rod(&g, &s);
    gradient_is_that_of_the_potential(&s);
    plane_solution_free(&s);
    geometry_free(&g);
}

/* Just left and right of every line at a few heights. */
static void nothing_jumps_at_cell_borders(const struct plane_solution *s)
{
    const double step = 1e-12;
    int free_points = 0;
    for (int i = 1; i + 1 < s->grid.na; i++)
        for (int k = 0; k < 9; k++) {
            const double a = s->grid.a[i];
            const double low = s->grid.b[0], high = s->grid.b[s->grid.nb - 1];
            const double b = low + (high - low) * (0.043 + 0.111 * k);
            const struct field_value v = value_at(s, a - step, b);
            const struct field_value w = value_at(s, a + step, b);
            if (v.part >= 0 || w.part >= 0)
                continue;
            free_points++;
            assert_close(v.potential, w.potential, 0.0, 1e-9 * VOLTS);
            assert_close(v.gradient.a, w.gradient.a, 0.0, 1e-6 * VOLTS / 5e-3);
            assert_close(v.gradient.b, w.gradient.b, 0.0, 1e-6 * VOLTS / 5e-3);
        }
    assert_true(free_points > 100);
}

static void test_nothing_jumps_at_cell_borders(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    rods(&g, &s);
    nothing_jumps_at_cell_borders(&s);
    plane_solution_free(&s);
    geometry_free(&g);
    ball_and_rod(&g, &s);
    nothing_jumps_at_cell_borders(&s);
    plane_solution_free(&s);
    geometry_free(&g);
}

/* Along the axis of a turned plane, between rod and ball and behind it. */
static void test_field_on_the_axis_has_no_radial_part(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    ball_and_rod(&g, &s);
    for (int k = 0; k < 60; k++) {
        const double z =
            k < 40 ? -1.99e-3 + 11.5e-3 * k / 39.0 : 19.01e-3 + 0.6e-3 * (k - 40);
        const struct field_value v = value_at(&s, z, 0.0);
        assert_int_equal(v.part, -1);
        assert_close(v.gradient.b, 0.0, 0.0, 1e-12 * fabs(v.gradient.a));
        const struct field_value up = value_at(&s, z, 1e-6),
                                 down = value_at(&s, z, -1e-6);
        assert_close(up.potential, down.potential, 1e-15, 0.0);
        assert_close(up.gradient.b, -down.gradient.b, 1e-15, 0.0);
        assert_close(up.gradient.b, 0.0, 0.0, 1e-2 * fabs(v.gradient.a));
    }
    plane_solution_free(&s);
    geometry_free(&g);
}

/* The field of a conductor stands on its surface, up to the poles. */
static void test_field_stands_on_a_ball(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    ball_and_rod(&g, &s);
    for (int k = 0; k <= 60; k++) {
        const double angle = PI * k / 60.0, r = 4.7e-3;
        const struct vec2 at = {14.3e-3 + r * cos(angle),
                                k < 60 ? r * sin(angle) : 0.0};
        struct field_value v;
        assert_int_equal(field_at_surface(s.field, at, &v), STATUS_OK);
        assert_close(v.potential, -0.6 * VOLTS, 0.0, 1e-4 * VOLTS);
        const double along = v.gradient.b * cos(angle) - v.gradient.a * sin(angle);
        assert_at_most(fabs(along), 0.01 * vec2_length(v.gradient));
    }
    plane_solution_free(&s);
    geometry_free(&g);
}

/* An insulator of permittivity 1 is there for nobody. */
static void test_insulators_are_no_conductors(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    scene_begin(&g, VOLTS, false);
    struct plane *p = scene_turned(&g, 0.0, 31e-3, 0.0, 17e-3);
    scene_wall(p, SIDE_A_LOW, 0.0, 0.0);
    scene_wall(p, SIDE_A_HIGH, 1.0, 1.0);
    p->sides[SIDE_B_HIGH].kind = SIDE_MIRROR;
    struct part *part = scene_disc(p, "bead", 0.0, 11.3e-3, 4.1e-3, 2.9e-3);
    part->kind = PART_INSULATOR;
    part->permittivity = 1.0;
    assert_int_equal(plane_solve(&g, PLANE_ELECTRIC_TURNED,
                                 &(struct grid_request){.fineness = 1.0}, &s, NULL),
                     STATUS_OK);
    const struct field_value v = value_at(&s, 10.7e-3, 4.9e-3);
    assert_int_equal(v.part, -1);
    assert_close(v.potential, VOLTS * 10.7 / 31.0, 1e-10, 0.0);
    assert_close(v.gradient.a, VOLTS / 31e-3, 1e-9, 0.0);
    plane_solution_free(&s);
    geometry_free(&g);
}

static void test_parts_hold_their_potential_and_no_field(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    rods(&g, &s);
    const struct field_value rod = value_at(&s, 13.1e-3, 4.9e-3);
    const struct field_value bar = value_at(&s, -2.9e-3, 6e-3);
    const struct field_value corner = value_at(&s, -2.99e-3, 4.01e-3);
    assert_int_equal(rod.part, 1);
    assert_close(rod.potential, -0.6 * VOLTS, 1e-15, 0.0);
    assert_true(rod.gradient.a == 0.0 && rod.gradient.b == 0.0);
    assert_int_equal(bar.part, 0);
    assert_close(bar.potential, VOLTS, 1e-15, 0.0);
    assert_int_equal(corner.part, -1); /* outside the rounding */
    plane_solution_free(&s);
    geometry_free(&g);
}

static void test_potential_meets_the_surface(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    rods(&g, &s);
    for (int k = 0; k < 60; k++) {
        const double angle = 0.1047 * k, r = 4.7e-3;
        struct field_value v;
        const struct vec2 at = {14.3e-3 + r * cos(angle), 3.1e-3 + r * sin(angle)};
        assert_int_equal(field_at_surface(s.field, at, &v), STATUS_OK);
        assert_close(v.potential, -0.6 * VOLTS, 0.0, 1e-4 * VOLTS);
        /* The field of a conductor stands on its surface. */
        const double along = v.gradient.b * cos(angle) - v.gradient.a * sin(angle);
        assert_at_most(fabs(along), 0.01 * vec2_length(v.gradient));
    }
    plane_solution_free(&s);
    geometry_free(&g);
}

static void test_points_beyond_walls_are_refused(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    struct field_value v;
    rods(&g, &s);
    const struct vec2 outside[] = {{-7.1e-3, 0.0},     {31.1e-3, 0.0},
                                   {0.0, -9.1e-3},     {0.0, 17.1e-3},
                                   {(double)NAN, 0.0}, {0.0, (double)INFINITY}};
    for (size_t k = 0; k < sizeof outside / sizeof *outside; k++) {
        assert_int_equal(field_at(s.field, outside[k], &v), STATUS_SIZE);
        assert_false(field_covers(&s.grid, outside[k]));
    }
    assert_int_equal(field_at(s.field, (struct vec2){-7e-3, 17e-3}, &v), STATUS_OK);
    assert_true(field_covers(&s.grid, (struct vec2){31e-3, -9e-3}));
    plane_solution_free(&s);
    geometry_free(&g);
}

/* Even and odd continuation with their signs; one region beyond a side, no further. */
static void test_sides_reflect_with_their_signs(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    scene_begin(&g, VOLTS, false);
    struct plane *p = scene_plane(&g, KIND, 0.0, 31e-3, 0.0, 17e-3);
    p->sides[SIDE_A_LOW].kind = SIDE_MIRROR;
    p->sides[SIDE_B_LOW].kind = SIDE_ANTIMIRROR;
    scene_disc(p, "rod", 1.0, 9.3e-3, 8.1e-3, 4.7e-3);
    assert_int_equal(plane_solve(&g, KIND,
                                 &(struct grid_request){.fineness = 1.0, .level = 1},
                                 &s, NULL),
                     STATUS_OK);
    for (int k = 0; k < 50; k++) {
        const double a = 15e-3 + 14e-3 * sin(2.385 * k),
                     b = 8e-3 + 7e-3 * sin(1.711 * k);
        const struct field_value v = value_at(&s, a, b), w = value_at(&s, -a, b);
        const struct field_value x = value_at(&s, a, -b), y = value_at(&s, -a, -b);
        assert_int_equal(w.part, v.part);
        assert_int_equal(x.part, v.part);
        assert_close(w.potential, v.potential, 1e-12, 0.0);
        assert_close(x.potential, -v.potential, 1e-12, 0.0);
        assert_close(y.potential, -v.potential, 1e-12, 0.0);
        assert_close(w.gradient.a, -v.gradient.a, 1e-12, 0.0);
        assert_close(w.gradient.b, v.gradient.b, 1e-12, 0.0);
        assert_close(x.gradient.a, -v.gradient.a, 1e-12, 0.0);
        assert_close(x.gradient.b, v.gradient.b, 1e-12, 0.0);
        assert_close(y.gradient.a, v.gradient.a, 1e-12, 0.0);
    }
    assert_false(field_covers(&s.grid, (struct vec2){-31.1e-3, 0.0}));
    plane_solution_free(&s);
    geometry_free(&g);
}

/* Linear potentials are in the fit's space: exact everywhere, also next to walls. */
static void test_linear_potential_is_interpolated_exactly(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    scene_begin(&g, VOLTS, false);
    struct plane *p = scene_plane(&g, KIND, -7e-3, 31e-3, -9e-3, 17e-3);
    scene_wall(p, SIDE_A_LOW, 0.0, 1.0);
    scene_wall(p, SIDE_A_HIGH, 3.0, 4.0);
    scene_wall(p, SIDE_B_LOW, 0.0, 3.0);
    scene_wall(p, SIDE_B_HIGH, 1.0, 4.0);
    assert_int_equal(plane_solve(&g, KIND,
                                 &(struct grid_request){.fineness = 1.0, .level = 0},
                                 &s, NULL),
                     STATUS_OK);
    for (int k = 0; k < 200; k++) {
        const struct vec2 at = scatter(k);
        const struct field_value v = value_at(&s, at.a, at.b);
        const double want = 3.0 * (at.a + 7e-3) / 38e-3 + (at.b + 9e-3) / 26e-3;
        assert_close(v.potential, VOLTS * want, 0.0, 1e-11 * VOLTS);
        assert_close(v.gradient.a, VOLTS * 3.0 / 38e-3, 1e-10, 0.0);
        assert_close(v.gradient.b, VOLTS / 26e-3, 1e-10, 0.0);
    }
    plane_solution_free(&s);
    geometry_free(&g);
}

/* A plate 0.02 mm thick along the diagonal of the region, crossing between the nodes.
 * Above it everything stands at the plate's potential: no field at all. Below it the
 * walls make the potential linear. Both solutions are exact on any grid, so a point next
 * to the plate must see its own side only. */
static void diagonal(struct geometry *g, struct plane_solution *s, double w, double h)
{
    const double t = 0.02e-3, d = 1e-3;
    const struct vec2 plate[4] = {{-d, -d * h / w},
                                  {w + d, h + d * h / w},
                                  {w + d, h + d * h / w + t},
                                  {-d, -d * h / w + t}};
    scene_begin(g, VOLTS, false);
    struct plane *p = scene_plane(g, KIND, 0.0, w, 0.0, h);
    scene_polygon(p, "plate", 1.0, plate, 4);
    scene_wall(p, SIDE_A_LOW, 1.0, 1.0);
    scene_wall(p, SIDE_B_HIGH, 1.0, 1.0);
    scene_wall(p, SIDE_B_LOW, 1.0, 0.0);
    scene_wall(p, SIDE_A_HIGH, 0.0, 1.0);
    assert_int_equal(plane_solve(g, KIND,
                                 &(struct grid_request){.fineness = 1.0, .level = 0}, s,
                                 NULL),
                     STATUS_OK);
}

static void test_points_beside_a_thin_slanted_plate_see_their_own_side(void **state)
{
    (void)state;
    const double w = 37e-3, h = 23e-3;
    struct geometry g;
    struct plane_solution s;
    diagonal(&g, &s, w, h);
    for (int k = 1; k < 60; k++) {
        const double a = w * (0.2 + 0.01 * k), b = h * a / w;
        for (int n = 0; n < 5; n++) {
            const double off = 0.03e-3 + 0.4e-3 * n;
            const struct field_value above = value_at(&s, a, b + off);
            const struct field_value below = value_at(&s, a, b - off);
            assert_close(above.potential, VOLTS, 0.0, 1e-9 * VOLTS);
            assert_close(vec2_length(above.gradient), 0.0, 0.0, 1e-6 * VOLTS / h);
            assert_close(below.potential, VOLTS * (1.0 - off / h), 0.0, 1e-9 * VOLTS);
            assert_close(below.gradient.a, -VOLTS / w, 1e-6, 0.0);
            assert_close(below.gradient.b, VOLTS / h, 1e-6, 0.0);
        }
    }
    plane_solution_free(&s);
    geometry_free(&g);
}

static void test_destroy_nulls_and_takes_null(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    rods(&g, &s);
    assert_non_null(s.field);
    field_destroy(&s.field);
    assert_null(s.field);
    field_destroy(&s.field);
    plane_solution_free(&s);
    plane_solution_free(&s);
    geometry_free(&g);
}

static void failed_allocations_are_reported(const struct plane_solution *s)
{
    enum status status = STATUS_MEMORY;
    long k = 0;
    while (status == STATUS_MEMORY) {
        struct field *field;
        struct field_value v;
        mem_fail_at(++k);
        status = field_create(&s->grid, s->phi, s->part_value, &field);
        assert_true((field == NULL) == (status != STATUS_OK));
        if (status == STATUS_OK)
            status = field_at(field, (struct vec2){25e-3, 3e-3}, &v);
        mem_fail_at(0);
        field_destroy(&field);
    }
    assert_int_equal(status, STATUS_OK);
    assert_true(k > 3);
}

static void test_failed_allocations_are_reported(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    rods(&g, &s);
    failed_allocations_are_reported(&s);
    plane_solution_free(&s);
    geometry_free(&g);
    ball_and_rod(&g, &s);
    failed_allocations_are_reported(&s);
    plane_solution_free(&s);
    geometry_free(&g);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_gradient_is_that_of_the_potential),
        cmocka_unit_test(test_nothing_jumps_at_cell_borders),
        cmocka_unit_test(test_field_on_the_axis_has_no_radial_part),
        cmocka_unit_test(test_field_stands_on_a_ball),
        cmocka_unit_test(test_insulators_are_no_conductors),
        cmocka_unit_test(test_parts_hold_their_potential_and_no_field),
        cmocka_unit_test(test_potential_meets_the_surface),
        cmocka_unit_test(test_points_beyond_walls_are_refused),
        cmocka_unit_test(test_sides_reflect_with_their_signs),
        cmocka_unit_test(test_linear_potential_is_interpolated_exactly),
        cmocka_unit_test(test_points_beside_a_thin_slanted_plate_see_their_own_side),
        cmocka_unit_test(test_destroy_nulls_and_takes_null),
        cmocka_unit_test(test_failed_allocations_are_reported),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
