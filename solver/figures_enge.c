/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Enge functions of both ends of both fields. The samples stand at fixed shares of a
 * range in gaps, counted from the effective edge of the same grid, and are taken from the
 * plane itself, not from the samples of the path: everything then moves smoothly from
 * grid to grid and the coefficients converge as the field does. */

#include <math.h>
#include <stdio.h>

#include "solver/enge.h"
#include "solver/figure_maker.h"
#include "solver/fringe.h"

enum { SAMPLES = 201, NOTE_SIZE = 320 };

#define INNER_MOST  2.0  /* gaps inside the edge: the field is full within 4e-6 there */
#define INNER_LEAST 0.5  /* a reference point nearer to the edge is no inside */
#define FLOOR       1e-3 /* the range ends where the field falls below this share */
#define LEFT_MOST   0.2 /* a field that has not fallen to this has no end on the path */

/* One end of one field. */
struct end {
    enum plane_kind kind;
    int outward; /* along z: -1 entrance, 1 exit */
    struct figure_key error, term;
};

static const struct end ENDS[] = {
    {PLANE_ELECTRIC_ALONG,
     -1,
     {"enge_error_electric_entrance", "Enge function of E_x, entrance: largest error",
      "1", 1.0},
     {"enge_electric_entrance", "Enge coefficient of E_x, entrance", "1", 1.0}},
    {PLANE_ELECTRIC_ALONG,
     1,
     {"enge_error_electric_exit", "Enge function of E_x, exit: largest error", "1",
      1.0},
     {"enge_electric_exit", "Enge coefficient of E_x, exit", "1", 1.0}},
    {PLANE_MAGNETIC_ALONG,
     -1,
     {"enge_error_magnetic_entrance", "Enge function of B_y, entrance: largest error",
      "1", 1.0},
     {"enge_magnetic_entrance", "Enge coefficient of B_y, entrance", "1", 1.0}},
    {PLANE_MAGNETIC_ALONG,
     1,
     {"enge_error_magnetic_exit", "Enge function of B_y, exit: largest error", "1",
      1.0},
     {"enge_magnetic_exit", "Enge coefficient of B_y, exit", "1", 1.0}},
};

/* What the fit of one end is made over. */
struct fit_range {
    double gap;   /* m */
    double edge;  /* m, z of s = 0 */
    double inner; /* gaps, s from -inner to outer */
    double outer;
};

/* Distance (m) outward from the edge at which the field has fallen to the floor, or to
 * the end of the path; *left is |F| there. */
static double reach(const struct path *path, const double *f, double centre,
                    double edge, int outward, double *left)
{
    const int end = outward > 0 ? PATH_POINTS - 1 : 0;
    double before = 1.0;
    *left = before;
    for (int k = PATH_POINTS - 1 - end; k != end + outward; k += outward) {
        const double distance = outward * (path->z[k] - edge);
        *left = fabs(f[k] / centre);
        if (distance > 0.0 && *left < FLOOR)
            return distance -
                   path->step *
                       (before > FLOOR ? (FLOOR - *left) / (before - *left) : 0.0);
        before = *left;
    }
    return outward * (path->z[end] - edge);
}

/* The range of an end; what is lacking, or NULL. */
static const char *find_range(const struct view *view, const struct path *path,
                              const struct end *end, struct fit_range *range)
{
    const struct geometry *g = view->geometry;
    const bool electric = end->kind == PLANE_ELECTRIC_ALONG;
    const double *f = electric ? path->e_x[0] : path->b_y[0];
    const double centre = electric ? path->e_centre : path->b_centre;
    double left;
    if (f == NULL)
        return electric ? "needs electric_along" : "needs magnetic_along";
    if (centre == 0.0)
        return "the field at the reference point is zero";
    if (!fringe_gap(&g->planes[end->kind], g->reference_z,
                    electric ? g->reference_x : g->reference_y, &range->gap))
        return "no part above and below the reference point sets a gap";
    const struct fringe fringe = fringe_of(path, f, centre, g->reference_z, range->gap);
    range->edge = end->outward < 0 ? fringe.entrance : fringe.exit;
    range->inner =
        fmin(INNER_MOST, end->outward * (range->edge - g->reference_z) / range->gap);
    range->outer =
        reach(path, f, centre, range->edge, end->outward, &left) / range->gap;
    if (left > LEFT_MOST)
        return "the path ends before the field has fallen off";
    if (range->inner < INNER_LEAST)
        return "the effective edge is within half a gap of the reference point";
    return NULL;
}

static enum status fit_end(const struct view *view, const struct path *path,
                           const struct end *end, const struct fit_range *range,
                           struct enge *fit)
{
    const double centre =
        end->kind == PLANE_ELECTRIC_ALONG ? path->e_centre : path->b_centre;
    double s[SAMPLES], f[SAMPLES];
    enum status status = STATUS_OK;
    for (int k = 0; k < SAMPLES && status == STATUS_OK; k++) {
        double field[2];
        s[k] = -range->inner + (range->inner + range->outer) * k / (SAMPLES - 1);
        const double z = range->edge + end->outward * s[k] * range->gap;
        const double low = path->z[0], high = path->z[PATH_POINTS - 1];
        status = plane_field(view->planes[end->kind],
                             (struct vec2){fmin(fmax(z, low), high), 0.0}, field, NULL);
        f[k] = field[1] / centre;
    }
    return status == STATUS_OK ? enge_fit(s, f, SAMPLES, fit) : status;
}

static void describe(const struct fit_range *range, const struct enge *fit, char *note,
                     size_t size)
{
    (void)snprintf(
        note, size,
        "s = %.3g to %.3g gaps of %.6g mm outward from the effective edge, z "
        "= %.5g mm; %d coefficients%s; rms error %.2g, largest at s = %.2g",
        -range->inner, range->outer, range->gap * 1e3, range->edge * 1e3, fit->terms,
        fit->terms < ENGE_TERMS ? ", as with more the leading one is negative" : "",
        fit->rms, fit->largest_at);
}

static void add_end(struct maker *maker, const struct end *end, const struct enge *fit,
                    const char *note, const char *lack)
{
    static const char *const subjects[ENGE_TERMS] = {"a0", "a1", "a2",
                                                     "a3", "a4", "a5"};
    maker_add_or_miss(maker, end->error, fit->largest, NULL, note, lack);
    for (int n = 0; n < ENGE_TERMS; n++) {
        const char *const left_out =
            lack == NULL && n >= fit->terms
                ? "left out: with it the leading coefficient would be negative"
                : lack;
        maker_add_or_miss(maker, end->term, fit->a[n], subjects[n], NULL, left_out);
    }
}

enum status figures_enge(const struct view *view, const struct path *path,
                         struct figures *figures)
{
    struct maker maker = {figures, FIGURE_ALONG, 0, STATUS_OK};
    for (size_t k = 0; k < sizeof ENDS / sizeof *ENDS && maker.status == STATUS_OK;
         k++) {
        struct fit_range range = {0};
        struct enge fit = {0};
        char note[NOTE_SIZE] = "";
        const char *lack = find_range(view, path, &ENDS[k], &range);
        enum status status = STATUS_OK;
        if (lack == NULL)
            status = fit_end(view, path, &ENDS[k], &range, &fit);
        if (status == STATUS_UNTRUSTED)
            lack = "no Enge function that falls off outward fits this end";
        else if (status != STATUS_OK)
            return status;
        describe(&range, &fit, note, sizeof note);
        maker.planes = plane_bit(ENDS[k].kind);
        add_end(&maker, &ENDS[k], &fit, note, lack);
    }
    return maker.status;
}
