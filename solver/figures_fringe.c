/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Lengths and edges of the two fields and how they differ. A length is always given
 * with its limits and the field left at them: without clamps it depends on them. */

#include <math.h>
#include <stdio.h>

#include "solver/figure_maker.h"
#include "solver/fringe.h"
#include "solver/ratio.h"

enum { NOTE_SIZE = 160 };

/* The names of one field's figures. */
struct fringe_names {
    struct figure_key length, entrance, exit, k_entrance, k_exit;
};

static const struct fringe_names ELECTRIC = {

    {"effective_length_electric", "effective length of E_x", "m", 0.0},
    {"edge_entrance_electric", "effective entrance edge of E_x", "m", 0.0},
    {"edge_exit_electric", "effective exit edge of E_x", "m", 0.0},
    {"fringe_integral_entrance_electric", "fringe integral K of E_x, entrance", "1",
     1.0},
    {"fringe_integral_exit_electric", "fringe integral K of E_x, exit", "1", 1.0}};

static const struct fringe_names MAGNETIC = {

    {"effective_length_magnetic", "effective length of B_y", "m", 0.0},
    {"edge_entrance_magnetic", "effective entrance edge of B_y", "m", 0.0},
    {"edge_exit_magnetic", "effective exit edge of B_y", "m", 0.0},
    {"fringe_integral_entrance_magnetic", "fringe integral K of B_y, entrance", "1",
     1.0},
    {"fringe_integral_exit_magnetic", "fringe integral K of B_y, exit", "1", 1.0}};

static void add_fringe(struct maker *maker, const struct fringe_names *names,
                       const struct path *path, const struct fringe *fringe, double gap,
                       const char *lack)
{
    char limits[NOTE_SIZE], gap_note[NOTE_SIZE];
    const char *const lack_gap =
        lack != NULL ? lack
        : gap > 0.0  ? NULL
                     : "no part above and below the reference point sets a gap";
    (void)snprintf(limits, sizeof limits,
                   "z = %.6g to %.6g mm; field left there %.2g and %.2g of centre",
                   path->z[0] * 1e3, path->z[PATH_POINTS - 1] * 1e3,
                   fringe->leftover_from, fringe->leftover_to);
    (void)snprintf(gap_note, sizeof gap_note, "gap %.6g mm", gap * 1e3);
    maker_add_or_miss(maker, names->length, fringe->length, NULL, limits, lack);
    struct figure_key entrance = names->entrance, leaving = names->exit;
    entrance.scale = leaving.scale = fringe->length; /* an edge may stand at z = 0 */
    maker_add_or_miss(maker, entrance, fringe->entrance, NULL, NULL, lack);
    maker_add_or_miss(maker, leaving, fringe->exit, NULL, NULL, lack);
    maker_add_or_miss(maker, names->k_entrance, fringe->k_entrance, NULL, gap_note,
                      lack_gap);
    maker_add_or_miss(maker, names->k_exit, fringe->k_exit, NULL, gap_note, lack_gap);
}

static struct fringe one_field(struct maker *maker, const struct fringe_names *names,
                               const struct view *view, const struct path *path,
                               enum plane_kind kind, const double *f, double centre)
{
    const struct geometry *g = view->geometry;
    const bool electric = kind == PLANE_ELECTRIC_ALONG;
    struct fringe fringe = {0};
    double gap = 0.0;
    const char *lack = NULL;
    maker->planes = plane_bit(kind);
    if (f == NULL)
        lack = electric ? "needs electric_along" : "needs magnetic_along";
    else if (centre == 0.0)
        lack = "the field at the reference point is zero";
    if (lack == NULL) {
        (void)fringe_gap(&g->planes[kind], g->reference_z,
                         electric ? g->reference_x : g->reference_y, &gap);
        fringe = fringe_of(path, f, centre, g->reference_z, gap);
    }
    add_fringe(maker, names, path, &fringe, gap, lack);
    return fringe;
}

/* Half the integral of |F_E - F_B|: the length over which the wrong force acts. */
static double shape_mismatch(const struct path *path)
{
    double difference[PATH_POINTS];
    for (int k = 0; k < PATH_POINTS; k++)
        difference[k] =
            fabs(path->e_x[0][k] / path->e_centre - path->b_y[0][k] / path->b_centre);
    return 0.5 * path_integral(path, difference, 0, PATH_POINTS - 1);
}

static void add_mismatch(struct maker *maker, const struct path *path,
                         const struct fringe *e, const struct fringe *b)
{
    const char *const lack = ratio_is_available(path)
                                 ? NULL
                                 : "needs both electric_along and magnetic_along";
    const double shape = lack == NULL ? shape_mismatch(path) : 0.0;
    maker->planes = plane_bit(PLANE_ELECTRIC_ALONG) | plane_bit(PLANE_MAGNETIC_ALONG);
    maker_add_or_miss(maker,
                      (struct figure_key){"length_mismatch",
                                          "length mismatch L_E - L_B", "m", e->length},
                      e->length - b->length, NULL, NULL, lack);
    maker_add_or_miss(maker,
                      (struct figure_key){"entrance_mismatch",
                                          "E reaches further out, entrance", "m",
                                          e->length},
                      b->entrance - e->entrance, NULL, NULL, lack);
    maker_add_or_miss(maker,
                      (struct figure_key){"exit_mismatch",
                                          "E reaches further out, exit", "m",
                                          e->length},
                      e->exit - b->exit, NULL, NULL, lack);
    maker_add_or_miss(
        maker,
        (struct figure_key){"shape_mismatch",
                            "shape mismatch, half integral |F_E - F_B| dz", "m",
                            e->length},
        shape, NULL, NULL, lack);
}

enum status figures_fringe(const struct view *view, const struct path *path,
                           struct figures *figures)
{
    struct maker maker = {figures, FIGURE_ALONG, 0, STATUS_OK};
    const struct fringe e =
        one_field(&maker, &ELECTRIC, view, path, PLANE_ELECTRIC_ALONG, path->e_x[0],
                  path->e_centre);
    const struct fringe b =
        one_field(&maker, &MAGNETIC, view, path, PLANE_MAGNETIC_ALONG, path->b_y[0],
                  path->b_centre);
    add_mismatch(&maker, path, &e, &b);
    return maker.status;
}
