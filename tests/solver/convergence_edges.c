/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Fields at the ends of plates and poles against conformal maps, and closed boxes against
 * elliptic integrals and series. */

#include "tests/support/assert_close.h"

#include "shared/constants.h"
#include "solver/extrapolate.h"
#include "solver/plane_solution.h"
#include "tests/support/scene.h"

enum { LEVELS = 3 };

static void solve(const struct geometry *g, enum plane_kind kind, int level,
                  struct plane_solution *s)
{
    assert_int_equal(
        plane_solve(g, kind, &(struct grid_request){.fineness = 1.0, .level = level}, s,
                    NULL),
        STATUS_OK);
}

/* |field along b| at points (a[k], 0), extrapolated over the default family. */
static void midplane_field(const struct geometry *g, enum plane_kind kind,
                           const double *a, int count, double *field)
{
    double values[16][LEVELS];
    for (int l = 0; l < LEVELS; l++) {
        struct plane_solution s;
        solve(g, kind, l, &s);
        for (int k = 0; k < count; k++) {
            double f[2];
            assert_int_equal(plane_field(&s, (struct vec2){a[k], 0.0}, f, NULL),
                             STATUS_OK);
            values[k][l] = fabs(f[1]);
        }
        plane_solution_free(&s);
    }
    for (int k = 0; k < count; k++)
        field[k] = extrapolate(values[k], LEVELS, 0.0).value;
}

/* Half of a gap above its mid plane; a conductor ends at a = 0. The far sides are
 * mirrors: far out the potential depends nearly on the angle only, so hardly any flux
 * crosses them. What is left falls with the square of the reach for the thin plate. */
static struct plane *half_gap(struct geometry *g, enum plane_kind kind, double reach)
{
    struct plane *plane = scene_plane(g, kind, -reach, reach, 0.0, reach);
    for (int s = 0; s < SIDE_COUNT; s++)
        plane->sides[s].kind = SIDE_MIRROR;
    plane->sides[SIDE_B_LOW].kind = SIDE_ANTIMIRROR;
    return plane;
}

/* Position of E/E0 = 1/(1 + e^p): 2 pi x/d = 1 + p + e^p (Maxwell, Treatise, art. 202). */
static double maxwell_field(double x_over_d)
{
    double low = -60.0, high = 60.0;
    for (int k = 0; k < 200; k++) {
        const double p = 0.5 * (low + high);
        if (1.0 + p + exp(p) < 2.0 * PI * x_over_d)
            low = p;
        else
            high = p;
    }
    return 1.0 / (1.0 + exp(low));
}

/* Position of B/B0 = 1/s: 2 pi x/g = 2s + ln((s-1)/(s+1)) (Schwarz-Christoffel). */
static double pole_field(double x_over_g)
{
    double low = log(1e-300), high = log(1e3); /* of s - 1 */
    for (int k = 0; k < 300; k++) {
        const double t = 0.5 * (low + high), s = 1.0 + exp(t);
        if (2.0 * s + t - log(s + 1.0) < 2.0 * PI * x_over_g)
            low = t;
        else
            high = t;
    }
    return 1.0 / (1.0 + exp(low));
}

static void test_closed_forms_give_the_tabulated_values(void **state)
{
    (void)state;
    assert_close(maxwell_field(-0.5), 0.9845905255, 0.0, 1e-10);
    assert_close(maxwell_field(0.0), 0.7821882943, 0.0, 1e-10);
    assert_close(maxwell_field(0.5), 0.3781738830, 0.0, 1e-10);
    assert_close(pole_field(-0.5), 0.9886341015, 0.0, 1e-10);
    assert_close(pole_field(0.0), 0.8335565596, 0.0, 1e-10);
    assert_close(pole_field(0.5), 0.4781525378, 0.0, 1e-10);
}

static void compare_profile(const struct geometry *g, enum plane_kind kind, double gap,
                            double (*exact)(double), double uniform)
{
    static const double at[9] = {-1.3, -0.94, -0.5, -0.2, 0.0, 0.17, 0.5, 0.8, 1.3};
    double a[9], field[9];
    for (int k = 0; k < 9; k++)
        a[k] = at[k] * gap;
    midplane_field(g, kind, a, 9, field);
    for (int k = 0; k < 9; k++) {
        const double want = exact(at[k]);
        print_message("  x/gap %6.2f field %.8f want %.8f error %9.2e\n", at[k],
                      field[k] / uniform, want, field[k] / uniform - want);
        assert_close(field[k] / uniform, want, 0.0, 1e-4);
    }
}

