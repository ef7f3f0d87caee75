/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Forces on conductors: exact where the field is uniform, and against the derivative of a
 * capacitance, F = V^2/2 dC/dx, elsewhere. All forces are per eps0. */

#include "tests/support/assert_close.h"

#include "shared/constants.h"
#include "shared/mem.h"
#include "solver/extrapolate.h"
#include "solver/plane_solution.h"
#include "tests/support/scene.h"

#define KIND  PLANE_ELECTRIC_ACROSS
#define VOLTS 3.857

enum { LEVELS = 3 };

static void solve(const struct geometry *g, enum plane_kind kind, double fineness,
                  int level, struct plane_solution *s)
{
    assert_int_equal(
        plane_solve(g, kind,
                    &(struct grid_request){.fineness = fineness, .level = level}, s,
                    NULL),
        STATUS_OK);
}

/* Force on conductor k over a family. */
static void family(const struct geometry *g, enum plane_kind kind, double fineness,
                   size_t k, struct estimate *a, struct estimate *b)
{
    double values[2][LEVELS];
    for (int l = 0; l < LEVELS; l++) {
        struct plane_solution s;
        solve(g, kind, fineness, l, &s);
        assert_false(s.capacitance.force[k].blocked);
        values[0][l] = s.capacitance.force[k].value.a;
        values[1][l] = s.capacitance.force[k].value.b;
        plane_solution_free(&s);
    }
    *a = extrapolate(values[0], LEVELS, 0.0);
    *b = extrapolate(values[1], LEVELS, 0.0);
}

/* Plate from mirror to mirror, gaps of 4 and 9 mm to earthed walls: width E^2/2 each. */
static void test_guarded_plate_is_pulled_by_half_the_field_squared(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    scene_begin(&g, VOLTS, false);
    struct plane *p = scene_plane(&g, KIND, 0.0, 31e-3, -9e-3, 7e-3);
    p->sides[SIDE_A_LOW].kind = p->sides[SIDE_A_HIGH].kind = SIDE_MIRROR;
    scene_box(p, "plate", 1.0, 0.0, 31e-3, 0.0, 3e-3, 0.0);
    solve(&g, KIND, 1.0, 0, &s);
    const double up = VOLTS / 4e-3, down = VOLTS / 9e-3;
    assert_close(s.capacitance.force[0].value.b, 31e-3 * 0.5 * (up * up - down * down),
                 1e-11, 0.0);
    plane_solution_free(&s);
    geometry_free(&g);
}

/* The same turned: a disc reaching a mirror at r = 12 mm, per radian r^2/2 E^2/2. */
static void test_turned_disc_is_pulled_along_its_axis(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    scene_begin(&g, VOLTS, false);
    struct plane *p = scene_plane(&g, PLANE_ELECTRIC_TURNED, -9e-3, 7e-3, 0.0, 12e-3);
    p->sides[SIDE_B_LOW].kind = p->sides[SIDE_B_HIGH].kind = SIDE_MIRROR;
    scene_box(p, "disc", 1.0, 0.0, 3e-3, 0.0, 12e-3, 0.0);
    solve(&g, PLANE_ELECTRIC_TURNED, 1.0, 0, &s);
    const double up = VOLTS / 4e-3, down = VOLTS / 9e-3;
    assert_close(s.capacitance.force[0].value.a,
                 0.5 * 12e-3 * 12e-3 * 0.5 * (up * up - down * down), 1e-10, 0.0);
    plane_solution_free(&s);
    geometry_free(&g);
}

/* C = 2 pi/acosh(x), x = (a^2 + b^2 - d^2)/(2 a b), pulls the core outwards (Smythe, sec.
 * 4.14, from memory); d at 0.3 rad to the lines. */
static void eccentric(struct geometry *g, double a, double b, double d)
{
    scene_begin(g, VOLTS, false);
    struct plane *p = scene_plane(g, KIND, -12e-3, 12e-3, -12e-3, 12e-3);
    scene_cut_disc(scene_box(p, "shell", 0.0, -12e-3, 12e-3, -12e-3, 12e-3, 0.0), 0.0,
                   0.0, b);
    scene_disc(p, "core", 1.0, d * cos(0.3), d * sin(0.3), a);
}

static double eccentric_force(double a, double b, double d)
{
    const double x = (a * a + b * b - d * d) / (2.0 * a * b);
    const double slope = 2.0 * PI / (acosh(x) * acosh(x) * sqrt(x * x - 1.0));
    return 0.5 * VOLTS * VOLTS * slope * d / (a * b);
}

static void test_eccentric_core_is_pulled_as_its_capacitance_says(void **state)
{
    (void)state;
    struct geometry g;
    struct estimate fa, fb;
    const double exact = eccentric_force(3e-3, 10e-3, 3e-3);
    eccentric(&g, 3e-3, 10e-3, 3e-3);
    family(&g, KIND, 2.0, 1, &fa, &fb);
    const double along = fa.value * cos(0.3) + fb.value * sin(0.3);
    const double across = fb.value * cos(0.3) - fa.value * sin(0.3);
    print_message("  relative error %.1e, across %.1e, uncertainty %.1e\n",
                  along / exact - 1.0, across / exact, fa.uncertainty / exact);
    assert_close(along, exact, 5e-6, 0.0);
    assert_close(across, 0.0, 0.0, 1e-5 * exact);
    geometry_free(&g);
}

