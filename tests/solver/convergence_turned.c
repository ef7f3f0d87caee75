/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Turned planes against closed forms, with round parts on cut legs and the axis inside
 * the region.
 *  - Coaxial tubes: phi = V ln(r/b)/ln(a/b), charge 2 pi eps0 L V/ln(b/a); Jackson,
 *    Classical Electrodynamics, ch. 1 (from memory).
 *  - Concentric spheres: phi = V (1/r - 1/b)/(1/a - 1/b), charge 4 pi eps0 V a b/(b - a);
 *    Jackson, ch. 1 (from memory).
 *  - Eccentric spheres: charge by successive images (Maxwell, Treatise, ch. XI, from
 *    memory).
 *  - A can of radius R and length L with one end at V: a series of J0; Jackson, sec. 3.7
 *    (from memory). A tube whose potential runs linearly along it between mirror ends: a
 *    series of I0 (separation of variables).
 * Charges are compared per radian and without eps0. */

#include "tests/support/assert_close.h"

#include <gsl/gsl_sf_bessel.h>

#include "shared/constants.h"
#include "solver/extrapolate.h"
#include "solver/plane_solution.h"
#include "tests/support/scene.h"

#define KIND PLANE_ELECTRIC_TURNED
enum { LEVELS = 4 };

static void solve(const struct geometry *g, double fineness, int level,
                  struct plane_solution *solution)
{
    assert_int_equal(
        plane_solve(g, KIND,
                    &(struct grid_request){.fineness = fineness, .level = level},
                    solution, NULL),
        STATUS_OK);
}

static struct field_value value_at(const struct plane_solution *s, double z, double r)
{
    struct field_value v;
    assert_int_equal(field_at(s->field, (struct vec2){z, r}, &v), STATUS_OK);
    return v;
}

static void assert_order(const char *what, const double *error, double order,
                         double within, double finest)
{
    const double measured = log2(error[0] / error[LEVELS - 1]) / (LEVELS - 1);
    print_message("  %s:", what);
    for (int k = 0; k < LEVELS; k++)
        print_message(" %.2e", error[k]);
    print_message(", order %.3f\n", measured);
    assert_true(error[LEVELS - 1] > 1e-12); /* else round-off is judged */
    assert_close(measured, order, 0.0, within);
    assert_at_most(error[LEVELS - 1], finest);
}

static void worse(double *worst, double error)
{
    if (!(fabs(error) <= *worst))
        *worst = fabs(error);
}

/* Largest error of the potential over the free nodes. */
static double potential_error(const struct plane_solution *s,
                              double (*exact)(double z, double r))
{
    double worst = 0.0;
    for (int n = 0; n < s->grid.na * s->grid.nb; n++)
        if (s->grid.owner[n] == OWNER_FREE)
            worse(&worst, s->phi[n] - exact(s->grid.a[n % s->grid.na],
                                            s->grid.b[n / s->grid.na]));
    return worst;
}

/* --- coaxial tubes ------------------------------------------------------------- */

#define TUBE_INNER  3.17e-3
#define TUBE_OUTER  11.3e-3
#define TUBE_LENGTH 7.1e-3

static double tube_potential(double z, double r)
{
    (void)z;
    return log(r / TUBE_OUTER) / log(TUBE_INNER / TUBE_OUTER);
}

/* A solid rod round the axis in a tube. */
static void rod_in_tube(struct geometry *g)
{
    scene_begin(g, 1.0, false);
    struct plane *p = scene_turned(g, 0.0, TUBE_LENGTH, 0.0, 13e-3);
    scene_box(p, "rod", 1.0, 0.0, TUBE_LENGTH, 0.0, TUBE_INNER, 0.0);
    scene_box(p, "tube", 0.0, 0.0, TUBE_LENGTH, TUBE_OUTER, 13e-3, 0.0);
}

/* The same space between two walls, without the axis. */
static void walls_only(struct geometry *g)
{
    scene_begin(g, 1.0, false);
    struct plane *p = scene_turned(g, 0.0, TUBE_LENGTH, TUBE_INNER, TUBE_OUTER);
    scene_wall(p, SIDE_B_LOW, 1.0, 1.0);
}

