/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Single edges against a dense sample of their points: arcs of any sweep, up to full
 * circles, in both senses. */

#include "mesh/shape_internal.h"
#include "tests/mesh/test_shape_cases.h"

#define SAMPLES 4000
#define CASES   200

static struct edge arc(struct vec2 centre, double radius, double from, double sweep)
{
    double to = from + sweep;

    return (struct edge){
        at(centre.a + radius * cos(from), centre.b + radius * sin(from)),
        at(centre.a + radius * cos(to), centre.b + radius * sin(to)), centre, radius,
        sweep};
}

static struct edge random_edge(unsigned *seed)
{
    struct vec2 p = at(random_between(seed, -1, 1), random_between(seed, -1, 1));
    struct vec2 q = at(random_between(seed, -1, 1), random_between(seed, -1, 1));

    if (random_between(seed, 0, 1) < 0.3)
        return (struct edge){p, q, {0, 0}, 0, 0};
    return arc(p, random_between(seed, 0.1, 1), random_between(seed, -4, 4),
               random_between(seed, -2 * PI, 2 * PI));
}

/* Whole quarter turns: the ends are tops and sides, exactly. */
static struct edge square_edge(unsigned *seed)
{
    const struct vec2 ends[4] = {{0.75, -0.5}, {0.25, 0}, {-0.25, -0.5}, {0.25, -1}};
    int from = (int)random_between(seed, 0, 4);
    int quarters = (int)random_between(seed, 1, 5);
    int sense = random_between(seed, -1, 1) < 0 ? -1 : 1;

    return (struct edge){ends[from], ends[(from + 4 + sense * quarters) % 4],
                         at(0.25, -0.5), 0.5, sense * quarters * PI / 2};
}

static struct vec2 sample(const struct edge *edge, int i)
{
    return edge_point(edge, (double)i / SAMPLES);
}

static double sampled_distance(const struct edge *edge, struct vec2 p)
{
    double nearest = (double)INFINITY;

    for (int i = 0; i <= SAMPLES; i++)
        nearest = fmin(nearest, vec2_length(vec2_sub(sample(edge, i), p)));
    return nearest;
}

/* A sample is off by half a step at most, 2 pi / (2 * 4000) = 8e-4 of the radius. */
static void test_nearest_point_is_nearest(void **state)
{
    unsigned seed = 51;

    (void)state;
    for (int i = 0; i < CASES; i++) {
        struct edge edge = random_edge(&seed);
        struct vec2 p = at(random_between(&seed, -1, 1), random_between(&seed, -1, 1));
        double got = vec2_length(vec2_sub(p, edge_nearest(&edge, p)));
        double want = sampled_distance(&edge, p);
        assert_true(got <= want + 1e-15);
        assert_close(got, want, 0, 8e-4);
    }
}

static void test_fraction_inverts_point(void **state)
{
    unsigned seed = 52;

    (void)state;
    for (int i = 0; i < CASES; i++) {
        struct edge edge = random_edge(&seed);
        double t = random_between(&seed, 0.01, 0.99);
        struct vec2 p = edge_point(&edge, t);
        struct vec2 q = edge_nearest(&edge, p);
        assert_close(edge_fraction(&edge, p), t, 0, 1e-12);
        assert_close(vec2_length(vec2_sub(p, q)), 0, 0, 1e-15);
    }
}

static void test_direction_is_the_derivative(void **state)
{
    unsigned seed = 53;
    const double h = 1e-6;

    (void)state;
    for (int i = 0; i < CASES; i++) {
        struct edge edge = random_edge(&seed);
        double t = random_between(&seed, 0.01, 0.99);
        struct vec2 d = vec2_sub(edge_point(&edge, t + h), edge_point(&edge, t - h));
        struct vec2 want = vec2_scale(d, 1 / (2 * h * edge_length(&edge)));
        struct vec2 got = edge_direction(&edge, t);
        assert_close(got.a, want.a, 0, 1e-8);
        assert_close(got.b, want.b, 0, 1e-8);
    }
}

static void assert_bounds(const struct edge *edge)
{
    struct vec2 low;
    struct vec2 high;
    double gap = 0;

    edge_bounds(edge, &low, &high);
    for (int i = 0; i <= SAMPLES; i++) {
        struct vec2 p = sample(edge, i);
        double inside =
            fmin(fmin(p.a - low.a, high.a - p.a), fmin(p.b - low.b, high.b - p.b));
        assert_true(inside >= -1e-15);
    }
    for (int i = 0; i <= SAMPLES; i++)
        gap = fmax(gap, sample(edge, i).a - low.a);
    assert_close(gap, high.a - low.a, 0, 1e-6);
    assert_true(edge_reaches(edge, high, high, 1e-15));
    assert_true(edge_reaches(edge, low, low, 1e-15));
}

