/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_RESULT_H
#define EVENGAP_SOLVER_RESULT_H

/* The result of the main job: what the writers turn into a sheet, maps and plots. All
 * values are SI and extrapolated over the grid family unless said otherwise. */

#include <stdbool.h>
#include <stddef.h>

#include "mesh/geometry.h"
#include "mesh/grid.h"
#include "shared/attributes.h"
#include "shared/message.h"
#include "shared/status.h"
#include "solver/accuracy.h"
#include "solver/caution.h"
#include "solver/figure.h"

#define RESULT_LEVELS_MAX 3

/* Quality of one solve, returned by the solver and judged in run.c. */
struct quality {
    int unknowns;
    double residual;       /* max scaled residual |b - A x| / (|A||x| + |b|), row-wise
                              norms */
    double rcond;          /* reciprocal condition estimate of the factorisation */
    double flux_imbalance; /* |sum of the fluxes of all parts and sides| / sum of
                              the absolute fluxes of their links (flux.h); 0 if there
                              is no flux */
    double seconds;        /* wall time of grid, factorisation and solves */
    double memory;         /* bytes, peak of the factorisation */
    /* Of the capacitance matrix (capacitance.h); 0 without one. */
    double reciprocity; /* largest |C_ij - C_ji| / largest |C|: of the discretisation */
    double row_sum;     /* largest |sum of a row, sides included| / largest |C|: of the
                           solves */
};

/* What the doubling test says of a plane with open sides (doubling.h). */
struct open_test {
    bool done;              /* false: the plane has no open side */
    int level;              /* the grid of the family it was done on, from 0 */
    double distance;        /* m, from the region to the earth that stands far away */
    double factor;          /* from the movement of a figure to what was added to its
                               uncertainty */
    double moved;           /* largest movement, of its scale, of a figure of this plane
                               that stands when the distance is doubled */
    const char *moved_most; /* title of that figure, static text; NULL if none */
    int unsettled;          /* figures that move too much, and are marked */
};

/* One plane. Node arrays are of the finest grid, not extrapolated; of open planes only
 * what lies in the region as drawn is kept. */
struct plane_result {
    bool present;
    int levels;                                /* grids in the family */
    struct quality quality[RESULT_LEVELS_MAX]; /* coarse to fine */
    struct open_test open;
    struct grid grid;  /* finest */
    double *potential; /* [nb*na] V or A, at the settings; no NaN */
    double *field_a;   /* [nb*na] E (V/m) or B (T), component along a; 0 inside parts */
    double *field_b;   /* [nb*na] the same along b */
};

/* Fields and ratio along the axis of the path, at equal steps from path_from to
 * path_to. Arrays are NULL if their plane is missing. */
struct profile {
    bool present;
    size_t count;
    double *z;               /* [count] m */
    double *e_x, *e_x_err;   /* [count] V/m and uncertainty */
    double *b_y, *b_y_err;   /* [count] T and uncertainty */
    double reference_speed;  /* m/s, u_ref at the reference point; 0 without both */
    double *ratio_error;     /* [count] u/u_ref - 1 on the axis; 0 where !defined */
    double *ratio_error_err; /* [count] */
    double *bundle_low;      /* [count] lowest ratio error over the footprint */
    double *bundle_high;     /* [count] highest */
    bool *defined;           /* [count] both fields at least FIELD_FLOOR of centre */
    double *imbalance;       /* [count] (E_x - u_ref B_y) / E_x(reference) */
    bool has_bundle;         /* a footprint was given */
};

/* Map of the ratio error over the footprint in the cross-section, node (i, j) at
 * (x[i], y[j]), arrays [ny*nx], x fastest. */
struct section {
    bool present;
    size_t nx, ny;
    double *x, *y;       /* [nx], [ny] m */
    double *e_x, *e_y;   /* V/m; NULL without electric_across */
    double *b_x, *b_y;   /* T; NULL without magnetic_across */
    double *ratio_error; /* NULL unless both planes are there */
};

struct probe_reading {
    size_t probe; /* index in geometry->probes */
    enum plane_kind plane;
    struct vec2 at;   /* m, in the plane's (a, b) */
    double potential; /* V or A */
    double field[2];  /* V/m or T, along a and b */
    double potential_err;
    double field_err[2];
    int part; /* part the probe lies in, or -1 */
};

/* E and B on the lattice for trajectory programs. Along planes are used where present
 * (E uniform along y, B uniform along x), else across planes (uniform along z).
 * Arrays [nz*ny*nx], x fastest, then y, then z. Uncertainties are kept once per plane, on
 * the lattice of its two axes (lattice_sheet_index), the first fastest. */
struct lattice_field {
    bool present;
    int n[3];         /* points along x, y, z (by enum axis) */
    double origin[3]; /* m */
    double step[3];   /* m */
    bool has_electric, has_magnetic;
    enum plane_kind electric_from, magnetic_from;
    double *e[3];         /* V/m, by axis; NULL without an electric plane */
    double *b[3];         /* T */
    double *e_err[2];     /* V/m, of the components along the axes of electric_from; the
                             third component is 0 by assumption */
    double *b_err[2];     /* T, the same of magnetic_from */
    unsigned char *solid; /* 1 where the point lies inside a part of either plane (the
                             field of that plane is 0 there) */
};

struct verdict_item {
    enum limit_kind limit;
    double allowed;              /* SI */
    const struct figure *figure; /* the figure judged; NULL if it is missing */
    double value;                /* SI, magnitude judged */
    double uncertainty;
    bool judged;  /* a figure was there and could be judged */
    bool met;     /* holds with the uncertainty on the bad side */
    char *reason; /* one sentence, never NULL */
};

struct verdict {
    struct verdict_item items[LIMIT_KINDS];
    size_t count;
    bool all_met; /* true also when there are no limits */
};

struct result {
    const struct geometry *geometry; /* borrowed */
    struct plane_result planes[PLANE_KINDS];
    struct figures figures;
    struct profile profile;
    struct section section;
    struct probe_reading *probes; /* [probe_count] */
    size_t probe_count;
    struct lattice_field lattice;
    struct verdict verdict;
    struct cautions cautions; /* fields above what the trade holds to */
    struct accuracy accuracy; /* that was asked for, and what came of it */
};

/** Empties; safe on zeroed, half built and twice. */
void result_free(struct result *result);

#endif
