/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Figures of conductors: which there are, in which order and unit, and what is said where
 * they cannot be had. Values are tested where they are measured. */

#include "tests/support/assert_close.h"

#include <stdio.h>
#include <string.h>

#include "shared/constants.h"
#include "shared/mem.h"
#include "solver/figures_conductor.h"
#include "tests/support/scene.h"

#define KIND  PLANE_ELECTRIC_ACROSS
#define VOLTS 385.7

static void solve(const struct geometry *g, enum plane_kind kind, double fineness,
                  struct plane_solution *s)
{
    assert_int_equal(
        plane_solve(g, kind, &(struct grid_request){.fineness = fineness}, s, NULL),
        STATUS_OK);
}

static enum status make(const struct geometry *g, enum plane_kind kind,
                        const struct plane_solution *s, struct figures *figures)
{
    struct view view = {.geometry = g};
    view.planes[kind] = s;
    *figures = (struct figures){0};
    return figures_hardware(&view, figures);
}

static void figures_of(const struct geometry *g, enum plane_kind kind, double fineness,
                       struct figures *figures)
{
    struct plane_solution s;
    solve(g, kind, fineness, &s);
    assert_int_equal(make(g, kind, &s, figures), STATUS_OK);
    plane_solution_free(&s);
}

static const struct figure *find(const struct figures *figures, const char *name,
                                 const char *subject)
{
    const struct figure *f = figures_find(figures, name, subject);
    if (f == NULL)
        fail_msg("no figure %s of %s", name, subject != NULL ? subject : "any");
    return f;
}

/* Two rods, a bar of two pieces between them, and a rib on a wall. */
static void rods(struct geometry *g)
{
    scene_begin(g, VOLTS, false);
    struct plane *p = scene_plane(g, KIND, -20e-3, 20e-3, -13e-3, 17e-3);
    scene_disc(p, "rod, left", 1.0, -13e-3, 1e-3, 3e-3);
    scene_box(p, "rib", 0.0, -3e-3, 3e-3, -13e-3, -10e-3, 0.0);
    scene_box(p, "bar", 0.5, -5e-3, 0.0, -2e-3, 3e-3, 0.0);
    scene_disc(p, "rod", -1.0, 13e-3, 1e-3, 3e-3);
    scene_box(p, "bar end", 0.5, 0.0, 5e-3, -2e-3, 3e-3, 0.0);
}

static void test_matrix_lists_the_upper_half_by_name(void **state)
{
    (void)state;
    static const char *const subjects[] = {"rod, left, rod, left",
                                           "rod, left, bar",
                                           "rod, left, rod",
                                           "bar, bar",
                                           "bar, rod",
                                           "rod, rod"};
    struct geometry g;
    struct figures figures;
    size_t next = 0;
    rods(&g);
    figures_of(&g, KIND, 1.0, &figures);
    for (size_t k = 0; k < figures.count; k++) {
        if (strcmp(figures.items[k].name, "capacitance_matrix") != 0)
            continue;
        assert_true(next < 6);
        assert_string_equal(figures.items[k].subject, subjects[next++]);
        assert_string_equal(figures.items[k].unit, "F/m");
    }
    assert_int_equal(next, 6);
    figures_free(&figures);
    geometry_free(&g);
}

static void test_matrix_is_found_again_by_row_and_column(void **state)
{
    (void)state;
    static const char *const names[] = {"rod, left", "bar", "rod"};
    struct geometry g;
    struct figures figures;
    struct matrix_view m;
    char name[40];
    rods(&g);
    figures_of(&g, KIND, 1.0, &figures);
    assert_true(matrix_find(&figures, KIND, &m));
    assert_int_equal(m.count, 3);
    for (size_t i = 0; i < 3; i++) {
        matrix_name(&m, i, name, sizeof name);
        assert_string_equal(name, names[i]);
        assert_true(matrix_entry(&m, i, i)->value > 0.0);
        for (size_t j = 0; j < i; j++) {
            assert_ptr_equal(matrix_entry(&m, i, j), matrix_entry(&m, j, i));
            assert_true(matrix_entry(&m, i, j)->value < 0.0);
        }
    }
    assert_string_equal(matrix_entry(&m, 2, 1)->subject, "bar, rod");
    matrix_name(&m, 0, name, 4);
    assert_string_equal(name, "rod");
    assert_false(matrix_find(&figures, PLANE_ELECTRIC_ALONG, &m));
    figures_free(&figures);
    geometry_free(&g);
}

