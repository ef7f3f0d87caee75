/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Grids that go on behind open sides, the crop to the region as drawn, and lines that
 * crowd near one part. */

#include "tests/support/assert_close.h"

#include <string.h>

#include "mesh/grid_crop.h"
#include "shared/mem.h"
#include "tests/support/scene.h"

#define KIND PLANE_ELECTRIC_ACROSS

/* A region 38 mm by 26 mm, open at all sides, with a bar and a rod in it. */
static struct plane *region(struct geometry *g)
{
    scene_begin(g, 1.0, false);
    struct plane *plane = scene_plane(g, KIND, -7e-3, 31e-3, -9e-3, 17e-3);
    for (int s = 0; s < SIDE_COUNT; s++)
        plane->sides[s].kind = SIDE_OPEN;
    scene_box(plane, "bar", 1.0, -3e-3, 2e-3, 4e-3, 9e-3, 1e-3);
    scene_disc(plane, "rod", -0.6, 20.3e-3, 3.1e-3, 4.7e-3);
    return plane;
}

static void build(const struct plane *plane, int level, double reach,
                  const double *crowding, struct grid *grid)
{
    const struct grid_request request = {
        .fineness = 1.0, .level = level, .reach = reach, .crowding = crowding};
    assert_int_equal(grid_build(plane, &request, grid, NULL), STATUS_OK);
}

static bool same(const double *p, const double *q, int n)
{
    return memcmp(p, q, (size_t)n * sizeof *p) == 0;
}

/* The lines of the region as drawn are those of the same region within walls. */
static void test_lines_inside_are_those_of_the_closed_region(void **state)
{
    (void)state;
    struct geometry g;
    struct grid open, closed;
    struct plane *plane = region(&g);
    build(plane, 1, 0.0, NULL, &open);
    for (int s = 0; s < SIDE_COUNT; s++)
        plane->sides[s].kind = SIDE_WALL;
    build(plane, 1, 0.0, NULL, &closed);
    const struct grid_window w = grid_drawn(&open);
    assert_true(w.na == closed.na && w.nb == closed.nb);
    assert_true(same(open.a + w.first_a, closed.a, w.na));
    assert_true(same(open.b + w.first_b, closed.b, w.nb));
    grid_free(&open);
    grid_free(&closed);
    geometry_free(&g);
}

static void test_doubled_grid_holds_all_lines_of_the_first(void **state)
{
    (void)state;
    struct geometry g;
    struct grid near, far;
    struct plane *plane = region(&g);
    build(plane, 1, 1.0, NULL, &near);
    build(plane, 1, 2.0, NULL, &far);
    const int a = grid_drawn(&far).first_a - grid_drawn(&near).first_a;
    const int b = grid_drawn(&far).first_b - grid_drawn(&near).first_b;
    assert_true(a > 0 && b > 0);
    assert_true(same(far.a + a, near.a, near.na));
    assert_true(same(far.b + b, near.b, near.nb));
    assert_true(plane->low.a - far.a[0] >= 2.0 * (plane->low.a - near.a[0]));
    assert_true(near.a[near.na - 1] - plane->high.a >= 300.0 * 38e-3);
    grid_free(&near);
    grid_free(&far);
    geometry_free(&g);
}

static void test_open_levels_nest(void **state)
{
    (void)state;
    struct geometry g;
    struct grid coarse, fine;
    struct plane *plane = region(&g);
    plane->sides[SIDE_B_LOW].kind = SIDE_MIRROR;
    build(plane, 0, 2.0, NULL, &coarse);
    build(plane, 1, 2.0, NULL, &fine);
    assert_true(fine.na == 2 * coarse.na - 1 && fine.nb == 2 * coarse.nb - 1);
    for (int i = 0; i < coarse.na; i++)
        assert_true(coarse.a[i] == fine.a[2 * (size_t)i]);
    for (int j = 0; j < coarse.nb; j++)
        assert_true(coarse.b[j] == fine.b[2 * (size_t)j]);
    assert_true(fine.b[0] == plane->low.b); /* nothing behind a mirror */
    grid_free(&coarse);
    grid_free(&fine);
    geometry_free(&g);
}

static void test_border_is_free_and_the_far_end_fixed(void **state)
{
    (void)state;
    struct geometry g;
    struct grid grid;
    build(region(&g), 0, 0.0, NULL, &grid);
    const struct grid_window w = grid_drawn(&grid);
    for (int j = 1; j + 1 < grid.nb; j++) {
        const int *row = grid.owner + (size_t)j * (size_t)grid.na;
        assert_int_equal(row[w.first_a], OWNER_FREE);
        assert_int_equal(row[0], OWNER_SIDE - SIDE_A_LOW);
        assert_int_equal(row[grid.na - 1], OWNER_SIDE - SIDE_A_HIGH);
    }
    grid_free(&grid);
    geometry_free(&g);
}

