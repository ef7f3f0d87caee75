/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Nodes, owners and cut legs against the exact shapes; what a grid cannot take; memory
 * that runs out. */

#include "tests/support/assert_close.h"

#include <string.h>

#include "mesh/grid.h"
#include "shared/mem.h"
#include "tests/support/scene.h"

#define KIND PLANE_ELECTRIC_ACROSS

/* Steps to the neighbour along each leg, as signs of a and b. */
static const int STEP_A[LEG_COUNT] = {-1, 1, 0, 0};
static const int STEP_B[LEG_COUNT] = {0, 0, -1, 1};

/* An earthed region 38 mm by 26 mm. */
static struct plane *region(struct geometry *g)
{
    scene_begin(g, 1.0, false);
    return scene_plane(g, KIND, -7e-3, 31e-3, -9e-3, 17e-3);
}

static void build(const struct geometry *g, int level, struct grid *grid)
{
    assert_int_equal(grid_build(&g->planes[KIND],
                                &(struct grid_request){.fineness = 1.0,
                                                       .level = level,
                                                       .memory_budget = 1e9},
                                grid, NULL),
                     STATUS_OK);
}

/* Owner of node (i, j). */
static int owner_at(const struct grid *grid, int i, int j)
{
    const int node = j * grid->na + i;
    return grid->owner[node];
}

static struct vec2 place_of(const struct grid *grid, int node)
{
    return (struct vec2){grid->a[node % grid->na], grid->b[node / grid->na]};
}

/* Expects STATUS_INPUT with an empty grid and a message that holds both words. */
static void assert_refused(const struct geometry *g, double fineness, double budget,
                           const char *word, const char *other)
{
    struct messages messages = {0};
    struct grid grid;
    assert_int_equal(grid_build(&g->planes[KIND],
                                &(struct grid_request){.fineness = fineness,
                                                       .level = 0,
                                                       .memory_budget = budget},
                                &grid, &messages),
                     STATUS_INPUT);
    assert_null(grid.a);
    assert_null(grid.owner);
    assert_true(messages.errors >= 1);
    if (strstr(messages.items[0].text, word) == NULL ||
        strstr(messages.items[0].text, other) == NULL)
        fail_msg("\"%s\" and \"%s\" are not both in: %s", word, other,
                 messages.items[0].text);
    messages_free(&messages);
}

/* Node at the far end of a leg, -1 outside the region. */
static int next_of(const struct grid *grid, int node, int leg)
{
    const int i = node % grid->na + STEP_A[leg], j = node / grid->na + STEP_B[leg];
    return i < 0 || j < 0 || i >= grid->na || j >= grid->nb ? -1 : j * grid->na + i;
}

static struct vec2 cut_end(const struct grid *grid, const struct cut *cut)
{
    const struct vec2 p = place_of(grid, cut->node);
    return (struct vec2){p.a + STEP_A[cut->leg] * cut->length,
                         p.b + STEP_B[cut->leg] * cut->length};
}

static bool has_line(const double *lines, int count, double at)
{
    return lines[grid_interval(lines, count, at)] == at ||
           lines[grid_interval(lines, count, at) + 1] == at;
}

static void test_box_faces_are_lines_and_cut_nothing(void **state)
{
    (void)state;
    struct geometry g;
    struct grid grid;
    scene_box(region(&g), "box", 1.0, 3e-3, 11e-3, -2e-3, 5e-3, 0.0);
    build(&g, 0, &grid);
    assert_int_equal(grid.cut_count, 0);
    assert_true(has_line(grid.a, grid.na, 3e-3) && has_line(grid.a, grid.na, 11e-3));
    assert_true(has_line(grid.b, grid.nb, -2e-3) && has_line(grid.b, grid.nb, 5e-3));
    for (int n = 0; n < grid.na * grid.nb; n++) {
        const struct vec2 p = place_of(&grid, n);
        const bool inside = p.a >= 3e-3 && p.a <= 11e-3 && p.b >= -2e-3 && p.b <= 5e-3;
        assert_int_equal(grid.owner[n] == 0, inside);
    }
    grid_free(&grid);
    geometry_free(&g);
}

