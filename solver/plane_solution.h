/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_PLANE_SOLUTION_H
#define EVENGAP_SOLVER_PLANE_SOLUTION_H

/* One plane solved on one grid: one unit potential per supply (and one for constant
 * potentials), superposed at the settings; fluxes; the interpolated field. */

#include "mesh/geometry.h"
#include "mesh/grid.h"
#include "shared/attributes.h"
#include "shared/message.h"
#include "shared/status.h"
#include "solver/capacitance.h"
#include "solver/field.h"
#include "solver/result.h"

/* Caller-owned; zeroed is empty. The geometry is borrowed. The struct must not move
 * after plane_solve: the field points into it. */
struct plane_solution {
    const struct geometry *geometry;
    const struct plane *plane;
    struct grid grid;
    struct quality quality;
    double **unit;      /* [supply_count + 1][nb*na] potential for 1 V (1 A) of every
                             supply, the last for the constant parts; NULL if nothing
                             in the plane depends on it */
    double *phi;        /* [nb*na] at the settings */
    double *part_value; /* [part_count] potential of every part at the settings; of
                           floating parts the one found */
    double *part_flux;  /* [part_count] outward flux of -grad phi at the settings */
    double side_flux[SIDE_COUNT];
    double *self_flux; /* [part_count] flux out of the conductor that a part belongs to
                          (conductor.h) at 1 with all else at 0; 0 if it is held.
                          Electric planes only, else NULL */
    struct capacitance capacitance; /* electric planes only, else empty */
    struct field *field;
};

/** Grid, factorisation, unit potentials and superposition of the plane `kind` on the grid
 *  asked for; the memory budget is the geometry's. Unit potentials include what floating
 *  parts make of them; charges given to these belong to the constant one. STATUS_INPUT
 *  (grid_build), STATUS_SINGULAR and STATUS_UNTRUSTED with a message that names the plane
 *  (and a floating part that nothing holds); STATUS_MEMORY. */
enum status plane_solve(const struct geometry *geometry, enum plane_kind kind,
                        const struct grid_request *request,
                        struct plane_solution *solution,
                        struct messages *messages) MUST_CHECK;

/** True if residual, reciprocal condition, flux balances and reciprocity are those of a
 *  sound solve; NaN is never trusted. */
bool quality_is_trusted(const struct quality *quality);

/** E (V/m) or B (T) along (a, b) at a point; part (may be NULL) as field_at. */
enum status plane_field(const struct plane_solution *solution, struct vec2 at,
                        double field[2], int *part) MUST_CHECK;

/** Factor from the gradient of the potential to the field: -1 for E, -mu0 for B. */
double plane_field_factor(enum plane_kind kind);

/** Factor from a flux or force of the solver to that of the hardware: 1, per metre of
 *  depth; 2 pi in a turned plane, for the whole ring. */
double plane_depth(enum plane_kind kind);

/** Empties; safe on zeroed and twice. */
void plane_solution_free(struct plane_solution *solution);

#endif
