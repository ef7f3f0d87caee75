/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Floating conductors against potentials known in closed form: flat gaps in series, where
 * the difference equation is exact, and concentric cylinders,
 *     V(r) = V0 + Q/(2 pi eps0) ln(b/r): Jackson, Classical Electrodynamics, ch. 1 (from
 * memory). */

#include "tests/support/assert_close.h"

#include <string.h>

#include "shared/constants.h"
#include "shared/mem.h"
#include "solver/extrapolate.h"
#include "solver/plane_solution.h"
#include "tests/support/scene.h"

#define KIND  PLANE_ELECTRIC_ACROSS
#define VOLTS 385.7
#define SHARE 1e-11 /* round-off of a direct solve, of the driving potential */

enum { LEVELS = 3 };

static enum status solve(const struct geometry *g, enum plane_kind kind,
                         double fineness, int level, struct plane_solution *s,
                         struct messages *messages)
{
    return plane_solve(g, kind,
                       &(struct grid_request){.fineness = fineness, .level = level}, s,
                       messages);
}

static struct part *floats(struct part *part, double charge)
{
    part->kind = PART_FLOATING;
    part->charge = charge;
    return part;
}

/* Plates from mirror to mirror, 31 mm wide: gaps of 4 mm, a floating slab of 3 mm, and 9
 * mm to the earthed wall. */
static void series_gaps(struct geometry *g, double charge)
{
    scene_begin(g, VOLTS, false);
    struct plane *p = scene_plane(g, KIND, 0.0, 31e-3, -16e-3, 5e-3);
    p->sides[SIDE_A_LOW].kind = p->sides[SIDE_A_HIGH].kind = SIDE_MIRROR;
    scene_box(p, "plate", 1.0, 0.0, 31e-3, 0.0, 3e-3, 0.0);
    floats(scene_box(p, "slab", 0.0, 0.0, 31e-3, -7e-3, -4e-3, 0.0), charge);
}

static void test_slab_divides_the_voltage_by_its_gaps(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    series_gaps(&g, 0.0);
    assert_int_equal(solve(&g, KIND, 1.0, 1, &s, NULL), STATUS_OK);
    assert_close(s.part_value[1], VOLTS * 9.0 / 13.0, SHARE, 0.0);
    assert_close(s.part_flux[1], 0.0, 0.0, SHARE * VOLTS * 31.0 / 4.0);
    assert_close(s.part_flux[0], VOLTS * 31.0 * (1.0 / 13.0 + 1.0 / 2.0), SHARE, 0.0);
    plane_solution_free(&s);
    geometry_free(&g);
}

/* A charge Q per metre lifts the slab by Q over the capacitance of both its gaps. */
static void test_given_charge_lifts_the_slab(void **state)
{
    (void)state;
    const double charge = 2.385e-9;
    struct geometry g;
    struct plane_solution s;
    series_gaps(&g, charge);
    assert_int_equal(solve(&g, KIND, 1.0, 1, &s, NULL), STATUS_OK);
    const double lift = charge / (VACUUM_PERMITTIVITY * 31.0 * (1.0 / 4.0 + 1.0 / 9.0));
    assert_close(s.part_value[1], VOLTS * 9.0 / 13.0 + lift, SHARE, 0.0);
    assert_close(VACUUM_PERMITTIVITY * s.part_flux[1], charge, 1e-10, 0.0);
    plane_solution_free(&s);
    geometry_free(&g);
}

/* The charge belongs to the constant column, so the supply's own stays that of 1 V. */
static void test_unit_potential_carries_no_charge(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    series_gaps(&g, 2.385e-9);
    assert_int_equal(solve(&g, KIND, 1.0, 0, &s, NULL), STATUS_OK);
    assert_non_null(s.unit[0]);
    assert_non_null(s.unit[1]);
    for (int n = 0; n < s.grid.na * s.grid.nb; n++) {
        if (s.grid.owner[n] == 1)
            assert_close(s.unit[0][n], 9.0 / 13.0, SHARE, 0.0);
        assert_close(s.phi[n], VOLTS * s.unit[0][n] + s.unit[1][n], 1e-12, 1e-12);
    }
    plane_solution_free(&s);
    geometry_free(&g);
}

static void test_disc_half_way_between_opposite_plates_stays_at_zero(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    scene_begin(&g, VOLTS, false);
    struct plane *p = scene_plane(&g, KIND, -30e-3, 30e-3, -20e-3, 20e-3);
    scene_box(p, "upper", 1.0, -15e-3, 15e-3, 8e-3, 10e-3, 0.0);
    scene_box(p, "lower", -1.0, -15e-3, 15e-3, -10e-3, -8e-3, 0.0);
    floats(scene_disc(p, "disc", 0.0, 3e-3, 0.0, 2.5e-3), 0.0);
    assert_int_equal(solve(&g, KIND, 1.0, 1, &s, NULL), STATUS_OK);
    assert_close(s.part_value[2], 0.0, 0.0, SHARE * VOLTS);
    assert_close(s.part_flux[2], 0.0, 0.0, SHARE * VOLTS);
    plane_solution_free(&s);
    geometry_free(&g);
}

