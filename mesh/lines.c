/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Between two neighbouring key lines the mapped coordinate is
 *     G(x) = integral dx / spacing(x),
 * tabulated once and inverted by bisection. Its integrand is singular (integrable) at
 * the key lines, so the table runs over t with x(t) flat at both ends. Equal steps of G
 * are the lines; the table does not depend on the level, so levels nest exactly. */

#include "mesh/lines.h"

#include <limits.h>
#include <math.h>
#include <stdlib.h>
#include <string.h>

#include "shared/constants.h"
#include "shared/mem.h"

enum {
    TABLE_CELLS = 2000,
    FLATNESS = 8,
    SMOOTH_MINIMUM = 4, /* fourth_power */
    MIN_INTERVALS = 2
};

struct stretch {
    double from, to;
    int intervals;
};

struct table {
    double sum[TABLE_CELLS + 1];   /* G at the table points */
    double slope[TABLE_CELLS + 1]; /* dG/dt there */
};

/* Keys that agree in everything act as often as they were given: mirror twins repeat. */
struct pull {
    struct key_line key;
    double times;
};

struct grading {
    const struct pull *pulls; /* [pull_count] of the keys with a power */
    size_t pull_count;
    struct line_spacing spacing;
};

double lines_corner_power(double free_angle)
{
    double lambda = PI / free_angle;
    double power = 1.0 - 2.0 * lambda / 3.0;
    return power > 0.0 ? power : 0.0;
}

static double fourth_power(double x)
{
    return (x * x) * (x * x);
}

/* The crowding of a key at a distance (in references): its own near by, 1 far away. */
static double crowding_at(const struct key_line *key, double distance)
{
    if (!(key->crowding > 0.0) || key->crowding == 1.0)
        return 1.0;
    return 1.0 + (key->crowding - 1.0) / (1.0 + fourth_power(distance));
}

/* One over the spacing: a sum of powers in which the smallest spacing rules. Keys without
 * a power say nothing. */
static double density(const struct grading *grading, double x)
{
    const struct line_spacing *spacing = &grading->spacing;
    const double share = spacing->at_reference / spacing->coarsest;
    double sum = pow(share, SMOOTH_MINIMUM);
    for (size_t k = 0; k < grading->pull_count; k++) {
        const struct key_line *key = &grading->pulls[k].key;
        double d = (fabs(x - key->at) + key->softening) / spacing->reference;
        if (d > 0.0)
            sum += grading->pulls[k].times * fourth_power(crowding_at(key, d)) *
                   pow(d, -SMOOTH_MINIMUM * key->power);
    }
    return pow(sum, 1.0 / SMOOTH_MINIMUM) / spacing->at_reference;
}

/* x(t) of a stretch, flat at both ends, and its derivative. Near an end the distance
 * to that end keeps full relative precision. */
static double flat_position(const struct stretch *s, double t, double *derivative)
{
    double p = pow(t, FLATNESS), q = pow(1.0 - t, FLATNESS), length = s->to - s->from;
    double ratio = p / (p + q);
    *derivative = 0.0;
    if (t > 0.0 && t < 1.0)
        *derivative = length * FLATNESS * ratio * (q / (p + q)) / (t * (1.0 - t));
    return t < 0.5 ? s->from + length * ratio : s->to - length * (q / (p + q));
}

static double table_slope(const struct grading *grading, const struct stretch *s,
                          double t)
{
    double derivative;
    double x = flat_position(s, t, &derivative);
    return derivative > 0.0 ? derivative * density(grading, x) : 0.0;
}

/* Cumulative Simpson rule with the midpoint of every cell. */
static void table_fill(struct table *table, const struct grading *grading,
                       const struct stretch *s)
{
    const double step = 1.0 / TABLE_CELLS;
    table->sum[0] = 0.0;
    table->slope[0] = 0.0;
    for (int k = 1; k <= TABLE_CELLS; k++) {
        table->slope[k] = table_slope(grading, s, k * step);
        double middle = table_slope(grading, s, (k - 0.5) * step);
        table->sum[k] =
            table->sum[k - 1] +
            step / 6.0 * (table->slope[k - 1] + 4.0 * middle + table->slope[k]);
    }
}

