/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Ends of a field written down as an Enge function with one coefficient,
 * F(z) = 1/(1 + exp((z - z0)/w)) (Enge, Rev. Sci. Instrum. 35, 278 (1964); from memory),
 * for which: effective edge exactly at z0, integral F (1 - F) dz = w. */

#include "tests/support/assert_close.h"

#include <string.h>

#include "solver/fringe.h"
#include "tests/support/scene.h"

#define ENTRANCE (-0.0471)
#define EXIT     0.0563
#define WIDTH    2.9e-3
#define CENTRE   (-0.1037)

static double f[PATH_POINTS];

/* Field from -0.11 to 0.13 m with its edges at ENTRANCE and EXIT. */
static void fill(struct path *path)
{
    memset(path, 0, sizeof *path);
    path->present = true;
    path->step = 0.24 / (PATH_POINTS - 1);
    for (int k = 0; k < PATH_POINTS; k++) {
        const double z = -0.11 + 0.24 * k / (PATH_POINTS - 1);
        path->z[k] = z;
        f[k] = CENTRE / (1.0 + exp((z - EXIT) / WIDTH)) /
               (1.0 + exp((ENTRANCE - z) / WIDTH));
    }
}

static void test_edges_and_length_of_enge_ends(void **state)
{
    (void)state;
    static struct path path;
    fill(&path);
    const struct fringe e = fringe_of(&path, f, CENTRE, 0.0, 20e-3);
    assert_close(e.entrance, ENTRANCE, 0.0, 1e-9);
    assert_close(e.exit, EXIT, 0.0, 1e-9);
    assert_close(e.length, EXIT - ENTRANCE, 0.0, 1e-9);
    assert_close(e.exit - e.entrance, e.length, 1e-14, 0.0);
}

static void test_fringe_integral_is_the_width_over_the_gap(void **state)
{
    (void)state;
    static struct path path;
    fill(&path);
    const struct fringe e = fringe_of(&path, f, CENTRE, 0.0, 20e-3);
    assert_close(e.k_entrance, WIDTH / 20e-3, 1e-6, 0.0);
    assert_close(e.k_exit, WIDTH / 20e-3, 1e-6, 0.0);
    const struct fringe none = fringe_of(&path, f, CENTRE, 0.0, 0.0);
    assert_true(none.k_entrance == 0.0 && none.k_exit == 0.0);
    assert_true(none.length == e.length);
}

static void test_edges_do_not_depend_on_the_reference_inside_the_flat(void **state)
{
    (void)state;
    static struct path path;
    fill(&path);
    const struct fringe e = fringe_of(&path, f, CENTRE, 0.0, 20e-3);
    const struct fringe shifted = fringe_of(&path, f, CENTRE, 7.13e-3, 20e-3);
    assert_close(shifted.entrance, e.entrance, 0.0, 1e-8);
    assert_close(shifted.exit, e.exit, 0.0, 1e-8);
}

static void test_field_left_at_the_ends_is_told(void **state)
{
    (void)state;
    static struct path path;
    fill(&path);
    f[0] = 0.017 * CENTRE;
    f[PATH_POINTS - 1] = -0.023 * CENTRE;
    const struct fringe e = fringe_of(&path, f, CENTRE, 0.0, 20e-3);
    assert_close(e.leftover_from, 0.017, 1e-12, 0.0);
    assert_close(e.leftover_to, 0.023, 1e-12, 0.0);
}

/* F = exp(-(z - z0)/w) beyond the flat: what lies beyond the end is F w exactly. */
static void test_tail_of_an_exponential_is_exact(void **state)
{
    (void)state;
    static struct path path;
    fill(&path);
    const double width = 0.031;
    for (int k = 0; k < PATH_POINTS; k++)
        f[k] = CENTRE * exp(-fmax(fabs(path.z[k]) - 0.04, 0.0) / width);
    const struct fringe e = fringe_of(&path, f, CENTRE, 0.0, 20e-3);
    assert_close(e.tail_from, width * exp(-0.07 / width), 1e-9, 0.0);
    assert_close(e.tail_to, width * exp(-0.09 / width), 1e-9, 0.0);
    assert_false(e.inside_from || e.inside_to);
}

