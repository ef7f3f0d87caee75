/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Fields at the surfaces of conductors, at fixed points and at their peak.
 *  - A core in a shell, on one axis or not: the field of two opposite line charges
 *    (Smythe, Static and Dynamic Electricity, sec. 4.14; from memory).
 *  - A plate with rounded corners: no closed form; the grids against each other.
 *  - Rogowski ends: y = g/2 + (g/pi) exp(pi x/g - 1) is an equipotential of the edge of
 *    two endless plates (Maxwell, Treatise, art. 202; Rogowski, Arch. Elektrotech. 12, 1,
 *    1923; from memory). With k = (y - g/2) pi/g the field on it is E0/sqrt(1 + k^2),
 *    never above that inside. */

#include "tests/support/assert_close.h"

#include <complex.h>
#include <math.h>

#include "mesh/reader.h"
#include "shared/constants.h"
#include "shared/mem.h"
#include "solver/extrapolate.h"
#include "solver/plane_solution.h"
#include "solver/surface_field.h"
#include "tests/support/scene.h"

#define CORE  3.17e-3
#define SHELL 11.3e-3
#define SHIFT 2.9e-3
/* The axis of the core lies off that of the shell in the direction (1, 0.37). */
#define SKEW 0.37

enum { LEVELS = 4 };

static void cylinders(struct geometry *g, double shift)
{
    scene_begin(g, 1.0, false);
    struct plane *plane =
        scene_plane(g, PLANE_ELECTRIC_ACROSS, -13e-3, 13e-3, -13e-3, 13e-3);
    scene_cut_disc(scene_box(plane, "shell", 0.0, -13e-3, 13e-3, -13e-3, 13e-3, 0.0),
                   0.0, 0.0, SHELL);
    scene_disc(plane, "core", 1.0, shift, SKEW * shift, CORE);
}

/* Magnitude on the core at an angle (rad) about its axis, for 1 V. */
static double exact_on_core(double shift, double angle)
{
    if (shift == 0.0)
        return 1.0 / (CORE * log(SHELL / CORE));
    const double d = shift * hypot(1.0, SKEW);
    const double sum = (SHELL * SHELL + d * d - CORE * CORE) / d;
    const double near = 0.5 * (sum - sqrt(sum * sum - 4.0 * SHELL * SHELL));
    const double far = SHELL * SHELL / near;
    const double complex at = d + CORE * cexp((angle - atan(SKEW)) * (double complex)I);
    const double charge =
        1.0 / acosh((CORE * CORE + SHELL * SHELL - d * d) / (2.0 * CORE * SHELL));
    return charge * cabs(1.0 / (at - near) - 1.0 / (at - far));
}

static void solve(const struct geometry *g, enum plane_kind kind, double fineness,
                  int level, struct plane_solution *solution)
{
    assert_int_equal(
        plane_solve(g, kind,
                    &(struct grid_request){.fineness = fineness, .level = level},
                    solution, NULL),
        STATUS_OK);
}

static double field_at_angle(const struct plane_solution *s, double shift, double angle)
{
    struct field_value v;
    const struct vec2 at = {shift + CORE * cos(angle),
                            SKEW * shift + CORE * sin(angle)};
    assert_int_equal(field_at_surface(s->field, at, &v), STATUS_OK);
    return vec2_length(v.gradient);
}

static void assert_order(const double *error, int count, double within, double finest)
{
    for (int k = 0; k < count; k++)
        print_message("  grid %d error %.3e\n", k, error[k]);
    for (int k = 1; k < count; k++)
        print_message("  order %.3f\n", log2(fabs(error[k - 1] / error[k])));
    assert_close(log2(fabs(error[0] / error[count - 1])) / (double)(count - 1), 2.0,
                 0.0, within);
    assert_at_most(fabs(error[count - 1]), finest);
}

/* At fixed points: root mean square over the circle of each grid's error, and of what
 * extrapolation leaves. */
static void fixed_points(double shift, double finest, double extrapolated)
{
    enum { POINTS = 97 };
    struct geometry g;
    struct plane_solution s;
    double value[POINTS][LEVELS], error[LEVELS], squares = 0.0;
    cylinders(&g, shift);
    for (int l = 0; l < LEVELS; l++) {
        double sum = 0.0;
        solve(&g, PLANE_ELECTRIC_ACROSS, 3.0, l, &s);
        for (int k = 0; k < POINTS; k++) {
            const double angle = 2.0 * PI * k / POINTS;
            value[k][l] = field_at_angle(&s, shift, angle);
            const double e = value[k][l] / exact_on_core(shift, angle) - 1.0;
            sum += e * e;
        }
        error[l] = sqrt(sum / POINTS);
        plane_solution_free(&s);
    }
    for (int k = 0; k < POINTS; k++) {
        const double exact = exact_on_core(shift, 2.0 * PI * k / POINTS);
        const double e = extrapolate(value[k] + 1, 3, 0.0).value / exact - 1.0;
        squares += e * e;
    }
    print_message("  extrapolated: %.2e\n", sqrt(squares / POINTS));
    assert_order(error, LEVELS, 0.1, finest);
    assert_at_most(sqrt(squares / POINTS), extrapolated);
    geometry_free(&g);
}

