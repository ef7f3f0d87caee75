/* SPDX-License-Identifier: GPL-3.0-or-later */

/* The difference equation must annihilate harmonic polynomials: to third degree on
 * uniform lines, to second on graded lines and cut legs. Indexing and weight errors show
 * here first. */

#include "tests/support/assert_close.h"

#include "shared/mem.h"
#include "solver/stencil.h"
#include "tests/support/scene.h"

enum { POLYNOMIALS = 7, QUADRATICS = 5 };

/* 1, x, y, xy, x^2 - y^2, x^3 - 3xy^2, 3x^2y - y^3; x, y in mm. */
static double polynomial(int k, double a, double b)
{
    const double x = 1e3 * a, y = 1e3 * b;
    const double values[POLYNOMIALS] = {1.0,
                                        x,
                                        y,
                                        x * y,
                                        x * x - y * y,
                                        x * x * x - 3.0 * x * y * y,
                                        3.0 * x * x * y - y * y * y};
    return values[k];
}

/* Value of the equation of a node for a polynomial, relative to its terms. */
static double equation(const struct grid *grid, int node, int k)
{
    static const double da[LEG_COUNT] = {-1.0, 1.0, 0.0, 0.0};
    static const double db[LEG_COUNT] = {0.0, 0.0, -1.0, 1.0};
    const double a = grid->a[node % grid->na], b = grid->b[node / grid->na];
    double sum = 0.0, size = 0.0;
    struct stencil s;
    stencil_at(grid, node, &s);
    for (int leg = 0; leg < LEG_COUNT; leg++) {
        const double h = s.length[leg];
        const double end = polynomial(k, a + da[leg] * h, b + db[leg] * h);
        sum += s.weight[leg] * (end - polynomial(k, a, b));
        size += s.weight[leg] * (fabs(end) + fabs(polynomial(k, a, b)));
    }
    return size > 0.0 ? fabs(sum) / size : 0.0;
}

/* Worst over the free nodes; `cut` picks nodes with or without cut legs. */
static double worst(const struct grid *grid, int polynomials, bool cut, int *nodes)
{
    double most = 0.0;
    *nodes = 0;
    for (int n = 0; n < grid->na * grid->nb; n++) {
        bool has_cut = false;
        if (grid->owner[n] != OWNER_FREE)
            continue;
        for (int leg = 0; leg < LEG_COUNT; leg++)
            has_cut = has_cut || grid_cut(grid, n, (enum leg)leg) != NULL;
        if (has_cut != cut)
            continue;
        ++*nodes;
        for (int k = 0; k < polynomials; k++)
            if (!(equation(grid, n, k) <= most))
                most = equation(grid, n, k);
    }
    return most;
}

static void build(struct geometry *g, struct grid *grid)
{
    assert_int_equal(grid_build(&g->planes[PLANE_ELECTRIC_ACROSS],
                                &(struct grid_request){
                                    .fineness = 1.0, .level = 1, .memory_budget = 1e9},
                                grid, NULL),
                     STATUS_OK);
}

/* Mapped lines are uniform to about 1e-12 only. */
static void make_uniform(double *lines, int count)
{
    const double from = lines[0], step = (lines[count - 1] - from) / (count - 1);
    for (int k = 1; k + 1 < count; k++)
        lines[k] = from + k * step;
}

static void test_uniform_lines_annihilate_cubic_harmonics(void **state)
{
    (void)state;
    struct geometry g;
    struct grid grid;
    int nodes;
    scene_begin(&g, 1.0, false);
    scene_plane(&g, PLANE_ELECTRIC_ACROSS, -7e-3, 31e-3, 3e-3, 29e-3);
    build(&g, &grid);
    make_uniform(grid.a, grid.na);
    make_uniform(grid.b, grid.nb);
    assert_at_most(worst(&grid, POLYNOMIALS, false, &nodes), 1e-14);
    assert_int_equal(nodes, (grid.na - 2) * (grid.nb - 2));
    grid_free(&grid);
    geometry_free(&g);
}

static void test_graded_lines_annihilate_quadratic_harmonics(void **state)
{
    (void)state;
    struct geometry g;
    struct grid grid;
    int nodes;
    scene_begin(&g, 1.0, false);
    scene_box(scene_plane(&g, PLANE_ELECTRIC_ACROSS, -7e-3, 31e-3, 3e-3, 29e-3), "box",
              1.0, 4e-3, 9e-3, 11e-3, 13e-3, 0.0);
    build(&g, &grid);
    assert_true(grid.a[1] - grid.a[0] >
                1.5 * (grid.a[grid_interval(grid.a, grid.na, 4e-3) + 1] - 4e-3));
    assert_at_most(worst(&grid, QUADRATICS, false, &nodes), 1e-14);
    assert_true(nodes > 300);
    grid_free(&grid);
    geometry_free(&g);
}