static void test_rod_in_tube_is_second_order(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    double potential[LEVELS], charge[LEVELS], field[LEVELS];
    const double logarithm = log(TUBE_OUTER / TUBE_INNER);
    rod_in_tube(&g);
    for (int l = 0; l < LEVELS; l++) {
        solve(&g, 1.0, l, &s);
        potential[l] = potential_error(&s, tube_potential);
        charge[l] = fabs(s.part_flux[0] / (TUBE_LENGTH / logarithm) - 1.0);
        field[l] =
            fabs(value_at(&s, 2.9e-3, 5.3e-3).gradient.b * 5.3e-3 * logarithm + 1.0);
        assert_close(s.part_flux[1], -s.part_flux[0], 1e-10, 0.0);
        plane_solution_free(&s);
    }
    assert_order("potential", potential, 2.0, 0.1, 1e-6);
    assert_order("charge", charge, 2.0, 0.1, 6e-6);
    assert_order("field", field, 2.0, 0.1, 4e-6);
    geometry_free(&g);
}

static void test_tubes_without_the_axis_are_second_order(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    double potential[LEVELS], charge[LEVELS];
    walls_only(&g);
    for (int l = 0; l < LEVELS; l++) {
        solve(&g, 1.0, l, &s);
        potential[l] = potential_error(&s, tube_potential);
        charge[l] = fabs(s.side_flux[SIDE_B_LOW] /
                             (TUBE_LENGTH / log(TUBE_OUTER / TUBE_INNER)) -
                         1.0);
        assert_close(s.side_flux[SIDE_B_HIGH], -s.side_flux[SIDE_B_LOW], 1e-10, 0.0);
        plane_solution_free(&s);
    }
    assert_order("potential", potential, 2.0, 0.1, 1e-5);
    assert_order("charge", charge, 2.0, 0.1, 3e-5);
    geometry_free(&g);
}

/* --- spheres ------------------------------------------------------------------- */

#define BALL        3.17e-3
#define SHELL       11.3e-3
#define FIELD_SCALE (SHELL / (BALL * (SHELL - BALL))) /* field at the ball's surface */

static double sphere_potential(double z, double r)
{
    return (1.0 / hypot(z, r) - 1.0 / SHELL) / (1.0 / BALL - 1.0 / SHELL);
}

/* A ball, `shift` along the axis, in a hollow sphere. */
static void spheres(struct geometry *g, double shift)
{
    scene_begin(g, 1.0, false);
    struct plane *p = scene_turned(g, -13e-3, 13e-3, 0.0, 13e-3);
    scene_cut_disc(scene_box(p, "shell", 0.0, -13e-3, 13e-3, 0.0, 13e-3, 0.0), 0.0, 0.0,
                   SHELL);
    scene_disc(p, "ball", 1.0, shift, 0.0, BALL);
}

/* Root mean square error of the field over points between two radii, the axis included,
 * relative to the field at the ball. */
static double sphere_field_error(const struct plane_solution *s, double from, double to,
                                 bool surface)
{
    enum { POINTS = 337 };
    const double k = 1.0 / (1.0 / BALL - 1.0 / SHELL);
    double squares = 0.0;
    for (int n = 0; n <= POINTS; n++) {
        const double angle = PI * n / POINTS;
        const double d = from + (to - from) * (0.5 + 0.5 * sin(2.385 * n));
        const struct vec2 at = {d * cos(angle), n == POINTS ? 0.0 : d * sin(angle)};
        struct field_value v;
        assert_int_equal(surface ? field_at_surface(s->field, at, &v)
                                 : field_at(s->field, at, &v),
                         STATUS_OK);
        assert_int_equal(v.part, -1);
        const struct vec2 want = vec2_scale(at, -k / (d * d * d));
        const double error = vec2_length(vec2_sub(v.gradient, want)) / FIELD_SCALE;
        squares += error * error;
    }
    return sqrt(squares / (POINTS + 1));
}