static void test_sides_own_their_nodes_and_mirrors_stay_free(void **state)
{
    (void)state;
    struct geometry g;
    struct grid grid;
    struct plane *plane = region(&g);
    plane->sides[SIDE_A_LOW].kind = SIDE_MIRROR;
    plane->sides[SIDE_B_HIGH].kind = SIDE_ANTIMIRROR;
    build(&g, 0, &grid);
    for (int j = 1; j + 1 < grid.nb; j++) {
        assert_int_equal(owner_at(&grid, 0, j), OWNER_FREE);
        assert_int_equal(owner_at(&grid, grid.na - 1, j), OWNER_SIDE - SIDE_A_HIGH);
    }
    for (int i = 0; i + 1 < grid.na; i++) {
        assert_int_equal(owner_at(&grid, i, 0), OWNER_SIDE - SIDE_B_LOW);
        assert_int_equal(owner_at(&grid, i, grid.nb - 1), OWNER_SIDE - SIDE_B_HIGH);
    }
    assert_int_equal(grid.free_count, (grid.na - 1) * (grid.nb - 2));
    grid_free(&grid);
    geometry_free(&g);
}

#define RADIUS 4.7e-3
static const struct vec2 CENTRE = {10.3e-3, 3.1e-3};

static double depth(struct vec2 p)
{
    return RADIUS - vec2_length(vec2_sub(p, CENTRE));
}

static void disc(struct geometry *g, int level, struct grid *grid)
{
    scene_disc(region(g), "rod", 1.0, CENTRE.a, CENTRE.b, RADIUS);
    build(g, level, grid);
}

static void test_disc_owns_the_nodes_inside_it(void **state)
{
    (void)state;
    struct geometry g;
    struct grid grid;
    disc(&g, 1, &grid);
    int inside = 0;
    for (int n = 0; n < grid.na * grid.nb; n++) {
        const double d = depth(place_of(&grid, n));
        if (fabs(d) < 1e-11) /* extreme points of the circle are nodes */
            continue;
        assert_int_equal(grid.owner[n] == 0, d > 0.0);
        inside += d > 0.0;
    }
    assert_true(inside > 50);
    grid_free(&grid);
    geometry_free(&g);
}

static void test_cuts_end_on_the_circle(void **state)
{
    (void)state;
    struct geometry g;
    struct grid grid;
    disc(&g, 1, &grid);
    assert_true(grid.cut_count > 40);
    for (size_t k = 0; k < grid.cut_count; k++) {
        const struct cut *cut = &grid.cuts[k];
        assert_int_equal(cut->part, 0);
        assert_int_equal(grid.owner[cut->node], OWNER_FREE);
        assert_true(cut->length > 0.0);
        assert_close(depth(cut_end(&grid, cut)), 0.0, 0.0, 1e-11 * 26e-3);
    }
    grid_free(&grid);
    geometry_free(&g);
}

/* A whole leg of a free node must not pass through the disc. */
static void test_no_cut_is_missing_at_a_disc(void **state)
{
    (void)state;
    struct geometry g;
    struct grid grid;
    disc(&g, 0, &grid);
    for (int n = 0; n < grid.na * grid.nb; n++)
        for (int leg = 0; leg < LEG_COUNT; leg++) {
            const int next = next_of(&grid, n, leg);
            if (grid.owner[n] != OWNER_FREE || next < 0 ||
                grid_cut(&grid, n, (enum leg)leg) != NULL)
                continue;
            for (int k = 1; k < 64; k++) {
                const struct vec2 p = place_of(&grid, n), q = place_of(&grid, next);
                const struct vec2 at =
                    vec2_add(p, vec2_scale(vec2_sub(q, p), k / 64.0));
                assert_at_most(depth(at), 1e-11);
            }
        }
    grid_free(&grid);
    geometry_free(&g);
}

