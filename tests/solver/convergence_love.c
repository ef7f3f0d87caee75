/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Two equal coaxial discs in free space: a turned plane with open sides, thin edges and
 * the axis, against Love's integral equation (tests/support/love.h), which is for discs
 * without thickness. A thickness t adds about 1.4 t/(2 pi a) ln(8 pi a/t) of the
 * capacitance (edges of a disc larger by t/(2 pi) ln(8 pi a/t); estimate), 1e-6 at t =
 * 2.5e-7 a. Two thicknesses, one twice the other, are extrapolated to none, which leaves
 * 2 ln 2/ln(8 pi a/t) = 0.08 of it. */

#include "tests/support/assert_close.h"

#include "shared/constants.h"
#include "solver/extrapolate.h"
#include "solver/plane_solution.h"
#include "tests/support/love.h"
#include "tests/support/scene.h"

#define RADIUS 23.7e-3
#define THIN   2.5e-7 /* of the radius */

static void test_quadrature_has_converged(void **state)
{
    (void)state;
    assert_close(love_capacitance(1.0, 32), love_capacitance(1.0, 64), 1e-13, 0.0);
    assert_close(love_capacitance(0.3, 64), love_capacitance(0.3, 128), 1e-13, 0.0);
    assert_true(fabs(love_capacitance(0.3, 10) / love_capacitance(0.3, 128) - 1.0) >
                1e-6); /* the comparison can fail */
}

/* Far apart: half of a single disc's 8 eps0 a, and 1/(1 - 2/(pi k)) for the other's
 * field. */
static void test_discs_far_apart_are_two_single_ones(void **state)
{
    (void)state;
    const double k = 1000.0;
    assert_close(love_capacitance(k, 32), 4.0 / (1.0 - 2.0 / (PI * k)), 1e-8, 0.0);
}

/* Kirchhoff (1877), from memory: C/(4 pi eps0) = a^2/(4 d) + a/(4 pi) (ln(16 pi a/d) - 1)
 * for d << a. What it leaves out falls as d ln^2 d. */
static void test_discs_near_each_other_follow_kirchhoff(void **state)
{
    (void)state;
    for (int n = 0; n < 3; n++) {
        const double k = ldexp(0.08, -n), kirchhoff = PI / k + log(16.0 * PI / k) - 1.0;
        const double off = love_capacitance(k, 512) - kirchhoff;
        const double rest = k / (4.0 * PI) * pow(log(16.0 * PI / k), 2.0);
        print_message("  d/a %g: off by %.2e, %.2f of k ln^2(16 pi/k)/(4 pi)\n", k, off,
                      off / rest);
        assert_close(off, rest, 0.2, 0.0);
    }
}

/* One disc before an antimirror; charge per radian without eps0, C = pi eps0 charge. */
static double solved_capacitance(double distance, double thickness)
{
    const double middle = 0.5 * distance;
    struct geometry g;
    double values[3];
    scene_begin(&g, 1.0, false);
    struct plane *p = scene_turned(&g, 0.0, middle + RADIUS, 0.0, 2.0 * RADIUS);
    p->sides[SIDE_A_LOW].kind = SIDE_ANTIMIRROR;
    p->sides[SIDE_A_HIGH].kind = p->sides[SIDE_B_HIGH].kind = SIDE_OPEN;
    scene_box(p, "disc", 1.0, middle - 0.5 * thickness, middle + 0.5 * thickness, 0.0,
              RADIUS, 0.0);
    for (int l = 0; l < 3; l++) {
        struct plane_solution s;
        assert_int_equal(
            plane_solve(&g, PLANE_ELECTRIC_TURNED,
                        &(struct grid_request){.fineness = 1.0, .level = l}, &s, NULL),
            STATUS_OK);
        values[l] = PI * s.part_flux[0] / RADIUS;
        print_message("  %d x %d: %.10f\n", s.grid.na, s.grid.nb, values[l]);
        plane_solution_free(&s);
    }
    geometry_free(&g);
    return extrapolate(values, 3, 0.0).value;
}

static void test_disc_capacitor_matches_loves_equation(void **state)
{
    (void)state;
    const double ratio[] = {1.0, 0.5};
    for (int k = 0; k < 2; k++) {
        const double exact = love_capacitance(ratio[k], 128);
        const double distance = ratio[k] * RADIUS;
        const double thin = solved_capacitance(distance, THIN * RADIUS);
        const double thick = solved_capacitance(distance, 2.0 * THIN * RADIUS);
        const double got = 2.0 * thin - thick;
        print_message("  d/a %g: %.10f, thin off by %.1e, limit by %.1e\n", ratio[k],
                      exact, thin / exact - 1.0, got / exact - 1.0);
        assert_close(thin, exact, 2e-6, 0.0);
        assert_close(got, exact, 3e-7, 0.0);
    }
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_quadrature_has_converged),
        cmocka_unit_test(test_discs_far_apart_are_two_single_ones),
        cmocka_unit_test(test_discs_near_each_other_follow_kirchhoff),
        cmocka_unit_test(test_disc_capacitor_matches_loves_equation),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
