/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Open sides against closed forms in endless space: wire pairs, strips, edges of plates
 * and poles; what the doubling test says of them. */

#include "tests/support/assert_close.h"

#include <stdio.h>
#include <string.h>

#include "shared/constants.h"
#include "shared/mem.h"
#include "solver/extrapolate.h"
#include "solver/plane_solution.h"
#include "solver/run.h"
#include "tests/support/scene.h"

enum { LEVELS = 3 };

/* Thickness of a film in gaps. Its effect on the charge is about as large; spacings ten
 * decades below the distance of the earth leave the solve untrusted. */
#define THIN 6e-7

static void open_all(struct plane *plane)
{
    for (int s = 0; s < SIDE_COUNT; s++)
        plane->sides[s].kind = SIDE_OPEN;
}

static void run(const struct geometry *g, struct result *result)
{
    const struct run_options options = {.levels = LEVELS};
    struct messages messages = {0};
    const enum status status = run_geometry(g, &options, result, &messages);
    if (status != STATUS_OK)
        fail_msg("%s", messages.count > 0 ? messages.items[0].text : "no message");
    messages_free(&messages);
}

static const struct figure *figure_of(const struct result *r, const char *name,
                                      const char *subject)
{
    const struct figure *f = figures_find(&r->figures, name, subject);
    assert_non_null(f);
    return f;
}

/* Within the bound (relative) and within what is claimed. */
static void compare(const char *what, double got, double uncertainty, double want,
                    double bound)
{
    print_message("  %-28s %.10g error %9.2e (%.0e) relative\n", what, got,
                  got / want - 1.0, uncertainty / fabs(want));
    assert_close(got, want, bound, 0.0);
    assert_close(got, want, 0.0, uncertainty);
}

/* Wire pair of radius a, distance d: lines of charge at +-c, c^2 = d^2/4 - a^2. */
static const double RADIUS = 3e-3, DISTANCE = 20e-3, VOLTS = 238.5;

static double pair_charge(void)
{
    return VACUUM_PERMITTIVITY * VOLTS * PI / acosh(0.5 * DISTANCE / RADIUS);
}

/* E_x at (x, y). */
static double pair_field(double x, double y)
{
    const double c = sqrt(0.25 * DISTANCE * DISTANCE - RADIUS * RADIUS);
    const double near = (x - c) * (x - c) + y * y, far = (x + c) * (x + c) + y * y;
    return pair_charge() / (2.0 * PI * VACUUM_PERMITTIVITY) *
           ((x - c) / near - (x + c) / far);
}

static void add_probe(struct geometry *g, double x, double y)
{
    g->probes = mem_resize(g->probes, g->probe_count + 1, sizeof *g->probes);
    g->probes[g->probe_count++] = (struct probe){.x = x, .y = y};
}

static void pair_scene(struct geometry *g, double margin)
{
    const double x = 0.5 * DISTANCE + RADIUS + margin, y = RADIUS + margin;
    scene_begin(g, VOLTS, false);
    struct plane *plane = scene_plane(g, PLANE_ELECTRIC_ACROSS, -x, x, -y, y);
    open_all(plane);
    scene_disc(plane, "right", 0.5, 0.5 * DISTANCE, 0.0, RADIUS);
    scene_disc(plane, "left", -0.5, -0.5 * DISTANCE, 0.0, RADIUS);
    add_probe(g, 0.0, 0.0);
    add_probe(g, 2e-3, y);
    add_probe(g, x, 1e-3);
}

static void pair_case(double margin)
{
    struct geometry g;
    struct result r;
    pair_scene(&g, margin);
    run(&g, &r);
    const struct open_test *open = &r.planes[PLANE_ELECTRIC_ACROSS].open;
    const struct figure *charge = figure_of(&r, "charge", "right");
    print_message("margin %g mm, %d unknowns, moved %.1e (%s)\n", margin * 1e3,
                  r.planes[PLANE_ELECTRIC_ACROSS].quality[2].unknowns, open->moved,
                  open->moved_most);
    assert_int_equal(charge->state, FIGURE_GOOD);
    assert_at_most(open->moved, 1e-5);
    compare("charge", charge->value, charge->uncertainty, pair_charge(), 1e-5);
    for (size_t k = 0; k < 3; k++) {
        const struct probe_reading *p = &r.probes[k];
        compare("E_x", p->field[0], p->field_err[0], pair_field(p->at.a, p->at.b),
                2e-5);
    }
    result_free(&r);
    geometry_free(&g);
}

