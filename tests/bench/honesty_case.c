/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "tests/bench/honesty_case.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

#include "shared/constants.h"
#include "shared/mem.h"
#include "solver/plane_solution.h"
#include "solver/run.h"
#include "tests/support/scene.h"

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

void honesty_sides(struct plane *plane, const enum side_index *sides, size_t count,
                   enum side_kind kind)
{
    for (size_t k = 0; k < count; k++)
        plane->sides[sides[k]].kind = kind;
}

struct part *honesty_insulate(struct part *part, double permittivity)
{
    part->kind = PART_INSULATOR;
    part->permittivity = permittivity;
    return part;
}

struct part *honesty_float(struct part *part, double charge)
{
    part->kind = PART_FLOATING;
    part->charge = charge;
    return part;
}

void honesty_expect(struct honesty_case *c, struct honesty_figure figure)
{
    if (c->count == HONESTY_FIGURES)
        honesty_must(STATUS_SIZE, c->name);
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

/* From the solver's fluxes to charges (or magnetic fluxes) of the hardware. */
static double charge_factor(const struct honesty_case *c)
{
    return plane_depth(c->kind) * (plane_kind_is_magnetic(c->kind)
                                       ? VACUUM_PERMEABILITY
                                       : VACUUM_PERMITTIVITY);
}

void honesty_expect_flux(struct honesty_case *c, size_t part, double exact)
{
    honesty_expect(c, (struct honesty_figure){.kind = HONESTY_CHARGE,
                                              .part = part,
                                              .exact = charge_factor(c) * exact});
}

void honesty_expect_capacitance(struct honesty_case *c, size_t part, double exact)
{
    honesty_expect(c, (struct honesty_figure){.kind = HONESTY_CAPACITANCE,
                                              .part = part,
                                              .exact = charge_factor(c) * exact});
}

void honesty_expect_matrix(struct honesty_case *c, size_t part, size_t other,
                           double exact)
{
    honesty_expect(c, (struct honesty_figure){.kind = HONESTY_MATRIX,
                                              .part = part,
                                              .other = other,
                                              .exact = charge_factor(c) * exact});
}

void honesty_expect_force(struct honesty_case *c, size_t part, struct vec2 exact)
{
    struct honesty_figure f = {
        .kind = HONESTY_FORCE_A, .part = part, .exact = charge_factor(c) * exact.a};
    if (exact.a != 0.0)
        honesty_expect(c, f);
    f.kind = HONESTY_FORCE_B;
    f.exact = charge_factor(c) * exact.b;
    if (exact.b != 0.0)
        honesty_expect(c, f);
}

static bool is_point(const struct honesty_figure *f)
{
    return f->kind <= HONESTY_FIELD_B;
}

/* A probe for every figure at a point, so that readings are found by counting. */
static void add_probes(struct honesty_case *c)
{
    struct geometry *g = &c->geometry;
    g->probes = MEM_NEW((size_t)c->count, struct probe);
    honesty_must(g->probes != NULL ? STATUS_OK : STATUS_MEMORY, "probes");
    for (int k = 0; k < c->count; k++) {
        const struct honesty_figure *f = &c->figures[k];
        if (!is_point(f))
            continue;
        struct probe *probe = &g->probes[g->probe_count++];
        *probe = (struct probe){.has_plane = true, .plane = c->kind};
        double *place[] = {[AXIS_X] = &probe->x,
                           [AXIS_Y] = &probe->y,
                           [AXIS_Z] = &probe->z,
                           [AXIS_R] = &probe->x};
        *place[plane_kind_axis(c->kind, 0)] = f->at.a;
        *place[plane_kind_axis(c->kind, 1)] = f->at.b;
    }
}

/* The figure of the program; magnetic: in the list as that of the B field. */
static const char *figure_name(const struct honesty_case *c, enum honesty_kind kind)
{
    static const char *const names[HONESTY_KINDS][2] = {
        [HONESTY_CHARGE] = {"charge", "flux"},
        [HONESTY_CAPACITANCE] = {"capacitance", NULL},
        [HONESTY_MATRIX] = {"capacitance_matrix", NULL},
        [HONESTY_FOUND] = {"potential", NULL},
        [HONESTY_PEAK] = {"surface_field", NULL},
        [HONESTY_CREEP] = {"insulator_field", NULL},
        [HONESTY_LENGTH] = {"effective_length_electric", "effective_length_magnetic"},
        [HONESTY_EXIT] = {"edge_exit_electric", "edge_exit_magnetic"},
        [HONESTY_FRINGE_K] = {"fringe_integral_exit_electric",
                              "fringe_integral_exit_magnetic"}};
    static const char *const forces[] = {
        [AXIS_X] = "force_x", [AXIS_Y] = "force_y", [AXIS_Z] = "force_z"};
    if (kind == HONESTY_FORCE_A || kind == HONESTY_FORCE_B)
        return forces[plane_kind_axis(c->kind, kind == HONESTY_FORCE_B)];
    return names[kind][plane_kind_is_magnetic(c->kind)];
}

static const struct figure *figure_of(const struct honesty_case *c,
                                      const struct honesty_figure *f,
                                      const struct figures *figures)
{
    const struct part *parts = c->geometry.planes[c->kind].parts;
    char subject[2 * HONESTY_NAME] = "";
    if (f->kind == HONESTY_MATRIX)
        (void)snprintf(subject, sizeof subject, "%s, %s", parts[f->part].name,
                       parts[f->other].name);
    else if (f->kind < HONESTY_LENGTH)
        (void)snprintf(subject, sizeof subject, "%s", parts[f->part].name);
    const struct figure *figure = figures_find(figures, figure_name(c, f->kind),
                                               subject[0] != '\0' ? subject : NULL);
    if (figure == NULL || figure->state == FIGURE_MISSING) {
        (void)fprintf(stderr, "bench_honesty: %s: no %s %s\n", c->name,
                      figure_name(c, f->kind), subject);
        exit(EXIT_FAILURE);
    }
    return figure;
}

static struct honesty_result result_of_point(const struct honesty_figure *f,
                                             const struct probe_reading *p)
{
    struct honesty_result r = {.settled = true};
    const int b = f->kind == HONESTY_FIELD_B;
    r.value = f->kind == HONESTY_POTENTIAL ? p->potential : p->field[b];
    r.uncertainty = f->kind == HONESTY_POTENTIAL ? p->potential_err : p->field_err[b];
    return r;
}

static struct honesty_result result_of_figure(const struct figure *figure)
{
    return (struct honesty_result){.value = figure->value,
                                   .uncertainty = figure->uncertainty,
                                   .settled = figure->state == FIGURE_GOOD};
}

/* What the grids gave, which probe readings do not keep. */
static void solve_points(const struct honesty_case *c,
                         const struct honesty_tally *tally,
                         double (*values)[RESULT_LEVELS_MAX])
{
    for (int l = 0; l < tally->levels; l++) {
        struct plane_solution s;
        honesty_must(
            plane_solve(&c->geometry, c->kind,
                        &(struct grid_request){.fineness = tally->fineness, .level = l},
                        &s, NULL),
            c->name);
        for (int k = 0; k < c->count; k++) {
            const struct honesty_figure *f = &c->figures[k];
            struct field_value v;
            if (!is_point(f))
                continue;
            honesty_must(field_at(s.field, f->at, &v), c->name);
            const double slope =
                f->kind == HONESTY_FIELD_A ? v.gradient.a : v.gradient.b;
            values[k][l] = f->kind == HONESTY_POTENTIAL
                               ? v.potential
                               : plane_field_factor(c->kind) * slope;
        }
        plane_solution_free(&s);
    }
}

static void write_raw(const struct honesty_case *c, const struct honesty_tally *tally,
                      const struct figures *figures)
{
    double values[HONESTY_FIGURES][RESULT_LEVELS_MAX] = {{0.0}};
    const struct honesty_result *r = &tally->results[tally->count - (size_t)c->count];
    solve_points(c, tally, values);
    for (int k = 0; k < c->count; k++, r++) {
        const struct honesty_figure *f = &c->figures[k];
        const struct figure *figure = is_point(f) ? NULL : figure_of(c, f, figures);
        (void)fprintf(tally->raw, "%s;%s;%s;%.6g;%.6g;%.17g;%.17g;%.17g;%.17g",
                      tally->families[r->family], c->name, honesty_kind_name(f->kind),
                      f->at.a, f->at.b, f->exact, r->value, r->uncertainty,
                      figure != NULL ? figure->scale : 0.0);
        for (int l = 0; l < tally->levels; l++)
            (void)fprintf(tally->raw, ";%.17g",
                          figure != NULL ? figure->grids[l] : values[k][l]);
        (void)fprintf(tally->raw, "\n");
    }
}

static void tally_all(const struct honesty_case *c, const struct result *result,
                      struct honesty_tally *tally)
{
    size_t probe = 0;
    for (int k = 0; k < c->count; k++) {
        const struct honesty_figure *f = &c->figures[k];
        struct honesty_result r =
            is_point(f) ? result_of_point(f, &result->probes[probe++])
                        : result_of_figure(figure_of(c, f, &result->figures));
        memcpy(r.case_name, c->name, sizeof r.case_name);
        r.kind = f->kind;
        r.at = f->at;
        r.exact = f->exact;
        honesty_add(tally, &r);
    }
    if (tally->raw != NULL)
        write_raw(c, tally, &result->figures);
}

void honesty_run(struct honesty_case *c, struct honesty_tally *tally)
{
    struct result result;
    struct messages messages = {0};
    const struct run_options options = {.fineness = tally->fineness,
                                        .levels = tally->levels};
    add_probes(c);
    const enum status status = run_geometry(&c->geometry, &options, &result, &messages);
    for (size_t k = 0; k < messages.count; k++)
        (void)fprintf(stderr, "  %s\n", messages.items[k].text);
    honesty_must(status, c->name);
    if (result.probe_count != c->geometry.probe_count)
        honesty_must(STATUS_SIZE, c->name);
    honesty_count_case(tally);
    printf("%d %s, %d unknowns\n", tally->cases, c->name,
           result.planes[c->kind].quality[tally->levels - 1].unknowns);
    tally_all(c, &result, tally);
    messages_free(&messages);
    result_free(&result);
    geometry_free(&c->geometry);
}
