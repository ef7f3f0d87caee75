/* SPDX-License-Identifier: GPL-3.0-or-later */

/* A disc at 0 with a guard ring at 0 round it, opposite a plate at 1: its charge is that
 * of a larger disc without an edge.
 *  - In the limit of a large radius the gap between disc and ring is Carter's slot, as
 *    deep as it takes: radius R + (1 - sigma) s/2 with sigma = (2/pi) (atan(s/(2 g)) -
 *    (g/s) ln(1 + (s/(2 g))^2)), s the gap, g the distance of the plate; F. W. Carter, J.
 *    IEE 29, 925 (1901), from memory.
 *  - Maxwell, Treatise, art. 201 (from memory): capacitance, in Gaussian units,
 *    (1/8) ((R^2 + R'^2)/A - (R'^2 - R^2)/A alpha/(A + alpha)), alpha = (ln 2/pi)(R' - R).
 *    It takes the mean of the two areas where the edge lies near the mean radius, and
 *    alpha/s = ln 2/pi where Carter has 1/(2 pi): both are wrong
 *    by terms of the square of the gap. */

#include "tests/support/assert_close.h"

#include "shared/constants.h"
#include "solver/extrapolate.h"
#include "solver/plane_solution.h"
#include "tests/support/scene.h"

#define GAP 1.3e-3 /* where it is not varied */

/* Extrapolated charge of the disc per radian, without eps0: R^2/(2 A) but for the gap. */
static double disc_charge(double radius, double gap, double distance)
{
    const double depth = 5.0 * gap, end = radius + gap + 4.0 * distance;
    struct geometry g;
    double values[3];
    scene_begin(&g, 1.0, false);
    struct plane *p = scene_turned(&g, -depth, distance, 0.0, end);
    scene_wall(p, SIDE_A_LOW, 0.0, 0.0);
    scene_wall(p, SIDE_A_HIGH, 1.0, 1.0);
    p->sides[SIDE_B_HIGH].kind = SIDE_MIRROR;
    scene_box(p, "disc", 0.0, -depth, 0.0, 0.0, radius, 0.0);
    scene_box(p, "ring", 0.0, -depth, 0.0, radius + gap, end, 0.0);
    for (int l = 0; l < 3; l++) {
        struct plane_solution s;
        assert_int_equal(
            plane_solve(&g, PLANE_ELECTRIC_TURNED,
                        &(struct grid_request){.fineness = 1.0, .level = l}, &s, NULL),
            STATUS_OK);
        values[l] = -s.part_flux[0];
        plane_solution_free(&s);
    }
    geometry_free(&g);
    return extrapolate(values, 3, 0.0).value;
}

/* sigma as the charge tells it, at one radius of the gap's middle. */
static double measured_sigma(double middle, double distance)
{
    const double charge = disc_charge(middle - 0.5 * GAP, GAP, distance);
    return (middle - sqrt(2.0 * distance * charge)) * 2.0 / GAP;
}

/* The curvature of the gap changes sigma by a multiple of s/R in the first order: two
 * radii tell the limit. */
static void test_large_disc_has_the_edge_of_a_slot(void **state)
{
    (void)state;
    const double ratio[] = {1.0, 0.4};
    for (int k = 0; k < 2; k++) {
        const double g = GAP / ratio[k], x = 0.5 * ratio[k];
        const double carter = 2.0 / PI * (atan(x) - log1p(x * x) / ratio[k]);
        const double near = measured_sigma(40.0 * GAP, g);
        const double far = measured_sigma(80.0 * GAP, g);
        const double limit = 2.0 * far - near;
        print_message("  s/g %g: sigma %.8f and %.8f, limit %.8f, Carter %.8f\n",
                      ratio[k], near, far, limit, carter);
        assert_close(far, carter, 0.0, 2e-3);
        assert_close(limit, carter, 0.0, 5e-6);
    }
}

/* The formula's own error is of the order (gap/R)^2 ln(A/gap), so the order in the gap
 * is a little below 2. */
static void test_maxwells_capacitance_is_approached_as_the_gap_closes(void **state)
{
    (void)state;
    const double radius = 7.3e-3, distance = 5.9e-3;
    double off[3];
    for (int k = 0; k < 3; k++) {
        const double gap = ldexp(GAP, -k), outer = radius + gap;
        const double alpha = log(2.0) / PI * gap;
        const double mean = radius * radius + outer * outer;
        const double ring = outer * outer - radius * radius;
        const double maxwell =
            0.25 * (mean - ring * alpha / (distance + alpha)) / distance;
        off[k] = disc_charge(radius, gap, distance) / maxwell - 1.0;
        print_message("  gap %.3g: off by %.3e\n", gap, off[k]);
        assert_at_most(fabs(off[k]), 0.5 * pow(gap / radius, 2.0));
    }
    assert_close(log2(off[0] / off[2]) / 2.0, 1.85, 0.0, 0.15);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_large_disc_has_the_edge_of_a_slot),
        cmocka_unit_test(test_maxwells_capacitance_is_approached_as_the_gap_closes),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
