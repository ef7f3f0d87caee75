/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Capacitance matrices against closed forms. Fluxes are per metre and per eps0. */

#include "tests/support/assert_close.h"

#include "shared/constants.h"
#include "shared/mem.h"
#include "solver/extrapolate.h"
#include "solver/plane_solution.h"
#include "tests/support/scene.h"

#define KIND PLANE_ELECTRIC_ACROSS

enum { LEVELS = 3, ROWS_MAX = 4 };

static void solve(const struct geometry *g, enum plane_kind kind, double fineness,
                  int level, struct plane_solution *s)
{
    assert_int_equal(
        plane_solve(g, kind,
                    &(struct grid_request){.fineness = fineness, .level = level}, s,
                    NULL),
        STATUS_OK);
}

/* Matrix of the first n conductors over a family; mean of both orders. */
static void family(const struct geometry *g, enum plane_kind kind, double fineness,
                   size_t n, double matrix[ROWS_MAX][ROWS_MAX])
{
    double values[ROWS_MAX][ROWS_MAX][LEVELS];
    for (int l = 0; l < LEVELS; l++) {
        struct plane_solution s;
        solve(g, kind, fineness, l, &s);
        const size_t count = s.capacitance.conductors.count;
        for (size_t i = 0; i < n; i++)
            for (size_t j = 0; j < n; j++)
                values[i][j][l] = 0.5 * (s.capacitance.flux[i * count + j] +
                                         s.capacitance.flux[j * count + i]);
        print_message("  level %d: C_ij - C_ji %.1e, row sums %.1e\n", l,
                      s.capacitance.reciprocity, s.capacitance.row_sum);
        assert_at_most(s.capacitance.row_sum, 1e-9);
        plane_solution_free(&s);
    }
    for (size_t i = 0; i < n; i++)
        for (size_t j = 0; j < n; j++)
            matrix[i][j] = extrapolate(values[i][j], LEVELS, 0.0).value;
}

/* Core, tube, shell, a quarter of each: the tube shields the core from all else. Closed
 * form 2 pi/ln(b/a), Jackson, Classical Electrodynamics, ch. 1 (from memory). */
static void test_concentric_cylinders_match_the_logarithm(void **state)
{
    (void)state;
    double c[ROWS_MAX][ROWS_MAX];
    struct geometry g;
    scene_begin(&g, 1.0, false);
    struct plane *p = scene_plane(&g, KIND, 0.0, 12e-3, 0.0, 12e-3);
    p->sides[SIDE_A_LOW].kind = p->sides[SIDE_B_LOW].kind = SIDE_MIRROR;
    scene_disc(p, "core", 1.0, 0.0, 0.0, 2e-3);
    scene_cut_disc(scene_disc(p, "tube", 0.3, 0.0, 0.0, 6e-3), 0.0, 0.0, 5e-3);
    scene_cut_disc(scene_box(p, "shell", 0.0, 0.0, 12e-3, 0.0, 12e-3, 0.0), 0.0, 0.0,
                   10.3e-3);
    family(&g, KIND, 1.5, 2, c);
    const double inner = 0.5 * PI / log(5.0 / 2.0);
    const double outer = 0.5 * PI / log(10.3 / 6.0);
    assert_close(c[0][0], inner, 1e-5, 0.0);
    assert_close(c[0][1], -inner, 1e-5, 0.0);
    assert_close(c[1][1], inner + outer, 1e-5, 0.0);
    geometry_free(&g);
}

/* One cylinder within another, axes apart: C = 2 pi/acosh((a^2 + b^2 - d^2)/(2 a b)).
 * The same formula is that of two wires. Smythe, Static and Dynamic Electricity, sec.
 * 4.14 (from memory). A sleeve round both is earthed. */
static void test_eccentric_cylinders_match_the_inverse_hyperbolic_cosine(void **state)
{
    (void)state;
    const double a = 3e-3, b = 10e-3, d = 2.9e-3;
    double c[ROWS_MAX][ROWS_MAX];
    struct geometry g;
    scene_begin(&g, 1.0, false);
    struct plane *p = scene_plane(&g, KIND, -15e-3, 15e-3, -15e-3, 15e-3);
    scene_cut_disc(scene_disc(p, "sleeve", 0.5, 0.0, 0.0, 12e-3), 0.0, 0.0, b);
    scene_disc(p, "wire", 1.0, d * cos(0.7), d * sin(0.7), a);
    family(&g, KIND, 2.0, 2, c);
    const double exact = 2.0 * PI / acosh((a * a + b * b - d * d) / (2.0 * a * b));
    assert_close(c[1][1], exact, 1e-5, 0.0);
    assert_close(c[0][1], -exact, 1e-5, 0.0);
    geometry_free(&g);
}

