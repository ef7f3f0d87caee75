/* SPDX-License-Identifier: GPL-3.0-or-later */

/* The local solutions beside an interface, and the media of points and cells. */

#include "tests/support/assert_close.h"

#include <math.h>
#include <string.h>

#include "mesh/grid.h"
#include "mesh/interface.h"
#include "mesh/medium.h"
#include "shared/mem.h"
#include "tests/support/scene.h"

#define RADIUS 5e-3 /* m, of the rod */
#define REACH  0.4e-3

static struct part *insulate(struct part *part, double permittivity)
{
    part->kind = PART_INSULATOR;
    part->permittivity = permittivity;
    return part;
}

static struct plane *rod_scene(struct geometry *g, enum plane_kind kind)
{
    scene_begin(g, 1.0, false);
    struct plane *p = scene_plane(g, kind, -20e-3, 20e-3, 0.0, 20e-3);
    insulate(scene_disc(p, "rod", 0.0, 1e-3, 11e-3, RADIUS), 3.0);
    return p;
}

/* A point of the rod's surface near the angle (rad), moved outwards by `out` (m). */
static struct vec2 near_rod(double angle, double out)
{
    return (struct vec2){1e-3 + (RADIUS + out) * cos(angle),
                         11e-3 + (RADIUS + out) * sin(angle)};
}

static void test_later_insulator_holds_and_conductors_hold_before(void **state)
{
    (void)state;
    struct geometry g;
    struct plane *p = rod_scene(&g, PLANE_ELECTRIC_ACROSS);
    insulate(scene_disc(p, "core", 0.0, 1e-3, 11e-3, 2e-3), 7.0);
    scene_disc(p, "wire", 1.0, 1e-3, 11e-3, 0.5e-3);
    assert_int_equal(plane_medium_at(p, near_rod(1.0, 1e-3)), MEDIUM_VACUUM);
    assert_int_equal(plane_medium_at(p, near_rod(1.0, -1e-3)), 0);
    assert_int_equal(plane_medium_at(p, near_rod(1.0, -4e-3)), 1);
    assert_int_equal(plane_medium_at(p, near_rod(1.0, -4.8e-3)), MEDIUM_CONDUCTOR);
    assert_close(medium_coefficient(p, 1), 7.0, 0.0, 0.0);
    assert_close(medium_coefficient(p, MEDIUM_VACUUM), 1.0, 0.0, 0.0);
    geometry_free(&g);
}

static void test_frame_points_from_the_rod_and_bends_towards_it(void **state)
{
    (void)state;
    struct geometry g;
    struct interface f;
    int media[2];
    struct plane *p = rod_scene(&g, PLANE_ELECTRIC_ACROSS);
    assert_true(interface_find(p, near_rod(0.7, 0.1e-3), REACH, &f, media));
    assert_int_equal(media[0], 0);
    assert_int_equal(media[1], MEDIUM_VACUUM);
    assert_close(f.origin.a, near_rod(0.7, 0.0).a, 1e-12, 0.0);
    assert_close(f.normal.b, sin(0.7), 1e-12, 0.0);
    assert_close(f.curvature, -1.0 / RADIUS, 1e-12, 0.0);
    assert_close(f.coefficient[0], 3.0, 0.0, 0.0);
    assert_false(interface_find(p, near_rod(0.7, 0.5e-3), REACH, &f, media));
    geometry_free(&g);
}

static void test_corner_is_no_smooth_interface(void **state)
{
    (void)state;
    struct geometry g;
    struct interface f;
    int media[2];
    scene_begin(&g, 1.0, false);
    struct plane *p = scene_plane(&g, PLANE_ELECTRIC_ACROSS, -20e-3, 20e-3, 0.0, 20e-3);
    insulate(scene_box(p, "bar", 0.0, 0.0, 5e-3, 3e-3, 8e-3, 0.0), 3.0);
    assert_true(interface_find(p, (struct vec2){5.1e-3, 6e-3}, REACH, &f, media));
    assert_false(interface_find(p, (struct vec2){5.1e-3, 7.8e-3}, REACH, &f, media));
    geometry_free(&g);
}

/* The terms of both sides agree along the interface up to third order in the distance. */
static void test_terms_are_continuous_to_second_order(void **state)
{
    (void)state;
    struct geometry g;
    struct interface f;
    int media[2];
    struct plane *p = rod_scene(&g, PLANE_ELECTRIC_ACROSS);
    assert_true(interface_find(p, near_rod(0.7, 0.0), REACH, &f, media));
    for (int m = 0; m < INTERFACE_TERMS; m++) {
        double gap[2], inside[INTERFACE_TERMS], outside[INTERFACE_TERMS];
        for (int k = 0; k < 2; k++) {
            const struct vec2 at = near_rod(0.7 + (k ? 0.01 : 0.02), 0.0);
            interface_values(&f, at, 0, inside);
            interface_values(&f, at, 1, outside);
            gap[k] = fabs(inside[m] - outside[m]);
        }
        assert_at_most(gap[0], 5e-3);
        assert_at_most(gap[1], 0.13 * gap[0] + 1e-15);
    }
    geometry_free(&g);
}

/* Flux through a closed polygon that crosses the interface: it vanishes up to the third
 * order in its size (flux itself is of the first). */