/* Shortley-Weller arms keep quadratics exact. */
static void test_cut_legs_annihilate_quadratic_harmonics(void **state)
{
    (void)state;
    struct geometry g;
    struct grid grid;
    int nodes;
    scene_begin(&g, 1.0, false);
    scene_disc(scene_plane(&g, PLANE_ELECTRIC_ACROSS, -7e-3, 31e-3, 3e-3, 29e-3), "rod",
               1.0, 10.3e-3, 15.1e-3, 4.7e-3);
    build(&g, &grid);
    assert_at_most(worst(&grid, QUADRATICS, true, &nodes), 1e-13);
    assert_true(nodes > 20);
    grid_free(&grid);
    geometry_free(&g);
}

/* On a mirror side the equation must hold for even functions about the side. */
static void test_mirror_side_annihilates_even_harmonics(void **state)
{
    (void)state;
    struct geometry g;
    struct grid grid;
    scene_begin(&g, 1.0, false);
    struct plane *p = scene_plane(&g, PLANE_ELECTRIC_ACROSS, 0.0, 31e-3, 0.0, 29e-3);
    p->sides[SIDE_A_LOW].kind = SIDE_MIRROR;
    p->sides[SIDE_B_LOW].kind = SIDE_MIRROR;
    build(&g, &grid);
    for (int j = 0; j + 1 < grid.nb; j++)
        assert_at_most(equation(&grid, j * grid.na, 4), 1e-14);
    for (int i = 0; i + 1 < grid.na; i++)
        assert_at_most(equation(&grid, i, 4), 1e-14);
    struct stencil s;
    stencil_at(&grid, 0, &s);
    assert_true(s.length[LEG_WEST] == 0.0 && s.weight[LEG_WEST] == 0.0);
    assert_true(s.length[LEG_SOUTH] == 0.0 && s.weight[LEG_SOUTH] == 0.0);
    grid_free(&grid);
    geometry_free(&g);
}

static void test_links_are_seen_alike_from_both_ends(void **state)
{
    (void)state;
    struct geometry g;
    struct grid grid;
    scene_begin(&g, 1.0, false);
    scene_box(scene_plane(&g, PLANE_ELECTRIC_ACROSS, -7e-3, 31e-3, 3e-3, 29e-3), "box",
              1.0, 4e-3, 9e-3, 11e-3, 13e-3, 0.0);
    build(&g, &grid);
    double *phi = MEM_NEW((size_t)grid.na * (size_t)grid.nb, double);
    assert_non_null(phi);
    for (int n = grid.na + 1; n < grid.na * (grid.nb - 1) - 2; n++) {
        struct stencil here, east, north;
        const int i = n % grid.na;
        if (i == 0 || i + 2 >= grid.na || n / grid.na + 2 >= grid.nb)
            continue;
        stencil_at(&grid, n, &here);
        stencil_at(&grid, n + 1, &east);
        stencil_at(&grid, n + grid.na, &north);
        assert_close(here.weight[LEG_EAST], east.weight[LEG_WEST], 1e-14, 0.0);
        assert_close(here.weight[LEG_NORTH], north.weight[LEG_SOUTH], 1e-14, 0.0);
        phi[n] = 1.0;
        assert_close(stencil_flux(&grid, phi, n, LEG_EAST), here.weight[LEG_EAST],
                     1e-14, 0.0);
        assert_close(stencil_flux(&grid, phi, n, LEG_NORTH), here.weight[LEG_NORTH],
                     1e-14, 0.0);
        phi[n] = 0.0;
    }
    mem_free(phi);
    grid_free(&grid);
    geometry_free(&g);
}

static void test_wall_values_run_linearly(void **state)
{
    (void)state;
    struct geometry g;
    struct grid grid;
    const struct drive drive = {NULL, {2.0, 0.0, 0.0, -1.0}, {5.0, 0.0, 0.0, 7.0}};
    scene_begin(&g, 1.0, false);
    scene_plane(&g, PLANE_ELECTRIC_ACROSS, -7e-3, 31e-3, 3e-3, 29e-3);
    build(&g, &grid);
    for (int j = 0; j < grid.nb; j++)
        assert_close(drive_value(&grid, &drive, j * grid.na),
                     2.0 + 3.0 * (grid.b[j] - 3e-3) / 26e-3, 0.0, 1e-14);
    for (int i = 1; i + 1 < grid.na; i++)
        assert_close(drive_value(&grid, &drive, (grid.nb - 1) * grid.na + i),
                     -1.0 + 8.0 * (grid.a[i] + 7e-3) / 38e-3, 0.0, 1e-14);
    grid_free(&grid);
    geometry_free(&g);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_uniform_lines_annihilate_cubic_harmonics),
        cmocka_unit_test(test_graded_lines_annihilate_quadratic_harmonics),
        cmocka_unit_test(test_cut_legs_annihilate_quadratic_harmonics),
        cmocka_unit_test(test_mirror_side_annihilates_even_harmonics),
        cmocka_unit_test(test_links_are_seen_alike_from_both_ends),
        cmocka_unit_test(test_wall_values_run_linearly),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
