/* SPDX-License-Identifier: GPL-3.0-or-later */

/* The linear system: exact answers where the difference equation is exact, the numbers
 * it says of itself, and what happens when memory runs out (in the library's own
 * allocations and in those of the factorisation). */

#include "tests/support/assert_close.h"

#include <dlfcn.h>
#include <stdlib.h>
#include <suitesparse/SuiteSparse_config.h>

#include "shared/mem.h"
#include "solver/plane_solution.h"
#include "solver/system.h"
#include "tests/support/scene.h"

#define KIND PLANE_ELECTRIC_ACROSS

static void build(const struct geometry *g, int level, struct grid *grid)
{
    assert_int_equal(grid_build(&g->planes[KIND],
                                &(struct grid_request){.fineness = 1.0,
                                                       .level = level,
                                                       .memory_budget = 1e9},
                                grid, NULL),
                     STATUS_OK);
}

static void box_scene(struct geometry *g)
{
    scene_begin(g, 1.0, false);
    struct plane *p = scene_plane(g, KIND, -7e-3, 31e-3, 3e-3, 29e-3);
    scene_box(p, "box", 1.0, 4e-3, 9e-3, 11e-3, 13e-3, 0.0);
    scene_disc(p, "rod", 1.0, 19.3e-3, 17.7e-3, 3.1e-3);
}

/* Lines at will between the ends of the region, all nodes free but the sides. */
static void graded_grid(const struct plane *plane, int n, struct grid *grid)
{
    *grid = (struct grid){.plane = plane, .na = n, .nb = n};
    grid->a = MEM_NEW((size_t)n, double);
    grid->b = MEM_NEW((size_t)n, double);
    grid->owner = MEM_NEW((size_t)(n * n), int);
    grid->first_cut = MEM_NEW((size_t)n + 1, int);
    for (int k = 0; k < n; k++) {
        const double t = (double)k / (n - 1);
        grid->a[k] = plane->low.a + (plane->high.a - plane->low.a) * t * t;
        grid->b[k] = plane->low.b + (plane->high.b - plane->low.b) * sqrt(t);
    }
    for (int k = 0; k < n * n; k++) {
        const int i = k % n, j = k / n;
        grid->owner[k] = i == 0       ? OWNER_SIDE - SIDE_A_LOW
                         : i == n - 1 ? OWNER_SIDE - SIDE_A_HIGH
                         : j == 0     ? OWNER_SIDE - SIDE_B_LOW
                         : j == n - 1 ? OWNER_SIDE - SIDE_B_HIGH
                                      : OWNER_FREE;
        grid->free_count += grid->owner[k] == OWNER_FREE;
    }
}

/* phi = 2 + 3 t + 5 s on the walls, t and s running from 0 to 1 over the region. */
static void test_linear_potential_is_exact_on_graded_lines(void **state)
{
    (void)state;
    const struct drive drive = {NULL, {2.0, 5.0, 2.0, 7.0}, {7.0, 10.0, 5.0, 10.0}};
    struct geometry g;
    struct grid grid;
    struct system *system;
    struct system_facts facts;
    double phi[23 * 23], residual;
    scene_begin(&g, 1.0, false);
    const struct plane *p = scene_plane(&g, KIND, -7e-3, 31e-3, 3e-3, 29e-3);
    graded_grid(p, 23, &grid);
    assert_int_equal(system_create(&grid, &system, &facts), STATUS_OK);
    assert_int_equal(system_solve(system, &drive, phi, &residual), STATUS_OK);
    for (int n = 0; n < 23 * 23; n++)
        assert_close(phi[n],
                     2.0 + 3.0 * (grid.a[n % 23] + 7e-3) / 38e-3 +
                         5.0 * (grid.b[n / 23] - 3e-3) / 26e-3,
                     0.0, 1e-13);
    assert_at_most(residual, 1e-15);
    system_destroy(&system);
    grid_free(&grid);
    geometry_free(&g);
}