/* Cubic Hermite value of G inside cell k at the fraction u. */
static double table_hermite(const struct table *table, int k, double u)
{
    const double step = 1.0 / TABLE_CELLS;
    double rise = table->sum[k + 1] - table->sum[k];
    double m0 = step * table->slope[k], m1 = step * table->slope[k + 1];
    double a = m0 + m1 - 2.0 * rise, b = 3.0 * rise - 2.0 * m0 - m1;
    return table->sum[k] + u * (m0 + u * (b + u * a));
}

/* t with G(t) = value. */
static double table_inverse(const struct table *table, double value)
{
    int low = 0, high = TABLE_CELLS;
    while (high - low > 1) {
        int middle = (low + high) / 2;
        if (table->sum[middle] <= value)
            low = middle;
        else
            high = middle;
    }
    double from = 0.0, to = 1.0;
    for (int step = 0; step < 60; step++) {
        double u = 0.5 * (from + to);
        if (table_hermite(table, low, u) <= value)
            from = u;
        else
            to = u;
    }
    return (low + 0.5 * (from + to)) / TABLE_CELLS;
}

static int compare_lines(const void *p, const void *q)
{
    double a = *(const double *)p, b = *(const double *)q;
    return (a > b) - (a < b);
}

/* Ends and keys in order, merged: the ends of the stretches. */
static size_t merged_ends(double low, double high, const struct key_line *keys,
                          size_t key_count, double merge, double *ends)
{
    size_t n = 0;
    for (size_t k = 0; k < key_count; k++)
        if (keys[k].at > low + merge && keys[k].at < high - merge)
            ends[++n] = keys[k].at;
    ends[0] = low;
    qsort(ends + 1, n, sizeof *ends, compare_lines);
    size_t kept = 1;
    for (size_t k = 1; k <= n; k++)
        if (ends[k] - ends[kept - 1] > merge)
            ends[kept++] = ends[k];
    ends[kept++] = high;
    return kept;
}

static bool keys_agree(const struct key_line *p, const struct key_line *q)
{
    return p->at == q->at && p->power == q->power && p->softening == q->softening &&
           p->crowding == q->crowding;
}

/* The keys with a power, repeated ones as one: pulls[key_count]. */
static size_t gather_pulls(const struct key_line *keys, size_t key_count,
                           struct pull *pulls)
{
    size_t count = 0;
    for (size_t k = 0; k < key_count; k++) {
        size_t p = 0;
        if (!(keys[k].power > 0.0))
            continue;
        while (p < count && !keys_agree(&pulls[p].key, &keys[k]))
            p++;
        if (p == count)
            pulls[count++] = (struct pull){keys[k], 0.0};
        pulls[p].times += 1.0;
    }
    return count;
}

static int intervals_of(double total, int level)
{
    double wanted = ceil(total - 1e-9);
    if (wanted < MIN_INTERVALS)
        wanted = MIN_INTERVALS;
    wanted = ldexp(wanted, level);
    return wanted < INT_MAX / 4 ? (int)wanted : -1;
}

static void place_lines(const struct table *table, const struct stretch *s,
                        double *lines)
{
    double total = table->sum[TABLE_CELLS], unused;
    lines[0] = s->from;
    for (int k = 1; k < s->intervals; k++) {
        /* The ratio is formed first: k/n is the same number on every level. */
        double t = table_inverse(table, total * ((double)k / s->intervals));
        lines[k] = flat_position(s, t, &unused);
    }
    lines[s->intervals] = s->to;
}

/* Adds one stretch behind the *count lines that are there. */
static enum status add_stretch(const struct grading *grading, double from, double to,
                               int level, struct table *table, double **lines,
                               int *count)
{
    struct stretch s = {from, to, 0};
    table_fill(table, grading, &s);
    s.intervals = intervals_of(table->sum[TABLE_CELLS], level);
    int start = *count > 0 ? *count - 1 : 0;
    if (s.intervals < 0 || start > INT_MAX / 2 - s.intervals)
        return STATUS_SIZE;
    size_t needed = (size_t)start + (size_t)s.intervals + 1;
    double *grown = mem_resize(*lines, needed, sizeof *grown);
    if (grown == NULL)
        return STATUS_MEMORY;
    *lines = grown;
    place_lines(table, &s, grown + start);
    *count = (int)needed;
    return STATUS_OK;
}