static void test_cuts_are_sorted_and_found(void **state)
{
    (void)state;
    struct geometry g;
    struct grid grid;
    size_t found = 0;
    disc(&g, 1, &grid);
    for (size_t k = 1; k < grid.cut_count; k++) {
        const struct cut *p = &grid.cuts[k - 1], *q = &grid.cuts[k];
        assert_true(p->node < q->node || (p->node == q->node && p->leg < q->leg));
    }
    for (size_t k = 0; k < grid.cut_count; k++)
        assert_ptr_equal(grid_cut(&grid, grid.cuts[k].node, grid.cuts[k].leg),
                         &grid.cuts[k]);
    for (int n = 0; n < grid.na * grid.nb; n++)
        for (int leg = 0; leg < LEG_COUNT; leg++)
            found += grid_cut(&grid, n, (enum leg)leg) != NULL;
    assert_int_equal(found, grid.cut_count);
    grid_free(&grid);
    geometry_free(&g);
}

/* A slanted plate 0.1 mm thick, far thinner than the spacing. */
#define THICK 0.1e-3

static void slanted(struct plane *plane, const char *name, double gain, double shift)
{
    const double slope = 0.371;
    const struct vec2 points[4] = {{2e-3, shift - 4e-3},
                                   {24e-3, shift - 4e-3 + slope * 22e-3},
                                   {24e-3, shift - 4e-3 + slope * 22e-3 + THICK},
                                   {2e-3, shift - 4e-3 + THICK}};
    scene_polygon(plane, name, gain, points, 4);
}

/* Where the plate passes between two nodes, both legs are cut and what lies between
 * the two cuts is the plate's thickness. */
static void test_plate_between_nodes_cuts_the_leg_from_both_ends(void **state)
{
    (void)state;
    struct geometry g;
    struct grid grid;
    int crossings = 0;
    slanted(region(&g), "plate", 1.0, 0.0);
    build(&g, 0, &grid);
    for (int n = 0; n + grid.na < grid.na * grid.nb; n++) {
        const struct cut *up = grid_cut(&grid, n, LEG_NORTH);
        if (up == NULL || grid.owner[n + grid.na] != OWNER_FREE)
            continue;
        const struct cut *down = grid_cut(&grid, n + grid.na, LEG_SOUTH);
        assert_non_null(down);
        const double spacing = grid.b[n / grid.na + 1] - grid.b[n / grid.na];
        assert_close(spacing - up->length - down->length, THICK, 0.0, 1e-12);
        crossings++;
    }
    assert_true(crossings > 8);
    grid_free(&grid);
    geometry_free(&g);
}

static void test_part_reaching_through_a_side_owns_the_side(void **state)
{
    (void)state;
    struct geometry g;
    struct grid grid;
    scene_box(region(&g), "box", 0.0, -12e-3, 2e-3, 3e-3, 5e-3, 0.0);
    build(&g, 0, &grid);
    int owned = 0;
    for (int j = 0; j < grid.nb; j++) {
        const bool inside = grid.b[j] >= 3e-3 && grid.b[j] <= 5e-3;
        assert_int_equal(owner_at(&grid, 0, j), inside ? 0 : OWNER_SIDE - SIDE_A_LOW);
        owned += inside;
    }
    assert_true(owned >= 3);
    grid_free(&grid);
    geometry_free(&g);
}

static void test_part_touching_a_wall_at_other_potential_is_refused(void **state)
{
    (void)state;
    struct geometry g;
    scene_box(region(&g), "box", 1.0, -12e-3, 2e-3, 3e-3, 5e-3, 0.0);
    assert_refused(&g, 1.0, 1e9, "box", "side");
    geometry_free(&g);
}