static void test_bounds_hold_the_edge_tightly(void **state)
{
    unsigned seed = 54;

    (void)state;
    for (int i = 0; i < CASES; i++) {
        struct edge edges[2] = {random_edge(&seed), square_edge(&seed)};
        assert_bounds(&edges[0]);
        assert_bounds(&edges[1]);
    }
}

/* Upward and downward crossings of b = level, and where, against the sample. */
static void assert_rises(const struct edge *edge, double level)
{
    struct rise rises[RISES_MAX];
    int n = edge_rises(edge, rises);
    int balance = 0;
    double sum = 0;
    double want = 0;

    for (int i = 0; i < n; i++) {
        double a = rise_position(&rises[i], level);
        int up = rises[i].b1 > rises[i].b0 ? 1 : -1;
        balance += rise_crosses(&rises[i], level) ? up : 0;
        sum += rise_crosses(&rises[i], level) ? up * a : 0;
    }
    for (int i = 0; i < SAMPLES; i++) {
        struct vec2 p = sample(edge, i);
        struct vec2 q = sample(edge, i + 1);
        int up = (q.b > level) - (p.b > level);
        balance -= up;
        want += up * 0.5 * (p.a + q.a);
    }
    assert_int_equal(balance, 0);
    assert_close(sum, want, 0, 4e-3);
}

static void test_rises_cross_where_the_edge_does(void **state)
{
    unsigned seed = 55;

    (void)state;
    for (int i = 0; i < CASES; i++) {
        struct edge edges[2] = {random_edge(&seed), square_edge(&seed)};
        assert_rises(&edges[0], random_between(&seed, -1, 1));
        assert_rises(&edges[1], random_between(&seed, -0.99, -0.01));
    }
}

static void test_transposed_edge_exchanges_the_axes(void **state)
{
    unsigned seed = 56;

    (void)state;
    for (int i = 0; i < CASES; i++) {
        struct edge edge = random_edge(&seed);
        struct edge other = edge_transposed(&edge);
        double t = random_between(&seed, 0, 1);
        assert_close(edge_point(&other, t).a, edge_point(&edge, t).b, 0, 1e-15);
        assert_close(edge_point(&other, t).b, edge_point(&edge, t).a, 0, 1e-15);
    }
}

static double sampled_gap(const struct edge *e, const struct edge *f)
{
    double gap = (double)INFINITY;

    for (int i = 0; i <= SAMPLES; i++) {
        struct vec2 p = sample(e, i);
        gap = fmin(gap, vec2_length(vec2_sub(p, edge_nearest(f, p))));
    }
    return gap;
}

/* Whether two edges come within t is told by their closest approach, sampled to 1e-6
 * of the size or better where it is smooth, to a step where they cross. */
static void test_edges_meet_if_they_come_close(void **state)
{
    unsigned seed = 57;
    const double t = 0.05;
    int counts[2] = {0, 0};

    (void)state;
    for (int i = 0; i < 2 * CASES; i++) {
        struct edge e = random_edge(&seed);
        struct edge f = random_edge(&seed);
        struct vec2 points[MEETINGS_MAX];
        int n = edge_meetings(&e, &f, t, points);
        double gap = sampled_gap(&e, &f);
        for (int k = 0; k < n; k++) {
            struct vec2 p = edge_nearest(&e, points[k]);
            assert_at_most(vec2_length(vec2_sub(p, points[k])), t);
            p = edge_nearest(&f, points[k]);
            assert_at_most(vec2_length(vec2_sub(p, points[k])), t);
        }
        if (fabs(gap - t) > 2e-3)
            assert_int_equal(n > 0, gap < t);
        counts[n > 0]++;
    }
    assert_true(counts[0] > 40 && counts[1] > 40);
}

/* Sign changes of the side of f along e are crossings; each must be listed. */
static void test_crossings_are_all_listed(void **state)
{
    unsigned seed = 58;
    int crossings = 0;

    (void)state;
    for (int i = 0; i < CASES; i++) {
        struct edge e = random_edge(&seed);
        struct edge f = arc(at(0.1, -0.2), 0.6, random_between(&seed, -3, 3), 2 * PI);
        struct vec2 points[MEETINGS_MAX];
        int n = edge_meetings(&e, &f, 1e-12, points);
        for (int k = 0; k < SAMPLES; k++) {
            struct vec2 p = sample(&e, k);
            struct vec2 q = sample(&e, k + 1);
            bool in = vec2_length(vec2_sub(p, f.centre)) < 0.6;
            double nearest = (double)INFINITY;
            if (in == (vec2_length(vec2_sub(q, f.centre)) < 0.6))
                continue;
            for (int m = 0; m < n; m++)
                nearest = fmin(nearest, vec2_length(vec2_sub(points[m], p)));
            assert_at_most(nearest, 2e-3);
            crossings++;
        }
    }
    assert_true(crossings > 50);
}