/* Plates from mirror to mirror: E uniform, charge eps0 width/gap per volt (exact). */
static void test_flat_capacitor_is_exact(void **state)
{
    (void)state;
    const double gap = 12.7e-3, width = 37e-3;
    struct geometry g;
    struct plane_solution s;
    scene_begin(&g, 385.7, false);
    struct plane *p = scene_plane(&g, KIND, 0.0, width, -23e-3, 21e-3);
    p->sides[SIDE_A_LOW].kind = p->sides[SIDE_A_HIGH].kind = SIDE_MIRROR;
    scene_box(p, "upper", 1.0, 0.0, width, 0.5 * gap, 15e-3, 0.0);
    scene_box(p, "lower", -1.0, 0.0, width, -17e-3, -0.5 * gap, 0.0);
    assert_int_equal(plane_solve(&g, KIND,
                                 &(struct grid_request){.fineness = 1.0, .level = 1},
                                 &s, NULL),
                     STATUS_OK);
    for (int k = 0; k < 40; k++) {
        const struct vec2 at = {width * (0.5 + 0.49 * sin(2.385 * k)),
                                0.49 * gap * sin(1.711 * k)};
        double f[2];
        assert_int_equal(plane_field(&s, at, f, NULL), STATUS_OK);
        assert_close(f[0] * gap / 385.7, 0.0, 0.0, 1e-9);
        assert_close(f[1] * gap / 385.7, -2.0, 0.0, 1e-9);
    }
    /* The outer faces see earthed walls: width/distance each. */
    assert_close(s.part_flux[0], 385.7 * width * (2.0 / gap + 1.0 / 6e-3), 1e-11, 0.0);
    assert_close(s.part_flux[1], -385.7 * width * (2.0 / gap + 1.0 / 6e-3), 1e-11, 0.0);
    plane_solution_free(&s);
    geometry_free(&g);
}

static void test_facts_and_residual_are_of_a_good_solve(void **state)
{
    (void)state;
    double values[2] = {1.0, -2.385}, residual = 1.0;
    const struct drive drive = {values, {0.0}, {0.0}};
    struct geometry g;
    struct grid grid;
    struct system *system;
    struct system_facts facts;
    box_scene(&g);
    build(&g, 1, &grid);
    double *phi = MEM_NEW((size_t)(grid.na * grid.nb), double);
    assert_int_equal(system_create(&grid, &system, &facts), STATUS_OK);
    assert_int_equal(system_solve(system, &drive, phi, &residual), STATUS_OK);
    assert_int_equal(facts.unknowns, grid.free_count);
    assert_true(facts.rcond > 1e-8 && facts.rcond <= 1.0);
    assert_true(facts.memory > 100.0 * facts.unknowns);
    assert_at_most(residual, 1e-14);
    mem_free(phi);
    system_destroy(&system);
    grid_free(&grid);
    geometry_free(&g);
}

/* The residual is recomputed here from the stencils. Nodes with cut legs are corrected
 * after the solve: they are off by the defect that was taken away, a small part. */
static void test_every_free_node_satisfies_its_equation(void **state)
{
    (void)state;
    struct geometry g;
    struct plane_solution s;
    int cuts = 0;
    box_scene(&g);
    assert_int_equal(plane_solve(&g, KIND,
                                 &(struct grid_request){.fineness = 1.0, .level = 1},
                                 &s, NULL),
                     STATUS_OK);
    for (int n = 0; n < s.grid.na * s.grid.nb; n++) {
        struct stencil e;
        double sum = 0.0, size = 0.0;
        if (s.grid.owner[n] != OWNER_FREE)
            continue;
        stencil_at(&s.grid, n, &e);
        for (int leg = 0; leg < LEG_COUNT; leg++) {
            const double end = e.part[leg] >= 0 ? 1.0 : s.phi[e.node[leg]];
            sum += e.weight[leg] * (end - s.phi[n]);
            size += e.weight[leg];
        }
        const bool cut =
            e.part[0] >= 0 || e.part[1] >= 0 || e.part[2] >= 0 || e.part[3] >= 0;
        assert_at_most(fabs(sum) / size, cut ? 1e-4 : 1e-13);
        cuts += cut;
    }
    assert_true(cuts > 0);
    plane_solution_free(&s);
    geometry_free(&g);
}

