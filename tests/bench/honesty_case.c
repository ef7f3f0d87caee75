/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "tests/bench/honesty_case.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

#include "shared/mem.h"
#include "solver/extrapolate.h"
#include "solver/fringe.h"
#include "solver/path.h"
#include "solver/plane_solution.h"
#include "solver/surface_field.h"
#include "tests/support/scene.h"

#define INSIDE_TARGET 0.95
#define MEDIAN_TARGET 10.0

enum { LEVELS = RESULT_LEVELS_MAX, WORST_SHOWN = 12 };

/* One figure after the family has spoken. */
struct honesty_result {
    char case_name[HONESTY_NAME];
    enum honesty_kind kind;
    struct vec2 at;
    double exact, error; /* error is absolute, >= 0 */
    struct estimate estimate;
};

static const char *const kind_names[] = {"potential", "field a",   "field b",
                                         "flux",      "self flux", "peak",
                                         "length",    "exit edge", "K"};
enum { KINDS = sizeof kind_names / sizeof *kind_names };

static void must(enum status status, const char *what)
{
    if (status == STATUS_OK)
        return;
    (void)fprintf(stderr, "bench_honesty: %s: %s\n", what, status_text(status));
    exit(EXIT_FAILURE);
}

struct plane *honesty_begin(struct honesty_case *c, const char *name,
                            enum plane_kind kind, double setting, struct vec2 low,
                            struct vec2 high)
{
    memset(c, 0, sizeof *c);
    (void)snprintf(c->name, sizeof c->name, "%s", name);
    c->kind = kind;
    scene_begin(&c->geometry, setting, plane_kind_is_magnetic(kind));
    return scene_plane(&c->geometry, kind, low.a, high.a, low.b, high.b);
}

void honesty_expect(struct honesty_case *c, struct honesty_figure figure)
{
    if (c->count == HONESTY_FIGURES)
        must(STATUS_SIZE, c->name);
    c->figures[c->count++] = figure;
}

void honesty_expect_point(struct honesty_case *c, struct vec2 at, double potential,
                          struct vec2 field)
{
    const double least = 1e-6 * vec2_length(field);
    struct honesty_figure f = {.kind = HONESTY_POTENTIAL, .at = at, .exact = potential};
    if (potential != 0.0)
        honesty_expect(c, f);
    f.kind = HONESTY_FIELD_A;
    f.exact = field.a;
    if (fabs(field.a) > least)
        honesty_expect(c, f);
    f.kind = HONESTY_FIELD_B;
    f.exact = field.b;
    if (fabs(field.b) > least)
        honesty_expect(c, f);
}

void honesty_expect_flux(struct honesty_case *c, size_t part, double exact)
{
    const double scale = fabs(c->geometry.supplies[0].setting);
    honesty_expect(
        c, (struct honesty_figure){
               .kind = HONESTY_FLUX, .part = part, .scale = scale, .exact = exact});
}

static double measure_point(const struct plane_solution *s,
                            const struct honesty_figure *f)
{
    struct field_value value;
    must(field_at(s->field, f->at, &value), "field");
    const double factor = plane_field_factor(s->plane->kind);
    if (f->kind == HONESTY_POTENTIAL)
        return value.potential;
    return factor * (f->kind == HONESTY_FIELD_A ? value.gradient.a : value.gradient.b);
}

static double measure_peak(const struct plane_solution *s, size_t part)
{
    struct surface_peak peak;
    must(surface_field_peak(s, part, &peak), "surface field");
    return peak.field;
}

static double measure(const struct plane_solution *s, const struct fringe *fringe,
                      const struct honesty_figure *f)
{
    switch (f->kind) {
    case HONESTY_FLUX:
        return s->part_flux[f->part];
    case HONESTY_SELF:
        return s->self_flux[f->part];
    case HONESTY_PEAK:
        return measure_peak(s, f->part);
    case HONESTY_LENGTH:
        return fringe->length;
    case HONESTY_EXIT:
        return fringe->exit;
    case HONESTY_FRINGE_K:
        return fringe->k_exit;
    default:
        return measure_point(s, f);
    }
}

static void measure_fringe(const struct honesty_case *c, const struct plane_solution *s,
                           struct fringe *fringe)
{
    struct view view = {.geometry = &c->geometry};
    struct path path;
    view.planes[c->kind] = s;
    must(path_sample(&view, &path), "path");
    const bool magnetic = plane_kind_is_magnetic(c->kind);
    *fringe = fringe_of(&path, magnetic ? path.b_y[0] : path.e_x[0],
                        magnetic ? path.b_centre : path.e_centre, 0.0, c->gap);
    path_free(&path);
}

static void print_messages(const struct messages *messages)
{
    for (size_t k = 0; k < messages->count; k++)
        (void)fprintf(stderr, "  %s\n", messages->items[k].text);
}

