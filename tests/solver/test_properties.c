/* SPDX-License-Identifier: GPL-3.0-or-later */

/* What any solution of Laplace's equation must do, whatever the geometry: maximum
 * principle, superposition, symmetry, scaling, balance of flux. None of these needs a
 * reference value. */

#include "tests/support/assert_close.h"

#include "shared/mem.h"
#include "solver/plane_solution.h"
#include "tests/support/scene.h"

/* Direct solves agree to a few hundred roundings on graded grids. */
#define ROUND_OFF 1e-10

/* A linear map of the plane: p -> (aa p.a + ab p.b, ba p.a + bb p.b). */
struct map {
    double aa, ab, ba, bb;
};

static const struct map SAME = {1.0, 0.0, 0.0, 1.0};
static const struct map FLIP = {-1.0, 0.0, 0.0, 1.0};
static const struct map TURN = {0.0, -1.0, 1.0, 0.0};
static const struct map GROW = {2.385, 0.0, 0.0, 2.385};

static struct vec2 mapped(const struct map *m, double a, double b)
{
    return (struct vec2){m->aa * a + m->ab * b, m->ba * a + m->bb * b};
}

static double stretch_of(const struct map *m)
{
    return hypot(m->aa, m->ba);
}

static void add_box(struct plane *p, const struct map *m, const char *name, double gain,
                    double a0, double a1, double b0, double b1, double rounding)
{
    const struct vec2 s = mapped(m, a0, b0), t = mapped(m, a1, b1);
    scene_box(p, name, gain, fmin(s.a, t.a), fmax(s.a, t.a), fmin(s.b, t.b),
              fmax(s.b, t.b), rounding * stretch_of(m));
}

/* A rounded plate, a sharp bar and a rod in an earthed box, nothing symmetric. */
static void scene(struct geometry *g, const struct map *m, double setting, double gain)
{
    const struct vec2 low = mapped(m, -31e-3, -19e-3), high = mapped(m, 27e-3, 23e-3);
    const struct vec2 rod = mapped(m, 7.3e-3, -4.1e-3);
    scene_begin(g, setting, false);
    struct plane *p =
        scene_plane(g, PLANE_ELECTRIC_ACROSS, fmin(low.a, high.a), fmax(low.a, high.a),
                    fmin(low.b, high.b), fmax(low.b, high.b));
    add_box(p, m, "plate", gain, -14e-3, -3e-3, 8e-3, 11e-3, 1e-3);
    add_box(p, m, "bar", 0.3 * gain, 15e-3, 18e-3, 9e-3, 17e-3, 0.0);
    scene_disc(p, "rod", -0.6 * gain, rod.a, rod.b, 3.7e-3 * stretch_of(m));
}

static void solve(const struct geometry *g, struct plane_solution *s)
{
    assert_int_equal(plane_solve(g, PLANE_ELECTRIC_ACROSS,
                                 &(struct grid_request){.fineness = 1.0, .level = 1}, s,
                                 NULL),
                     STATUS_OK);
}

/* Point k of a scatter over the region of scene(). */
static struct vec2 scatter(int k)
{
    return (struct vec2){-2e-3 + 28e-3 * sin(2.385 * k), 2e-3 + 20e-3 * sin(1.711 * k)};
}

static struct field_value value_at(const struct plane_solution *s, struct vec2 at)
{
    struct field_value v;
    assert_int_equal(field_at(s->field, at, &v), STATUS_OK);
    return v;
}

static void test_potential_stays_between_its_fixed_values(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    scene(&g, &SAME, 385.7, 1.0);
    solve(&g, &s);
    int free_nodes = 0;
    for (int n = 0; n < s.grid.na * s.grid.nb; n++) {
        if (s.grid.owner[n] != OWNER_FREE)
            continue;
        free_nodes++;
        assert_true(s.phi[n] > -0.6 * 385.7 && s.phi[n] < 385.7);
    }
    assert_true(free_nodes > 1000);
    plane_solution_free(&s);
    geometry_free(&g);
}