/* The matrix times the potentials is the charges, but for the mean of C_ij and C_ji, which
 * differ by 1e-5 on this grid. */
static void test_charges_follow_from_the_matrix(void **state)
{
    (void)state;
    const double volts[] = {VOLTS, 0.5 * VOLTS, -VOLTS};
    struct geometry g;
    struct figures figures;
    struct matrix_view m;
    rods(&g);
    figures_of(&g, KIND, 2.0, &figures);
    assert_true(matrix_find(&figures, KIND, &m));
    const double charge[] = {find(&figures, "charge", "rod, left")->value,
                             find(&figures, "charge", "bar")->value +
                                 find(&figures, "charge", "bar end")->value,
                             find(&figures, "charge", "rod")->value};
    for (size_t i = 0; i < 3; i++) {
        double sum = 0.0;
        for (size_t j = 0; j < 3; j++)
            sum += matrix_entry(&m, i, j)->value * volts[j];
        assert_close(sum, charge[i], 5e-5, 0.0);
    }
    figures_free(&figures);
    geometry_free(&g);
}

static void test_capacitance_is_told_once_for_a_conductor(void **state)
{
    (void)state;
    struct geometry g;
    struct figures figures;
    struct matrix_view m;
    rods(&g);
    figures_of(&g, KIND, 1.0, &figures);
    assert_true(matrix_find(&figures, KIND, &m));
    const struct figure *bar = find(&figures, "capacitance", "bar");
    const struct figure *end = find(&figures, "capacitance", "bar end");
    const struct figure *rib = find(&figures, "capacitance", "rib");
    assert_close(bar->value, matrix_entry(&m, 1, 1)->value, 1e-14, 0.0);
    assert_int_equal(end->state, FIGURE_MISSING);
    assert_string_equal(end->note, "one conductor with bar");
    assert_int_equal(rib->state, FIGURE_MISSING);
    assert_non_null(strstr(rib->note, "fixed potential"));
    assert_null(figures_find(&figures, "force_x", "rib"));
    assert_null(figures_find(&figures, "force_x", "bar end"));
    assert_string_equal(find(&figures, "force_y", "bar")->unit, "N/m");
    figures_free(&figures);
    geometry_free(&g);
}

/* n rods in a row. */
static void row_of_rods(struct geometry *g, int n)
{
    scene_begin(g, VOLTS, false);
    struct plane *p = scene_plane(g, KIND, 0.0, 10e-3 * n, 0.0, 20e-3);
    for (int k = 0; k < n; k++) {
        char name[16];
        (void)snprintf(name, sizeof name, "rod %d", k + 1);
        scene_box(p, name, 1.0 + k, 10e-3 * k + 3e-3, 10e-3 * k + 7e-3, 8e-3, 12e-3,
                  0.0);
    }
}

static void test_matrix_needs_two_and_takes_eight_conductors(void **state)
{
    (void)state;
    struct geometry g;
    struct figures figures;
    struct matrix_view m;
    row_of_rods(&g, 1);
    figures_of(&g, KIND, 0.5, &figures);
    assert_null(figures_find(&figures, "capacitance_matrix", NULL));
    figures_free(&figures);
    geometry_free(&g);
    row_of_rods(&g, 8);
    figures_of(&g, KIND, 0.5, &figures);
    assert_true(matrix_find(&figures, KIND, &m));
    assert_int_equal(m.count, 8);
    figures_free(&figures);
    geometry_free(&g);
    row_of_rods(&g, 9);
    figures_of(&g, KIND, 0.5, &figures);
    assert_false(matrix_find(&figures, KIND, &m));
    const struct figure *f = find(&figures, "capacitance_matrix", "electric_across");
    assert_int_equal(f->state, FIGURE_MISSING);
    assert_string_equal(f->note, "left out: 9 conductors, more than 8");
    figures_free(&figures);
    geometry_free(&g);
}