static void test_wire_pair_in_open_space(void **state)
{
    (void)state;
    pair_case(5e-3);
    pair_case(10e-3);
}

/* Complete elliptic integrals by the arithmetic-geometric mean. */
static double elliptic(double modulus, double *second)
{
    double a = 1.0, b = sqrt((1.0 - modulus) * (1.0 + modulus));
    double sum = 0.5 * modulus * modulus;
    for (int n = 0; n < 12; n++) {
        const double mean = 0.5 * (a + b), half = 0.5 * (a - b);
        b = sqrt(a * b);
        a = mean;
        sum += ldexp(half * half, n);
    }
    if (second != NULL)
        *second = 0.5 * PI / a * (1.0 - sum);
    return 0.5 * PI / a;
}

/* Two thin plates of width w, gap d, one above the other. A quarter of the plane with the
 * slit of the upper plate is the image of a half plane t, t = sn^2 u (Schwarz-Christoffel;
 * derived here, cf. Love 1923):
 *     dz/du = A (c - sn^2 u), c = E'/(k^2 K'), d = A pi/(k^2 K'), C = eps0 K'/K,
 * the plate is u = K + iv, the mid plane u = iv. With theta the amplitude of v, modulus k',
 * D^2 = 1 - k'^2 sin^2 theta, dv = dtheta/D:
 *     plate  x = A int (c - 1/D^2) dv, to where D^2 = 1/c at its edge,
 *     mid    x = A int (c + tan^2 theta) dv, E = V/(2 K A (c + tan^2 theta)). */
struct plates {
    double k, width_over_gap;
    double scale; /* A / gap */
    double c, big_k, big_k_prime;
};

/* x / gap at theta: on the plate, or on the mid plane. */
static double plates_place(const struct plates *p, double theta, bool plate)
{
    const int n = 4000;
    const double k2 = 1.0 - p->k * p->k;
    double sum = 0.0;
    for (int i = 0; i <= n; i++) {
        const double t = theta * i / n, sine = sin(t), d2 = 1.0 - k2 * sine * sine;
        const double f = plate ? p->c - 1.0 / d2 : p->c + tan(t) * tan(t);
        sum += (i == 0 || i == n ? 1.0 : i % 2 ? 4.0 : 2.0) * f / sqrt(d2);
    }
    return p->scale * sum * theta / n / 3.0;
}

static struct plates plates_of(double k)
{
    struct plates p = {.k = k};
    const double k_prime = sqrt(1.0 - k * k);
    double second;
    p.big_k = elliptic(k, NULL);
    p.big_k_prime = elliptic(k_prime, &second);
    p.c = second / (k * k * p.big_k_prime);
    p.scale = k * k * p.big_k_prime / PI;
    const double edge = asin(sqrt(1.0 - 1.0 / p.c) / k_prime);
    p.width_over_gap = 2.0 * plates_place(&p, edge, true);
    return p;
}

/* Field on the mid plane over V/gap. */
static double plates_field(const struct plates *p, double x_over_gap)
{
    double low = 0.0, high = 0.5 * PI - 1e-6;
    for (int i = 0; i < 60; i++) {
        const double middle = 0.5 * (low + high);
        if (plates_place(p, middle, false) < x_over_gap)
            low = middle;
        else
            high = middle;
    }
    return 1.0 / (2.0 * p->big_k * p->scale * (p->c + tan(low) * tan(low)));
}

/* Far inside and with wide plates the edge is Maxwell's: E/E0 = 1/(1 + e^p),
 * 2 pi x/d = 1 + p + e^p (Treatise, art. 202). */
