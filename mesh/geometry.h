/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_MESH_GEOMETRY_H
#define EVENGAP_MESH_GEOMETRY_H

/* The geometry model: what the user's file says, in SI units, every expression
 * evaluated, every part with its place in the file. The reader (reader.h) makes it,
 * geometry_check.h judges it, everything after reads it as const.
 *
 * Axes: z along the beam, x the way the electric field points, y from pole to pole. A
 * plane has a first axis a and a second axis b:
 *     electric_along  (a, b) = (z, x)      electric_across (a, b) = (x, y)
 *     magnetic_along  (a, b) = (z, y)      magnetic_across (a, b) = (x, y)
 *     electric_turned (a, b) = (z, r)      round parts about z, r >= 0 */

#include <stdbool.h>
#include <stddef.h>

#include "mesh/shape.h"
#include "shared/message.h"

enum axis { AXIS_X, AXIS_Y, AXIS_Z, AXIS_R };

enum plane_kind {
    PLANE_ELECTRIC_ALONG,
    PLANE_ELECTRIC_ACROSS,
    PLANE_MAGNETIC_ALONG,
    PLANE_MAGNETIC_ACROSS,
    PLANE_ELECTRIC_TURNED,
    PLANE_KINDS
};

/* A potential linear in the supplies: constant + sum of gain[s] * setting[s]. */
struct linear {
    double constant; /* V, or A (ampere-turns) in a magnetic plane */
    double *gain;    /* [supply_count], dimensionless */
};

struct supply {
    char *name;
    double setting; /* V, or A (ampere-turns) when is_current */
    bool is_current;
    bool used; /* some part or side of a plane refers to it */
    struct place place;
};

enum part_kind {
    PART_ELECTRODE,
    PART_GUARD,
    PART_CLAMP,
    PART_POLE,
    PART_FLOATING, /* a conductor of given charge; its potential is found */
    PART_INSULATOR /* no conductor: a medium of given permittivity */
};

struct part {
    char *name; /* unique within its plane */
    enum part_kind kind;
    struct shape shape;      /* m, in the plane's (a, b) */
    struct linear potential; /* conductors; zero in floating parts and insulators */
    double charge;           /* floating: C/m (planar) or C (turned), of the part inside
                                the region: of a part that touches a mirror side, of the
                                half drawn */
    double permittivity;     /* insulators: relative, >= 1. Where insulators overlap the
                                later part holds; conductors hold before insulators */
    double edge_radius; /* m: radius on which the surface field at a sharp corner is
                           stated; 0 if the file does not give one */
    struct place place;
};

enum side_kind {
    SIDE_WALL,       /* fixed potential, running linearly from `from` to `to` */
    SIDE_MIRROR,     /* no flux across: the potential is even */
    SIDE_ANTIMIRROR, /* zero potential, odd across */
    SIDE_OPEN        /* free space: the grid goes on in growing steps to a wall of zero
                        potential far away */
};

/* The four sides of a region, in the order of the arrays below. */
enum side_index { SIDE_A_LOW, SIDE_A_HIGH, SIDE_B_LOW, SIDE_B_HIGH, SIDE_COUNT };

struct side {
    enum side_kind kind;
    struct linear from; /* walls: potential at the low end of the side */
    struct linear to;   /* walls: potential at its high end */
    struct place place;
};

struct plane {
    bool present;
    enum plane_kind kind;
    struct vec2 low, high; /* m, corners of the region */
    struct side sides[SIDE_COUNT];
    struct part *parts; /* [part_count] */
    size_t part_count;
    size_t supply_count; /* length of every gain array in this plane */
    struct place place;
};

/* Which optional items of the beam the file gives is told by the flags. */
struct beam {
    bool has_particle; /* mass, charge and energy or speed */
    double mass;       /* kg */
    double charge;     /* C, signed */
    double speed;      /* m/s, from the energy (relativistic) or given */
    double energy;     /* J, kinetic */
    bool has_path;
    double path_from, path_to; /* m, along z on the axis */
    bool has_footprint;
    double half_x, half_y; /* m, half widths over which the ratio must hold */
    bool has_slit;
    double slit_at;    /* m, z of the slit */
    double slit_width; /* m, full width along x */
    struct place place;
};

struct probe {
    double x, y, z; /* m; 0 where not given */
    bool has_z;
    bool has_plane;
    enum plane_kind plane; /* if has_plane: only there */
    struct place place;
};