enum status lines_build(double low, double high, const struct key_line *keys,
                        size_t key_count, struct line_spacing spacing, double merge,
                        int level, double **lines, int *count)
{
    struct grading grading = {NULL, 0, spacing};
    enum status status = STATUS_OK;
    *lines = NULL;
    *count = 0;
    if (!(isfinite(low) && isfinite(high) && low < high && spacing.coarsest > 0.0 &&
          spacing.at_reference > 0.0 && spacing.reference > 0.0 && level >= 0 &&
          level < 16))
        return STATUS_SIZE;

    double *ends = MEM_NEW(key_count + 2, double);
    struct pull *pulls = MEM_NEW(key_count, struct pull);
    struct table *table = MEM_NEW(1, struct table);
    if (ends == NULL || pulls == NULL || table == NULL)
        status = STATUS_MEMORY;
    size_t end_count = 0;
    if (status == STATUS_OK) {
        end_count = merged_ends(low, high, keys, key_count, merge, ends);
        grading.pull_count = gather_pulls(keys, key_count, pulls);
        grading.pulls = pulls;
    }
    for (size_t k = 0; k + 1 < end_count && status == STATUS_OK; k++)
        status =
            add_stretch(&grading, ends[k], ends[k + 1], level, table, lines, count);
    if (status != STATUS_OK) {
        mem_free(*lines);
        *lines = NULL;
        *count = 0;
    }
    mem_free(ends);
    mem_free(pulls);
    mem_free(table);
    return status;
}

/* A tail and the spacing it starts with. */
struct tail {
    double first; /* m */
    struct line_tail shape;
};

static double tail_distance(const struct tail *tail, double k)
{
    return tail->first / tail->shape.growth * expm1(tail->shape.growth * k);
}

/* Steps at level 0 to the distance d; one that ends within round-off of it counts. */
static double tail_steps(const struct tail *tail, double d)
{
    return ceil(log1p(tail->shape.growth * d / tail->first) / tail->shape.growth -
                1e-9);
}

/* Steps of the whole tail at a level; -1 if there are too many. */
static int tail_intervals(const struct tail *tail, int level)
{
    const double near = fmax(tail_steps(tail, tail->shape.distance), 1.0);
    const double all = tail_steps(tail, tail->shape.reach * tail_distance(tail, near));
    const double wanted = ldexp(all, level);
    return wanted >= 1.0 && wanted < INT_MAX / 4 ? (int)wanted : -1;
}

static bool is_positive(double x)
{
    return x > 0.0 && isfinite(x);
}

enum status lines_extend(double **lines, int *count, bool high, struct line_tail tail,
                         int level)
{
    if (!(is_positive(tail.growth) && is_positive(tail.distance) &&
          is_positive(tail.reach) && level >= 0 && level < 16) ||
        *count <= 1 << level)
        return STATUS_SIZE;
    const size_t had = (size_t)*count, step = (size_t)1 << level;
    const double first = high ? (*lines)[had - 1] - (*lines)[had - 1 - step]
                              : (*lines)[step] - (*lines)[0];
    const struct tail t = {first, tail};
    const int added = tail_intervals(&t, level);
    if (added < 0 || *count > INT_MAX / 2 - added)
        return STATUS_SIZE;
    const size_t more = (size_t)added;
    double *grown = mem_resize(*lines, had + more, sizeof *grown);
    if (grown == NULL)
        return STATUS_MEMORY;
    if (!high)
        memmove(grown + more, grown, had * sizeof *grown);
    const double end = high ? grown[had - 1] : grown[more];
    for (size_t k = 1; k <= more; k++) {
        const double d = tail_distance(&t, ldexp((double)k, -level));
        grown[high ? had - 1 + k : more - k] = high ? end + d : end - d;
    }
    *lines = grown;
    *count += added;
    return STATUS_OK;
}