static void test_thin_plate_edge_follows_maxwell(void **state)
{
    (void)state;
    const double d = 23e-3, volts = 350.0, reach = 120.0 * d;
    struct geometry g;
    scene_begin(&g, volts, false);
    scene_box(half_gap(&g, PLANE_ELECTRIC_ALONG, reach), "plate", 0.5, -reach, 0.0,
              0.5 * d, 0.5 * d * (1.0 + 2e-6), 0.0);
    compare_profile(&g, PLANE_ELECTRIC_ALONG, d, maxwell_field, volts / d);
    geometry_free(&g);
}

static void test_square_pole_edge_follows_the_conformal_map(void **state)
{
    (void)state;
    const double gap = 31e-3, turns = 2400.0, reach = 50.0 * gap;
    struct geometry g;
    scene_begin(&g, turns, true);
    scene_box(half_gap(&g, PLANE_MAGNETIC_ALONG, reach), "pole", 0.5, -reach, 0.0,
              0.5 * gap, reach, 0.0);
    compare_profile(&g, PLANE_MAGNETIC_ALONG, gap, pole_field,
                    VACUUM_PERMEABILITY * turns / gap);
    geometry_free(&g);
}

/* Overhang: 1 - E/E0 = exp(-1 - 2 pi a/d) for thin plates and 0.2707 exp(-2 pi a/g) for a
 * square pole at a inside the edge (from the maps above, far inside). */
static void test_overhang_rules_follow_from_the_maps(void **state)
{
    (void)state;
    assert_close(1.0 - maxwell_field(-0.940), 1e-3, 1e-2, 0.0);
    assert_close(1.0 - pole_field(-0.891), 1e-3, 1e-2, 0.0);
    assert_close(1.0 - maxwell_field(-1.4), exp(-1.0 - 2.8 * PI), 1e-3, 0.0);
    assert_close(1.0 - pole_field(-1.4), 0.2707 * exp(-2.8 * PI), 1e-3, 0.0);
}

static void test_overhang_is_found_by_the_solver(void **state)
{
    (void)state;
    const double gap = 31e-3, turns = 2400.0, reach = 50.0 * gap;
    const double at[1] = {-0.891 * gap};
    double field;
    struct geometry g;
    scene_begin(&g, turns, true);
    scene_box(half_gap(&g, PLANE_MAGNETIC_ALONG, reach), "pole", 0.5, -reach, 0.0,
              0.5 * gap, reach, 0.0);
    midplane_field(&g, PLANE_MAGNETIC_ALONG, at, 1, &field);
    assert_close(1.0 - field / (VACUUM_PERMEABILITY * turns / gap),
                 0.2707 * exp(-2.0 * PI * 0.891), 2e-2, 0.0);
    geometry_free(&g);
}

/* Square coaxial line, inner/outer side `ratio`: one quarter with mirror sides. */
static double square_line(double ratio, double fineness, int levels)
{
    const double half = 17e-3;
    double values[LEVELS];
    struct geometry g;
    scene_begin(&g, 1.0, false);
    struct plane *plane = scene_plane(&g, PLANE_ELECTRIC_ACROSS, 0.0, half, 0.0, half);
    plane->sides[SIDE_A_LOW].kind = SIDE_MIRROR;
    plane->sides[SIDE_B_LOW].kind = SIDE_MIRROR;
    scene_box(plane, "inner", 1.0, 0.0, ratio * half, 0.0, ratio * half, 0.0);
    for (int l = 0; l < levels; l++) {
        struct plane_solution s;
        assert_int_equal(
            plane_solve(&g, PLANE_ELECTRIC_ACROSS,
                        &(struct grid_request){.fineness = fineness, .level = l}, &s,
                        NULL),
            STATUS_OK);
        values[l] = 4.0 * s.part_flux[0];
        plane_solution_free(&s);
    }
    geometry_free(&g);
    return extrapolate(values, levels, 0.0).value;
}

/* F. Bowman, Proc. London Math. Soc. 39, 205 (1935): C/eps0 for side ratio 1/2 (value
 * recomputed from the elliptic integrals to the digits shown). */
static void test_square_line_two_grids_within_1e_5(void **state)
{
    (void)state;
    const double got = square_line(0.5, 1.0, 2);
    print_message("  two grids: relative error %.2e\n", got / 10.23409256936805 - 1.0);
    assert_close(got, 10.23409256936805, 1e-5, 0.0);
}

