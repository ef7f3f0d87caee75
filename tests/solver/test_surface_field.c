/* SPDX-License-Identifier: GPL-3.0-or-later */

/* The highest field on surfaces and what is said of it beside sharp corners. */

#include "tests/support/assert_close.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

#include "shared/mem.h"
#include "solver/figures_surface.h"
#include "solver/surface_field.h"
#include "tests/support/scene.h"

#define KIND PLANE_ELECTRIC_ALONG

static void solve(const struct geometry *g, double fineness,
                  struct plane_solution *solution)
{
    assert_int_equal(plane_solve(g, KIND, &(struct grid_request){.fineness = fineness},
                                 solution, NULL),
                     STATUS_OK);
}

/* A block in a box of earth, off its middle: nearest to the wall at high b. */
static struct part *block(struct geometry *g, double rounding)
{
    scene_begin(g, 238.5, false);
    struct plane *plane = scene_plane(g, KIND, -30e-3, 30e-3, -25e-3, 25e-3);
    return scene_box(plane, "block", 1.0, -11e-3, 9e-3, -3e-3, 8e-3, rounding);
}

static struct surface_peak peak_of(const struct geometry *g, double fineness)
{
    struct plane_solution s;
    struct surface_peak peak;
    solve(g, fineness, &s);
    assert_int_equal(surface_field_peak(&s, 0, &peak), STATUS_OK);
    plane_solution_free(&s);
    return peak;
}

static double distance_to_corner(struct vec2 p)
{
    return hypot(p.a - (p.a < 0.0 ? -11e-3 : 9e-3),
                 p.b - (p.b < 2.5e-3 ? -3e-3 : 8e-3));
}

static void test_sharp_corner_is_looked_at_from_the_default_distance(void **state)
{
    (void)state;
    struct geometry g;
    block(&g, 0.0);
    const struct surface_peak peak = peak_of(&g, 2.0);
    assert_true(peak.found && peak.at_corner && !peak.edge_given);
    assert_close(peak.corner_distance, 0.5e-3, 0.0, 0.0);
    assert_close(distance_to_corner(peak.at), 0.5e-3, 1e-12, 0.0);
    assert_true(isinf(peak.radius));
    geometry_free(&g);
}

/* Near the corner the field goes as distance^(-1/3) (Jackson, Classical Electrodynamics,
 * sec. 2.11; from memory). */
static void test_field_beside_a_sharp_corner_has_no_limit(void **state)
{
    (void)state;
    double field[2];
    for (int k = 0; k < 2; k++) {
        struct geometry g;
        block(&g, 0.0)->edge_radius = k == 0 ? 0.2e-3 : 0.05e-3;
        const struct surface_peak peak = peak_of(&g, 4.0);
        assert_true(peak.at_corner && peak.edge_given);
        assert_close(distance_to_corner(peak.at), k == 0 ? 0.2e-3 : 0.05e-3, 1e-9, 0.0);
        field[k] = peak.field;
        geometry_free(&g);
    }
    assert_close(field[1] / field[0], cbrt(4.0), 0.02, 0.0);
}

static void test_rounded_block_peaks_on_an_arc(void **state)
{
    (void)state;
    struct geometry g;
    block(&g, 2e-3);
    const struct surface_peak peak = peak_of(&g, 2.0);
    assert_true(peak.found && !peak.at_corner && peak.corner_distance == 0.0);
    assert_close(peak.radius, 2e-3, 1e-12, 0.0);
    assert_true(peak.at.a < 0.0 && peak.at.b > 6e-3);
    geometry_free(&g);
}

/* No point of the surface is above the peak, and the peak is on the surface. */
static void test_peak_is_the_highest_of_all_points(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    struct surface_peak peak;
    struct surface_point *points;
    size_t count;
    block(&g, 2e-3);
    solve(&g, 2.0, &s);
    const struct shape *shape = &s.plane->parts[0].shape;
    assert_int_equal(surface_field_peak(&s, 0, &peak), STATUS_OK);
    assert_int_equal(shape_surface(shape, 1e-5, &points, &count), STATUS_OK);
    double highest = 0.0;
    for (size_t k = 0; k < count; k++) {
        struct field_value v;
        assert_int_equal(field_at_surface(s.field, points[k].at, &v), STATUS_OK);
        highest = fmax(highest, vec2_length(v.gradient));
    }
    assert_true(highest <= peak.field * (1.0 + 1e-9));
    assert_close(highest, peak.field, 1e-5, 0.0);
    assert_true(shape_contains(shape, peak.at, 1e-12));
    mem_free(points);
    plane_solution_free(&s);
    geometry_free(&g);
}

