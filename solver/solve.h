/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_SOLVE_H
#define EVENGAP_SOLVER_SOLVE_H

/* All planes of a geometry, each solved on all grids of its family. Every plane
 * has its own knobs: how fine all its lines are and how they crowd at each
 * part. A plane whose knobs were turned is solved anew and takes the place of
 * the old one only if that succeeds. */

#include "mesh/geometry.h"
#include "shared/attributes.h"
#include "shared/message.h"
#include "shared/status.h"
#include "solver/plane_solution.h"
#include "solver/progress.h"
#include "solver/result.h"
#include "solver/view.h"

/* Slots of what is solved: the levels of the family, then the doubling test of
 * open sides, a view in which planes without any are those of the level it is
 * done on. */
enum { SOLVE_FAR = RESULT_LEVELS_MAX, SOLVE_SLOTS };

/* What is asked of the grids of a plane. */
struct plane_knobs {
    double fineness;
    double *crowding; /* [part_count] factor on the lines near every part */
};

struct plane_family {
    struct plane_solution slots[SOLVE_SLOTS]; /* must not move: see plane_solution */
};

/* Caller-owned; zeroed is empty. */
struct solve {
    const struct geometry *geometry; /* borrowed */
    int levels;                      /* grids in a family */
    double fineness;                 /* that all planes begin with */
    bool is_open;                    /* some plane has an open side */
    struct plane_knobs knobs[PLANE_KINDS];
    struct plane_family *families[PLANE_KINDS]; /* NULL where missing or not solved */
    struct view views[SOLVE_SLOTS];             /* borrow from the families */
};

/** Nothing solved yet, all knobs of all planes plain. STATUS_SIZE unless 2 <=
 * levels <= RESULT_LEVELS_MAX; STATUS_MEMORY. */
enum status solve_begin(const struct geometry *geometry, int levels, double fineness,
                        struct solve *solve) MUST_CHECK;

/** Solves one plane on all its grids with its knobs as they stand. On failure
 * (those of plane_solve) what was there before stays. */
enum status solve_plane(struct solve *solve, enum plane_kind kind,
                        const struct progress *progress,
                        struct messages *messages) MUST_CHECK;

/** Solves all planes. */
enum status solve_planes(struct solve *solve, const struct progress *progress,
                         struct messages *messages) MUST_CHECK;

/** One plane on the grid of one level with other knobs; nothing of *solve
 * changes. Free with plane_solution_free in every case. */
enum status solve_trial(const struct solve *solve, enum plane_kind kind,
                        const struct plane_knobs *knobs, int level,
                        struct plane_solution *trial) MUST_CHECK;

/** Whether the finest grid with these knobs is within the memory budget of the
 *  geometry. */
enum status solve_fits(const struct solve *solve, enum plane_kind kind,
                       const struct plane_knobs *knobs, bool *fits) MUST_CHECK;

/** Level the doubling test is done on: the finest but one tells enough. */
int solve_test_level(const struct solve *solve);

/** Empties; safe on zeroed, half built and twice. */
void solve_free(struct solve *solve);

#endif