/* F = x0/x: one e-fold of x beyond the end adds F x. */
static void test_tail_of_a_field_that_falls_slowly_is_one_more_efold(void **state)
{
    (void)state;
    static struct path path;
    fill(&path);
    for (int k = 0; k < PATH_POINTS; k++)
        f[k] = CENTRE * 5e-3 / fmax(fabs(path.z[k]), 5e-3);
    const struct fringe e = fringe_of(&path, f, CENTRE, 0.0, 20e-3);
    assert_close(e.tail_to, 5e-3, 0.02, 0.0);
    assert_close(e.tail_from, 5e-3, 0.02, 0.0);
}

static void test_field_that_does_not_fall_is_taken_to_go_on(void **state)
{
    (void)state;
    static struct path path;
    fill(&path);
    for (int k = 0; k < PATH_POINTS; k++)
        f[k] = path.z[k] > 0.05 ? 0.4 * CENTRE : CENTRE;
    const struct fringe e = fringe_of(&path, f, CENTRE, 0.01, 20e-3);
    assert_close(e.tail_to, 0.4 * 0.12, 1e-12, 0.0);
    assert_true(e.inside_from && !e.inside_to && e.tail_from == 0.0);
}

static void test_gap_lies_between_the_nearest_faces(void **state)
{
    (void)state;
    struct geometry g;
    double gap;
    scene_begin(&g, 1.0, false);
    struct plane *p =
        scene_plane(&g, PLANE_ELECTRIC_ALONG, -60e-3, 60e-3, -50e-3, 50e-3);
    scene_box(p, "upper", 0.5, -30e-3, 30e-3, 9.7e-3, 14e-3, 0.0);
    scene_box(p, "upper shield", 0.0, -30e-3, 30e-3, 30e-3, 34e-3, 0.0);
    scene_box(p, "lower", -0.5, -30e-3, 30e-3, -17e-3, -10.4e-3, 0.0);
    assert_true(fringe_gap(p, 0.0, 0.0, &gap));
    assert_close(gap, 20.1e-3, 1e-12, 0.0);
    assert_true(fringe_gap(p, 0.0, 20e-3, &gap));
    assert_close(gap, 16e-3, 1e-12, 0.0);
    assert_false(fringe_gap(p, 40e-3, 0.0, &gap));
    assert_true(gap == 0.0);
    geometry_free(&g);
}

static void test_symmetry_side_is_the_middle_of_the_gap(void **state)
{
    (void)state;
    struct geometry g;
    double gap;
    scene_begin(&g, 1.0, false);
    struct plane *p = scene_plane(&g, PLANE_ELECTRIC_ALONG, -60e-3, 60e-3, 0.0, 50e-3);
    scene_box(p, "upper", 0.5, -30e-3, 30e-3, 9.7e-3, 14e-3, 0.0);
    assert_false(fringe_gap(p, 0.0, 0.0, &gap)); /* a wall is no middle */
    p->sides[SIDE_B_LOW].kind = SIDE_ANTIMIRROR;
    assert_true(fringe_gap(p, 0.0, 0.0, &gap));
    assert_close(gap, 19.4e-3, 1e-12, 0.0);
    p->sides[SIDE_B_LOW].kind = SIDE_MIRROR;
    assert_true(fringe_gap(p, 0.0, 0.0, &gap));
    assert_close(gap, 19.4e-3, 1e-12, 0.0);
    assert_false(fringe_gap(p, 0.0, 2e-3, &gap)); /* not on the side */
    geometry_free(&g);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_edges_and_length_of_enge_ends),
        cmocka_unit_test(test_fringe_integral_is_the_width_over_the_gap),
        cmocka_unit_test(test_edges_do_not_depend_on_the_reference_inside_the_flat),
        cmocka_unit_test(test_field_left_at_the_ends_is_told),
        cmocka_unit_test(test_tail_of_an_exponential_is_exact),
        cmocka_unit_test(test_tail_of_a_field_that_falls_slowly_is_one_more_efold),
        cmocka_unit_test(test_field_that_does_not_fall_is_taken_to_go_on),
        cmocka_unit_test(test_gap_lies_between_the_nearest_faces),
        cmocka_unit_test(test_symmetry_side_is_the_middle_of_the_gap),
    };
    return cmocka_run_group_tests(tests, NULL, NULL);
}