static void test_field_on_a_core_is_second_order(void **state)
{
    (void)state;
    fixed_points(0.0, 2e-5, 1e-6);
}

static void test_field_on_an_eccentric_core_is_second_order(void **state)
{
    (void)state;
    fixed_points(SHIFT, 2e-5, 1e-6);
}

static void peaks_of_core(double shift, double peak[LEVELS], struct vec2 *place)
{
    struct geometry g;
    struct plane_solution s;
    cylinders(&g, shift);
    for (int l = 0; l < LEVELS; l++) {
        struct surface_peak found;
        solve(&g, PLANE_ELECTRIC_ACROSS, 3.0, l, &s);
        assert_int_equal(surface_field_peak(&s, 1, &found), STATUS_OK);
        assert_true(found.found && found.corner_distance == 0.0 && !found.at_corner);
        assert_close(found.radius, CORE, 1e-12, 0.0);
        peak[l] = found.field;
        *place = found.at;
        plane_solution_free(&s);
    }
    geometry_free(&g);
}

/* The highest of a constant field is its highest error: still of second order. */
static void test_peak_on_a_core_is_second_order(void **state)
{
    (void)state;
    double peak[LEVELS], error[LEVELS];
    const double exact = exact_on_core(0.0, 0.0);
    struct vec2 place;
    peaks_of_core(0.0, peak, &place);
    for (int l = 0; l < LEVELS; l++)
        error[l] = peak[l] / exact - 1.0;
    assert_order(error, LEVELS, 0.1, 4e-5);
    const struct estimate e = extrapolate(peak + 1, 3, 0.0);
    print_message("  extrapolated %.2e, stated %.2e\n", e.value / exact - 1.0,
                  e.uncertainty / exact);
    assert_close(e.value, exact, 0.0, e.uncertainty);
    assert_at_most(e.uncertainty, 1e-5 * exact);
}

static void test_peak_on_an_eccentric_core_lies_nearest_to_the_shell(void **state)
{
    (void)state;
    double peak[LEVELS];
    struct vec2 place;
    const double exact = exact_on_core(SHIFT, atan(SKEW));
    peaks_of_core(SHIFT, peak, &place);
    const struct estimate e = extrapolate(peak + 1, 3, 0.0);
    print_message("  extrapolated %.2e, stated %.2e\n", e.value / exact - 1.0,
                  e.uncertainty / exact);
    assert_close(atan2(place.b - SKEW * SHIFT, place.a - SHIFT), atan(SKEW), 0.0, 3e-3);
    assert_close(peak[LEVELS - 1], exact, 1e-5, 0.0);
    assert_close(e.value, exact, 0.0, e.uncertainty);
    assert_at_most(e.uncertainty, 2e-5 * exact);
}

/* Half of the upper of two plates 24 mm long, corners rounded by 2 mm, at grids fine
 * enough for the arc; order from the changes between grids. */
static void test_peak_on_a_rounded_corner_is_second_order(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    double peak[LEVELS];
    scene_begin(&g, 1.0, false);
    struct plane *plane =
        scene_plane(&g, PLANE_ELECTRIC_ALONG, -40e-3, 0.0, 0.0, 40e-3);
    plane->sides[SIDE_A_HIGH].kind = SIDE_MIRROR;
    plane->sides[SIDE_B_LOW].kind = SIDE_ANTIMIRROR;
    scene_box(plane, "plate", 1.0, -12e-3, 6e-3, 10e-3, 14e-3, 2e-3);
    for (int l = 0; l < LEVELS; l++) {
        struct surface_peak found;
        solve(&g, PLANE_ELECTRIC_ALONG, 3.0, l, &s);
        assert_int_equal(surface_field_peak(&s, 0, &found), STATUS_OK);
        assert_close(found.radius, 2e-3, 1e-12, 0.0);
        print_message("  peak %.8f at (%.5f, %.5f) mm\n", found.field, found.at.a * 1e3,
                      found.at.b * 1e3);
        peak[l] = found.field;
        plane_solution_free(&s);
    }
    const double order = log2((peak[1] - peak[2]) / (peak[2] - peak[3]));
    print_message("  order %.3f\n", order);
    assert_close(order, 2.0, 0.0, 0.1);
    geometry_free(&g);
}

/* ---- Rogowski ends: the electrode of the example, read from its outline file ---- */

#define GAP      20e-3
#define ROGOWSKI SOURCE_DIR "/geometries/rogowski_pair.yaml"
/* The chain of chords: its turn of 0.4 degrees, squared. */
#define CHAIN_ERROR 5e-5

