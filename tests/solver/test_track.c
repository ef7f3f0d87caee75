/* SPDX-License-Identifier: GPL-3.0-or-later */

/* A particle in exactly uniform crossed fields, made by walls that run linearly. */

#include "tests/support/assert_close.h"

#include "shared/constants.h"
#include "solver/track.h"
#include "tests/support/scene.h"

#define FROM  (-60e-3)
#define TO    60e-3
#define HALF  30e-3
#define STEPS 600

struct bench {
    struct geometry geometry;
    struct plane_solution electric, magnetic;
    struct view view;
};

/* E_x = e (V/m), B_y = b (T) everywhere from FROM to TO. */
static void begin(struct bench *bench, double e, double b)
{
    struct geometry *g = &bench->geometry;
    const double volts = -e * HALF, amperes = -b * HALF / VACUUM_PERMEABILITY;
    scene_begin(g, 1.0, false);
    struct plane *p = scene_plane(g, PLANE_ELECTRIC_ALONG, FROM, TO, -HALF, HALF);
    struct plane *m = scene_plane(g, PLANE_MAGNETIC_ALONG, FROM, TO, -HALF, HALF);
    for (int s = SIDE_A_LOW; s <= SIDE_A_HIGH; s++) {
        scene_wall(p, (enum side_index)s, -volts, volts);
        scene_wall(m, (enum side_index)s, -amperes, amperes);
    }
    scene_wall(p, SIDE_B_LOW, -volts, -volts);
    scene_wall(p, SIDE_B_HIGH, volts, volts);
    scene_wall(m, SIDE_B_LOW, -amperes, -amperes);
    scene_wall(m, SIDE_B_HIGH, amperes, amperes);
    assert_int_equal(plane_solve(g, PLANE_ELECTRIC_ALONG,
                                 &(struct grid_request){.fineness = 0.5, .level = 0},
                                 &bench->electric, NULL),
                     STATUS_OK);
    assert_int_equal(plane_solve(g, PLANE_MAGNETIC_ALONG,
                                 &(struct grid_request){.fineness = 0.5, .level = 0},
                                 &bench->magnetic, NULL),
                     STATUS_OK);
    bench->view = (struct view){g,
                                {[PLANE_ELECTRIC_ALONG] = &bench->electric,
                                 [PLANE_MAGNETIC_ALONG] = &bench->magnetic}};
}

static void end(struct bench *bench)
{
    plane_solution_free(&bench->electric);
    plane_solution_free(&bench->magnetic);
    geometry_free(&bench->geometry);
}

static struct exit_state track(const struct bench *bench, double mass, double charge,
                               double speed, int steps)
{
    const struct particle particle = {mass, charge, speed};
    struct exit_state exit;
    assert_int_equal(track_particle(&bench->view, &particle, FROM, TO, steps, &exit),
                     STATUS_OK);
    return exit;
}

/* Check 20 (common practice): force balance at E/B whatever the charge and mass. */
static void test_balanced_particle_goes_straight_whatever_its_charge(void **state)
{
    (void)state;
    const double charges[] = {1.0, 2.0, 7.0, -1.0, -3.0};
    const double masses[] = {39.948, 1.008, 131.293, 4.0026, 720.66};
    struct bench bench;
    begin(&bench, 15.5e3, 0.1037);
    for (int k = 0; k < 5; k++) {
        const struct exit_state exit =
            track(&bench, masses[k] * ATOMIC_MASS, charges[k] * ELEMENTARY_CHARGE,
                  15.5e3 / 0.1037, STEPS);
        assert_false(exit.lost);
        assert_close(exit.x, 0.0, 0.0, 1e-11);
        assert_close(exit.slope, 0.0, 0.0, 1e-9);
    }
    end(&bench);
}

/* Slow particle, exact: in the frame that drifts with E/B it runs on a circle, so
 * v_x = -dv sin(w t), v_z = u + dv cos(w t) with w = qB/m and dv = v0 - u. */
static void exact_slow(double e, double b, double mass, double charge, double speed,
                       double length, double *x, double *slope)
{
    const double u = e / b, dv = speed - u, w = charge * b / mass;
    double t = length / speed;
    for (int k = 0; k < 60; k++) /* z(t) = length by Newton's method */
        t -= (u * t + dv / w * sin(w * t) - length) / (u + dv * cos(w * t));
    *x = -dv / w * (1.0 - cos(w * t));
    *slope = -dv * sin(w * t) / (u + dv * cos(w * t));
}

