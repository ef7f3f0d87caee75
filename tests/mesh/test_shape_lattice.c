/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Shapes on a lattice: a box from which boxes with whole-number corners are taken, so
 * faces coincide, cuts overlap, touch and cover each other in every way. Which unit
 * cells are solid is known exactly, and the shape must agree with the cells about
 * membership, spans, corners and meetings. */

#include "tests/mesh/test_shape_cases.h"

#define CELLS 8     /* lattice of CELLS * CELLS unit cells */
#define UNIT  0.003 /* m, a cell; not a power of two, so coordinates are rounded */
#define CASES 150

struct lattice {
    struct shape shape;
    double turn;                      /* rad, of the shape about the origin */
    bool solid[CELLS + 2][CELLS + 2]; /* [a][b], with a free rim all around */
};

static int random_int(unsigned *seed, int low, int high)
{
    return (int)floor(random_between(seed, low, high + 1));
}

static void paint(struct lattice *lattice, const int corner[4], bool solid)
{
    for (int a = corner[0]; a < corner[2]; a++)
        for (int b = corner[1]; b < corner[3]; b++)
            lattice->solid[a][b] = solid;
}

static struct shape lattice_box(const int c[4])
{
    return box(c[0] * UNIT, c[1] * UNIT, c[2] * UNIT, c[3] * UNIT, 0);
}

static const int whole[4] = {1, 1, CELLS + 1, CELLS + 1};

static struct lattice random_lattice(unsigned *seed, const int body[4], int cuts)
{
    struct lattice lattice = {.shape = lattice_box(body)};

    paint(&lattice, body, true);
    for (int i = 0; i < cuts; i++) {
        int a = random_int(seed, 0, CELLS);
        int b = random_int(seed, 0, CELLS);
        int cut[4] = {a, b, random_int(seed, a + 1, CELLS + 2),
                      random_int(seed, b + 1, CELLS + 2)};
        if (cut[2] > a + 5 || cut[3] > b + 5)
            continue; /* leave something */
        take(&lattice.shape, lattice_box(cut));
        paint(&lattice, cut, false);
    }
    return lattice;
}

static void turn_lattice(struct lattice *lattice, double angle)
{
    shape_turn(&lattice->shape, angle, at(0, 0));
    lattice->turn = angle;
}

/* Where the lattice point (a, b) is after the turn. */
static struct vec2 place(const struct lattice *lattice, double a, double b)
{
    double c = cos(lattice->turn);
    double s = sin(lattice->turn);

    return at((c * a - s * b) * UNIT, (s * a + c * b) * UNIT);
}

static bool holds(const struct lattice *lattice, double a, double b)
{
    return shape_contains(&lattice->shape, place(lattice, a, b), TOLERANCE);
}

/* How many of the cells that touch the lattice point (a, b) are solid. */
static int solid_around(const struct lattice *lattice, int a, int b)
{
    return lattice->solid[a - 1][b - 1] + lattice->solid[a][b - 1] +
           lattice->solid[a - 1][b] + lattice->solid[a][b];
}

static bool is_diagonal(const struct lattice *lattice, int a, int b)
{
    return solid_around(lattice, a, b) == 2 &&
           lattice->solid[a - 1][b - 1] == lattice->solid[a][b];
}

static void assert_membership(const struct lattice *lattice)
{
    for (int a = 1; a <= CELLS + 1; a++)
        for (int b = 1; b <= CELLS + 1; b++) {
            bool face = lattice->solid[a][b] || lattice->solid[a][b - 1];
            assert_int_equal(holds(lattice, a, b), solid_around(lattice, a, b) > 0);
            assert_int_equal(holds(lattice, a + 0.5, b + 0.5), lattice->solid[a][b]);
            assert_int_equal(holds(lattice, a + 0.5, b), face);
        }
}

static void test_membership_follows_the_cells(void **state)
{
    unsigned seed = 41;

    (void)state;
    for (int i = 0; i < CASES; i++) {
        struct lattice lattice = random_lattice(&seed, whole, 6);
        assert_membership(&lattice);
        turn_lattice(&lattice, 0.37);
        assert_membership(&lattice);
        shape_free(&lattice.shape);
    }
}

/* Is the unit stretch k of line `line` solid: a cell on either side of it is. */
static bool stretch_is_solid(const struct lattice *lattice, int axis, int line, int k)
{
    if (axis == 0)
        return lattice->solid[k][line - 1] || lattice->solid[k][line];
    return lattice->solid[line - 1][k] || lattice->solid[line][k];
}

static void assert_line(const struct lattice *lattice, int axis, int line)
{
    struct span *spans = NULL;
    size_t capacity = 0;
    size_t count;
    size_t n = 0;

    assert_int_equal(shape_spans(&lattice->shape, axis, line * UNIT, TOLERANCE, &spans,
                                 &capacity, &count),
                     STATUS_OK);
    for (int k = 1; k <= CELLS + 1; k++) {
        bool before = stretch_is_solid(lattice, axis, line, k - 1);
        bool here = stretch_is_solid(lattice, axis, line, k);
        assert_true(n < count || !here || before);
        if (here && !before)
            assert_close(spans[n].low, k * UNIT, 0, 0);
        if (before && !here)
            assert_close(spans[n++].high, k * UNIT, 0, 0);
    }
    assert_int_equal(n, count);
    mem_free(spans);
}