/* Highest field over that inside, less 1. */
static double excess(const struct geometry *g, double fineness, int level)
{
    struct plane_solution s;
    struct surface_peak peak;
    double inside[2];
    solve(g, PLANE_ELECTRIC_ALONG, fineness, level, &s);
    assert_int_equal(surface_field_peak(&s, 0, &peak), STATUS_OK);
    assert_int_equal(plane_field(&s, (struct vec2){0.0, 0.0}, inside, NULL), STATUS_OK);
    const double over = peak.field / fabs(inside[1]) - 1.0;
    print_message("  highest field over that inside, less 1: %.2e at (%.3f, %.4f) mm\n",
                  over, peak.at.a * 1e3, peak.at.b * 1e3);
    plane_solution_free(&s);
    return over;
}

static void rogowski(struct geometry *g)
{
    struct messages messages = {0};
    assert_int_equal(reader_read_file(ROGOWSKI, g, &messages), STATUS_OK);
    messages_free(&messages);
}

/* Not above the inside by more than the chain and the grids allow: the change between
 * the grids bounds the error of the finest, and it shrinks. */
static void test_rogowski_field_stays_below_the_inside_field(void **state)
{
    (void)state;
    struct geometry g;
    double over[3];
    rogowski(&g);
    for (int l = 0; l < 3; l++)
        over[l] = excess(&g, g.fineness, l);
    assert_at_most(over[2], CHAIN_ERROR + fabs(over[2] - over[1]));
    assert_at_most(fabs(over[2] - over[1]), CHAIN_ERROR);
    geometry_free(&g);
}

/* The walls stand far enough away: twice as far changes nothing. */
static void test_rogowski_field_does_not_feel_the_walls(void **state)
{
    (void)state;
    struct geometry g;
    rogowski(&g);
    struct plane *plane = &g.planes[PLANE_ELECTRIC_ALONG];
    const double near = excess(&g, g.fineness, 1);
    plane->low.a *= 2.0;
    plane->high.a *= 2.0;
    plane->high.b *= 2.0;
    assert_close(excess(&g, 2.0 * g.fineness, 1), near, 0.0, CHAIN_ERROR);
    geometry_free(&g);
}

/* Along the profile the field falls as the closed form says, as far as the rim, where the
 * profile is given up, does not reach. */
static void test_rogowski_field_follows_the_closed_form(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    rogowski(&g);
    const struct plane *plane = &g.planes[PLANE_ELECTRIC_ALONG];
    solve(&g, PLANE_ELECTRIC_ALONG, g.fineness, 1, &s);
    struct surface_point *points;
    size_t count, compared = 0;
    assert_int_equal(shape_surface(&plane->parts[0].shape, 1e-3, &points, &count),
                     STATUS_OK);
    const double inside = g.supplies[0].setting / GAP;
    for (size_t k = 0; k < count; k++) {
        struct field_value v;
        const double rise = (points[k].at.b - 0.5 * GAP) * PI / GAP;
        if (rise > 0.3)
            continue;
        assert_int_equal(field_at_surface(s.field, points[k].at, &v), STATUS_OK);
        assert_close(vec2_length(v.gradient) / inside, 1.0 / hypot(1.0, rise), 0.0,
                     1e-3);
        compared++;
    }
    assert_true(compared > 300);
    mem_free(points);
    plane_solution_free(&s);
    geometry_free(&g);
}

/* That a profile which ends too soon does show: the flat part and a round end. */
static void test_a_plain_round_end_exceeds_the_inside_field(void **state)
{
    (void)state;
    struct geometry g;
    scene_begin(&g, 1.0, false);
    struct plane *plane =
        scene_plane(&g, PLANE_ELECTRIC_ALONG, -110e-3, 110e-3, 0.0, 100e-3);
    plane->sides[SIDE_B_LOW].kind = SIDE_ANTIMIRROR;
    scene_box(plane, "plate", 1.0, -50e-3, 50e-3, 0.5 * GAP, 0.5 * GAP + 20e-3, 10e-3);
    assert_true(excess(&g, 2.0, 1) > 0.1);
    geometry_free(&g);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_field_on_a_core_is_second_order),
        cmocka_unit_test(test_field_on_an_eccentric_core_is_second_order),
        cmocka_unit_test(test_peak_on_a_core_is_second_order),
        cmocka_unit_test(test_peak_on_an_eccentric_core_lies_nearest_to_the_shell),
        cmocka_unit_test(test_peak_on_a_rounded_corner_is_second_order),
        cmocka_unit_test(test_rogowski_field_stays_below_the_inside_field),
        cmocka_unit_test(test_rogowski_field_does_not_feel_the_walls),
        cmocka_unit_test(test_rogowski_field_follows_the_closed_form),
        cmocka_unit_test(test_a_plain_round_end_exceeds_the_inside_field),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