static void test_floating_part_has_its_potential_and_its_charge(void **state)
{
    (void)state;
    struct geometry g;
    struct figures figures;
    rods(&g);
    struct part *rod = &g.planes[KIND].parts[3];
    rod->kind = PART_FLOATING;
    rod->potential.gain[0] = 0.0;
    rod->charge = 1.7e-9;
    figures_of(&g, KIND, 1.0, &figures);
    const struct figure *f = find(&figures, "potential", "rod");
    assert_string_equal(f->unit, "V");
    assert_true(f->value > 0.0 && f->scale >= VOLTS);
    assert_close(find(&figures, "charge", "rod")->value, 1.7e-9, 1e-9, 0.0);
    assert_null(figures_find(&figures, "potential", "bar"));
    figures_free(&figures);
    geometry_free(&g);
}

/* A tube between mirrors, 20 mm long, about a rod: everything of the whole ring. */
static void test_turned_plane_speaks_of_whole_rings(void **state)
{
    (void)state;
    struct geometry g;
    struct figures figures;
    scene_begin(&g, VOLTS, false);
    struct plane *p = scene_plane(&g, PLANE_ELECTRIC_TURNED, 0.0, 20e-3, 0.0, 12e-3);
    for (int s = 0; s < SIDE_B_HIGH; s++)
        p->sides[s].kind = SIDE_MIRROR;
    scene_box(p, "rod", 1.0, 0.0, 20e-3, 0.0, 2e-3, 0.0);
    scene_box(p, "tube", 0.0, 0.0, 20e-3, 4.1e-3, 5e-3, 0.0);
    figures_of(&g, PLANE_ELECTRIC_TURNED, 4.0, &figures);
    const double farads = 2.0 * PI * VACUUM_PERMITTIVITY * 20e-3 / log(4.1 / 2.0);
    const struct figure *charge = find(&figures, "charge", "rod");
    const struct figure *capacitance = find(&figures, "capacitance", "rod");
    const struct figure *energy = find(&figures, "stored_energy", NULL);
    assert_string_equal(charge->unit, "C");
    assert_string_equal(charge->title, "charge");
    assert_string_equal(capacitance->unit, "F");
    assert_string_equal(energy->unit, "J");
    assert_string_equal(find(&figures, "capacitance_matrix", "rod, tube")->unit, "F");
    assert_close(charge->value, farads * VOLTS, 1e-3, 0.0);
    assert_close(capacitance->value, farads, 1e-3, 0.0);
    assert_close(energy->value, 0.5 * farads * VOLTS * VOLTS, 1e-3, 0.0);
    /* Cut by mirrors at both ends: what pulls along z is not the part's own. */
    const struct figure *force = find(&figures, "force_z", "rod");
    assert_string_equal(force->unit, "N");
    assert_int_equal(force->state, FIGURE_MISSING);
    assert_null(figures_find(&figures, "force_x", NULL));
    figures_free(&figures);
    geometry_free(&g);
}

static void test_force_across_a_mirror_that_cuts_the_part_is_missing(void **state)
{
    (void)state;
    struct geometry g;
    struct figures figures;
    scene_begin(&g, VOLTS, false);
    struct plane *p = scene_plane(&g, KIND, 0.0, 20e-3, -13e-3, 17e-3);
    p->sides[SIDE_A_LOW].kind = SIDE_MIRROR;
    scene_box(p, "bar", 1.0, 0.0, 5e-3, -2e-3, 2e-3, 0.0);
    figures_of(&g, KIND, 1.0, &figures);
    const struct figure *across = find(&figures, "force_x", "bar");
    const struct figure *along = find(&figures, "force_y", "bar");
    assert_int_equal(across->state, FIGURE_MISSING);
    assert_non_null(strstr(across->note, "mirror"));
    assert_int_equal(along->state, FIGURE_GOOD);
    assert_true(along->value < 0.0); /* to the nearer wall */
    assert_non_null(strstr(along->note, "half"));
    figures_free(&figures);
    geometry_free(&g);
}