static void test_spans_follow_the_cells(void **state)
{
    unsigned seed = 42;

    (void)state;
    for (int i = 0; i < CASES; i++) {
        struct lattice lattice = random_lattice(&seed, whole, 6);
        for (int line = 1; line <= CELLS + 1; line++) {
            assert_line(&lattice, 0, line);
            assert_line(&lattice, 1, line);
        }
        shape_free(&lattice.shape);
    }
}

/* Widest free angle at a lattice point; 0 where there is no corner. */
static double free_angle(const struct lattice *lattice, int a, int b)
{
    int solid = solid_around(lattice, a, b);

    if (solid == 1 || is_diagonal(lattice, a, b))
        return solid == 1 ? 1.5 * PI : 0.5 * PI;
    return solid == 3 ? 0.5 * PI : 0;
}

static double key_angle(const struct key_point *keys, size_t count, struct vec2 p)
{
    double angle = 0;

    for (size_t i = 0; i < count; i++)
        if (keys[i].radius == 0 && vec2_length(vec2_sub(keys[i].at, p)) < 1e-12) {
            assert_true(angle == 0); /* once only */
            angle = keys[i].free_angle;
        }
    return angle;
}

static void assert_corners(const struct lattice *lattice)
{
    struct key_point *keys;
    size_t count;
    size_t sharp = 0;
    size_t want = 0;

    assert_int_equal(shape_key_points(&lattice->shape, &keys, &count), STATUS_OK);
    for (size_t i = 0; i < count; i++)
        sharp += keys[i].radius == 0;
    for (int a = 1; a <= CELLS + 1; a++)
        for (int b = 1; b <= CELLS + 1; b++) {
            double angle = free_angle(lattice, a, b);
            want += angle > 0;
            assert_close(key_angle(keys, count, place(lattice, a, b)), angle, 1e-9, 0);
        }
    assert_int_equal(sharp, want);
    mem_free(keys);
}

static void test_corners_follow_the_cells(void **state)
{
    unsigned seed = 43;

    (void)state;
    for (int i = 0; i < CASES; i++) {
        struct lattice lattice = random_lattice(&seed, whole, 6);
        assert_corners(&lattice);
        turn_lattice(&lattice, 1.93);
        assert_corners(&lattice);
        shape_free(&lattice.shape);
    }
}

/* Faces of a cell between solid and free, in all. */
static int count_faces(const struct lattice *lattice)
{
    int faces = 0;

    for (int a = 1; a <= CELLS + 1; a++)
        for (int b = 1; b <= CELLS + 1; b++)
            faces += (lattice->solid[a][b] != lattice->solid[a - 1][b]) +
                     (lattice->solid[a][b] != lattice->solid[a][b - 1]);
    return faces;
}

/* A face that is part of the outlines of two cuts is listed once. The spacing is a
 * ninth of a cell, and a little more, so rounding does not ask for a tenth point. */
static void test_surface_covers_the_faces_of_the_cells(void **state)
{
    unsigned seed = 44;

    (void)state;
    for (int i = 0; i < 20; i++) {
        struct lattice lattice = random_lattice(&seed, whole, 5);
        struct surface_point *points;
        size_t count;
        assert_int_equal(
            shape_surface(&lattice.shape, UNIT / 9 * (1 + 1e-9), &points, &count),
            STATUS_OK);
        assert_int_equal(count, 9 * count_faces(&lattice));
        mem_free(points);
        shape_free(&lattice.shape);
    }
}

static bool cells_meet(const struct lattice *p, const struct lattice *q)
{
    for (int a = 1; a <= CELLS + 1; a++)
        for (int b = 1; b <= CELLS + 1; b++)
            if (solid_around(p, a, b) > 0 && solid_around(q, a, b) > 0)
                return true;
    return false;
}

static void test_meetings_follow_the_cells(void **state)
{
    unsigned seed = 45;
    int apart = 0;

    (void)state;
    for (int i = 0; i < 2 * CASES; i++) {
        int a = random_int(&seed, 1, CELLS - 1);
        int b = random_int(&seed, 1, CELLS - 1);
        int body[4] = {a, b, a + 2, b + 2};
        struct lattice p = random_lattice(&seed, whole, 12);
        struct lattice q = random_lattice(&seed, body, 3);
        bool meets;
        assert_int_equal(shape_meets(&p.shape, &q.shape, TOLERANCE, &meets, NULL),
                         STATUS_OK);
        assert_int_equal(meets, cells_meet(&p, &q));
        apart += !meets;
        shape_free(&p.shape);
        shape_free(&q.shape);
    }
    assert_true(apart > 10 && apart < 2 * CASES - 10);
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_membership_follows_the_cells),
        cmocka_unit_test(test_spans_follow_the_cells),
        cmocka_unit_test(test_corners_follow_the_cells),
        cmocka_unit_test(test_surface_covers_the_faces_of_the_cells),
        cmocka_unit_test(test_meetings_follow_the_cells),
    };

    return cmocka_run_group_tests(tests, NULL, NULL);
}