static double leak(const struct interface *f, struct vec2 centre, double size, int m)
{
    static const struct vec2 corners[4] = {{-1, -0.8}, {1.1, -1}, {0.9, 1}, {-1, 0.7}};
    double sum = 0.0;
    for (int k = 0; k < 4; k++) {
        double flux[INTERFACE_TERMS];
        interface_fluxes(f, vec2_add(centre, vec2_scale(corners[k], size)),
                         vec2_add(centre, vec2_scale(corners[(k + 1) % 4], size)),
                         flux);
        sum += flux[m];
    }
    return fabs(sum);
}

static void check_leaks(enum plane_kind kind)
{
    struct geometry g;
    struct interface f;
    int media[2];
    struct plane *p = rod_scene(&g, kind);
    assert_true(interface_find(p, near_rod(0.7, 0.0), REACH, &f, media));
    const double scale = kind == PLANE_ELECTRIC_TURNED ? f.origin.b : 1.0;
    for (int m = 0; m < INTERFACE_TERMS; m++) {
        const double coarse = leak(&f, f.origin, 0.2e-3, m) / scale;
        const double fine = leak(&f, f.origin, 0.1e-3, m) / scale;
        assert_at_most(coarse, 0.1); /* of fluxes of order 1 */
        assert_at_most(fine, 0.14 * coarse + 1e-14);
    }
    geometry_free(&g);
}

static void test_terms_conserve_flux(void **state)
{
    (void)state;
    check_leaks(PLANE_ELECTRIC_ACROSS);
    check_leaks(PLANE_ELECTRIC_TURNED);
}

static void test_one_medium_needs_no_jump(void **state)
{
    (void)state;
    struct interface f = {.origin = {2e-3, 3e-3},
                          .normal = {0.6, 0.8},
                          .curvature = 80.0,
                          .coefficient = {2.5, 2.5},
                          .scale = 1e-3};
    double one[INTERFACE_TERMS], other[INTERFACE_TERMS];
    interface_values(&f, (struct vec2){2.3e-3, 2.6e-3}, 0, one);
    interface_values(&f, (struct vec2){2.3e-3, 2.6e-3}, 1, other);
    for (int m = 0; m < INTERFACE_TERMS; m++)
        assert_close(one[m], other[m], 1e-14, 1e-15);
}

static void test_cells_know_their_medium(void **state)
{
    (void)state;
    struct geometry g;
    struct grid grid;
    rod_scene(&g, PLANE_ELECTRIC_ACROSS);
    assert_int_equal(grid_build(&g.planes[PLANE_ELECTRIC_ACROSS],
                                &(struct grid_request){.fineness = 2.0}, &grid, NULL),
                     STATUS_OK);
    int count[3] = {0, 0, 0};
    for (int c = 0; c < (grid.na - 1) * (grid.nb - 1); c++) {
        const int medium = grid.medium[c];
        assert_true(medium == 0 || medium == MEDIUM_VACUUM || medium == MEDIUM_MIXED);
        count[medium == 0 ? 0 : medium == MEDIUM_MIXED ? 1 : 2]++;
        if (medium == 0)
            assert_close(grid.coefficient[c], 3.0, 0.0, 0.0);
    }
    assert_true(count[0] > 0 && count[1] > 0 && count[2] > count[0]);
    assert_true(grid.face_count > 0);
    grid_free(&grid);
    geometry_free(&g);
}

static void test_weights_of_every_face_sum_to_zero(void **state)
{
    (void)state;
    struct geometry g;
    struct grid grid;
    rod_scene(&g, PLANE_ELECTRIC_TURNED);
    assert_int_equal(grid_build(&g.planes[PLANE_ELECTRIC_TURNED],
                                &(struct grid_request){.fineness = 2.0}, &grid, NULL),
                     STATUS_OK);
    for (size_t k = 0; k < grid.face_count; k++) {
        const struct face *face = &grid.faces[k];
        double sum = 0.0, size = 0.0;
        for (int n = 0; n < FACE_PATCH; n++) {
            sum += face->weight[n];
            size += fabs(face->weight[n]);
        }
        assert_at_most(fabs(sum), 1e-12 * size);
        assert_true(grid_face(&grid, face->node, face->leg) == face);
    }
    grid_free(&grid);
    geometry_free(&g);
}

static void test_every_failed_allocation_is_reported(void **state)
{
    (void)state;
    struct geometry g;
    rod_scene(&g, PLANE_ELECTRIC_ACROSS);
    enum status status = STATUS_MEMORY;
    for (long k = 1; k < 1000 && status == STATUS_MEMORY; k++) {
        struct grid grid;
        mem_fail_at(k);
        status = grid_build(&g.planes[PLANE_ELECTRIC_ACROSS],
                            &(struct grid_request){.fineness = 0.5}, &grid, NULL);
        mem_fail_at(0);
        assert_true(status == STATUS_OK || grid.faces == NULL);
        grid_free(&grid);
    }
    assert_int_equal(status, STATUS_OK);
    geometry_free(&g);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_later_insulator_holds_and_conductors_hold_before),
        cmocka_unit_test(test_frame_points_from_the_rod_and_bends_towards_it),
        cmocka_unit_test(test_corner_is_no_smooth_interface),
        cmocka_unit_test(test_terms_are_continuous_to_second_order),
        cmocka_unit_test(test_terms_conserve_flux),
        cmocka_unit_test(test_one_medium_needs_no_jump),
        cmocka_unit_test(test_cells_know_their_medium),
        cmocka_unit_test(test_weights_of_every_face_sum_to_zero),
        cmocka_unit_test(test_every_failed_allocation_is_reported),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