/* A quarter of: core at 1 V, floating tubes 4.1..5 mm and 7.2..8 mm, earthed shell from 10.3 mm on. */
static void nested_tubes(struct geometry *g, const double charge[2])
{
    scene_begin(g, VOLTS, false);
    struct plane *p = scene_plane(g, KIND, 0.0, 12e-3, 0.0, 12e-3);
    p->sides[SIDE_A_LOW].kind = p->sides[SIDE_B_LOW].kind = SIDE_MIRROR;
    scene_disc(p, "core", 1.0, 0.0, 0.0, 2e-3);
    scene_cut_disc(floats(scene_disc(p, "inner tube", 0.0, 0.0, 0.0, 5e-3), charge[0]),
                   0.0, 0.0, 4.1e-3);
    scene_cut_disc(floats(scene_disc(p, "outer tube", 0.0, 0.0, 0.0, 8e-3), charge[1]),
                   0.0, 0.0, 7.2e-3);
    scene_cut_disc(scene_box(p, "shell", 0.0, 0.0, 12e-3, 0.0, 12e-3, 0.0), 0.0, 0.0,
                   10.3e-3);
}

static double tube_potential(const double charge[2], int which, double fineness)
{
    double values[LEVELS];
    struct geometry g;
    nested_tubes(&g, charge);
    for (int l = 0; l < LEVELS; l++) {
        struct plane_solution s;
        assert_int_equal(solve(&g, KIND, fineness, l, &s, NULL), STATUS_OK);
        for (int k = 0; k < 2; k++)
            assert_close(VACUUM_PERMITTIVITY * s.part_flux[1 + k], charge[k], 1e-9,
                         1e-9 * VACUUM_PERMITTIVITY * VOLTS);
        values[l] = s.part_value[1 + which];
        plane_solution_free(&s);
    }
    geometry_free(&g);
    const struct estimate e = extrapolate(values, LEVELS, 0.0);
    print_message("  tube %d: %.9g +- %.1g V, order %.2f\n", which, e.value,
                  e.uncertainty, e.order);
    return e.value;
}

/* The charges belong to a quarter of each tube: four times as much on the whole. */
static void exact_tubes(const double charge[2], double v[2])
{
    const double gap[3] = {log(4.1 / 2.0), log(7.2 / 5.0), log(10.3 / 8.0)};
    const double per = 4.0 / (2.0 * PI * VACUUM_PERMITTIVITY);
    const double q0 = charge[0] * per, q1 = charge[1] * per;
    /* core charge c from VOLTS = c g0 + (c + q0) g1 + (c + q0 + q1) g2 */
    const double c =
        (VOLTS - q0 * (gap[1] + gap[2]) - q1 * gap[2]) / (gap[0] + gap[1] + gap[2]);
    v[1] = (c + q0 + q1) * gap[2];
    v[0] = v[1] + (c + q0) * gap[1];
}

static void test_nested_tubes_take_the_potentials_of_the_logarithm(void **state)
{
    (void)state;
    static const double charges[2][2] = {{0.0, 0.0}, {1.3e-9, -2.17e-9}};
    for (int k = 0; k < 2; k++) {
        double v[2];
        exact_tubes(charges[k], v);
        for (int which = 0; which < 2; which++)
            assert_close(tube_potential(charges[k], which, 1.5), v[which], 0.0,
                         1e-5 * VOLTS);
    }
}

/* The same in a turned plane: a floating tube between mirrors, 20 mm long, so that a
 * charge in C is meant. */
static void test_turned_tube_takes_its_charge_in_coulombs(void **state)
{
    (void)state;
    const double charge = 31.7e-12;
    double values[LEVELS];
    struct geometry g;
    scene_begin(&g, VOLTS, false);
    struct plane *p = scene_plane(&g, PLANE_ELECTRIC_TURNED, 0.0, 20e-3, 0.0, 12e-3);
    for (int s = 0; s < SIDE_B_HIGH; s++)
        p->sides[s].kind = SIDE_MIRROR;
    scene_box(p, "core", 1.0, 0.0, 20e-3, 0.0, 2e-3, 0.0);
    floats(scene_box(p, "tube", 0.0, 0.0, 20e-3, 4.1e-3, 5e-3, 0.0), charge);
    for (int l = 0; l < LEVELS; l++) {
        struct plane_solution s;
        assert_int_equal(solve(&g, PLANE_ELECTRIC_TURNED, 2.0, l, &s, NULL), STATUS_OK);
        values[l] = s.part_value[1];
        assert_close(2.0 * PI * VACUUM_PERMITTIVITY * s.part_flux[1], charge, 1e-9,
                     0.0);
        plane_solution_free(&s);
    }
    geometry_free(&g);
    const double per = charge / (2.0 * PI * VACUUM_PERMITTIVITY * 20e-3);
    const double inner = log(4.1 / 2.0), outer = log(12.0 / 5.0);
    const double exact = (VOLTS + per * inner) * outer / (inner + outer);
    const struct estimate e = extrapolate(values, LEVELS, 0.0);
    print_message("  error %.1e, uncertainty %.1e\n", e.value - exact, e.uncertainty);
    assert_close(e.value, exact, 1e-6, 0.0);
}