/* Tangent from outside, from inside, and by a hair: h off the line of touching. */
static void test_tangent_edges_meet(void **state)
{
    struct edge line = {{-1, 0.3}, {1, 0.3}, {0, 0}, 0, 0};
    struct edge slanted = {{1, -0.5}, {-1, 1}, {0, 0}, 0, 0}; /* 0.2 from the origin */
    struct edge circle = arc(at(0, 0), 0.3, 0.1, 2 * PI);
    struct edge outer = arc(at(0.3, 0.4), 0.2, 2, 2 * PI);
    struct edge inner = arc(at(0.06, 0.08), 0.2, 2, -2 * PI);
    struct edge small = arc(at(0, 0), 0.2, 0.1, 2 * PI);
    struct vec2 points[MEETINGS_MAX];

    (void)state;
    assert_true(edge_meetings(&line, &circle, 1e-12, points) > 0);
    assert_true(edge_meetings(&slanted, &small, 1e-12, points) > 0);
    assert_true(edge_meetings(&circle, &outer, 1e-12, points) > 0);
    assert_true(edge_meetings(&outer, &circle, 1e-12, points) > 0);
    assert_true(edge_meetings(&circle, &inner, 1e-12, points) > 0);
    assert_true(edge_meetings(&inner, &circle, 1e-12, points) > 0);
    inner.radius = 0.2 - 5e-7;
    assert_true(edge_meetings(&circle, &inner, 1e-6, points) > 0);
    assert_true(edge_meetings(&inner, &circle, 1e-6, points) > 0);
    assert_int_equal(edge_meetings(&inner, &circle, 1e-7, points), 0);
    circle = arc(at(0, -1e-6), 0.3, 0.1, 2 * PI);
    assert_int_equal(edge_meetings(&line, &circle, 1e-7, points), 0);
    assert_true(edge_meetings(&line, &circle, 2e-6, points) > 0);
}

static void test_overlapping_edges_list_the_ends_of_what_they_share(void **state)
{
    struct edge e = {{0.1, 0.3}, {0.9, 0.3}, {0, 0}, 0, 0};
    struct edge f = {{0.6, 0.3}, {0.3, 0.3}, {0, 0}, 0, 0};
    struct edge p = arc(at(0.1, 0.2), 0.5, 0.3, 1.5);
    struct edge q = arc(at(0.1, 0.2), 0.5, 2.2, -1.1);
    struct vec2 points[MEETINGS_MAX];

    (void)state;
    assert_int_equal(edge_meetings(&e, &f, 1e-12, points), 2);
    assert_close(points[0].a, 0.6, 1e-15, 0);
    assert_close(points[1].a, 0.3, 1e-15, 0);
    assert_int_equal(edge_meetings(&f, &e, 1e-12, points), 2);
    assert_int_equal(edge_meetings(&p, &q, 1e-12, points), 2);
    assert_close(points[0].a, 0.1 + 0.5 * cos(1.8), 1e-14, 0);
    assert_close(points[1].a, 0.1 + 0.5 * cos(1.1), 1e-14, 0);
}

/* A circle of one edge is as good as one of four, wherever it begins. */
static void test_full_circle_in_one_edge_is_a_disc(void **state)
{
    unsigned seed = 59;

    (void)state;
    for (int k = 0; k < 8; k++) {
        struct edge circle = arc(at(0.2, -0.1), 0.5, k * PI / 4, 2 * PI);
        struct outline outline = {&circle, 1};
        circle.end = circle.start;
        assert_close(outline_area(&outline), PI * 0.25, 1e-14, 0);
        for (int i = 0; i < 200; i++) {
            struct vec2 p =
                at(random_between(&seed, -0.4, 0.8), random_between(&seed, -0.7, 0.5));
            double depth = 0.5 - vec2_length(vec2_sub(p, circle.centre));
            assert_close(outline_depth(&outline, p), depth, 0, 1e-15);
        }
    }
}

int main(void)
{
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_nearest_point_is_nearest),
        cmocka_unit_test(test_fraction_inverts_point),
        cmocka_unit_test(test_direction_is_the_derivative),
        cmocka_unit_test(test_bounds_hold_the_edge_tightly),
        cmocka_unit_test(test_rises_cross_where_the_edge_does),
        cmocka_unit_test(test_transposed_edge_exchanges_the_axes),
        cmocka_unit_test(test_edges_meet_if_they_come_close),
        cmocka_unit_test(test_crossings_are_all_listed),
        cmocka_unit_test(test_tangent_edges_meet),
        cmocka_unit_test(test_overlapping_edges_list_the_ends_of_what_they_share),
        cmocka_unit_test(test_full_circle_in_one_edge_is_a_disc),
    };

    return cmocka_run_group_tests(tests, NULL, NULL);
}