static void test_levels_nest_bit_for_bit(void **state)
{
    (void)state;
    struct geometry g;
    struct grid coarse, fine;
    struct plane *plane = region(&g);
    scene_disc(plane, "rod", 1.0, CENTRE.a, CENTRE.b, RADIUS);
    slanted(plane, "plate", 1.0, 10e-3);
    for (int level = 0; level < 3; level++) {
        build(&g, level, &coarse);
        build(&g, level + 1, &fine);
        assert_int_equal(fine.na, 2 * coarse.na - 1);
        assert_int_equal(fine.nb, 2 * coarse.nb - 1);
        for (int i = 0; i < coarse.na; i++)
            assert_true(coarse.a[i] == fine.a[(size_t)2 * (size_t)i]);
        for (int j = 0; j < coarse.nb; j++)
            assert_true(coarse.b[j] == fine.b[(size_t)2 * (size_t)j]);
        for (int n = 0; n < coarse.na * coarse.nb; n++)
            assert_int_equal(coarse.owner[n],
                             owner_at(&fine, 2 * (n % coarse.na), 2 * (n / coarse.na)));
        grid_free(&coarse);
        grid_free(&fine);
    }
    geometry_free(&g);
}

static void test_twice_the_fineness_gives_twice_the_lines(void **state)
{
    (void)state;
    struct geometry g;
    struct grid one, two;
    slanted(region(&g), "plate", 1.0, 0.0);
    assert_int_equal(grid_build(&g.planes[KIND],
                                &(struct grid_request){
                                    .fineness = 4.0, .level = 0, .memory_budget = 1e9},
                                &one, NULL),
                     STATUS_OK);
    assert_int_equal(grid_build(&g.planes[KIND],
                                &(struct grid_request){
                                    .fineness = 8.0, .level = 0, .memory_budget = 1e9},
                                &two, NULL),
                     STATUS_OK);
    assert_close((double)two.na / one.na, 2.0, 0.0, 0.1);
    assert_close((double)two.nb / one.nb, 2.0, 0.0, 0.1);
    grid_free(&one);
    grid_free(&two);
    geometry_free(&g);
}

static void test_interval_is_found_and_clamped(void **state)
{
    (void)state;
    const double lines[] = {-2.0, -0.5, 0.25, 7.0};
    assert_int_equal(grid_interval(lines, 4, -3.0), 0);
    assert_int_equal(grid_interval(lines, 4, -0.5), 1);
    assert_int_equal(grid_interval(lines, 4, 0.2), 1);
    assert_int_equal(grid_interval(lines, 4, 6.9), 2);
    assert_int_equal(grid_interval(lines, 4, 7.0), 2);
    assert_int_equal(grid_interval(lines, 4, 9.0), 2);
}

static void test_gap_too_thin_names_both_parts_and_the_place(void **state)
{
    (void)state;
    struct geometry g;
    struct plane *plane = region(&g);
    slanted(plane, "first plate", 1.0, 0.0);
    slanted(plane, "second plate", -1.0, 2.0 * THICK);
    plane->parts[0].place = (struct place){17, 5};
    assert_refused(&g, 1.0, 1e9, "first plate", "second plate");
    struct messages messages = {0};
    struct grid grid;
    assert_int_equal(grid_build(plane,
                                &(struct grid_request){
                                    .fineness = 1.0, .level = 0, .memory_budget = 1e9},
                                &grid, &messages),
                     STATUS_INPUT);
    assert_int_equal(messages.items[0].place.line, 17);
    messages_free(&messages);
    geometry_free(&g);
}

static void test_thin_gap_at_the_same_potential_is_fine(void **state)
{
    (void)state;
    struct geometry g;
    struct grid grid;
    struct plane *plane = region(&g);
    slanted(plane, "first plate", 1.0, 0.0);
    slanted(plane, "second plate", 1.0, 2.0 * THICK);
    build(&g, 0, &grid);
    grid_free(&grid);
    geometry_free(&g);
}

static void test_thin_gap_to_a_wall_is_refused(void **state)
{
    (void)state;
    struct geometry g;
    struct plane *plane = region(&g);
    /* Two faces almost on the wall: their lines merge with it. */
    scene_box(plane, "bar", 1.0, 3e-3, 11e-3, -9e-3 + 1e-10, 5e-3, 0.0);
    assert_refused(&g, 1.0, 1e9, "bar", "side");
    geometry_free(&g);
}