/* Gives the geometry a second supply that drives the last part alone. */
static void split_supplies(struct geometry *g, double first, double second, double gain)
{
    struct plane *p = &g->planes[PLANE_ELECTRIC_ACROSS];
    g->supplies = mem_resize(g->supplies, 2, sizeof *g->supplies);
    assert_non_null(g->supplies);
    g->supplies[1] = (struct supply){mem_text("other"), second, false, true, {0, 0}};
    g->supplies[0].setting = first;
    g->supply_count = p->supply_count = 2;
    for (size_t k = 0; k < p->part_count; k++) {
        double *grown = mem_resize(p->parts[k].potential.gain, 2, sizeof *grown);
        assert_non_null(grown);
        grown[1] = 0.0;
        p->parts[k].potential.gain = grown;
    }
    p->parts[2].potential.gain[0] = 0.0;
    p->parts[2].potential.gain[1] = gain;
}

/* The same potentials written as constants: one solve at the settings. */
static void freeze(struct geometry *g)
{
    struct plane *p = &g->planes[PLANE_ELECTRIC_ACROSS];
    for (size_t k = 0; k < p->part_count; k++) {
        struct linear *l = &p->parts[k].potential;
        l->constant = geometry_potential(g, l);
        for (size_t s = 0; s < g->supply_count; s++)
            l->gain[s] = 0.0;
    }
}

static void test_unit_potentials_combine_to_the_solve_at_the_settings(void **state)
{
    (void)state;
    struct geometry g, frozen;
    struct plane_solution s, t;
    scene(&g, &SAME, 1.0, 1.0);
    split_supplies(&g, 385.7, -117.3, 1.9);
    g.planes[PLANE_ELECTRIC_ACROSS].parts[1].potential.constant = 23.85;
    scene(&frozen, &SAME, 1.0, 1.0);
    split_supplies(&frozen, 385.7, -117.3, 1.9);
    frozen.planes[PLANE_ELECTRIC_ACROSS].parts[1].potential.constant = 23.85;
    freeze(&frozen);
    solve(&g, &s);
    solve(&frozen, &t);
    assert_non_null(s.unit[0]);
    assert_non_null(s.unit[1]);
    assert_null(t.unit[0]);
    for (int n = 0; n < s.grid.na * s.grid.nb; n++)
        assert_close(s.phi[n], t.phi[n], 0.0, 1e-12 * 385.7);
    plane_solution_free(&s);
    plane_solution_free(&t);
    geometry_free(&g);
    geometry_free(&frozen);
}

/* Solves scene() and its image under the map: phi'(M p) = phi(p) and
 * grad'(M p) = M grad(p)/stretch^2; fluxes are the same. */
static void compare_image(const struct map *m)
{
    const double k = stretch_of(m), size = 385.7;
    struct geometry g, image;
    struct plane_solution s, t;
    scene(&g, &SAME, size, 1.0);
    scene(&image, m, size, 1.0);
    solve(&g, &s);
    solve(&image, &t);
    for (int n = 0; n < 200; n++) {
        const struct vec2 p = scatter(n);
        const struct field_value v = value_at(&s, p);
        const struct field_value w = value_at(&t, mapped(m, p.a, p.b));
        const struct vec2 want = mapped(m, v.gradient.a, v.gradient.b);
        assert_int_equal(w.part, v.part);
        assert_close(w.potential, v.potential, 0.0, ROUND_OFF * size);
        assert_close(w.gradient.a, want.a / (k * k), 0.0, ROUND_OFF * size / 1e-3);
        assert_close(w.gradient.b, want.b / (k * k), 0.0, ROUND_OFF * size / 1e-3);
    }
    for (int p = 0; p < 3; p++)
        assert_close(t.part_flux[p], s.part_flux[p], 0.0, ROUND_OFF * size);
    plane_solution_free(&s);
    plane_solution_free(&t);
    geometry_free(&g);
    geometry_free(&image);
}

static void test_mirrored_parts_give_the_mirrored_field(void **state)
{
    (void)state;
    compare_image(&FLIP);
}

static void test_parts_turned_by_a_quarter_give_the_turned_field(void **state)
{
    (void)state;
    compare_image(&TURN);
}

static void test_larger_parts_give_weaker_fields_and_the_same_charge(void **state)
{
    (void)state;
    compare_image(&GROW);
}

