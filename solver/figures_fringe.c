/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Lengths and edges of the two fields and how they differ. A length is always given
 * with its limits and the field left at them, and is unsettled where what the field
 * beyond them would add (fringe.h) is more than TAIL_SHARE of it: without clamps a field
 * falls as 1/x and its length grows with the limits for ever. */

#include <math.h>
#include <stdio.h>
#include <string.h>

#include "solver/figure_maker.h"
#include "solver/fringe.h"
#include "solver/ratio.h"

enum { NOTE_SIZE = 320 };

/* Ends of the path. */
enum { FROM = 1, TO = 2, BOTH = FROM | TO };

/* A tail of this share of the length (of the gap, for the fringe integral) is no longer
 * small print: a thousandth of the length is what tells masses 1 in 250 apart. */
#define TAIL_SHARE 1e-3

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

/* The ends whose tail is more than allowed. */
static unsigned tails(const struct fringe *f, double allowed)
{
    return (f->tail_from > allowed ? (unsigned)FROM : 0) |
           (f->tail_to > allowed ? (unsigned)TO : 0);
}

static unsigned insides(const struct fringe *f)
{
    return (f->inside_from ? (unsigned)FROM : 0) | (f->inside_to ? (unsigned)TO : 0);
}

/* Ends on which the length depends. One end may be set inside the field, as in half a
 * model; the length is then that of the rest. */
static unsigned length_ends(const struct fringe *f)
{
    return insides(f) == BOTH ? (unsigned)BOTH : tails(f, TAIL_SHARE * f->length);
}

/* What is left at the ends a figure depends on. */
static void say_ends(const struct path *path, const struct fringe *f, unsigned ends,
                     char *text, size_t size)
{
    const double from = path->z[0] * 1e3, to = path->z[PATH_POINTS - 1] * 1e3;
    const double left_from = 100.0 * f->leftover_from, left_to = 100.0 * f->leftover_to;
    if (ends == BOTH)
        (void)snprintf(text, size,
                       "depends on its limits: %.3g %% and %.3g %% of the centre field "
                       "are left at z = %.6g and %.6g mm",
                       left_from, left_to, from, to);
    else
        (void)snprintf(
            text, size,
            "depends on its limits: %.3g %% of the centre field is left at z "
            "= %.6g mm",
            ends == FROM ? left_from : left_to, ends == FROM ? from : to);
}

/* Adds a figure that depends on `ends` (0: settled); note may be NULL. */
static void add_one(struct maker *maker, struct figure_key key, double value,
                    const char *note, const struct path *path, const struct fringe *f,
                    unsigned ends)
{
    char text[2 * NOTE_SIZE];
    if (ends == 0) {
        maker_add(maker, key, value, NULL, note);
        return;
    }
    say_ends(path, f, ends, text, NOTE_SIZE);
    if (note != NULL) {
        const size_t used = strlen(text);
        (void)snprintf(text + used, sizeof text - used, "; %s", note);
    }
    maker_add_unsettled(maker, key, value, NULL, text);
}

static void add_length(struct maker *maker, struct figure_key key,
                       const struct path *path, const struct fringe *f)
{
    char note[NOTE_SIZE];
    (void)snprintf(note, sizeof note,
                   "z = %.6g to %.6g mm; field left there %.2g and %.2g of centre%s%s",
                   path->z[0] * 1e3, path->z[PATH_POINTS - 1] * 1e3, f->leftover_from,
                   f->leftover_to, f->inside_from ? "; begins inside the field" : "",
                   f->inside_to ? "; ends inside the field" : "");
    add_one(maker, key, f->length, note, path, f, length_ends(f));
}

static void add_edge(struct maker *maker, struct figure_key key,
                     const struct path *path, const struct fringe *f, unsigned end)
{
    key.scale = f->length; /* an edge may stand at z = 0 */
    add_one(maker, key, end == FROM ? f->entrance : f->exit, NULL, path, f,
            end & (insides(f) | tails(f, TAIL_SHARE * f->length)));
}

