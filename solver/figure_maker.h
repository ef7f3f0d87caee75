/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_FIGURE_MAKER_H
#define EVENGAP_SOLVER_FIGURE_MAKER_H

/* The makers of figures: each appends the figures of one group, made from one view, in
 * an order that depends on the geometry only. A figure that cannot be had is appended
 * as missing with its reason, never as zero. */

#include "solver/expansion.h"
#include "solver/figure.h"
#include "solver/path.h"
#include "solver/view.h"

/* A list being filled. After the first failure nothing more is added and status keeps
 * it. */
struct maker {
    struct figures *figures;
    enum figure_group group;
    unsigned planes; /* of the figures added next */
    enum status status;
};

/* What identifies a figure, written as a literal where it is made. */
struct figure_key {
    const char *name;
    const char *title;
    const char *unit;
    double scale; /* struct figure: scale */
};

/** Appends a value; subject and note may be NULL. */
void maker_add(struct maker *maker, struct figure_key key, double value,
               const char *subject, const char *note);

/** Appends a value that is unsettled whatever the grids say; the note tells why. */
void maker_add_unsettled(struct maker *maker, struct figure_key key, double value,
                         const char *subject, const char *note);

/** Appends a missing figure with its reason. */
void maker_miss(struct maker *maker, struct figure_key key, const char *subject,
                const char *reason);

/** The value if `reason` is NULL, else missing. */
void maker_add_or_miss(struct maker *maker, struct figure_key key, double value,
                       const char *subject, const char *note, const char *reason);

/** Beam alone, and along the path (figures_along.c). */
enum status figures_beam(const struct view *view, struct figures *figures) MUST_CHECK;
enum status figures_along(const struct view *view, const struct path *path,
                          struct figures *figures) MUST_CHECK;

/** Fringes of each field: lengths, edges, integrals, mismatch (figures_fringe.c). */
enum status figures_fringe(const struct view *view, const struct path *path,
                           struct figures *figures) MUST_CHECK;

/** Enge functions of the ends of each field (figures_enge.c). */
enum status figures_enge(const struct view *view, const struct path *path,
                         struct figures *figures) MUST_CHECK;

/** Motion of the wanted particle (figures_motion.c). */
enum status figures_motion(const struct view *view, const struct path *path,
                           struct figures *figures) MUST_CHECK;

/** Over the cross-section (figures_across.c). */
enum status figures_across(const struct view *view, struct figures *figures) MUST_CHECK;

/** Parts and supplies (figures_hardware.c). */
enum status figures_hardware(const struct view *view,
                             struct figures *figures) MUST_CHECK;

#endif
