/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Cross-sections of fields that are known exactly: E from the saddle in an across plane,
 * B uniform from an along plane, each made by walls that run linearly. */

#include "tests/support/assert_close.h"

#include "shared/constants.h"
#include "shared/mem.h"
#include "solver/cross_section.h"
#include "tests/support/scene.h"

#define HALF_X 21e-3
#define HALF_Y 17e-3
#define SADDLE 0.031 /* of the uniform part */

struct bench {
    struct geometry geometry;
    struct plane_solution electric, magnetic;
    struct view view;
};

/* E_x = -V/HALF_X (1 + SADDLE y/HALF_Y), E_y = -V/HALF_X SADDLE x/HALF_Y in the across
 * plane; B_y = -mu0 I/HALF_Y in the along plane. */
static void begin(struct bench *b)
{
    struct geometry *g = &b->geometry;
    scene_begin(g, 1.0, false);
    struct plane *e =
        scene_plane(g, PLANE_ELECTRIC_ACROSS, -HALF_X, HALF_X, -HALF_Y, HALF_Y);
    scene_wall(e, SIDE_A_LOW, -311.0 * (1.0 - SADDLE), -311.0 * (1.0 + SADDLE));
    scene_wall(e, SIDE_A_HIGH, 311.0 * (1.0 - SADDLE), 311.0 * (1.0 + SADDLE));
    scene_wall(e, SIDE_B_LOW, -311.0 * (1.0 - SADDLE), 311.0 * (1.0 - SADDLE));
    scene_wall(e, SIDE_B_HIGH, -311.0 * (1.0 + SADDLE), 311.0 * (1.0 + SADDLE));
    struct plane *m =
        scene_plane(g, PLANE_MAGNETIC_ALONG, -60e-3, 60e-3, -HALF_Y, HALF_Y);
    scene_wall(m, SIDE_A_LOW, -1590.0, 1590.0);
    scene_wall(m, SIDE_A_HIGH, -1590.0, 1590.0);
    scene_wall(m, SIDE_B_LOW, -1590.0, -1590.0);
    scene_wall(m, SIDE_B_HIGH, 1590.0, 1590.0);
    assert_int_equal(plane_solve(g, PLANE_ELECTRIC_ACROSS,
                                 &(struct grid_request){.fineness = 1.0, .level = 0},
                                 &b->electric, NULL),
                     STATUS_OK);
    assert_int_equal(plane_solve(g, PLANE_MAGNETIC_ALONG,
                                 &(struct grid_request){.fineness = 1.0, .level = 0},
                                 &b->magnetic, NULL),
                     STATUS_OK);
    b->view = (struct view){g,
                            {[PLANE_ELECTRIC_ACROSS] = &b->electric,
                             [PLANE_MAGNETIC_ALONG] = &b->magnetic}};
}

static void end(struct bench *b)
{
    plane_solution_free(&b->electric);
    plane_solution_free(&b->magnetic);
    geometry_free(&b->geometry);
}

static void test_across_planes_come_first_and_along_planes_stand_in(void **state)
{
    (void)state;
    struct bench b;
    begin(&b);
    const struct section_source source = section_source_of(&b.view);
    assert_ptr_equal(source.electric, &b.electric);
    assert_ptr_equal(source.magnetic, &b.magnetic);
    assert_int_equal(section_planes(&source), plane_bit(PLANE_ELECTRIC_ACROSS) |
                                                  plane_bit(PLANE_MAGNETIC_ALONG));
    const struct view none = {&b.geometry, {NULL}};
    assert_int_equal(section_planes(&(struct section_source){NULL, NULL, 0.0}), 0);
    assert_null(section_source_of(&none).electric);
    end(&b);
}

static void test_fields_at_points_of_the_section(void **state)
{
    (void)state;
    struct bench b;
    begin(&b);
    const struct section_source source = section_source_of(&b.view);
    for (int k = 0; k < 30; k++) {
        const double x = 15e-3 * sin(2.385 * k), y = 12e-3 * sin(1.711 * k);
        double e[2], m[2];
        bool open;
        assert_int_equal(section_electric(&source, x, y, e, &open), STATUS_OK);
        assert_true(open);
        assert_close(e[0], -311.0 / HALF_X * (1.0 + SADDLE * y / HALF_Y), 1e-10, 0.0);
        assert_close(e[1], -311.0 / HALF_X * SADDLE * x / HALF_Y, 0.0, 1e-6);
        assert_int_equal(section_magnetic(&source, x, y, m, &open), STATUS_OK);
        assert_true(open && m[0] == 0.0);
        assert_close(m[1], -VACUUM_PERMEABILITY * 1590.0 / HALF_Y, 1e-10, 0.0);
    }
    end(&b);
}