static void add_integral(struct maker *maker, struct figure_key key,
                         const struct path *path, const struct fringe *f, unsigned end,
                         double gap)
{
    char note[NOTE_SIZE];
    (void)snprintf(note, sizeof note, "gap %.6g mm", gap * 1e3);
    if (gap > 0.0)
        add_one(maker, key, end == FROM ? f->k_entrance : f->k_exit, note, path, f,
                end & (insides(f) | tails(f, TAIL_SHARE * gap)));
    else
        maker_miss(maker, key, NULL,
                   "no part above and below the reference point sets a gap");
}

static void add_fringe(struct maker *maker, const struct fringe_names *names,
                       const struct path *path, const struct fringe *fringe, double gap)
{
    add_length(maker, names->length, path, fringe);
    add_edge(maker, names->entrance, path, fringe, FROM);
    add_edge(maker, names->exit, path, fringe, TO);
    add_integral(maker, names->k_entrance, path, fringe, FROM, gap);
    add_integral(maker, names->k_exit, path, fringe, TO, gap);
}

static void miss_fringe(struct maker *maker, const struct fringe_names *names,
                        const char *lack)
{
    maker_miss(maker, names->length, NULL, lack);
    maker_miss(maker, names->entrance, NULL, lack);
    maker_miss(maker, names->exit, NULL, lack);
    maker_miss(maker, names->k_entrance, NULL, lack);
    maker_miss(maker, names->k_exit, NULL, lack);
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
    if (lack != NULL) {
        miss_fringe(maker, names, lack);
        return fringe;
    }
    (void)fringe_gap(&g->planes[kind], g->reference_z,
                     electric ? g->reference_x : g->reference_y, &gap);
    fringe = fringe_of(path, f, centre, g->reference_z, gap);
    add_fringe(maker, names, path, &fringe, gap);
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

/* Ends on which a difference of the two fields depends: those of either, and those that
 * only one of them has inside. */
static unsigned mismatch_ends(const struct fringe *e, const struct fringe *b)
{
    const double allowed = TAIL_SHARE * e->length;
    return tails(e, allowed) | tails(b, allowed) | (insides(e) ^ insides(b));
}

/* Adds the difference that stands at `ends` of the path; the field of which more is left
 * is named. */
static void add_difference(struct maker *maker, struct figure_key key, double value,
                           const struct path *path, const struct fringe *e,
                           const struct fringe *b, unsigned ends)
{
    const bool electric = insides(e) != insides(b) ? insides(e) > insides(b)
                                                   : fmax(e->tail_from, e->tail_to) >=
                                                         fmax(b->tail_from, b->tail_to);
    key.scale = e->length;
    add_one(maker, key, value, NULL, path, electric ? e : b,
            mismatch_ends(e, b) & ends);
}

static const struct figure_key DIFFERENCES[] = {
    {"length_mismatch", "length mismatch L_E - L_B", "m", 0.0},
    {"entrance_mismatch", "E reaches further out, entrance", "m", 0.0},
    {"exit_mismatch", "E reaches further out, exit", "m", 0.0},
    {"shape_mismatch", "shape mismatch, half integral |F_E - F_B| dz", "m", 0.0}};

static void add_mismatch(struct maker *maker, const struct path *path,
                         const struct fringe *e, const struct fringe *b)
{
    maker->planes = plane_bit(PLANE_ELECTRIC_ALONG) | plane_bit(PLANE_MAGNETIC_ALONG);
    if (!ratio_is_available(path)) {
        for (int k = 0; k < 4; k++)
            maker_miss(maker, DIFFERENCES[k], NULL,
                       "needs both electric_along and magnetic_along");
        return;
    }
    add_difference(maker, DIFFERENCES[0], e->length - b->length, path, e, b, BOTH);
    add_difference(maker, DIFFERENCES[1], b->entrance - e->entrance, path, e, b, FROM);
    add_difference(maker, DIFFERENCES[2], e->exit - b->exit, path, e, b, TO);
    add_difference(maker, DIFFERENCES[3], shape_mismatch(path), path, e, b, BOTH);
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