static int solve_level(struct honesty_case *c, double fineness, int level)
{
    struct plane_solution s;
    struct fringe fringe = {0};
    struct messages messages = {0};
    const enum status status =
        plane_solve(&c->geometry, c->kind, fineness, level, &s, &messages);
    print_messages(&messages);
    must(status, c->name);
    if (c->geometry.beam.has_path)
        measure_fringe(c, &s, &fringe);
    for (int k = 0; k < c->count; k++)
        c->figures[k].values[level] = measure(&s, &fringe, &c->figures[k]);
    const int unknowns = s.quality.unknowns;
    messages_free(&messages);
    plane_solution_free(&s);
    return unknowns;
}

static bool is_inside(const struct honesty_result *r)
{
    return r->error <= r->estimate.uncertainty;
}

/* Printed uncertainty over true error; large where the error is lost in round-off. */
static double ratio_of(const struct honesty_result *r)
{
    return r->estimate.uncertainty / fmax(r->error, 1e-15 * fabs(r->exact));
}

static void print_result(const struct honesty_result *r)
{
    char place[40] = "";
    if (r->kind <= HONESTY_FIELD_B)
        (void)snprintf(place, sizeof place, " (%.4g, %.4g) mm", 1e3 * r->at.a,
                       1e3 * r->at.b);
    printf("  %-9s%-24s %17.10g %9.1e %9.1e %7.2f %9.3g  %s%s\n", kind_names[r->kind],
           place, r->estimate.value, r->estimate.uncertainty / fabs(r->exact),
           r->error / fabs(r->exact), r->estimate.order, ratio_of(r),
           is_inside(r) ? "inside" : "OUTSIDE",
           r->estimate.settled ? "" : ", unsettled");
}

static void tally_figure(const struct honesty_case *c, const struct honesty_figure *f,
                         struct honesty_tally *tally)
{
    void *array = tally->results;
    must(mem_grow(&array, &tally->capacity, tally->count + 1, sizeof *tally->results),
         "tally");
    tally->results = array;
    struct honesty_result *r = &tally->results[tally->count++];
    memcpy(r->case_name, c->name, sizeof r->case_name);
    r->kind = f->kind;
    r->at = f->at;
    r->exact = f->exact;
    r->estimate = extrapolate(f->values, LEVELS, f->scale);
    r->error = fabs(r->estimate.value - f->exact);
    print_result(r);
    if (tally->raw != NULL)
        (void)fprintf(tally->raw, "%s;%s;%.17g;%.17g;%.17g;%.17g;%.17g\n", c->name,
                      kind_names[f->kind], f->scale, f->exact, f->values[0],
                      f->values[1], f->values[2]);
}

void honesty_run(struct honesty_case *c, struct honesty_tally *tally)
{
    int unknowns = 0;
    for (int l = 0; l < LEVELS; l++)
        unknowns = solve_level(c, tally->fineness, l);
    tally->cases++;
    printf("%d %s, %d unknowns\n", tally->cases, c->name, unknowns);
    for (int k = 0; k < c->count; k++)
        tally_figure(c, &c->figures[k], tally);
    geometry_free(&c->geometry);
}

static int by_value(const void *p, const void *q)
{
    const double a = *(const double *)p, b = *(const double *)q;
    return (a > b) - (a < b);
}

struct summary {
    size_t count, inside, unsettled;
    double median;
};

/* Of one kind, or of all with kind = KINDS. */
static struct summary summarise(const struct honesty_tally *tally, int kind)
{
    struct summary s = {0, 0, 0, 0.0};
    double *ratios = MEM_NEW(tally->count, double);
    must(ratios != NULL ? STATUS_OK : STATUS_MEMORY, "summary");
    for (size_t k = 0; k < tally->count; k++) {
        const struct honesty_result *r = &tally->results[k];
        if (kind != KINDS && (int)r->kind != kind)
            continue;
        s.inside += is_inside(r) ? 1 : 0;
        s.unsettled += r->estimate.settled ? 0 : 1;
        ratios[s.count++] = ratio_of(r);
    }
    qsort(ratios, s.count, sizeof *ratios, by_value);
    if (s.count > 0)
        s.median = 0.5 * (ratios[(s.count - 1) / 2] + ratios[s.count / 2]);
    mem_free(ratios);
    return s;
}

static void print_summary(const char *title, struct summary s)
{
    if (s.count > 0)
        printf("  %-10s %4zu figures, inside %5.1f %%, median ratio %5.3g, unsettled "
               "%zu\n",
               title, s.count, 100.0 * (double)s.inside / (double)s.count, s.median,
               s.unsettled);
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
    print_worst(tally);
    printf("%d cases\n", tally->cases);
    for (int kind = 0; kind < KINDS; kind++)
        print_summary(kind_names[kind], summarise(tally, kind));
    const struct summary all = summarise(tally, KINDS);
    print_summary("all", all);
    return (double)all.inside >= INSIDE_TARGET * (double)all.count &&
           all.median <= MEDIAN_TARGET;
}

void honesty_tally_free(struct honesty_tally *tally)
{
    mem_free(tally->results);
    memset(tally, 0, sizeof *tally);
}