/* Lower wall at the supply, upper at 0, mirrors at the ends: eps0 E^2/2 area, exact. */
static void test_energy_counts_walls_of_constant_potential(void **state)
{
    (void)state;
    struct geometry g;
    struct figures figures;
    scene_begin(&g, VOLTS, false);
    struct plane *p = scene_plane(&g, KIND, 0.0, 31e-3, 0.0, 17e-3);
    p->sides[SIDE_A_LOW].kind = p->sides[SIDE_A_HIGH].kind = SIDE_MIRROR;
    scene_wall(p, SIDE_B_LOW, 1.0, 1.0);
    figures_of(&g, KIND, 1.0, &figures);
    assert_close(find(&figures, "stored_energy", "electric_across")->value,
                 0.5 * VACUUM_PERMITTIVITY * VOLTS * VOLTS * 31.0 / 17.0, 1e-12, 0.0);
    figures_free(&figures);
    geometry_free(&g);
}

static void test_energy_without_bound_is_missing(void **state)
{
    (void)state;
    static const double upper[2][2] = {{1.0, 1.0}, {0.0, 1.0}};
    static const char *const words[2] = {"corner", "runs along"};
    for (int k = 0; k < 2; k++) {
        struct geometry g;
        struct figures figures;
        scene_begin(&g, VOLTS, false);
        struct plane *p = scene_plane(&g, KIND, 0.0, 31e-3, 0.0, 17e-3);
        scene_wall(p, SIDE_B_HIGH, upper[k][0], upper[k][1]);
        figures_of(&g, KIND, 1.0, &figures);
        const struct figure *f = find(&figures, "stored_energy", "electric_across");
        assert_int_equal(f->state, FIGURE_MISSING);
        assert_non_null(strstr(f->note, words[k]));
        figures_free(&figures);
        geometry_free(&g);
    }
}

static void test_every_failed_allocation_is_reported(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    struct figures figures;
    enum status status = STATUS_MEMORY;
    long k = 0;
    scene_begin(&g, VOLTS, false);
    struct plane *p = scene_plane(&g, KIND, -20e-3, 20e-3, -13e-3, 17e-3);
    scene_box(p, "bar", 0.5, -5e-3, 0.0, -2e-3, 3e-3, 0.0);
    scene_box(p, "other", 1.0, 7e-3, 9e-3, -2e-3, 3e-3, 0.0);
    solve(&g, KIND, 0.5, &s);
    while (status == STATUS_MEMORY) {
        mem_fail_at(++k);
        status = make(&g, KIND, &s, &figures);
        mem_fail_at(0);
        figures_free(&figures);
    }
    assert_int_equal(status, STATUS_OK);
    assert_true(k > 20);
    plane_solution_free(&s);
    geometry_free(&g);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_matrix_lists_the_upper_half_by_name),
        cmocka_unit_test(test_matrix_is_found_again_by_row_and_column),
        cmocka_unit_test(test_charges_follow_from_the_matrix),
        cmocka_unit_test(test_capacitance_is_told_once_for_a_conductor),
        cmocka_unit_test(test_matrix_needs_two_and_takes_eight_conductors),
        cmocka_unit_test(test_floating_part_has_its_potential_and_its_charge),
        cmocka_unit_test(test_turned_plane_speaks_of_whole_rings),
        cmocka_unit_test(test_force_across_a_mirror_that_cuts_the_part_is_missing),
        cmocka_unit_test(test_energy_counts_walls_of_constant_potential),
        cmocka_unit_test(test_energy_without_bound_is_missing),
        cmocka_unit_test(test_every_failed_allocation_is_reported),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