/* All listed ratios, three grids at fineness 4. */
static void test_square_lines_three_grids_within_1e_8(void **state)
{
    (void)state;
    static const double ratio[3] = {0.5, 1.0 / 3.0, 0.4};
    static const double table[3] = {10.23409256936805, 6.215547284858944,
                                    7.561531539810583};
    for (int k = 0; k < 3; k++) {
        const double got = square_line(ratio[k], 4.0, 3);
        print_message("  side ratio %.4f: relative error %.2e\n", ratio[k],
                      got / table[k] - 1.0);
        assert_close(got, table[k], 1e-8, 0.0);
    }
}

/* Box with side walls at +-V, top and bottom earthed:
 * E(0)/(2V/d) = (2d/g) sum (-1)^k/sinh((2k+1) pi d/(2g)) (separation of variables). */
static double side_wall_series(double g_over_d)
{
    double sum = 0.0;
    for (int k = 0; k < 60; k++)
        sum += (k % 2 ? -1.0 : 1.0) / sinh((2 * k + 1) * PI / (2.0 * g_over_d));
    return 2.0 / g_over_d * sum;
}

static double side_wall_field(double g_over_d)
{
    const double d = 19e-3, height = g_over_d * d;
    double values[LEVELS];
    struct geometry g;
    scene_begin(&g, 640.0, false);
    struct plane *plane = scene_plane(&g, PLANE_ELECTRIC_ACROSS, -0.5 * d, 0.5 * d,
                                      -0.5 * height, 0.5 * height);
    scene_wall(plane, SIDE_A_LOW, -0.5, -0.5);
    scene_wall(plane, SIDE_A_HIGH, 0.5, 0.5);
    for (int l = 0; l < LEVELS; l++) {
        struct plane_solution s;
        double f[2];
        assert_int_equal(
            plane_solve(&g, PLANE_ELECTRIC_ACROSS,
                        &(struct grid_request){.fineness = 4.0, .level = l}, &s, NULL),
            STATUS_OK);
        assert_int_equal(plane_field(&s, (struct vec2){0.0, 0.0}, f, NULL), STATUS_OK);
        values[l] = -f[0] / (640.0 / d);
        plane_solution_free(&s);
    }
    geometry_free(&g);
    return extrapolate(values, LEVELS, 0.0).value;
}

static void test_side_wall_box_follows_the_series(void **state)
{
    (void)state;
    const double table[3] = {0.834626841674, 0.992544178491, 0.999677227979};
    for (int k = 0; k < 3; k++) {
        assert_close(side_wall_series(k + 1.0), table[k], 0.0, 1e-12);
        const double got = side_wall_field(k + 1.0);
        print_message("  g/d %d: error %.2e\n", k + 1, got - table[k]);
        assert_close(got, table[k], 0.0, 1e-6);
    }
}

/* A boundary potential linear along the guards makes E uniform to round-off (exact). */
static void test_linear_guards_make_the_field_uniform(void **state)
{
    (void)state;
    const double d = 19e-3, height = 27e-3;
    struct geometry g;
    struct plane_solution s;
    scene_begin(&g, 640.0, false);
    struct plane *plane = scene_plane(&g, PLANE_ELECTRIC_ACROSS, -0.5 * d, 0.5 * d,
                                      -0.5 * height, 0.5 * height);
    scene_wall(plane, SIDE_A_LOW, -0.5, -0.5);
    scene_wall(plane, SIDE_A_HIGH, 0.5, 0.5);
    scene_wall(plane, SIDE_B_LOW, -0.5, 0.5);
    scene_wall(plane, SIDE_B_HIGH, -0.5, 0.5);
    solve(&g, PLANE_ELECTRIC_ACROSS, 1, &s);
    for (int k = 0; k < 50; k++) {
        double f[2];
        const struct vec2 at = {0.49 * d * sin(2.385 * k),
                                0.49 * height * sin(1.7 * k)};
        assert_int_equal(plane_field(&s, at, f, NULL), STATUS_OK);
        assert_close(-f[0] / (640.0 / d), 1.0, 0.0, 1e-11);
        assert_close(f[1] / (640.0 / d), 0.0, 0.0, 1e-11);
    }
    plane_solution_free(&s);
    geometry_free(&g);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_closed_forms_give_the_tabulated_values),
        cmocka_unit_test(test_thin_plate_edge_follows_maxwell),
        cmocka_unit_test(test_square_pole_edge_follows_the_conformal_map),
        cmocka_unit_test(test_overhang_rules_follow_from_the_maps),
        cmocka_unit_test(test_overhang_is_found_by_the_solver),
        cmocka_unit_test(test_square_line_two_grids_within_1e_5),
        cmocka_unit_test(test_square_lines_three_grids_within_1e_8),
        cmocka_unit_test(test_side_wall_box_follows_the_series),
        cmocka_unit_test(test_linear_guards_make_the_field_uniform),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