/* Two equal peaks: the first along the outline, on every grid. */
static void test_of_equal_peaks_the_first_is_taken(void **state)
{
    (void)state;
    struct vec2 first = {0.0, 0.0};
    for (int k = 0; k < 3; k++) {
        struct geometry g;
        scene_begin(&g, 1.0, false);
        struct plane *plane = scene_plane(&g, KIND, -30e-3, 30e-3, -25e-3, 25e-3);
        scene_box(plane, "block", 1.0, -10e-3, 10e-3, -5e-3, 5e-3, 2e-3);
        const struct surface_peak peak = peak_of(&g, 1.0 + k);
        if (k == 0)
            first = peak.at;
        assert_true(peak.at.a * first.a > 0.0 && peak.at.b * first.b > 0.0);
        geometry_free(&g);
    }
}

/* A box cut by a mirror has no corner there. */
static void test_corners_on_the_border_do_not_stand_out(void **state)
{
    (void)state;
    struct geometry g;
    scene_begin(&g, 1.0, false);
    struct plane *plane = scene_plane(&g, KIND, 0.0, 30e-3, -25e-3, 25e-3);
    const struct vec2 points[4] = {
        {0.0, -5e-3}, {8e-3, -2e-3}, {8e-3, 2e-3}, {0.0, 5e-3}};
    plane->sides[SIDE_A_LOW].kind = SIDE_MIRROR;
    scene_polygon(plane, "half", 1.0, points, 4);
    struct surface_peak peak = peak_of(&g, 1.0);
    assert_true(peak.corner_distance > 0.0); /* the two at 8 mm */
    geometry_free(&g);
    scene_begin(&g, 1.0, false);
    plane = scene_plane(&g, KIND, 0.0, 30e-3, 0.0, 25e-3);
    plane->sides[SIDE_A_LOW].kind = plane->sides[SIDE_A_HIGH].kind = SIDE_MIRROR;
    plane->sides[SIDE_B_LOW].kind = SIDE_MIRROR;
    scene_box(plane, "block", 1.0, 0.0, 30e-3, 0.0, 5e-3, 0.0);
    peak = peak_of(&g, 1.0);
    assert_true(peak.found && peak.corner_distance == 0.0 && !peak.at_corner);
    geometry_free(&g);
}

static void test_covered_part_has_no_surface(void **state)
{
    (void)state;
    struct geometry g;
    block(&g, 0.0);
    struct plane *plane = &g.planes[KIND];
    scene_box(plane, "cover", 1.0, -12e-3, 10e-3, -4e-3, 9e-3, 1e-3);
    assert_false(peak_of(&g, 1.0).found);
    geometry_free(&g);
}

/* ---- insulators ---- */

/* Between a wall at 0 and one at the supply, 40 mm apart; sides run linearly. */
static struct plane *even_field(struct geometry *g)
{
    scene_begin(g, 238.5, false);
    struct plane *plane = scene_plane(g, KIND, -20e-3, 20e-3, -13e-3, 13e-3);
    scene_wall(plane, SIDE_A_HIGH, 1.0, 1.0);
    scene_wall(plane, SIDE_B_LOW, 0.0, 1.0);
    scene_wall(plane, SIDE_B_HIGH, 0.0, 1.0);
    return plane;
}

static struct part *insulate(struct part *part, double permittivity)
{
    part->kind = PART_INSULATOR;
    part->permittivity = permittivity;
    return part;
}

static double creep_of(const struct geometry *g)
{
    struct plane_solution s;
    struct surface_peak peak;
    solve(g, 1.0, &s);
    assert_int_equal(surface_field_creep(&s, 0, &peak), STATUS_OK);
    assert_true(peak.found);
    plane_solution_free(&s);
    return peak.field;
}

/* Of permittivity 1 it changes nothing: the field along a disc is highest at its sides. */
static void test_field_along_an_insulator_is_the_tangential_one(void **state)
{
    (void)state;
    struct geometry g;
    insulate(scene_disc(even_field(&g), "bead", 0.0, 1e-3, -2e-3, 3e-3), 1.0);
    assert_close(creep_of(&g), 238.5 / 40e-3, 1e-9, 0.0);
    geometry_free(&g);
}