static void test_points_outside_are_not_open(void **state)
{
    (void)state;
    struct bench b;
    double e[2] = {1.0, 1.0};
    bool open = true;
    begin(&b);
    const struct section_source source = section_source_of(&b.view);
    assert_int_equal(section_electric(&source, 30e-3, 0.0, e, &open), STATUS_OK);
    assert_false(open);
    assert_true(e[0] == 0.0 && e[1] == 0.0);
    end(&b);
}

static void test_ratio_error_is_that_of_the_saddle(void **state)
{
    (void)state;
    struct bench b;
    double reference, error;
    bool open;
    begin(&b);
    const struct section_source source = section_source_of(&b.view);
    assert_int_equal(section_reference(&source, 0.0, 0.0, &reference), STATUS_OK);
    assert_close(reference, 311.0 / HALF_X / (VACUUM_PERMEABILITY * 1590.0 / HALF_Y),
                 1e-10, 0.0);
    assert_int_equal(section_ratio_error(&source, reference, 4e-3, 5e-3, &error, &open),
                     STATUS_OK);
    assert_true(open);
    assert_close(error, SADDLE * 5e-3 / HALF_Y, 0.0, 1e-10);
    end(&b);
}

static void test_map_covers_the_footprint(void **state)
{
    (void)state;
    struct bench b;
    struct section map;
    begin(&b);
    b.geometry.beam.has_footprint = true;
    b.geometry.beam.half_x = 3e-3;
    b.geometry.beam.half_y = 2e-3;
    assert_int_equal(section_map(&b.view, &map), STATUS_OK);
    assert_true(map.present && map.nx == SECTION_POINTS && map.ny == SECTION_POINTS);
    assert_close(map.x[0], -3e-3, 1e-14, 0.0);
    assert_close(map.y[SECTION_POINTS - 1], 2e-3, 1e-14, 0.0);
    for (size_t n = 0; n < map.nx * map.ny; n++)
        assert_close(map.ratio_error[n], SADDLE * map.y[n / map.nx] / HALF_Y, 0.0,
                     1e-10);
    section_free(&map);
    section_free(&map);
    end(&b);
}

static void test_map_needs_a_footprint_and_a_plane(void **state)
{
    (void)state;
    struct bench b;
    struct section map;
    begin(&b);
    assert_int_equal(section_map(&b.view, &map), STATUS_OK);
    assert_false(map.present);
    b.geometry.beam.has_footprint = true;
    b.view.planes[PLANE_ELECTRIC_ACROSS] = NULL;
    b.geometry.beam.half_x = b.geometry.beam.half_y = 1e-3;
    assert_int_equal(section_map(&b.view, &map), STATUS_OK);
    assert_true(map.present);
    assert_null(map.e_x);
    assert_null(map.ratio_error);
    assert_non_null(map.b_y);
    section_free(&map);
    end(&b);
}

static void test_vanishing_field_has_no_reference(void **state)
{
    (void)state;
    struct bench b;
    double reference = 1.0;
    begin(&b);
    struct geometry g;
    struct plane_solution dead;
    scene_begin(&g, 0.0, true);
    struct plane *p =
        scene_plane(&g, PLANE_MAGNETIC_ALONG, -60e-3, 60e-3, -HALF_Y, HALF_Y);
    scene_wall(p, SIDE_B_HIGH, 1.0, 1.0);
    assert_int_equal(plane_solve(&g, PLANE_MAGNETIC_ALONG,
                                 &(struct grid_request){.fineness = 1.0, .level = 0},
                                 &dead, NULL),
                     STATUS_OK);
    const struct section_source source = {&b.electric, &dead, 0.0};
    assert_int_equal(section_reference(&source, 0.0, 0.0, &reference),
                     STATUS_UNTRUSTED);
    assert_true(reference == 0.0);
    plane_solution_free(&dead);
    geometry_free(&g);
    end(&b);
}

static void test_every_failed_allocation_of_the_map_is_reported(void **state)
{
    (void)state;
    struct bench b;
    enum status status = STATUS_MEMORY;
    long k = 0;
    begin(&b);
    b.geometry.beam.has_footprint = true;
    b.geometry.beam.half_x = b.geometry.beam.half_y = 1e-3;
    while (status == STATUS_MEMORY) {
        struct section map;
        mem_fail_at(++k);
        status = section_map(&b.view, &map);
        mem_fail_at(0);
        assert_int_equal(map.present, status == STATUS_OK);
        section_free(&map);
    }
    assert_int_equal(status, STATUS_OK);
    assert_true(k > 6);
    end(&b);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_across_planes_come_first_and_along_planes_stand_in),
        cmocka_unit_test(test_fields_at_points_of_the_section),
        cmocka_unit_test(test_points_outside_are_not_open),
        cmocka_unit_test(test_ratio_error_is_that_of_the_saddle),
        cmocka_unit_test(test_map_covers_the_footprint),
        cmocka_unit_test(test_map_needs_a_footprint_and_a_plane),
        cmocka_unit_test(test_vanishing_field_has_no_reference),
        cmocka_unit_test(test_every_failed_allocation_of_the_map_is_reported),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