/* A charged slab from mirror to mirror, 5 mm from an earthed wall, with a disc in the dead
 * space behind it. */
static struct plane *slab_and_disc(struct geometry *g)
{
    scene_begin(g, VOLTS, false);
    struct plane *p = scene_plane(g, KIND, 0.0, 31e-3, -16e-3, 2e-3);
    p->sides[SIDE_A_LOW].kind = p->sides[SIDE_A_HIGH].kind = SIDE_MIRROR;
    p->sides[SIDE_B_LOW].kind = SIDE_MIRROR;
    floats(scene_box(p, "slab", 0.0, 0.0, 31e-3, -5e-3, -3e-3, 0.0), 2.385e-9);
    floats(scene_disc(p, "trapped", 0.0, 11e-3, -11e-3, 2e-3), 0.0);
    return p;
}

static void test_part_behind_another_takes_its_potential(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    (void)slab_and_disc(&g);
    assert_int_equal(solve(&g, KIND, 1.0, 0, &s, NULL), STATUS_OK);
    const double exact = 2.385e-9 / VACUUM_PERMITTIVITY * 5.0 / 31.0;
    assert_close(s.part_value[0], exact, SHARE, 0.0);
    assert_close(s.part_value[1], exact, SHARE, 0.0);
    plane_solution_free(&s);
    geometry_free(&g);
}

static void test_parts_that_only_see_each_other_are_refused_by_name(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    struct messages messages = {0};
    slab_and_disc(&g)->sides[SIDE_B_HIGH].kind = SIDE_MIRROR;
    assert_int_equal(solve(&g, KIND, 1.0, 0, &s, &messages), STATUS_SINGULAR);
    plane_solution_free(&s);
    assert_non_null(strstr(messages.items[0].text, "the floating part \""));
    assert_true(strstr(messages.items[0].text, "\"slab\"") != NULL ||
                strstr(messages.items[0].text, "\"trapped\"") != NULL);
    messages_free(&messages);
    geometry_free(&g);
}

static void test_single_part_among_mirrors_is_named(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    struct messages messages = {0};
    scene_begin(&g, VOLTS, false);
    struct plane *p = scene_plane(&g, KIND, 0.0, 31e-3, -16e-3, 5e-3);
    for (int side = 0; side < SIDE_COUNT; side++)
        p->sides[side].kind = SIDE_MIRROR;
    floats(scene_disc(p, "lonely", 0.0, 11e-3, -7e-3, 2e-3), 1e-9);
    assert_int_equal(solve(&g, KIND, 1.0, 0, &s, &messages), STATUS_SINGULAR);
    plane_solution_free(&s);
    assert_non_null(strstr(messages.items[0].text, "\"lonely\""));
    messages_free(&messages);
    geometry_free(&g);
}

static void test_every_failed_allocation_is_reported(void **state)
{
    (void)state;
    struct geometry g;
    enum status status = STATUS_MEMORY;
    long k = 0;
    series_gaps(&g, 1e-9);
    while (status == STATUS_MEMORY) {
        struct plane_solution s;
        mem_fail_at(++k);
        status = solve(&g, KIND, 0.3, 0, &s, NULL);
        mem_fail_at(0);
        plane_solution_free(&s);
    }
    assert_int_equal(status, STATUS_OK);
    assert_true(k > 30);
    geometry_free(&g);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_slab_divides_the_voltage_by_its_gaps),
        cmocka_unit_test(test_given_charge_lifts_the_slab),
        cmocka_unit_test(test_unit_potential_carries_no_charge),
        cmocka_unit_test(test_disc_half_way_between_opposite_plates_stays_at_zero),
        cmocka_unit_test(test_nested_tubes_take_the_potentials_of_the_logarithm),
        cmocka_unit_test(test_turned_tube_takes_its_charge_in_coulombs),
        cmocka_unit_test(test_part_behind_another_takes_its_potential),
        cmocka_unit_test(test_parts_that_only_see_each_other_are_refused_by_name),
        cmocka_unit_test(test_single_part_among_mirrors_is_named),
        cmocka_unit_test(test_every_failed_allocation_is_reported),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