/* Square within a square frame, sides 1 : 2: 10.23409256936805 (Bowman 1935); the frame
 * stands free in an earthed box. */
static void test_square_frame_and_core_match_the_elliptic_integrals(void **state)
{
    (void)state;
    double c[ROWS_MAX][ROWS_MAX];
    struct geometry g;
    struct shape bore;
    scene_begin(&g, 1.0, false);
    struct plane *p = scene_plane(&g, KIND, 0.0, 20e-3, 0.0, 20e-3);
    p->sides[SIDE_A_LOW].kind = p->sides[SIDE_B_LOW].kind = SIDE_MIRROR;
    scene_box(p, "core", 1.0, 0.0, 5e-3, 0.0, 5e-3, 0.0);
    struct part *frame = scene_box(p, "frame", 0.5, -12e-3, 12e-3, -12e-3, 12e-3, 0.0);
    assert_int_equal(shape_init_box(&bore, (struct vec2){-10e-3, -10e-3},
                                    (struct vec2){10e-3, 10e-3}, 0.0),
                     STATUS_OK);
    assert_int_equal(shape_cut(&frame->shape, &bore), STATUS_OK);
    shape_free(&bore);
    family(&g, KIND, 1.0, 2, c);
    assert_close(4.0 * c[0][0], 10.23409256936805, 3e-7, 0.0);
    assert_close(4.0 * c[0][1], -10.23409256936805, 3e-7, 0.0);
    geometry_free(&g);
}

/* Tubes 20 mm long between mirrors, in a turned plane: length/ln(b/a) per radian. */
static void test_turned_tubes_match_the_logarithm(void **state)
{
    (void)state;
    double c[ROWS_MAX][ROWS_MAX];
    struct geometry g;
    scene_begin(&g, 1.0, false);
    struct plane *p = scene_plane(&g, PLANE_ELECTRIC_TURNED, 0.0, 20e-3, 0.0, 12e-3);
    for (int s = 0; s < SIDE_B_HIGH; s++)
        p->sides[s].kind = SIDE_MIRROR;
    scene_box(p, "core", 1.0, 0.0, 20e-3, 0.0, 2e-3, 0.0);
    scene_box(p, "tube", 0.3, 0.0, 20e-3, 4.1e-3, 5e-3, 0.0);
    family(&g, PLANE_ELECTRIC_TURNED, 2.0, 2, c);
    const double inner = 20e-3 / log(4.1 / 2.0), outer = 20e-3 / log(12.0 / 5.0);
    assert_close(c[0][0], inner, 1e-6, 0.0);
    assert_close(c[0][1], -inner, 1e-6, 0.0);
    assert_close(c[1][1], inner + outer, 1e-6, 0.0);
    geometry_free(&g);
}

/* Cut legs make the discrete matrix a little skew: with the order of the scheme. */
static void test_reciprocity_is_second_order_on_round_parts(void **state)
{
    (void)state;
    double skew[LEVELS];
    struct geometry g;
    scene_begin(&g, 1.0, false);
    struct plane *p = scene_plane(&g, KIND, -20e-3, 20e-3, -13e-3, 17e-3);
    scene_disc(p, "large", 1.0, -6e-3, 1e-3, 5e-3);
    scene_disc(p, "small", 0.5, 5e-3, -1e-3, 2e-3);
    scene_disc(p, "third", 0.2, 9e-3, 7.7e-3, 3e-3);
    for (int l = 0; l < LEVELS; l++) {
        struct plane_solution s;
        solve(&g, KIND, 2.0, l, &s);
        skew[l] = s.capacitance.reciprocity;
        print_message("  level %d: %.2e\n", l, skew[l]);
        plane_solution_free(&s);
    }
    assert_at_most(skew[LEVELS - 1], 1e-5);
    assert_at_most(skew[LEVELS - 1], 0.15 * skew[0]);
    geometry_free(&g);
}