static void test_concentric_spheres_are_second_order(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    double potential[LEVELS], charge[LEVELS], field[LEVELS], ball[LEVELS],
        shell[LEVELS];
    const double exact = 2.0 / (1.0 / BALL - 1.0 / SHELL);
    spheres(&g, 0.0);
    for (int l = 0; l < LEVELS; l++) {
        solve(&g, 3.0, l, &s);
        potential[l] = potential_error(&s, sphere_potential);
        charge[l] = fabs(s.part_flux[1] / exact - 1.0);
        field[l] = sphere_field_error(&s, 4e-3, 10.5e-3, false);
        ball[l] = sphere_field_error(&s, BALL, BALL, true);
        shell[l] = sphere_field_error(&s, SHELL, SHELL, true);
        assert_close(s.part_flux[0], -s.part_flux[1], 1e-10, 0.0);
        plane_solution_free(&s);
    }
    assert_order("potential", potential, 2.0, 0.1, 4e-6);
    assert_order("charge", charge, 2.0, 0.1, 4e-6);
    assert_order("field", field, 2.0, 0.1, 3e-6);
    /* Scattered nodes next to the arc carry an h^2 log h of their own. */
    assert_order("field on the ball", ball, 2.0, 0.25, 2e-5);
    assert_order("field on the shell", shell, 2.0, 0.1, 1e-6);
    geometry_free(&g);
}

/* Charge (per radian, without eps0) of a ball at 1 V, its centre `shift` from that of the
 * earthed shell: images in the shell and in the ball in turn. */
static double charge_by_images(double shift)
{
    double charge = BALL, at = shift,
           sum = 0.0; /* 4 pi eps0; from the shell's centre */
    for (int k = 0; k < 200; k++) {
        sum += charge;
        const double outer = -charge * SHELL / at, place = SHELL * SHELL / at;
        const double distance = place - shift;
        charge = -outer * BALL / distance;
        at = shift + BALL * BALL / distance;
    }
    return 2.0 * sum;
}

static void test_eccentric_spheres_charge_matches_images(void **state)
{
    (void)state;
    const double shift = 4.3e-3;
    struct geometry g;
    struct plane_solution s;
    double error[LEVELS];
    spheres(&g, shift);
    for (int l = 0; l < LEVELS; l++) {
        solve(&g, 2.0, l, &s);
        error[l] = fabs(s.part_flux[1] / charge_by_images(shift) - 1.0);
        plane_solution_free(&s);
    }
    assert_order("charge", error, 2.0, 0.1, 5e-6);
    geometry_free(&g);
}

/* --- cans ---------------------------------------------------------------------- */

#define CAN_RADIUS 5.3e-3
#define CAN_LENGTH 8.9e-3

/* Potential and slopes of a can whose end z = 0 is at 1, the mantle at 0 and the far end
 * at 0, or a mirror. */
static double can_series(double z, double r, bool mirror, struct vec2 *gradient)
{
    double sum = 0.0;
    *gradient = (struct vec2){0.0, 0.0};
    for (unsigned n = 1; n <= 60; n++) {
        const double zero = gsl_sf_bessel_zero_J0(n), k = zero / CAN_RADIUS;
        const double a = 2.0 / (zero * gsl_sf_bessel_J1(zero));
        /* sinh or cosh (k (L - z)) over its value at z = 0, and its slope */
        const double e = exp(-k * z), back = exp(-2.0 * k * (CAN_LENGTH - z));
        const double whole = exp(-2.0 * k * CAN_LENGTH), sign = mirror ? 1.0 : -1.0;
        const double shape = e * (1.0 + sign * back) / (1.0 + sign * whole);
        const double slope = -k * e * (1.0 - sign * back) / (1.0 + sign * whole);
        sum += a * gsl_sf_bessel_J0(k * r) * shape;
        gradient->a += a * gsl_sf_bessel_J0(k * r) * slope;
        gradient->b -= a * k * gsl_sf_bessel_J1(k * r) * shape;
    }
    return sum;
}

static void can(struct geometry *g, enum side_kind far)
{
    scene_begin(g, 1.0, false);
    struct plane *p = scene_turned(g, 0.0, CAN_LENGTH, 0.0, CAN_RADIUS);
    scene_wall(p, SIDE_A_LOW, 1.0, 1.0);
    p->sides[SIDE_A_HIGH].kind = far;
}