static void test_force_is_second_order(void **state)
{
    (void)state;
    double error[LEVELS];
    struct geometry g;
    const double exact = eccentric_force(3e-3, 10e-3, 3e-3);
    eccentric(&g, 3e-3, 10e-3, 3e-3);
    for (int l = 0; l < LEVELS; l++) {
        struct plane_solution s;
        solve(&g, KIND, 3.0, l, &s);
        const struct vec2 f = s.capacitance.force[1].value;
        error[l] = fabs((f.a * cos(0.3) + f.b * sin(0.3)) / exact - 1.0);
        print_message("  level %d: %.2e\n", l, error[l]);
        plane_solution_free(&s);
    }
    assert_close(log2(error[0] / error[1]), 2.0, 0.0, 0.15);
    assert_close(log2(error[1] / error[2]), 2.0, 0.0, 0.15);
    geometry_free(&g);
}

/* Integral of E^2/2 n over the surface of the core at (d cos 0.3, d sin 0.3). The points
 * lie at equal steps, so the sum is right beyond all orders. */
static struct vec2 surface_force(const struct plane_solution *s, double a, double d)
{
    enum { POINTS = 400 };
    struct vec2 sum = {0.0, 0.0};
    for (int k = 0; k < POINTS; k++) {
        const double angle = 2.0 * PI * (k + 0.37) / POINTS;
        const struct vec2 normal = {cos(angle), sin(angle)};
        const struct vec2 at = {d * cos(0.3) + a * normal.a,
                                d * sin(0.3) + a * normal.b};
        struct field_value v;
        assert_int_equal(field_at_surface(s->field, at, &v), STATUS_OK);
        const double share = PI * a / POINTS * vec2_dot(v.gradient, v.gradient);
        sum = vec2_add(sum, vec2_scale(normal, share));
    }
    return sum;
}

static void test_force_is_the_integral_over_the_surface(void **state)
{
    (void)state;
    double surface[LEVELS], stress[LEVELS];
    struct geometry g;
    eccentric(&g, 3e-3, 10e-3, 3e-3);
    for (int l = 0; l < LEVELS; l++) {
        struct plane_solution s;
        solve(&g, KIND, 3.0, l, &s);
        surface[l] = surface_force(&s, 3e-3, 3e-3).a;
        stress[l] = s.capacitance.force[1].value.a;
        print_message("  %.7g by the surface, %.7g\n", surface[l], stress[l]);
        plane_solution_free(&s);
    }
    assert_close(surface[2], stress[2], 2e-4, 0.0);
    assert_close(extrapolate(surface, LEVELS, 0.0).value,
                 extrapolate(stress, LEVELS, 0.0).value, 3e-5, 0.0);
    geometry_free(&g);
}

/* Two wires at +-V/2, a quarter of the plane, far from all walls: F = V^2/2 dC/dD with
 * C = pi/acosh(D/2a), Smythe, sec. 4.14 (from memory). The walls lie 30 spacings away:
 * their images pull with about (D/L)^2 of it. */
static void test_wire_pair_attracts_as_its_capacitance_says(void **state)
{
    (void)state;
    const double spacing = 4e-3, a = 1e-3, x = spacing / (2.0 * a);
    struct geometry g;
    struct estimate fa, fb;
    scene_begin(&g, VOLTS, false);
    struct plane *p = scene_plane(&g, KIND, 0.0, 120e-3, 0.0, 120e-3);
    p->sides[SIDE_A_LOW].kind = SIDE_ANTIMIRROR;
    p->sides[SIDE_B_LOW].kind = SIDE_MIRROR;
    scene_disc(p, "right", 0.5, 0.5 * spacing, 0.0, a);
    family(&g, KIND, 1.0, 0, &fa, &fb);
    const double slope = PI / (acosh(x) * acosh(x) * sqrt(x * x - 1.0)) / (2.0 * a);
    const double exact = -0.5 * VOLTS * VOLTS * slope;
    print_message("  relative error %.1e\n", 2.0 * fa.value / exact - 1.0);
    assert_close(2.0 * fa.value, exact, 1e-3, 0.0);
    geometry_free(&g);
}

/* A rod, and its image at the same potential: half the region with a mirror must give the
 * force that the whole region gives. */
static void rods(struct geometry *g, bool half)
{
    scene_begin(g, VOLTS, false);
    struct plane *p = scene_plane(g, KIND, half ? 0.0 : -20e-3, 20e-3, -13e-3, 17e-3);
    if (half)
        p->sides[SIDE_A_LOW].kind = SIDE_MIRROR;
    scene_box(p, "rod", 1.0, 2e-3, 5e-3, -2e-3, 1e-3, 0.0);
    if (!half)
        scene_box(p, "image", 1.0, -5e-3, -2e-3, -2e-3, 1e-3, 0.0);
}