static void test_slow_particle_follows_the_drifting_circle(void **state)
{
    (void)state;
    const double e = 15.5e3, b = 0.1037, mass = 39.948 * ATOMIC_MASS;
    const double speeds[] = {0.7, 0.95, 1.02, 1.3};
    struct bench bench;
    begin(&bench, e, b);
    for (int k = 0; k < 4; k++) {
        const double speed = speeds[k] * e / b;
        double x, slope;
        exact_slow(e, b, mass, ELEMENTARY_CHARGE, speed, TO - FROM, &x, &slope);
        const struct exit_state exit =
            track(&bench, mass, ELEMENTARY_CHARGE, speed, STEPS);
        assert_false(exit.lost);
        /* the speed is 5e-4 of light: relativity changes it by 1e-7 */
        assert_close(exit.x, x, 3e-6, 0.0);
        assert_close(exit.slope, slope, 3e-6, 0.0);
        assert_true((exit.x < 0.0) == (speeds[k] > 1.0));
    }
    end(&bench);
}

/* Check 20: a faster particle is pushed towards the side the magnetic force points to, a
 * slower one towards the electric side; both forces turn with the sign of the charge. */
static void test_faster_particles_go_to_the_magnetic_side(void **state)
{
    (void)state;
    const double u = 15.5e3 / 0.1037, mass = 39.948 * ATOMIC_MASS;
    struct bench bench;
    begin(&bench, 15.5e3, 0.1037);
    for (int sign = -1; sign <= 1; sign += 2) {
        const double charge = sign * ELEMENTARY_CHARGE;
        const double electric_side = sign; /* of q E_x */
        assert_true(track(&bench, mass, charge, 1.05 * u, STEPS).x * electric_side <
                    0.0);
        assert_true(track(&bench, mass, charge, 0.95 * u, STEPS).x * electric_side >
                    0.0);
    }
    end(&bench);
}

/* Seliger, J. Appl. Phys. 43, 2352 (1972); Wollnik, Optics of Charged Particles (1987);
 * both from memory: to first order x = (dv/v) R (1 - cos(L/R)), after a drift D another
 * (dv/v) D sin(L/R); towards the magnetic side. */
static void test_small_speed_change_follows_first_order_optics(void **state)
{
    (void)state;
    const double e = 15.5e3, b = 0.1037, u = e / b, mass = 39.948 * ATOMIC_MASS;
    const double radius = mass * u / (ELEMENTARY_CHARGE * b),
                 theta = (TO - FROM) / radius;
    const double change = 1e-5, drift = 0.5;
    struct bench bench;
    begin(&bench, e, b);
    const struct exit_state up =
        track(&bench, mass, ELEMENTARY_CHARGE, u * (1.0 + change), STEPS);
    const struct exit_state down =
        track(&bench, mass, ELEMENTARY_CHARGE, u * (1.0 - change), STEPS);
    const double x = (up.x - down.x) / (2.0 * change);
    const double slope = (up.slope - down.slope) / (2.0 * change);
    assert_close(x, -radius * (1.0 - cos(theta)), 1e-6, 0.0);
    assert_close(x + drift * slope, -(radius * (1.0 - cos(theta)) + drift * sin(theta)),
                 1e-6, 0.0);
    end(&bench);
}

/* Magnetic field alone, at 0.7 c: a circle of radius gamma m v/(q B), exact. */
static void test_relativistic_circle_has_the_relativistic_radius(void **state)
{
    (void)state;
    const double speed = 0.7 * SPEED_OF_LIGHT, b = 4.3e-3, length = TO - FROM;
    const double gamma = 1.0 / sqrt(1.0 - 0.49);
    const double radius = gamma * ELECTRON_MASS * speed / (ELEMENTARY_CHARGE * b);
    struct bench bench;
    begin(&bench, 0.0, b);
    const struct exit_state exit =
        track(&bench, ELECTRON_MASS, -ELEMENTARY_CHARGE, speed, STEPS);
    assert_false(exit.lost);
    assert_close(exit.x, radius - sqrt(radius * radius - length * length), 1e-8, 0.0);
    assert_close(exit.slope, length / sqrt(radius * radius - length * length), 1e-8,
                 0.0);
    end(&bench);
}

/* Electric field alone, exact: p_x = q E t, p_z constant,
 * x = (gamma0 m c^2/(q E)) (cosh(q E z/(p_z c)) - 1). */
static void test_relativistic_fall_is_a_catenary(void **state)
{
    (void)state;
    const double e = 0.9e6, speed = 0.7 * SPEED_OF_LIGHT, length = TO - FROM;
    const double gamma = 1.0 / sqrt(1.0 - 0.49), mass = ELECTRON_MASS;
    const double energy = gamma * mass * SPEED_OF_LIGHT * SPEED_OF_LIGHT;
    const double k = ELEMENTARY_CHARGE * e / (gamma * mass * speed * SPEED_OF_LIGHT);
    struct bench bench;
    begin(&bench, e, 0.0);
    const struct exit_state exit = track(&bench, mass, ELEMENTARY_CHARGE, speed, STEPS);
    assert_false(exit.lost);
    assert_close(exit.x, energy / (ELEMENTARY_CHARGE * e) * (cosh(k * length) - 1.0),
                 1e-8, 0.0);
    /* dx/dz = (energy/(q E)) k sinh(k z) = (c/v) sinh(k z) */
    assert_close(exit.slope, sinh(k * length) / 0.7, 1e-8, 0.0);
    end(&bench);
}