/* The axis, and a line beside it. The jump at the rim of the lid is felt next to it
 * only. */
static void can_is_second_order(enum side_kind far)
{
    struct geometry g;
    struct plane_solution s;
    double on_axis[LEVELS] = {0.0}, beside[LEVELS] = {0.0}, values[LEVELS], limit = 0.0;
    can(&g, far);
    for (int l = 0; l < LEVELS; l++) {
        solve(&g, 2.0, l, &s);
        for (int k = 1; k < 8; k++) {
            const double z = 0.25 * CAN_RADIUS + 0.19 * CAN_RADIUS * k;
            for (int side = 0; side < 2; side++) {
                struct vec2 want;
                const double r = 0.37 * CAN_RADIUS * side;
                const struct field_value v = value_at(&s, z, r);
                double *error = side == 0 ? &on_axis[l] : &beside[l];
                worse(error, v.potential - can_series(z, r, far == SIDE_MIRROR, &want));
                worse(error, CAN_RADIUS * vec2_length(vec2_sub(v.gradient, want)));
            }
        }
        values[l] = value_at(&s, 0.9 * CAN_RADIUS, 0.0).gradient.a;
        plane_solution_free(&s);
    }
    struct vec2 exact;
    (void)can_series(0.9 * CAN_RADIUS, 0.0, far == SIDE_MIRROR, &exact);
    limit = extrapolate(values + LEVELS - 3, 3, 0.0).value;
    print_message("  extrapolated axis field off by %.1e\n", limit / exact.a - 1.0);
    assert_close(limit, exact.a, 1e-7, 0.0);
    assert_order("axis", on_axis, 2.0, 0.1, 3e-5);
    assert_order("beside", beside, 2.0, 0.1, 5e-5);
    geometry_free(&g);
}

static void test_closed_can_is_second_order(void **state)
{
    (void)state;
    can_is_second_order(SIDE_WALL);
}

static void test_can_with_mirror_end_is_second_order(void **state)
{
    (void)state;
    can_is_second_order(SIDE_MIRROR);
}

static void test_can_with_antimirror_end_is_second_order(void **state)
{
    (void)state;
    can_is_second_order(SIDE_ANTIMIRROR);
}

/* Wall potential z/L on the mantle between mirror ends. */
static double ramp_potential(double z, double r)
{
    double sum = 0.5;
    for (int n = 1; n < 4000; n += 2) {
        const double k = n * PI / CAN_LENGTH;
        const double shape = gsl_sf_bessel_I0_scaled(k * r) /
                             gsl_sf_bessel_I0_scaled(k * CAN_RADIUS) *
                             exp(-k * (CAN_RADIUS - r));
        if (shape < 1e-18)
            break;
        sum -= 4.0 / (n * PI * n * PI) * cos(k * z) * shape;
    }
    return sum;
}

static void test_ramp_along_a_tube_is_second_order(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    double error[LEVELS] = {0.0};
    scene_begin(&g, 1.0, false);
    scene_wall(scene_turned(&g, 0.0, CAN_LENGTH, 0.0, CAN_RADIUS), SIDE_B_HIGH, 0.0,
               1.0);
    for (int l = 0; l < LEVELS; l++) {
        solve(&g, 2.0, l, &s);
        for (int k = 0; k < 20; k++) {
            const double z = CAN_LENGTH * 0.05 * k, r = CAN_RADIUS * 0.04 * (k % 12);
            worse(&error[l], value_at(&s, z, r).potential - ramp_potential(z, r));
        }
        plane_solution_free(&s);
    }
    assert_order("potential", error, 2.0, 0.1, 1e-5);
    geometry_free(&g);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_rod_in_tube_is_second_order),
        cmocka_unit_test(test_tubes_without_the_axis_are_second_order),
        cmocka_unit_test(test_concentric_spheres_are_second_order),
        cmocka_unit_test(test_eccentric_spheres_charge_matches_images),
        cmocka_unit_test(test_closed_can_is_second_order),
        cmocka_unit_test(test_can_with_mirror_end_is_second_order),
        cmocka_unit_test(test_can_with_antimirror_end_is_second_order),
        cmocka_unit_test(test_ramp_along_a_tube_is_second_order),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