static void test_rod_before_a_mirror_feels_its_image(void **state)
{
    (void)state;
    struct estimate fa[2], fb[2];
    for (int half = 0; half < 2; half++) {
        struct geometry g;
        rods(&g, half);
        family(&g, KIND, 1.0, 0, &fa[half], &fb[half]);
        geometry_free(&g);
    }
    print_message("  %.7g, %.7g whole; %.7g, %.7g half\n", fa[0].value, fb[0].value,
                  fa[1].value, fb[1].value);
    assert_true(fa[0].value > 0.0); /* away from the image */
    assert_close(fa[1].value, fa[0].value, 2e-5, 0.0);
    assert_close(fb[1].value, fb[0].value, 2e-5, 0.0);
}

/* A rod across the step of an earthed bore, 6 mm radius on the left and 9 mm on the right,
 * all ends far away: moving it trades one coaxial capacitance per length for the other,
 * so per radian F = V^2/2 (1/ln(9/3) - 1/ln(6/3)), but for exp(-16). */
static void test_turned_rod_is_pulled_as_its_capacitance_says(void **state)
{
    (void)state;
    struct geometry g;
    struct estimate fa, fb;
    scene_begin(&g, VOLTS, false);
    struct plane *p = scene_plane(&g, PLANE_ELECTRIC_TURNED, -60e-3, 60e-3, 0.0, 9e-3);
    p->sides[SIDE_B_LOW].kind = SIDE_MIRROR;
    scene_box(p, "rod", 1.0, -35e-3, 30e-3, 0.0, 3e-3, 0.0);
    scene_box(p, "step", 0.0, -60e-3, 0.0, 6e-3, 9e-3, 0.0);
    family(&g, PLANE_ELECTRIC_TURNED, 1.0, 0, &fa, &fb);
    const double exact = 0.5 * VOLTS * VOLTS * (1.0 / log(3.0) - 1.0 / log(2.0));
    print_message("  relative error %.1e, uncertainty %.1e\n", fa.value / exact - 1.0,
                  fa.uncertainty / fabs(exact));
    assert_close(fa.value, exact, 1e-5, 0.0);
    geometry_free(&g);
}

static void test_forces_on_free_parts_and_their_opposite_balance(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    scene_begin(&g, VOLTS, false);
    struct plane *p = scene_plane(&g, KIND, -30e-3, 30e-3, -20e-3, 20e-3);
    scene_box(p, "upper", 1.0, -15e-3, 15e-3, 8e-3, 10e-3, 0.0);
    scene_box(p, "lower", -1.0, -15e-3, 15e-3, -10e-3, -8e-3, 0.0);
    solve(&g, KIND, 1.0, 1, &s);
    const struct force *f = s.capacitance.force;
    assert_true(f[0].value.b < 0.0); /* towards each other */
    assert_close(f[1].value.b, -f[0].value.b, 1e-10, 0.0);
    assert_close(f[0].value.a, 0.0, 0.0, 1e-10 * f[0].gross);
    assert_true(f[0].gross >= fabs(f[0].value.b));
    plane_solution_free(&s);
    geometry_free(&g);
}

static void test_insulator_in_the_gap_blocks_the_force(void **state)
{
    (void)state;
    for (int where = 0; where < 2; where++) {
        struct geometry g;
        struct plane_solution s;
        scene_begin(&g, VOLTS, false);
        struct plane *p = scene_plane(&g, KIND, -30e-3, 30e-3, -20e-3, 20e-3);
        scene_box(p, "plate", 1.0, -15e-3, 15e-3, 3e-3, 5e-3, 0.0);
        /* Half way up the gap, or on the far wall where the unit potential is small. */
        const double low = where == 0 ? -9e-3 : -20e-3;
        struct part *glass =
            scene_box(p, "glass", 0.0, -5e-3, 5e-3, low, low + 2e-3, 0.0);
        glass->kind = PART_INSULATOR;
        glass->permittivity = 3.8;
        solve(&g, KIND, 1.0, 0, &s);
        assert_int_equal(s.capacitance.conductors.count, 1);
        assert_true(s.capacitance.force[0].blocked == (where == 0));
        plane_solution_free(&s);
        geometry_free(&g);
    }
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_guarded_plate_is_pulled_by_half_the_field_squared),
        cmocka_unit_test(test_turned_disc_is_pulled_along_its_axis),
        cmocka_unit_test(test_eccentric_core_is_pulled_as_its_capacitance_says),
        cmocka_unit_test(test_force_is_second_order),
        cmocka_unit_test(test_force_is_the_integral_over_the_surface),
        cmocka_unit_test(test_wire_pair_attracts_as_its_capacitance_says),
        cmocka_unit_test(test_rod_before_a_mirror_feels_its_image),
        cmocka_unit_test(test_turned_rod_is_pulled_as_its_capacitance_says),
        cmocka_unit_test(test_forces_on_free_parts_and_their_opposite_balance),
        cmocka_unit_test(test_insulator_in_the_gap_blocks_the_force),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