/* A spacer from wall to wall leaves the field as it is, whatever it is made of. */
static void test_field_along_a_spacer_is_that_between_the_walls(void **state)
{
    (void)state;
    struct geometry g;
    insulate(scene_box(even_field(&g), "spacer", 0.0, -20e-3, 20e-3, -4e-3, 3e-3, 0.0),
             6.3);
    assert_close(creep_of(&g), 238.5 / 40e-3, 1e-9, 0.0);
    geometry_free(&g);
}

/* ---- the figures ---- */

static struct figure figure_of(const struct geometry *g, char *note, size_t size)
{
    struct plane_solution s;
    struct figures figures = {0};
    struct maker maker = {&figures, FIGURE_HARDWARE, 0, STATUS_OK};
    solve(g, 1.0, &s);
    figures_conductor_surface(&maker, &s, 0);
    assert_int_equal(maker.status, STATUS_OK);
    assert_int_equal(figures.count, 1);
    const struct figure f = figures.items[0];
    (void)snprintf(note, size, "%s", f.note);
    figures_free(&figures);
    plane_solution_free(&s);
    return f;
}

static void test_figure_of_a_sharp_corner_is_unsettled_and_says_why(void **state)
{
    (void)state;
    struct geometry g;
    char note[400];
    block(&g, 0.0);
    assert_int_equal(figure_of(&g, note, sizeof note).state, FIGURE_UNSETTLED);
    assert_non_null(strstr(note,
                           "no limit exists beside a sharp corner: looked at from "
                           "0.5 mm on"));
    geometry_free(&g);
}

static void test_figure_on_a_given_edge_radius_is_good(void **state)
{
    (void)state;
    struct geometry g;
    char note[400];
    block(&g, 0.0)->edge_radius = 1.5e-3;
    assert_int_equal(figure_of(&g, note, sizeof note).state, FIGURE_GOOD);
    assert_non_null(strstr(note, "beside a sharp corner, at the edge radius 1.5 mm"));
    geometry_free(&g);
}

static void test_figure_on_an_arc_names_its_radius(void **state)
{
    (void)state;
    struct geometry g;
    char note[400];
    block(&g, 2e-3);
    assert_int_equal(figure_of(&g, note, sizeof note).state, FIGURE_GOOD);
    assert_ptr_equal(strstr(note, "radius 2 mm, at z = -"), note);
    assert_null(strstr(note, "corner"));
    geometry_free(&g);
}

static void test_every_failed_allocation_is_reported(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    struct surface_peak peak;
    block(&g, 2e-3);
    solve(&g, 1.0, &s);
    enum status status = STATUS_MEMORY;
    int failures = 0;
    for (long k = 1; status != STATUS_OK; k++) {
        mem_fail_at(k);
        status = surface_field_peak(&s, 0, &peak);
        mem_fail_at(0);
        assert_true(status == STATUS_OK || (status == STATUS_MEMORY && !peak.found));
        failures += status == STATUS_MEMORY;
    }
    assert_true(failures > 3 && peak.found);
    plane_solution_free(&s);
    geometry_free(&g);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_sharp_corner_is_looked_at_from_the_default_distance),
        cmocka_unit_test(test_field_beside_a_sharp_corner_has_no_limit),
        cmocka_unit_test(test_rounded_block_peaks_on_an_arc),
        cmocka_unit_test(test_peak_is_the_highest_of_all_points),
        cmocka_unit_test(test_of_equal_peaks_the_first_is_taken),
        cmocka_unit_test(test_corners_on_the_border_do_not_stand_out),
        cmocka_unit_test(test_covered_part_has_no_surface),
        cmocka_unit_test(test_field_along_an_insulator_is_the_tangential_one),
        cmocka_unit_test(test_field_along_a_spacer_is_that_between_the_walls),
        cmocka_unit_test(test_figure_of_a_sharp_corner_is_unsettled_and_says_why),
        cmocka_unit_test(test_figure_on_a_given_edge_radius_is_good),
        cmocka_unit_test(test_figure_on_an_arc_names_its_radius),
        cmocka_unit_test(test_every_failed_allocation_is_reported),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
