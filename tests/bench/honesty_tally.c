/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "tests/bench/honesty_tally.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

#include "shared/mem.h"

/* Shares inside and median ratio of uncertainty to error that are asked for. */
#define INSIDE_TARGET 0.95
#define FAMILY_TARGET 0.90
#define MEDIAN_TARGET 10.0
/* Below this share of the value an error is lost in round-off. */
#define ROUND_OFF 1e-15

enum { WORST_SHOWN = 12, ANY = -1 };

static const char *const kind_names[HONESTY_KINDS] = {
    "potential", "field a", "field b", "charge",  "capacitance", "matrix",    "found",
    "peak",      "creep",   "force a", "force b", "length",      "exit edge", "K"};

void honesty_must(enum status status, const char *what)
{
    if (status == STATUS_OK)
        return;
    (void)fprintf(stderr, "bench_honesty: %s: %s\n", what, status_text(status));
    exit(EXIT_FAILURE);
}

void honesty_family(struct honesty_tally *tally, const char *name)
{
    if (tally->family_count == HONESTY_FAMILIES)
        honesty_must(STATUS_SIZE, name);
    tally->families[tally->family_count++] = name;
}

const char *honesty_kind_name(enum honesty_kind kind)
{
    return kind_names[kind];
}

void honesty_count_case(struct honesty_tally *tally)
{
    tally->cases++;
    tally->family_cases[tally->family_count - 1]++;
}

static double error_of(const struct honesty_result *r)
{
    return fabs(r->value - r->exact);
}

static bool is_inside(const struct honesty_result *r)
{
    return error_of(r) <= r->uncertainty;
}

/* Printed uncertainty over true error. */
static double ratio_of(const struct honesty_result *r)
{
    return r->uncertainty / fmax(error_of(r), ROUND_OFF * fabs(r->exact));
}

static void print_result(const struct honesty_result *r)
{
    char place[40] = "";
    if (r->kind <= HONESTY_FIELD_B)
        (void)snprintf(place, sizeof place, " (%.4g, %.4g) mm", 1e3 * r->at.a,
                       1e3 * r->at.b);
    printf("  %-11s%-22s %17.10g %9.1e %9.1e %9.3g  %s%s\n", kind_names[r->kind], place,
           r->value, r->uncertainty / fabs(r->exact), error_of(r) / fabs(r->exact),
           ratio_of(r), is_inside(r) ? "inside" : "OUTSIDE",
           r->settled ? "" : ", unsettled");
}

void honesty_add(struct honesty_tally *tally, const struct honesty_result *result)
{
    void *array = tally->results;
    honesty_must(
        mem_grow(&array, &tally->capacity, tally->count + 1, sizeof *tally->results),
        "tally");
    tally->results = array;
    struct honesty_result *r = &tally->results[tally->count++];
    *r = *result;
    r->family = tally->family_count - 1;
    print_result(r);
}

struct summary {
    size_t count, inside, unsettled;
    double median; /* ratio */
    double worst;  /* error over uncertainty */
};

static int by_value(const void *p, const void *q)
{
    const double a = *(const double *)p, b = *(const double *)q;
    return (a > b) - (a < b);
}

/* Of one kind, of one family, of both or of all (ANY). */
static struct summary summarise(const struct honesty_tally *tally, int kind, int family)
{
    struct summary s = {0, 0, 0, 0.0, 0.0};
    double *ratios = MEM_NEW(tally->count, double);
    honesty_must(ratios != NULL ? STATUS_OK : STATUS_MEMORY, "summary");
    for (size_t k = 0; k < tally->count; k++) {
        const struct honesty_result *r = &tally->results[k];
        if ((kind != ANY && (int)r->kind != kind) ||
            (family != ANY && r->family != family))
            continue;
        s.inside += is_inside(r) ? 1 : 0;
        s.unsettled += r->settled ? 0 : 1;
        s.worst = fmax(s.worst, error_of(r) / r->uncertainty);
        ratios[s.count++] = ratio_of(r);
    }
    qsort(ratios, s.count, sizeof *ratios, by_value);
    if (s.count > 0)
        s.median = 0.5 * (ratios[(s.count - 1) / 2] + ratios[s.count / 2]);
    mem_free(ratios);
    return s;
}

static double share_of(const struct summary *s)
{
    return (double)s->inside / (double)s->count;
}

static void print_summary(const char *title, const struct summary *s)
{
    if (s->count > 0)
        printf("  %-16s %7zu %7.1f %% %8.3g %14.3g %10zu\n", title, s->count,
               100.0 * share_of(s), s->median, s->worst, s->unsettled);
}

static void print_head(const char *title)
{
    printf("%-18s %7s %9s %8s %14s %10s\n", title, "figures", "inside", "median",
           "worst error", "unsettled");
    printf("%-18s %7s %9s %8s %14s\n", "", "", "", "ratio", "/ uncertainty");
}

static int by_ratio(const void *p, const void *q)
{
    const double a = ratio_of(p), b = ratio_of(q);
    return (a > b) - (a < b);
}

static void print_worst(const struct honesty_tally *tally)
{
    qsort(tally->results, tally->count, sizeof *tally->results, by_ratio);
    printf("least uncertainty for the error:\n");
    for (size_t k = 0; k < tally->count && k < WORST_SHOWN; k++) {
        printf("  %s:\n  ", tally->results[k].case_name);
        print_result(&tally->results[k]);
    }
}

bool honesty_summary(const struct honesty_tally *tally)
{
    char title[40];
    bool good = true;
    print_worst(tally);
    print_head("kind of figure");
    for (int kind = 0; kind < HONESTY_KINDS; kind++) {
        const struct summary s = summarise(tally, kind, ANY);
        print_summary(kind_names[kind], &s);
    }
    print_head("family (cases)");
    for (int f = 0; f < tally->family_count; f++) {
        const struct summary s = summarise(tally, ANY, f);
        (void)snprintf(title, sizeof title, "%s (%d)", tally->families[f],
                       tally->family_cases[f]);
        print_summary(title, &s);
        good = good && share_of(&s) >= FAMILY_TARGET;
    }
    const struct summary all = summarise(tally, ANY, ANY);
    (void)snprintf(title, sizeof title, "all (%d)", tally->cases);
    print_summary(title, &all);
    return good && share_of(&all) >= INSIDE_TARGET && all.median <= MEDIAN_TARGET;
}

void honesty_tally_free(struct honesty_tally *tally)
{
    mem_free(tally->results);
    memset(tally, 0, sizeof *tally);
}
