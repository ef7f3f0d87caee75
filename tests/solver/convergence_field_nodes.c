/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Gradients at the nodes between coaxial cylinders (closed form): second order at inner
 * nodes and where legs are cut. Also the interpolated field between the nodes. */

#include "tests/support/assert_close.h"

#include "shared/constants.h"
#include "shared/mem.h"
#include "solver/plane_solution.h"
#include "tests/support/scene.h"

#define INNER 3.17e-3
#define OUTER 11.3e-3
#define KIND  PLANE_ELECTRIC_ACROSS

enum { LEVELS = 4 };

static void coaxial(struct geometry *g)
{
    scene_begin(g, 1.0, false);
    struct plane *plane = scene_plane(g, KIND, -13e-3, 13e-3, -13e-3, 13e-3);
    scene_cut_disc(scene_box(plane, "shell", 0.0, -13e-3, 13e-3, -13e-3, 13e-3, 0.0),
                   0.0, 0.0, OUTER);
    scene_disc(plane, "core", 1.0, 0.0, 0.0, INNER);
}

/* Exact gradient of V ln(r/b)/ln(a/b). */
static struct vec2 exact(struct vec2 p)
{
    const double r2 = vec2_dot(p, p);
    return vec2_scale(p, 1.0 / (log(INNER / OUTER) * r2));
}

static bool node_is_cut(const struct grid *grid, int node)
{
    bool cut = false;
    for (int leg = 0; leg < LEG_COUNT; leg++)
        cut = cut || grid_cut(grid, node, (enum leg)leg) != NULL;
    return cut;
}

/* Root mean square error over the free nodes with or without cuts, relative to the field
 * at the core. */
static double node_error(const struct plane_solution *s, bool cut)
{
    const int nodes = s->grid.na * s->grid.nb;
    const double scale = vec2_length(exact((struct vec2){INNER, 0.0}));
    double *ga = MEM_NEW((size_t)nodes, double), *gb = MEM_NEW((size_t)nodes, double);
    double squares = 0.0;
    int count = 0;
    assert_true(ga != NULL && gb != NULL);
    field_at_nodes(&s->grid, s->phi, s->part_value, ga, gb);
    for (int n = 0; n < nodes; n++) {
        if (s->grid.owner[n] != OWNER_FREE || node_is_cut(&s->grid, n) != cut)
            continue;
        const struct vec2 p = {s->grid.a[n % s->grid.na], s->grid.b[n / s->grid.na]};
        const struct vec2 e = vec2_sub((struct vec2){ga[n], gb[n]}, exact(p));
        squares += vec2_dot(e, e);
        count++;
    }
    mem_free(ga);
    mem_free(gb);
    assert_true(count > 10);
    return sqrt(squares / count) / scale;
}

/* The same over points between the nodes. */
static double point_error(const struct plane_solution *s)
{
    enum { POINTS = 400 };
    const double scale = vec2_length(exact((struct vec2){INNER, 0.0}));
    double squares = 0.0;
    for (int k = 0; k < POINTS; k++) {
        const double r = INNER + (OUTER - INNER) * (0.5 + 0.49 * sin(1.711 * k));
        const struct vec2 p = {r * cos(2.385 * k), r * sin(2.385 * k)};
        struct field_value v;
        assert_int_equal(field_at(s->field, p, &v), STATUS_OK);
        const struct vec2 e = vec2_sub(v.gradient, exact(p));
        squares += vec2_dot(e, e);
    }
    return sqrt(squares / POINTS) / scale;
}

static void assert_order(const char *what, const double error[LEVELS], double order,
                         double within, double finest)
{
    for (int k = 0; k < LEVELS; k++)
        print_message("  %s: level %d error %.3e\n", what, k, error[k]);
    const double measured = log2(error[1] / error[LEVELS - 1]) / (LEVELS - 2);
    print_message("  measured order %.3f\n", measured);
    assert_close(measured, order, 0.0, within);
    assert_at_most(error[LEVELS - 1], finest);
}

static void test_gradients_are_second_order_at_and_between_nodes(void **state)
{
    (void)state;
    double inner[LEVELS], cut[LEVELS], between[LEVELS];
    struct geometry g;
    coaxial(&g);
    for (int l = 0; l < LEVELS; l++) {
        struct plane_solution s;
        assert_int_equal(
            plane_solve(&g, KIND, &(struct grid_request){.fineness = 2.0, .level = l},
                        &s, NULL),
            STATUS_OK);
        inner[l] = node_error(&s, false);
        cut[l] = node_error(&s, true);
        between[l] = point_error(&s);
        plane_solution_free(&s);
    }
    assert_order("inner nodes", inner, 2.0, 0.1, 1e-4);
    assert_order("nodes at cut legs", cut, 2.0, 0.25, 1e-4);
    assert_order("between the nodes", between, 2.0, 0.25, 1e-4);
    geometry_free(&g);
}

/* On the axis-parallel flat faces and walls the one-sided parabola is exact for
 * quadratics; here for the uniform field of a flat capacitor. */
static void test_gradient_on_a_flat_face_is_that_of_the_gap(void **state)
{
    (void)state;
    const double gap = 12.7e-3;
    struct geometry g;
    struct plane_solution s;
    scene_begin(&g, 385.7, false);
    struct plane *p = scene_plane(&g, KIND, 0.0, 37e-3, 0.0, 21e-3);
    p->sides[SIDE_A_LOW].kind = p->sides[SIDE_A_HIGH].kind = SIDE_MIRROR;
    scene_box(p, "upper", 1.0, 0.0, 37e-3, gap, 17e-3, 0.0);
    assert_int_equal(plane_solve(&g, KIND,
                                 &(struct grid_request){.fineness = 1.0, .level = 0},
                                 &s, NULL),
                     STATUS_OK);
    const int nodes = s.grid.na * s.grid.nb;
    double *ga = MEM_NEW((size_t)nodes, double), *gb = MEM_NEW((size_t)nodes, double);
    field_at_nodes(&s.grid, s.phi, s.part_value, ga, gb);
    for (int n = 0; n < nodes; n++) {
        const double b = s.grid.b[n / s.grid.na];
        const double want = b <= gap ? 385.7 / gap : b < 17e-3 ? 0.0 : -385.7 / 4e-3;
        assert_close(ga[n], 0.0, 0.0, 1e-9 * 385.7 / gap);
        assert_close(gb[n], want, 1e-10, 0.0);
    }
    mem_free(ga);
    mem_free(gb);
    plane_solution_free(&s);
    geometry_free(&g);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_gradients_are_second_order_at_and_between_nodes),
        cmocka_unit_test(test_gradient_on_a_flat_face_is_that_of_the_gap),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