static struct vec2 place_of(const struct grid *grid, int node)
{
    return (struct vec2){grid->a[node % grid->na], grid->b[node / grid->na]};
}

/* Owners, values and cuts keep their places. */
static void test_crop_keeps_what_lies_in_the_region(void **state)
{
    (void)state;
    struct geometry g;
    struct grid whole, grid;
    struct plane *plane = region(&g);
    build(plane, 0, 0.0, NULL, &whole);
    build(plane, 0, 0.0, NULL, &grid);
    const struct grid_window w = grid_drawn(&whole);
    const int nodes = whole.na * whole.nb;
    double *values = MEM_NEW((size_t)nodes, double);
    for (int n = 0; n < nodes; n++)
        values[n] = 7.0 * place_of(&whole, n).a - 3.0 * place_of(&whole, n).b;
    grid_crop_nodes(&grid, w, values);
    grid_crop(&grid, w);
    assert_true(grid.a[0] == plane->low.a && grid.a[grid.na - 1] == plane->high.a);
    assert_true(grid.b[0] == plane->low.b && grid.b[grid.nb - 1] == plane->high.b);
    int free_nodes = 0;
    for (int n = 0; n < grid.na * grid.nb; n++) {
        const struct vec2 p = place_of(&grid, n);
        const int from = (n / grid.na + w.first_b) * whole.na + n % grid.na + w.first_a;
        assert_true(values[n] == 7.0 * p.a - 3.0 * p.b);
        assert_int_equal(grid.owner[n], whole.owner[from]);
        for (int leg = 0; leg < LEG_COUNT; leg++) {
            const struct cut *cut = grid_cut(&grid, n, (enum leg)leg);
            const struct cut *before = grid_cut(&whole, from, (enum leg)leg);
            assert_true((cut == NULL) == (before == NULL));
            if (cut != NULL && before != NULL)
                assert_true(cut->length == before->length && cut->part == before->part);
        }
        free_nodes += grid.owner[n] == OWNER_FREE;
    }
    assert_true(grid.cut_count > 10 && grid.cut_count == whole.cut_count);
    assert_int_equal(grid.free_count, free_nodes);
    mem_free(values);
    grid_free(&whole);
    grid_free(&grid);
    geometry_free(&g);
}

static int count_between(const double *lines, int n, double low, double high)
{
    int count = 0;
    for (int k = 0; k < n; k++)
        count += lines[k] >= low && lines[k] < high;
    return count;
}

static void test_crowding_of_one_part_leaves_the_rest(void **state)
{
    (void)state;
    static const double one[2] = {1.0, 1.0}, rod[2] = {1.0, 2.0};
    struct geometry g;
    struct grid plain, same_grid, crowded;
    struct plane *plane = region(&g);
    build(plane, 2, 0.0, NULL, &plain);
    build(plane, 2, 0.0, one, &same_grid);
    build(plane, 2, 0.0, rod, &crowded);
    assert_true(plain.na == same_grid.na && plain.nb == same_grid.nb);
    assert_true(same(plain.a, same_grid.a, plain.na));
    assert_true(same(plain.b, same_grid.b, plain.nb));
    const int before = count_between(plain.a, plain.na, 15.6e-3, 25e-3);
    const int after = count_between(crowded.a, crowded.na, 15.6e-3, 25e-3);
    assert_true(after >= 1.6 * before && after <= 2.1 * before);
    assert_close(count_between(crowded.a, crowded.na, -7e-3, 2e-3),
                 count_between(plain.a, plain.na, -7e-3, 2e-3), 0.1, 0.0);
    grid_free(&plain);
    grid_free(&same_grid);
    grid_free(&crowded);
    geometry_free(&g);
}

static void test_every_failed_allocation_is_reported(void **state)
{
    (void)state;
    struct geometry g;
    enum status status = STATUS_MEMORY;
    long k = 0;
    const struct plane *plane = region(&g);
    while (status == STATUS_MEMORY) {
        struct grid grid;
        mem_fail_at(++k);
        status =
            grid_build(plane, &(struct grid_request){.fineness = 0.3}, &grid, NULL);
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
        cmocka_unit_test(test_lines_inside_are_those_of_the_closed_region),
        cmocka_unit_test(test_doubled_grid_holds_all_lines_of_the_first),
        cmocka_unit_test(test_open_levels_nest),
        cmocka_unit_test(test_border_is_free_and_the_far_end_fixed),
        cmocka_unit_test(test_crop_keeps_what_lies_in_the_region),
        cmocka_unit_test(test_crowding_of_one_part_leaves_the_rest),
        cmocka_unit_test(test_every_failed_allocation_is_reported),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