static void test_zero_drive_gives_zero(void **state)
{
    (void)state;
    double values[2] = {0.0, 0.0}, residual = 1.0;
    const struct drive drive = {values, {0.0}, {0.0}};
    struct geometry g;
    struct grid grid;
    struct system *system;
    struct system_facts facts;
    box_scene(&g);
    build(&g, 0, &grid);
    double *phi = MEM_NEW((size_t)(grid.na * grid.nb), double);
    assert_int_equal(system_create(&grid, &system, &facts), STATUS_OK);
    assert_int_equal(system_solve(system, &drive, phi, &residual), STATUS_OK);
    assert_true(residual == 0.0);
    for (int n = 0; n < grid.na * grid.nb; n++)
        assert_true(phi[n] == 0.0);
    mem_free(phi);
    system_destroy(&system);
    grid_free(&grid);
    geometry_free(&g);
}

static void test_value_that_is_not_finite_is_not_trusted(void **state)
{
    (void)state;
    double values[2] = {(double)NAN, 1.0};
    const struct drive drive = {values, {0.0}, {0.0}};
    struct geometry g;
    struct grid grid;
    struct system *system;
    struct system_facts facts;
    box_scene(&g);
    build(&g, 0, &grid);
    double *phi = MEM_NEW((size_t)(grid.na * grid.nb), double);
    assert_int_equal(system_create(&grid, &system, &facts), STATUS_OK);
    assert_int_equal(system_solve(system, &drive, phi, NULL), STATUS_UNTRUSTED);
    mem_free(phi);
    system_destroy(&system);
    grid_free(&grid);
    geometry_free(&g);
}

static void test_grid_without_free_nodes_is_refused(void **state)
{
    (void)state;
    struct geometry g;
    struct grid grid;
    struct system *system = (struct system *)&g;
    struct system_facts facts;
    scene_begin(&g, 1.0, false);
    graded_grid(scene_plane(&g, KIND, 0.0, 1e-3, 0.0, 1e-3), 2, &grid);
    assert_int_equal(system_create(&grid, &system, &facts), STATUS_SIZE);
    assert_null(system);
    grid_free(&grid);
    geometry_free(&g);
}

/* Mirrors all round leave the potential undetermined; judged here without the check
 * that the grid makes before. */
static void test_undetermined_system_is_not_believed(void **state)
{
    (void)state;
    const struct drive drive = {NULL, {0.0}, {0.0}};
    struct geometry g;
    struct grid grid;
    struct system *system;
    struct system_facts facts;
    double phi[23 * 23];
    scene_begin(&g, 1.0, false);
    struct plane *p = scene_plane(&g, KIND, -7e-3, 31e-3, 3e-3, 29e-3);
    graded_grid(p, 23, &grid);
    for (int s = 0; s < SIDE_COUNT; s++)
        p->sides[s].kind = SIDE_MIRROR;
    for (int n = 0; n < 23 * 23; n++)
        grid.owner[n] = OWNER_FREE;
    grid.free_count = 23 * 23;
    const enum status status = system_create(&grid, &system, &facts);
    assert_true(status == STATUS_SINGULAR ||
                (status == STATUS_OK && facts.rcond < 1e-12));
    if (status == STATUS_OK)
        (void)!system_solve(system, &drive, phi, NULL);
    system_destroy(&system);
    grid_free(&grid);
    geometry_free(&g);
}