/* What a limit can refer to; geometry_limit_rule tells key, unit and sense. */
enum limit_kind {
    LIMIT_RATIO_ERROR,     /* at most, over the footprint of the cross-section; also the
                              bound that defines flat_length and even_radius */
    LIMIT_FLAT_LENGTH,     /* at least, m: stretch of the axis within ratio_error */
    LIMIT_EVEN_RADIUS,     /* at least, m: circle of the cross-section within it */
    LIMIT_DETUNING,        /* at most: |balanced speed / wanted speed - 1| */
    LIMIT_LENGTH_MISMATCH, /* at most, m: |effective length of E - that of B| */
    LIMIT_KICK,       /* at most, rad: direction of the wanted particle at the exit */
    LIMIT_OFFSET,     /* at most, m: its sideways place at the exit */
    LIMIT_RESOLUTION, /* at least: mass resolution m/dm at the slit */
    LIMIT_SURFACE_FIELD, /* at most, V/m, on any electrode */
    LIMIT_KINDS
};

struct limit_rule {
    const char *key;  /* as in the file */
    const char *unit; /* SI unit the model keeps it in: "1", "m", "rad", "V/m" */
    bool at_least;    /* true: the figure must reach it; false: stay below it */
};

struct limit {
    bool present;
    double value; /* SI, positive */
    struct place place;
};

struct lattice_axis {
    double from, to, step; /* m */
    int count;             /* points: (to - from)/step + 1, a whole number */
};

struct lattice {
    bool present;
    struct lattice_axis axes[3]; /* by enum axis */
    struct place place;
};

struct named_value {
    char *name;
    double value; /* SI */
    struct place place;
};

/* The whole file. Caller-owned; zeroed is valid and empty. */
struct geometry {
    char *path; /* as given on the command line */
    char *title;
    struct named_value *values; /* [value_count] */
    size_t value_count;
    struct beam beam;
    struct supply *supplies; /* [supply_count] */
    size_t supply_count;
    struct plane planes[PLANE_KINDS];
    struct probe *probes; /* [probe_count] */
    size_t probe_count;
    struct limit limits[LIMIT_KINDS];
    struct lattice lattice;
    bool has_reference;
    double reference_z, reference_x, reference_y; /* m: the reference point, default
                                                     the centre (0, 0, 0) */
    double fineness;      /* grid knob, 1 = default, 2 = twice the lines per axis */
    double memory_budget; /* bytes the solve may take */
};

/** Key of a plane in the file, of its axes ("z"), of a part kind, of a side. */
const char *plane_kind_key(enum plane_kind kind);
bool plane_kind_is_magnetic(enum plane_kind kind);
bool plane_kind_is_along(enum plane_kind kind);
bool plane_kind_is_across(enum plane_kind kind);
bool plane_kind_is_turned(enum plane_kind kind);
enum axis plane_kind_axis(enum plane_kind kind, int which);
const char *axis_key(enum axis axis);
const char *part_kind_key(enum part_kind kind);
const char *side_kind_key(enum side_kind kind);

/** The point (x, y, z) (m) as a plane of this kind sees it, in its axes (a, b); the r of
 *  a turned plane is the distance from the axis z. */
struct vec2 plane_kind_project(enum plane_kind kind, double x, double y, double z);

/** False for insulators. */
bool part_is_conductor(const struct part *part);

/** The rule of a limit; never NULL for kind < LIMIT_KINDS. */
const struct limit_rule *geometry_limit_rule(enum limit_kind kind);

/** True if two potentials are the same at every setting of the supplies[supply_count];
 *  a gain array that is NULL counts as zeros. */
bool linear_equal(const struct linear *p, const struct linear *q, size_t supply_count);

/** True if a part touches a wall of its plane: it is one conductor with that wall and has
 *  no capacitance of its own. */
bool plane_touches_wall(const struct plane *plane, const struct part *part);

/** True if a probe that names no plane is read in planes of this kind: always in planes
 *  along the beam; in planes across it, which stand for the reference z, if it stands
 *  there, gives no z, or no plane along the beam knows z; in turned planes if it gives
 *  z. */
bool geometry_probe_counts(const struct geometry *geometry, const struct probe *probe,
                           enum plane_kind kind);

/** The ratio error that bounds flat_length and even_radius: the file's limit, or 1e-3
 *  (masses 1 in 250 apart, common practice). */
double geometry_ratio_bound(const struct geometry *geometry);

/** Value of a potential at the settings of the supplies (V or A). */
double geometry_potential(const struct geometry *geometry,
                          const struct linear *potential);

/** Empties; safe on zeroed, half built, and twice. */
void geometry_free(struct geometry *geometry);

#endif