static void test_symmetric_parts_give_a_symmetric_field(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    scene_begin(&g, 385.7, false);
    struct plane *p =
        scene_plane(&g, PLANE_ELECTRIC_ACROSS, -31e-3, 31e-3, -19e-3, 23e-3);
    scene_box(p, "left", 0.5, -17e-3, -9e-3, -3e-3, 8e-3, 1.1e-3);
    scene_box(p, "right", 0.5, 9e-3, 17e-3, -3e-3, 8e-3, 1.1e-3);
    solve(&g, &s);
    for (int k = 0; k < 100; k++) {
        const struct vec2 at = scatter(k);
        const struct field_value v = value_at(&s, at);
        const struct field_value w = value_at(&s, (struct vec2){-at.a, at.b});
        assert_close(w.potential, v.potential, 0.0, ROUND_OFF * 385.7);
        assert_close(w.gradient.a, -v.gradient.a, 0.0, ROUND_OFF * 385.7 / 1e-3);
        assert_close(w.gradient.b, v.gradient.b, 0.0, ROUND_OFF * 385.7 / 1e-3);
    }
    plane_solution_free(&s);
    geometry_free(&g);
}

static void test_potentials_times_k_give_fields_times_k(void **state)
{
    (void)state;
    const double k = -2.385;
    struct geometry g, h;
    struct plane_solution s, t;
    scene(&g, &SAME, 385.7, 1.0);
    scene(&h, &SAME, 385.7, k);
    solve(&g, &s);
    solve(&h, &t);
    for (int n = 0; n < s.grid.na * s.grid.nb; n++)
        assert_close(t.phi[n], k * s.phi[n], 0.0, 1e-12 * 385.7);
    for (int p = 0; p < 3; p++)
        assert_close(t.part_flux[p], k * s.part_flux[p], 0.0, ROUND_OFF * 385.7);
    plane_solution_free(&s);
    plane_solution_free(&t);
    geometry_free(&g);
    geometry_free(&h);
}

static void test_flux_out_of_all_parts_and_sides_cancels(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    double sum = 0.0, size = 0.0;
    scene(&g, &SAME, 385.7, 1.0);
    solve(&g, &s);
    for (int p = 0; p < 3; p++) {
        sum += s.part_flux[p];
        size += fabs(s.part_flux[p]);
    }
    for (int side = 0; side < SIDE_COUNT; side++) {
        sum += s.side_flux[side];
        size += fabs(s.side_flux[side]);
    }
    assert_true(size > 385.7);
    assert_at_most(fabs(sum) / size, ROUND_OFF);
    assert_at_most(s.quality.flux_imbalance, ROUND_OFF);
    plane_solution_free(&s);
    geometry_free(&g);
}

/* Green's reciprocity: the charge on P when Q is at 1 is that on Q when P is at 1. */
static double mutual(int driven, int seen)
{
    struct geometry g;
    struct plane_solution s;
    scene(&g, &SAME, 1.0, 1.0);
    for (int p = 0; p < 3; p++)
        g.planes[PLANE_ELECTRIC_ACROSS].parts[p].potential.gain[0] = p == driven;
    solve(&g, &s);
    const double flux = s.part_flux[seen];
    assert_close(s.part_flux[driven], s.self_flux[driven], 1e-12, 0.0);
    plane_solution_free(&s);
    geometry_free(&g);
    return flux;
}

/* Unequal arms make the matrix unsymmetric, so this holds to the discretisation only. */
static void test_mutual_charges_are_reciprocal(void **state)
{
    (void)state;
    assert_close(mutual(0, 2), mutual(2, 0), 2e-4, 0.0);
    assert_close(mutual(0, 1), mutual(1, 0), 2e-4, 0.0);
    assert_true(mutual(0, 1) < -0.1);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_potential_stays_between_its_fixed_values),
        cmocka_unit_test(test_unit_potentials_combine_to_the_solve_at_the_settings),
        cmocka_unit_test(test_mirrored_parts_give_the_mirrored_field),
        cmocka_unit_test(test_parts_turned_by_a_quarter_give_the_turned_field),
        cmocka_unit_test(test_larger_parts_give_weaker_fields_and_the_same_charge),
        cmocka_unit_test(test_symmetric_parts_give_a_symmetric_field),
        cmocka_unit_test(test_potentials_times_k_give_fields_times_k),
        cmocka_unit_test(test_flux_out_of_all_parts_and_sides_cancels),
        cmocka_unit_test(test_mutual_charges_are_reciprocal),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