static void test_destroy_nulls_and_takes_null(void **state)
{
    (void)state;
    struct geometry g;
    struct grid grid;
    struct system *system;
    struct system_facts facts;
    box_scene(&g);
    build(&g, 0, &grid);
    assert_int_equal(system_create(&grid, &system, &facts), STATUS_OK);
    assert_non_null(system);
    system_destroy(&system);
    assert_null(system);
    system_destroy(&system);
    grid_free(&grid);
    geometry_free(&g);
}

static enum status create_and_solve(const struct grid *grid, double *phi)
{
    double values[2] = {1.0, 0.5};
    const struct drive drive = {values, {0.0}, {0.0}};
    struct system *system;
    struct system_facts facts;
    enum status status = system_create(grid, &system, &facts);
    assert_true((system == NULL) == (status != STATUS_OK));
    if (status == STATUS_OK)
        status = system_solve(system, &drive, phi, NULL);
    system_destroy(&system);
    return status;
}

static void test_every_failed_allocation_is_reported(void **state)
{
    (void)state;
    struct geometry g;
    struct grid grid;
    enum status status = STATUS_MEMORY;
    long k = 0;
    box_scene(&g);
    build(&g, 0, &grid);
    double *phi = MEM_NEW((size_t)(grid.na * grid.nb), double);
    while (status == STATUS_MEMORY) {
        mem_fail_at(++k);
        status = create_and_solve(&grid, phi);
    }
    mem_fail_at(0);
    assert_int_equal(status, STATUS_OK);
    assert_true(k > 5);
    mem_free(phi);
    grid_free(&grid);
    geometry_free(&g);
}

/* Hooks of the factorisation's allocator: the k-th request fails. */
static long countdown;

static void *failing_malloc(size_t size)
{
    return countdown > 0 && --countdown == 0 ? NULL : malloc(size);
}

static void *failing_calloc(size_t n, size_t size)
{
    return countdown > 0 && --countdown == 0 ? NULL : calloc(n, size);
}

static void *failing_realloc(void *p, size_t size)
{
    return countdown > 0 && --countdown == 0 ? NULL : realloc(p, size);
}

static void test_every_failed_allocation_of_the_factorisation_is_reported(void **state)
{
    (void)state;
    struct SuiteSparse_config_struct *config =
        dlsym(RTLD_DEFAULT, "SuiteSparse_config");
    struct geometry g;
    struct grid grid;
    enum status status = STATUS_MEMORY;
    long k = 0;
    assert_non_null(config);
    const struct SuiteSparse_config_struct saved = *config;
    box_scene(&g);
    build(&g, 0, &grid);
    double *phi = MEM_NEW((size_t)(grid.na * grid.nb), double);
    config->malloc_func = failing_malloc;
    config->calloc_func = failing_calloc;
    config->realloc_func = failing_realloc;
    while (k < 1000) {
        countdown = ++k;
        status = create_and_solve(&grid, phi);
        if (countdown > 0) /* never reached: every request has failed once */
            break;
        assert_true(status == STATUS_MEMORY || status == STATUS_OK);
    }
    *config = saved;
    assert_int_equal(status, STATUS_OK);
    assert_true(k > 5 && k < 1000);
    mem_free(phi);
    grid_free(&grid);
    geometry_free(&g);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_linear_potential_is_exact_on_graded_lines),
        cmocka_unit_test(test_flat_capacitor_is_exact),
        cmocka_unit_test(test_facts_and_residual_are_of_a_good_solve),
        cmocka_unit_test(test_every_free_node_satisfies_its_equation),
        cmocka_unit_test(test_zero_drive_gives_zero),
        cmocka_unit_test(test_value_that_is_not_finite_is_not_trusted),
        cmocka_unit_test(test_grid_without_free_nodes_is_refused),
        cmocka_unit_test(test_undetermined_system_is_not_believed),
        cmocka_unit_test(test_destroy_nulls_and_takes_null),
        cmocka_unit_test(test_every_failed_allocation_is_reported),
        cmocka_unit_test(test_every_failed_allocation_of_the_factorisation_is_reported),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