static void test_space_without_a_fixed_potential_is_located(void **state)
{
    (void)state;
    struct geometry g;
    struct plane *plane = region(&g);
    for (int s = 0; s < SIDE_COUNT; s++)
        plane->sides[s].kind = SIDE_MIRROR;
    assert_refused(&g, 1.0, 1e9, "no fixed potential", "(-7, -9) mm");
    geometry_free(&g);
}

static void test_region_filled_by_a_part_is_refused(void **state)
{
    (void)state;
    struct geometry g;
    scene_box(region(&g), "block", 1.0, -8e-3, 32e-3, -10e-3, 18e-3, 0.0);
    assert_refused(&g, 1.0, 1e9, "no free space", "electric_across");
    geometry_free(&g);
}

static void test_memory_budget_is_kept(void **state)
{
    (void)state;
    struct geometry g;
    slanted(region(&g), "plate", 1.0, 0.0);
    assert_refused(&g, 1.0, 1e5, "memory", "expected at most");
    assert_refused(&g, 300.0, 2e9, "memory", "expected at most");
    assert_refused(&g, 1e12, 2e9, "fineness", "electric_across");
    geometry_free(&g);
}

static void test_free_takes_empty_grids_twice(void **state)
{
    (void)state;
    struct geometry g;
    struct grid grid = {0};
    grid_free(&grid);
    disc(&g, 0, &grid);
    grid_free(&grid);
    grid_free(&grid);
    assert_null(grid.cuts);
    geometry_free(&g);
}

static void test_every_failed_allocation_is_reported(void **state)
{
    (void)state;
    struct geometry g;
    enum status status = STATUS_MEMORY;
    long k = 0;
    struct plane *plane = region(&g);
    scene_disc(plane, "rod", 1.0, CENTRE.a, CENTRE.b, RADIUS);
    while (status == STATUS_MEMORY) {
        struct grid grid;
        mem_fail_at(++k);
        status = grid_build(
            plane,
            &(struct grid_request){.fineness = 0.3, .level = 0, .memory_budget = 1e9},
            &grid, NULL);
        mem_fail_at(0);
        assert_true((grid.a == NULL) == (status != STATUS_OK));
        grid_free(&grid);
    }
    assert_int_equal(status, STATUS_OK);
    assert_true(k > 10);
    geometry_free(&g);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_box_faces_are_lines_and_cut_nothing),
        cmocka_unit_test(test_sides_own_their_nodes_and_mirrors_stay_free),
        cmocka_unit_test(test_disc_owns_the_nodes_inside_it),
        cmocka_unit_test(test_cuts_end_on_the_circle),
        cmocka_unit_test(test_no_cut_is_missing_at_a_disc),
        cmocka_unit_test(test_cuts_are_sorted_and_found),
        cmocka_unit_test(test_plate_between_nodes_cuts_the_leg_from_both_ends),
        cmocka_unit_test(test_part_reaching_through_a_side_owns_the_side),
        cmocka_unit_test(test_part_touching_a_wall_at_other_potential_is_refused),
        cmocka_unit_test(test_levels_nest_bit_for_bit),
        cmocka_unit_test(test_twice_the_fineness_gives_twice_the_lines),
        cmocka_unit_test(test_interval_is_found_and_clamped),
        cmocka_unit_test(test_gap_too_thin_names_both_parts_and_the_place),
        cmocka_unit_test(test_thin_gap_at_the_same_potential_is_fine),
        cmocka_unit_test(test_thin_gap_to_a_wall_is_refused),
        cmocka_unit_test(test_space_without_a_fixed_potential_is_located),
        cmocka_unit_test(test_region_filled_by_a_part_is_refused),
        cmocka_unit_test(test_memory_budget_is_kept),
        cmocka_unit_test(test_free_takes_empty_grids_twice),
        cmocka_unit_test(test_every_failed_allocation_is_reported),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