static void test_plates_of_finite_width_tend_to_maxwell(void **state)
{
    (void)state;
    static const double maxwell[3] = {0.9845905255, 0.7821882943, 0.3781738830};
    const struct plates p = plates_of(0.1), wide = plates_of(0.01);
    for (int k = 0; k < 3; k++) {
        const double x = 0.5 * (k - 1);
        const double narrow = plates_field(&p, 0.5 * p.width_over_gap + x);
        const double broad = plates_field(&wide, 0.5 * wide.width_over_gap + x);
        print_message("  x/gap %4.1f: w/d %.3f %.6f, w/d %.3f %.6f, endless %.6f\n", x,
                      p.width_over_gap, narrow, wide.width_over_gap, broad, maxwell[k]);
        assert_close(broad, maxwell[k], 0.0, 0.03);
        assert_at_most(fabs(broad - maxwell[k]), 0.7 * fabs(narrow - maxwell[k]));
    }
}

/* A quarter of the plates: their film is THIN gaps thick. */
static void test_thin_plates_in_open_space(void **state)
{
    (void)state;
    static const double at[4] = {0.0, -0.5, 0.0, 0.5}; /* the first is the centre */
    const struct plates p = plates_of(0.01);
    const double d = 50e-3, half = 0.5 * p.width_over_gap * d, film = THIN * d;
    struct geometry g;
    struct result r;
    scene_begin(&g, VOLTS, false);
    struct plane *plane =
        scene_plane(&g, PLANE_ELECTRIC_ACROSS, 0.0, half + d, 0.0, 1.5 * d);
    open_all(plane);
    plane->sides[SIDE_A_LOW].kind = SIDE_MIRROR;
    plane->sides[SIDE_B_LOW].kind = SIDE_ANTIMIRROR;
    scene_box(plane, "plate", 0.5, -half, half, 0.5 * d, 0.5 * d + film, 0.0);
    for (int k = 0; k < 4; k++)
        add_probe(&g, k == 0 ? 0.0 : half + at[k] * d, 0.0);
    run(&g, &r);
    const struct figure *charge = figure_of(&r, "charge", "plate");
    compare("half the charge", charge->value, charge->uncertainty,
            0.5 * VACUUM_PERMITTIVITY * VOLTS * p.big_k_prime / p.big_k, 1e-5);
    for (size_t k = 0; k < 4; k++)
        compare("E_y", -r.probes[k].field[1], r.probes[k].field_err[1],
                VOLTS / d * plates_field(&p, r.probes[k].at.a / d), 3e-5);
    result_free(&r);
    geometry_free(&g);
}

static void test_single_charged_wire_is_marked(void **state)
{
    (void)state;
    struct geometry g;
    struct result r;
    scene_begin(&g, VOLTS, false);
    struct plane *plane =
        scene_plane(&g, PLANE_ELECTRIC_ACROSS, -11e-3, 11e-3, -9e-3, 9e-3);
    open_all(plane);
    scene_disc(plane, "wire", 1.0, 1e-3, 0.0, RADIUS);
    run(&g, &r);
    const struct figure *charge = figure_of(&r, "charge", "wire");
    print_message("%s\n", charge->note);
    assert_int_equal(charge->state, FIGURE_UNSETTLED);
    assert_non_null(strstr(charge->note, "when the open sides are moved twice as far"));
    assert_true(r.planes[PLANE_ELECTRIC_ACROSS].open.unsettled > 0);
    result_free(&r);
    geometry_free(&g);
}

/* A charged sphere in a turned plane: C = 4 pi eps0 a, and what is far away counts as
 * 1/R: covered by the uncertainty. */
static void test_charged_sphere_is_covered(void **state)
{
    (void)state;
    struct geometry g;
    struct result r;
    scene_begin(&g, VOLTS, false);
    struct plane *plane =
        scene_plane(&g, PLANE_ELECTRIC_TURNED, -11e-3, 11e-3, 0.0, 9e-3);
    open_all(plane);
    plane->sides[SIDE_B_LOW].kind = SIDE_MIRROR;
    scene_disc(plane, "ball", 1.0, 0.0, 0.0, RADIUS);
    run(&g, &r);
    const struct figure *charge = figure_of(&r, "charge", "ball");
    print_message("moved %.2e\n", r.planes[PLANE_ELECTRIC_TURNED].open.moved);
    compare("charge", charge->value, charge->uncertainty,
            4.0 * PI * VACUUM_PERMITTIVITY * RADIUS * VOLTS, 1e-3);
    result_free(&r);
    geometry_free(&g);
}

