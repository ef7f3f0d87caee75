/* SPDX-License-Identifier: GPL-3.0-or-later */

/* A plane knows two of the three axes: its field is computed once on the two-dimensional
 * lattice of those axes and spread along the third. Its uncertainty is not spread: a large
 * lattice holds its fields only. */

#include "solver/lattice_field.h"

#include <assert.h>
#include <math.h>
#include <string.h>

#include "shared/mem.h"
#include "solver/family.h"

/* Two components on the plane's own lattice [nb*na]. */
struct sheet {
    double *field[2];
    double *uncertainty[2]; /* of the combined sheet only, else NULL */
    unsigned char *solid;
};

static double coordinate(const struct lattice_axis *axis, int k)
{
    return k == axis->count - 1 ? axis->to : axis->from + k * axis->step;
}

static void sheet_free(struct sheet *sheet)
{
    mem_free(sheet->field[0]);
    mem_free(sheet->field[1]);
    mem_free(sheet->uncertainty[0]);
    mem_free(sheet->uncertainty[1]);
    mem_free(sheet->solid);
    memset(sheet, 0, sizeof *sheet);
}

static enum status sheet_new(struct sheet *sheet, size_t n)
{
    memset(sheet, 0, sizeof *sheet);
    sheet->field[0] = MEM_NEW(n, double);
    sheet->field[1] = MEM_NEW(n, double);
    sheet->solid = MEM_NEW(n, unsigned char);
    return sheet->field[0] != NULL && sheet->field[1] != NULL && sheet->solid != NULL
               ? STATUS_OK
               : STATUS_MEMORY;
}

static enum status sheet_sample(const struct plane_solution *plane,
                                const struct lattice *lattice, struct sheet *sheet)
{
    const enum plane_kind kind = plane->plane->kind;
    const struct lattice_axis *a = &lattice->axes[plane_kind_axis(kind, 0)];
    const struct lattice_axis *b = &lattice->axes[plane_kind_axis(kind, 1)];
    size_t n = 0;
    for (int j = 0; j < b->count; j++)
        for (int i = 0; i < a->count; i++, n++) {
            const struct vec2 at = {coordinate(a, i), coordinate(b, j)};
            double field[2];
            int part;
            enum status status = plane_field(plane, at, field, &part);
            if (status != STATUS_OK)
                return status;
            sheet->field[0][n] = field[0];
            sheet->field[1][n] = field[1];
            sheet->solid[n] = part >= 0;
        }
    return STATUS_OK;
}

static enum status sheet_new_combined(struct sheet *sheet, size_t n)
{
    enum status status = sheet_new(sheet, n);
    sheet->uncertainty[0] = MEM_NEW(n, double);
    sheet->uncertainty[1] = MEM_NEW(n, double);
    return status == STATUS_OK && sheet->uncertainty[0] != NULL &&
                   sheet->uncertainty[1] != NULL
               ? STATUS_OK
               : STATUS_MEMORY;
}

static double largest(const struct sheet *sheet, size_t n)
{
    double size = 0.0;
    for (size_t k = 0; k < n; k++)
        size = fmax(size, fmax(fabs(sheet->field[0][k]), fabs(sheet->field[1][k])));
    return size;
}

static void sheet_combine(const struct sheet *levels, int count, size_t n,
                          struct sheet *best)
{
    assert(count >= 1);
    const double scale = largest(&levels[0], n);
    const double *parts[RESULT_LEVELS_MAX];
    memcpy(best->solid, levels[count - 1].solid, n);
    for (int c = 0; c < 2; c++) {
        for (int l = 0; l < count; l++)
            parts[l] = levels[l].field[c];
        family_array(parts, count, n, scale, best->field[c], best->uncertainty[c]);
        for (size_t k = 0; k < n; k++) /* the 0 inside a part is exact */
            if (best->solid[k])
                best->uncertainty[c][k] = 0.0;
    }
}

static size_t sheet_points(const struct lattice *lattice, enum plane_kind kind)
{
    return (size_t)lattice->axes[plane_kind_axis(kind, 0)].count *
           (size_t)lattice->axes[plane_kind_axis(kind, 1)].count;
}

static enum status sheet_of_plane(const struct view *views, int count,
                                  enum plane_kind kind, struct sheet *best)
{
    const struct lattice *lattice = &views[0].geometry->lattice;
    const size_t n = sheet_points(lattice, kind);
    struct sheet levels[RESULT_LEVELS_MAX];
    memset(levels, 0, sizeof levels);
    enum status status = sheet_new_combined(best, n);
    for (int l = 0; l < count && status == STATUS_OK; l++) {
        status = sheet_new(&levels[l], n);
        if (status == STATUS_OK)
            status = sheet_sample(views[l].planes[kind], lattice, &levels[l]);
    }
    if (status == STATUS_OK)
        sheet_combine(levels, count, n, best);
    for (int l = 0; l < count; l++)
        sheet_free(&levels[l]);
    return status;
}

size_t lattice_sheet_index(const struct lattice_field *lattice, enum plane_kind kind,
                           const int k[3])
{
    const enum axis first = plane_kind_axis(kind, 0), second = plane_kind_axis(kind, 1);
    return (size_t)k[second] * (size_t)lattice->n[first] + (size_t)k[first];
}