/* Relativistic filter, k = q B/(gamma p) (check 22, from memory): the slope that a small
 * change of speed brings goes as sin(k z) and vanishes at k L = pi. */
static void test_relativistic_slope_vanishes_after_half_a_turn(void **state)
{
    (void)state;
    const double speed = 0.6 * SPEED_OF_LIGHT, gamma = 1.25, length = TO - FROM;
    const double p = gamma * ELECTRON_MASS * speed;
    const double b = PI / length * gamma * p / ELEMENTARY_CHARGE, change = 1e-6;
    struct bench bench;
    begin(&bench, speed * b, b);
    const struct exit_state up =
        track(&bench, ELECTRON_MASS, ELEMENTARY_CHARGE, speed * (1.0 + change), STEPS);
    const struct exit_state down =
        track(&bench, ELECTRON_MASS, ELEMENTARY_CHARGE, speed * (1.0 - change), STEPS);
    assert_false(up.lost || down.lost);
    assert_close((up.slope - down.slope) / (2.0 * change), 0.0, 0.0, 1e-4);
    assert_true(up.x < -change * length / 10.0);
    end(&bench);
}

static void test_steps_are_of_fourth_order(void **state)
{
    (void)state;
    const double speed = 0.7 * SPEED_OF_LIGHT, b = 4.3e-3, length = TO - FROM;
    const double radius = ELECTRON_MASS * speed / sqrt(0.51) / (ELEMENTARY_CHARGE * b);
    double error[3];
    struct bench bench;
    begin(&bench, 0.0, b);
    for (int k = 0; k < 3; k++)
        error[k] =
            fabs(track(&bench, ELECTRON_MASS, -ELEMENTARY_CHARGE, speed, 8 << k).slope -
                 length / sqrt(radius * radius - length * length));
    assert_close(log2(error[0] / error[2]) / 2.0, 4.0, 0.0, 0.3);
    end(&bench);
}

static void test_particle_that_leaves_or_turns_back_is_lost(void **state)
{
    (void)state;
    struct bench bench;
    begin(&bench, 0.0, 0.9); /* radius far below the region */
    const struct exit_state turned =
        track(&bench, 39.948 * ATOMIC_MASS, ELEMENTARY_CHARGE, 20e3, STEPS);
    assert_true(turned.lost);
    assert_true(turned.lost_at > FROM && turned.lost_at < TO);
    assert_true(turned.x == 0.0 && turned.slope == 0.0);
    end(&bench);
    begin(&bench, 300e3, 0.0);
    assert_true(
        track(&bench, 39.948 * ATOMIC_MASS, ELEMENTARY_CHARGE, 50e3, STEPS).lost);
    end(&bench);
}

static void test_particle_that_meets_a_part_is_lost_there(void **state)
{
    (void)state;
    struct bench bench;
    struct plane_solution electric;
    struct exit_state exit;
    const struct particle particle = {39.948 * ATOMIC_MASS, ELEMENTARY_CHARGE, 150e3};
    begin(&bench, 0.0, 0.0);
    struct geometry g;
    scene_begin(&g, 0.0, false);
    struct plane *p = scene_plane(&g, PLANE_ELECTRIC_ALONG, FROM, TO, -HALF, HALF);
    scene_box(p, "stop", 1.0, 20e-3, 25e-3, -3e-3, 3e-3, 0.0);
    assert_int_equal(plane_solve(&g, PLANE_ELECTRIC_ALONG,
                                 &(struct grid_request){.fineness = 1.0, .level = 0},
                                 &electric, NULL),
                     STATUS_OK);
    bench.view.planes[PLANE_ELECTRIC_ALONG] = &electric;
    assert_int_equal(track_particle(&bench.view, &particle, FROM, TO, STEPS, &exit),
                     STATUS_OK);
    assert_true(exit.lost);
    assert_close(exit.lost_at, 20e-3, 0.0, 1.01 * (TO - FROM) / STEPS);
    plane_solution_free(&electric);
    geometry_free(&g);
    end(&bench);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_balanced_particle_goes_straight_whatever_its_charge),
        cmocka_unit_test(test_slow_particle_follows_the_drifting_circle),
        cmocka_unit_test(test_faster_particles_go_to_the_magnetic_side),
        cmocka_unit_test(test_small_speed_change_follows_first_order_optics),
        cmocka_unit_test(test_relativistic_circle_has_the_relativistic_radius),
        cmocka_unit_test(test_relativistic_fall_is_a_catenary),
        cmocka_unit_test(test_relativistic_slope_vanishes_after_half_a_turn),
        cmocka_unit_test(test_steps_are_of_fourth_order),
        cmocka_unit_test(test_particle_that_leaves_or_turns_back_is_lost),
        cmocka_unit_test(test_particle_that_meets_a_part_is_lost_there),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
