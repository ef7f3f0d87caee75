/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Speeds and balance of real beams, from the file's text to the figure. Values computed
 * outside the project from CODATA constants; the last example is a maker's published
 * sample calculation (0.1085 T; the further digits recomputed). */

#include "tests/support/assert_close.h"

#include <stdio.h>
#include <string.h>

#include "mesh/reader.h"
#include "shared/constants.h"
#include "solver/run.h"

/* Walls that run linearly make E = V/17.8 mm and B = mu0 I/40 mm exactly uniform. */
static void read_filter(const char *mass, const char *charge, const char *energy,
                        const char *volts, const char *amperes, struct geometry *g)
{
    char text[2000];
    struct messages messages = {0};
    const int n = snprintf(
        text, sizeof text,
        "evengap: 1\n"
        "beam: {mass: %s, charge: %s, energy: %s, slit: {at: 300 mm, width: 0.5 mm}}\n"
        "supplies: {plates: %s, coil: %s}\n"
        "planes:\n"
        "  electric_along:\n"
        "    region: {z: [-40 mm, 40 mm], x: [-8.9 mm, 8.9 mm]}\n"
        "    sides:\n"
        "      z: {wall: [plates/2, -plates/2]}\n"
        "      x: {low: {wall: plates/2}, high: {wall: -plates/2}}\n"
        "  magnetic_along:\n"
        "    region: {z: [-40 mm, 40 mm], y: [-20 mm, 20 mm]}\n"
        "    sides:\n"
        "      z: {wall: [coil/2, -coil/2]}\n"
        "      y: {low: {wall: coil/2}, high: {wall: -coil/2}}\n",
        mass, charge, energy, volts, amperes);
    assert_true(n > 0 && (size_t)n < sizeof text);
    const enum status status =
        reader_read_text("beam.yaml", text, (size_t)n, g, &messages);
    if (status != STATUS_OK)
        fail_msg("%s", messages.count > 0 ? messages.items[0].text : "no message");
    messages_free(&messages);
}

static double speed_of(const char *mass, const char *charge, const char *energy)
{
    struct geometry g;
    read_filter(mass, charge, energy, "300 V", "3000 A", &g);
    const double speed = g.beam.speed;
    geometry_free(&g);
    return speed;
}

static void test_speeds_of_ions(void **state)
{
    (void)state;
    assert_close(speed_of("131.293 u", "1 e", "300 eV"), 20998.4, 0.0, 0.05);
    /* 300 V accelerate a doubly charged ion to 600 eV. */
    assert_close(speed_of("131.293 u", "2 e", "600 eV"), 29696.2, 0.0, 0.05);
    assert_close(speed_of("39.948 u", "1 e", "1 keV"), 69502.1, 0.0, 0.05);
}

/* Relativistic electrons (checks computed from beta = sqrt(k (k + 2))/(1 + k)). */
static void test_speeds_of_fast_electrons(void **state)
{
    (void)state;
    assert_close(speed_of("9.1093837015e-31 kg", "-1 e", "100 keV") / SPEED_OF_LIGHT,
                 0.548221, 0.0, 5e-7);
    assert_close(speed_of("9.1093837015e-31 kg", "-1 e", "200 keV") / SPEED_OF_LIGHT,
                 0.695314, 0.0, 5e-7);
}

static double figure_value(const struct result *r, const char *name)
{
    const struct figure *f = figures_find(&r->figures, name, NULL);
    assert_non_null(f);
    assert_int_equal(f->state, FIGURE_GOOD);
    return f->value;
}

static void run(const struct geometry *g, struct result *r)
{
    const struct run_options options = {.levels = 2, .fineness = 0.5};
    assert_int_equal(run_geometry(g, &options, r, NULL), STATUS_OK);
}

static void test_flux_density_that_40_u_at_5_kev_needs(void **state)
{
    (void)state;
    struct geometry g;
    struct result r;
    read_filter("40.0 u", "1 e", "5 keV", "300 V", "3000 A", &g);
    run(&g, &r);
    assert_close(figure_value(&r, "centre_electric_field"), 300.0 / 17.8e-3, 1e-9, 0.0);
    assert_close(figure_value(&r, "centre_electric_field") /
                     figure_value(&r, "wanted_speed"),
                 0.108518, 0.0, 5e-7);
    assert_close(figure_value(&r, "centre_flux_density"),
                 VACUUM_PERMEABILITY * 3000.0 / 40e-3, 1e-9, 0.0);
    result_free(&r);
    geometry_free(&g);
}

/* 0.108518 T across 40 mm are 3454.24 A: then the beam is in tune and goes straight. */
static void test_beam_in_tune_goes_straight(void **state)
{
    (void)state;
    struct geometry g;
    struct result r;
    read_filter("40.0 u", "1 e", "5 keV", "300 V", "3454.24 A", &g);
    run(&g, &r);
    assert_close(figure_value(&r, "detuning"), 0.0, 0.0, 5e-6);
    assert_close(figure_value(&r, "kick"), 0.0, 0.0, 5e-6);
    assert_close(figure_value(&r, "offset"), 0.0, 0.0, 5e-7);
    assert_close(figure_value(&r, "ratio_error_peak_along"), 0.0, 0.0, 1e-9);
    assert_close(figure_value(&r, "flat_length"), 80e-3, 1e-9, 0.0);
    result_free(&r);
    geometry_free(&g);
}

/* First-order optics of the ideal filter (Seliger 1972; Wollnik 1987; from memory): a
 * change of speed moves the particle by (dv/v) [R (1 - cos theta) + D sin theta] towards
 * the magnetic side; a change of mass at the same energy by half of that. */
static void test_dispersions_follow_first_order_optics(void **state)
{
    (void)state;
    struct geometry g;
    struct result r;
    read_filter("40.0 u", "1 e", "5 keV", "300 V", "3454.24 A", &g);
    run(&g, &r);
    const double b = VACUUM_PERMEABILITY * 3454.24 / 40e-3;
    const double radius = 40.0 * ATOMIC_MASS * g.beam.speed / (ELEMENTARY_CHARGE * b);
    const double theta = 80e-3 / radius, drift = 300e-3 - 40e-3;
    const double at_slit = radius * (1.0 - cos(theta)) + drift * sin(theta);
    assert_close(figure_value(&r, "cyclotron_radius"), radius, 1e-6, 0.0);
    assert_close(figure_value(&r, "cyclotron_phase"), theta, 1e-6, 0.0);
    assert_close(figure_value(&r, "speed_dispersion"), -radius * (1.0 - cos(theta)),
                 1e-5, 0.0);
    assert_close(figure_value(&r, "speed_dispersion_slit"), -at_slit, 1e-5, 0.0);
    assert_close(figure_value(&r, "speed_resolution"), at_slit / 0.5e-3, 1e-5, 0.0);
    assert_close(figure_value(&r, "mass_resolution"), 0.5 * at_slit / 0.5e-3, 1e-4,
                 0.0);
    result_free(&r);
    geometry_free(&g);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_speeds_of_ions),
        cmocka_unit_test(test_speeds_of_fast_electrons),
        cmocka_unit_test(test_flux_density_that_40_u_at_5_kev_needs),
        cmocka_unit_test(test_beam_in_tune_goes_straight),
        cmocka_unit_test(test_dispersions_follow_first_order_optics),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