static void test_parts_that_touch_have_the_matrix_of_their_union(void **state)
{
    (void)state;
    double flux[2];
    for (int split = 0; split < 2; split++) {
        struct geometry g;
        struct plane_solution s;
        scene_begin(&g, 1.0, false);
        struct plane *p = scene_plane(&g, KIND, -20e-3, 20e-3, -13e-3, 17e-3);
        scene_disc(p, "rod", 0.5, 9e-3, 3e-3, 2e-3);
        scene_box(p, "bar", 1.0, -8e-3, split ? -2e-3 : 3e-3, -2e-3, 2e-3, 0.0);
        if (split)
            scene_box(p, "end", 1.0, -2e-3, 3e-3, -2e-3, 2e-3, 0.0);
        solve(&g, KIND, 1.0, 1, &s);
        assert_int_equal(s.capacitance.conductors.count, 2);
        flux[split] = s.capacitance.flux[2];
        if (split)
            assert_true(s.self_flux[1] == s.self_flux[2]);
        plane_solution_free(&s);
        geometry_free(&g);
    }
    assert_close(flux[1], flux[0], 1e-3, 0.0); /* the seam asks for other lines */
}

static void test_held_conductor_has_no_row(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    scene_begin(&g, 1.0, false);
    struct plane *p = scene_plane(&g, KIND, -20e-3, 20e-3, -13e-3, 17e-3);
    scene_box(p, "rib", 0.0, -3e-3, 3e-3, -13e-3, -8e-3, 0.0);
    scene_disc(p, "rod", 1.0, 0.0, 0.0, 4e-3);
    solve(&g, KIND, 1.0, 0, &s);
    const double *c = s.capacitance.flux;
    assert_true(c[0] == 0.0 && c[1] == 0.0 && c[2] == 0.0 && c[3] > 1.0);
    assert_true(s.self_flux[0] == 0.0 && s.self_flux[1] == c[3]);
    /* The rib takes its share of the rod's flux: the sum over all is zero. */
    assert_at_most(s.capacitance.row_sum, 1e-10);
    plane_solution_free(&s);
    geometry_free(&g);
}

static void test_magnetic_plane_has_none(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    scene_begin(&g, 1.0, true);
    struct plane *p =
        scene_plane(&g, PLANE_MAGNETIC_ACROSS, -20e-3, 20e-3, -13e-3, 17e-3);
    scene_disc(p, "pole", 1.0, 0.0, 0.0, 4e-3);
    solve(&g, PLANE_MAGNETIC_ACROSS, 1.0, 0, &s);
    assert_null(s.self_flux);
    assert_null(s.capacitance.flux);
    assert_int_equal(s.capacitance.conductors.count, 0);
    plane_solution_free(&s);
    geometry_free(&g);
}

static void test_every_failed_allocation_is_reported(void **state)
{
    (void)state;
    struct geometry g;
    struct grid grid;
    struct system *system;
    struct system_facts facts;
    struct capacitance c;
    const struct floating none = {0};
    double part_value[2] = {1.0, 0.5};
    enum status status = STATUS_MEMORY;
    long k = 0;
    scene_begin(&g, 1.0, false);
    struct plane *p = scene_plane(&g, KIND, -20e-3, 20e-3, -13e-3, 17e-3);
    scene_disc(p, "large", 1.0, -6e-3, 1e-3, 5e-3);
    scene_disc(p, "small", 0.5, 5e-3, -1e-3, 2e-3);
    assert_int_equal(
        grid_build(p, &(struct grid_request){.fineness = 0.5}, &grid, NULL), STATUS_OK);
    assert_int_equal(system_create(&grid, &system, &facts), STATUS_OK);
    double *phi = MEM_NEW((size_t)(grid.na * grid.nb), double);
    while (status == STATUS_MEMORY) {
        mem_fail_at(++k);
        status = capacitance_measure(&grid, system, &none,
                                     (struct force_field){phi, part_value}, &c);
        mem_fail_at(0);
        assert_true((c.flux == NULL) == (status != STATUS_OK));
    }
    assert_int_equal(status, STATUS_OK);
    assert_true(k > 8);
    capacitance_free(&c);
    capacitance_free(&c);
    mem_free(phi);
    system_destroy(&system);
    grid_free(&grid);
    geometry_free(&g);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_concentric_cylinders_match_the_logarithm),
        cmocka_unit_test(test_eccentric_cylinders_match_the_inverse_hyperbolic_cosine),
        cmocka_unit_test(test_square_frame_and_core_match_the_elliptic_integrals),
        cmocka_unit_test(test_turned_tubes_match_the_logarithm),
        cmocka_unit_test(test_reciprocity_is_second_order_on_round_parts),
        cmocka_unit_test(test_parts_that_touch_have_the_matrix_of_their_union),
        cmocka_unit_test(test_held_conductor_has_no_row),
        cmocka_unit_test(test_magnetic_plane_has_none),
        cmocka_unit_test(test_every_failed_allocation_is_reported),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