/* Edge of a square pole of infinite permeability, gap g, field outward to x:
 *     2 pi x/g = 2s + ln((s-1)/(s+1)), B/B0 = 1/s,
 * so that the effective edge from the field up to x is (ln(s^2 - 1) + 2 - 2 ln 2)/(2 pi)
 * gaps (Schwarz-Christoffel). */
static double pole_edge(double x_over_g, double *field)
{
    double low = log(1e-12), high = log(1e3); /* of s - 1 */
    for (int k = 0; k < 200; k++) {
        const double t = 0.5 * (low + high);
        if (2.0 * (1.0 + exp(t)) + t - log(2.0 + exp(t)) < 2.0 * PI * x_over_g)
            low = t;
        else
            high = t;
    }
    const double s = 1.0 + exp(low);
    *field = 1.0 / s;
    return (log(s * s - 1.0) + 2.0 - 2.0 * log(2.0)) / (2.0 * PI);
}

static const double GAP = 31e-3;

/* One end of a pole that is TALL gaps high below a mirror: what is above moves the field
 * at x by about x/TALL^2 of the inside field. */
#define TALL 200.0

static void pole_scene(struct geometry *g, double limit)
{
    scene_begin(g, 2400.0, true);
    struct plane *plane =
        scene_plane(g, PLANE_MAGNETIC_ALONG, -4.0 * GAP, 6.0 * GAP, 0.0, TALL * GAP);
    plane->sides[SIDE_A_LOW].kind = SIDE_MIRROR;
    plane->sides[SIDE_A_HIGH].kind = SIDE_OPEN;
    plane->sides[SIDE_B_LOW].kind = SIDE_ANTIMIRROR;
    plane->sides[SIDE_B_HIGH].kind = SIDE_MIRROR;
    scene_box(plane, "pole", 0.5, -4.0 * GAP, 0.0, 0.5 * GAP, TALL * GAP, 0.0);
    g->fineness = 0.7;
    g->reference_z = -3.0 * GAP;
    g->beam.has_path = true;
    g->beam.path_from = -3.0 * GAP;
    g->beam.path_to = limit * GAP;
}

static void assert_depends(const struct result *r, const char *name, double percent)
{
    char left[80];
    const struct figure *f = figure_of(r, name, NULL);
    (void)snprintf(left, sizeof left, "depends on its limits: %.3g %% of the centre",
                   percent);
    assert_int_equal(f->state, FIGURE_UNSETTLED);
    if (strstr(f->note, left) == NULL)
        fail_msg("%s: \"%s\" is not in: %s", name, left, f->note);
}

static void pole_case(double limit, double tabulated)
{
    struct geometry g;
    struct result r;
    double field;
    const double want = pole_edge(limit, &field);
    assert_close(want, tabulated, 0.0, 5e-5);
    pole_scene(&g, limit);
    run(&g, &r);
    const struct figure *edge = figure_of(&r, "edge_exit_magnetic", NULL);
    const struct figure *length = figure_of(&r, "effective_length_magnetic", NULL);
    print_message("  edge to %g gaps: %.6f gaps, want %.6f (%.0e); %s\n", limit,
                  edge->value / GAP, want, edge->uncertainty / GAP, edge->note);
    assert_close(edge->value / GAP, want, 0.0, 1e-4);
    assert_close(length->value / GAP, 3.0 + want, 0.0, 1e-4);
    assert_depends(&r, "edge_exit_magnetic", 100.0 * field);
    assert_depends(&r, "effective_length_magnetic", 100.0 * field);
    assert_depends(&r, "fringe_integral_exit_magnetic", 100.0 * field);
    assert_at_most(r.planes[PLANE_MAGNETIC_ALONG].open.moved, 1e-5);
    result_free(&r);
    geometry_free(&g);
}

static void test_unclamped_edge_depends_on_the_limit(void **state)
{
    (void)state;
    pole_case(1.0, 0.4770);
    pole_case(5.0, 0.9750);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_wire_pair_in_open_space),
        cmocka_unit_test(test_plates_of_finite_width_tend_to_maxwell),
        cmocka_unit_test(test_thin_plates_in_open_space),
        cmocka_unit_test(test_single_charged_wire_is_marked),
        cmocka_unit_test(test_charged_sphere_is_covered),
        cmocka_unit_test(test_unclamped_edge_depends_on_the_limit),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
