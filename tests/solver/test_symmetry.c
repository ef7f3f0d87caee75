/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Half models with a mirror or an antimirror side against the full model, inside and
 * beyond the symmetry side. */

#include "tests/support/assert_close.h"

#include "solver/extrapolate.h"
#include "solver/plane_solution.h"
#include "tests/support/scene.h"

#define VOLTS 385.7

enum { LEVELS = 2 };

static void solve(const struct geometry *g, double fineness, int level,
                  struct plane_solution *s)
{
    assert_int_equal(
        plane_solve(g, PLANE_ELECTRIC_ACROSS,
                    &(struct grid_request){.fineness = fineness, .level = level}, s,
                    NULL),
        STATUS_OK);
}

/* Box driven by its walls alone: no key lines, so half and full grids coincide. Top at
 * +1, bottom at -1, even in a; with `odd` the walls left and right at -1 and +1 and top
 * and bottom running between them, odd in a. */
static void walls(struct geometry *g, bool half, bool odd)
{
    scene_begin(g, VOLTS, false);
    struct plane *p = scene_plane(g, PLANE_ELECTRIC_ACROSS, half ? 0.0 : -59.5e-3,
                                  59.5e-3, -23e-3, 23e-3);
    if (odd) {
        scene_wall(p, SIDE_A_HIGH, 1.0, 1.0);
        if (!half)
            scene_wall(p, SIDE_A_LOW, -1.0, -1.0);
    } else {
        scene_wall(p, SIDE_B_LOW, -1.0, -1.0);
        scene_wall(p, SIDE_B_HIGH, 1.0, 1.0);
    }
    if (half)
        p->sides[SIDE_A_LOW].kind = odd ? SIDE_ANTIMIRROR : SIDE_MIRROR;
}

static void compare_walls(bool odd)
{
    struct geometry full, half;
    struct plane_solution s, t;
    walls(&full, false, odd);
    walls(&half, true, odd);
    solve(&full, 1.0, 1, &s);
    solve(&half, 1.0, 1, &t);
    assert_int_equal(s.grid.na - 1, 2 * (t.grid.na - 1));
    for (int k = 0; k < 200; k++) {
        /* At the walls the fits weigh the corner of wall and symmetry side otherwise. */
        const struct vec2 at = {50e-3 * sin(2.385 * k), 10e-3 * sin(1.711 * k)};
        struct field_value v, w;
        assert_int_equal(field_at(s.field, at, &v), STATUS_OK);
        assert_int_equal(field_at(t.field, at, &w), STATUS_OK);
        assert_close(w.potential, v.potential, 0.0, 1e-10 * VOLTS);
        assert_close(w.gradient.a, v.gradient.a, 0.0, 1e-9 * VOLTS / 23e-3);
        assert_close(w.gradient.b, v.gradient.b, 0.0, 1e-9 * VOLTS / 23e-3);
    }
    plane_solution_free(&s);
    plane_solution_free(&t);
    geometry_free(&full);
    geometry_free(&half);
}

static void test_mirror_half_on_the_same_grid_equals_the_full_model(void **state)
{
    (void)state;
    compare_walls(false);
}

static void test_antimirror_half_on_the_same_grid_equals_the_full_model(void **state)
{
    (void)state;
    compare_walls(true);
}

/* Two rounded plates: the full model, or the quarter with a >= 0 and b >= 0 (the plate
 * reaches through its mirror side). */
static void plates(struct geometry *g, bool quarter)
{
    const double low = quarter ? 0.0 : -61e-3, deep = quarter ? 0.0 : -43e-3;
    scene_begin(g, VOLTS, false);
    struct plane *p = scene_plane(g, PLANE_ELECTRIC_ACROSS, low, 61e-3, deep, 43e-3);
    scene_box(p, "upper", 0.5, -27e-3, 27e-3, 10e-3, 14e-3, 1e-3);
    if (quarter) {
        p->sides[SIDE_A_LOW].kind = SIDE_MIRROR;
        p->sides[SIDE_B_LOW].kind = SIDE_ANTIMIRROR;
    } else {
        scene_box(p, "lower", -0.5, -27e-3, 27e-3, -14e-3, -10e-3, 1e-3);
    }
}

/* Field and flux of the upper plate, extrapolated over two grids. */
static void plate_figures(bool quarter, const struct vec2 *at, int count, double *ea,
                          double *eb, double *flux)
{
    double a[8][LEVELS], b[8][LEVELS], f[LEVELS];
    struct geometry g;
    plates(&g, quarter);
    for (int l = 0; l < LEVELS; l++) {
        struct plane_solution s;
        solve(&g, 2.0, l, &s);
        for (int k = 0; k < count; k++) {
            double field[2];
            assert_int_equal(plane_field(&s, at[k], field, NULL), STATUS_OK);
            a[k][l] = field[0];
            b[k][l] = field[1];
        }
        f[l] = s.part_flux[0] * (quarter ? 2.0 : 1.0);
        plane_solution_free(&s);
    }
    for (int k = 0; k < count; k++) {
        ea[k] = extrapolate(a[k], LEVELS, 0.0).value;
        eb[k] = extrapolate(b[k], LEVELS, 0.0).value;
    }
    *flux = extrapolate(f, LEVELS, 0.0).value;
    geometry_free(&g);
}

static void test_quarter_model_equals_the_full_model_beyond_its_sides(void **state)
{
    (void)state;
    const struct vec2 at[5] = {{0.0, 0.0},
                               {11.3e-3, 4.1e-3},
                               {-24e-3, 6.3e-3},
                               {-31e-3, -8.7e-3},
                               {29e-3, -3.1e-3}};
    double a[5], b[5], c[5], d[5], flux, quarter_flux;
    plate_figures(false, at, 5, a, b, &flux);
    plate_figures(true, at, 5, c, d, &quarter_flux);
    for (int k = 0; k < 5; k++) {
        assert_close(c[k], a[k], 0.0, 1e-5 * VOLTS / 20e-3);
        assert_close(d[k], b[k], 0.0, 1e-5 * VOLTS / 20e-3);
    }
    assert_close(quarter_flux, flux, 1e-5, 0.0);
}

/* Straight across a symmetry side nothing may jump. */
static void test_field_is_continuous_across_a_symmetry_side(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    plates(&g, true);
    solve(&g, 1.0, 1, &s);
    for (int k = 0; k < 30; k++) {
        const double b = -9e-3 + 0.6e-3 * k, step = 1e-9;
        struct field_value v, w;
        assert_int_equal(field_at(s.field, (struct vec2){-step, b}, &v), STATUS_OK);
        assert_int_equal(field_at(s.field, (struct vec2){step, b}, &w), STATUS_OK);
        assert_close(v.potential, w.potential, 0.0, 1e-10 * VOLTS);
        assert_close(v.gradient.a, -w.gradient.a, 0.0, 1e-9 * VOLTS / 20e-3);
        assert_close(w.gradient.a, 0.0, 0.0, 1e-5 * VOLTS / 20e-3);
        assert_close(v.gradient.b, w.gradient.b, 0.0, 1e-9 * VOLTS / 20e-3);
    }
    plane_solution_free(&s);
    geometry_free(&g);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_mirror_half_on_the_same_grid_equals_the_full_model),
        cmocka_unit_test(test_antimirror_half_on_the_same_grid_equals_the_full_model),
        cmocka_unit_test(test_quarter_model_equals_the_full_model_beyond_its_sides),
        cmocka_unit_test(test_field_is_continuous_across_a_symmetry_side),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