/* Spreads a sheet over the third axis into three components and the solid mask. */
static void spread(const struct lattice_field *lattice, enum plane_kind kind,
                   const struct sheet *sheet, double *out[3])
{
    const enum axis first = plane_kind_axis(kind, 0), second = plane_kind_axis(kind, 1);
    size_t n = 0;
    int k[3];
    for (k[AXIS_Z] = 0; k[AXIS_Z] < lattice->n[AXIS_Z]; k[AXIS_Z]++)
        for (k[AXIS_Y] = 0; k[AXIS_Y] < lattice->n[AXIS_Y]; k[AXIS_Y]++)
            for (k[AXIS_X] = 0; k[AXIS_X] < lattice->n[AXIS_X]; k[AXIS_X]++, n++) {
                const size_t from = lattice_sheet_index(lattice, kind, k);
                out[first][n] = sheet->field[0][from];
                out[second][n] = sheet->field[1][from];
                lattice->solid[n] |= sheet->solid[from];
            }
}

static enum status fill_from(const struct view *views, int count, enum plane_kind kind,
                             struct lattice_field *lattice, double *out[3],
                             double *uncertainty[2])
{
    const size_t n =
        (size_t)lattice->n[0] * (size_t)lattice->n[1] * (size_t)lattice->n[2];
    struct sheet sheet = {.solid = NULL};
    for (int c = 0; c < 3; c++) {
        out[c] = MEM_NEW(n, double);
        if (out[c] == NULL)
            return STATUS_MEMORY;
    }
    enum status status = sheet_of_plane(views, count, kind, &sheet);
    if (status == STATUS_OK) {
        spread(lattice, kind, &sheet, out);
        for (int c = 0; c < 2; c++) {
            uncertainty[c] = sheet.uncertainty[c];
            sheet.uncertainty[c] = NULL;
        }
    }
    sheet_free(&sheet);
    return status;
}

/* The plane to take a field from: along where present, else across. */
static bool choose(const struct view *view, bool magnetic, enum plane_kind *kind)
{
    const enum plane_kind along =
        magnetic ? PLANE_MAGNETIC_ALONG : PLANE_ELECTRIC_ALONG;
    const enum plane_kind across =
        magnetic ? PLANE_MAGNETIC_ACROSS : PLANE_ELECTRIC_ACROSS;
    *kind = view->planes[along] != NULL ? along : across;
    return view->planes[*kind] != NULL;
}

static enum status lattice_open(const struct lattice *from, struct lattice_field *to)
{
    for (int k = 0; k < 3; k++) {
        to->n[k] = from->axes[k].count;
        to->origin[k] = from->axes[k].from;
        to->step[k] = from->axes[k].step;
    }
    to->solid =
        MEM_NEW((size_t)to->n[0] * (size_t)to->n[1] * (size_t)to->n[2], unsigned char);
    return to->solid != NULL ? STATUS_OK : STATUS_MEMORY;
}

enum status lattice_fill(const struct view *views, int count,
                         struct lattice_field *lattice)
{
    memset(lattice, 0, sizeof *lattice);
    if (!views[0].geometry->lattice.present)
        return STATUS_OK;
    enum status status = lattice_open(&views[0].geometry->lattice, lattice);
    lattice->has_electric = choose(&views[0], false, &lattice->electric_from);
    lattice->has_magnetic = choose(&views[0], true, &lattice->magnetic_from);
    if (status == STATUS_OK && lattice->has_electric)
        status = fill_from(views, count, lattice->electric_from, lattice, lattice->e,
                           lattice->e_err);
    if (status == STATUS_OK && lattice->has_magnetic)
        status = fill_from(views, count, lattice->magnetic_from, lattice, lattice->b,
                           lattice->b_err);
    if (status == STATUS_OK)
        lattice->present = true;
    return status;
}

/* Widens the uncertainties of one plane, if its test is done. */
static enum status widen(const struct view pair[2], enum plane_kind kind,
                         const struct open_test *test, double *const uncertainty[2])
{
    const struct lattice *lattice = &pair[0].geometry->lattice;
    const size_t n = sheet_points(lattice, kind);
    struct sheet sheets[2] = {{.solid = NULL}, {.solid = NULL}};
    enum status status = STATUS_OK;
    if (!test->done)
        return STATUS_OK;
    for (int l = 0; l < 2 && status == STATUS_OK; l++) {
        status = sheet_new(&sheets[l], n);
        if (status == STATUS_OK)
            status = sheet_sample(pair[l].planes[kind], lattice, &sheets[l]);
    }
    for (int c = 0; c < 2 && status == STATUS_OK; c++)
        for (size_t k = 0; k < n; k++)
            uncertainty[c][k] +=
                test->factor * fabs(sheets[1].field[c][k] - sheets[0].field[c][k]);
    sheet_free(&sheets[0]);
    sheet_free(&sheets[1]);
    return status;
}

enum status lattice_widen(const struct view pair[2], const struct plane_result *planes,
                          struct lattice_field *lattice)
{
    enum status status = STATUS_OK;
    if (lattice->present && lattice->has_electric)
        status = widen(pair, lattice->electric_from,
                       &planes[lattice->electric_from].open, lattice->e_err);
    if (status == STATUS_OK && lattice->present && lattice->has_magnetic)
        status = widen(pair, lattice->magnetic_from,
                       &planes[lattice->magnetic_from].open, lattice->b_err);
    return status;
}

void lattice_free(struct lattice_field *lattice)
{
    for (int c = 0; c < 3; c++) {
        mem_free(lattice->e[c]);
        mem_free(lattice->b[c]);
    }
    for (int c = 0; c < 2; c++) {
        mem_free(lattice->e_err[c]);
        mem_free(lattice->b_err[c]);
    }
    mem_free(lattice->solid);
    memset(lattice, 0, sizeof *lattice);
}
