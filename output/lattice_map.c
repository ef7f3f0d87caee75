/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Both files walk the same points in the same order. The file states whatever a reader
 * would otherwise have to guess: which axis is fastest, units, and where a field that
 * was solved in a plane was taken as uniform. */

#include "output/lattice_map.h"

#include <float.h>
#include <math.h>

static size_t point_count(const struct lattice_field *lattice)
{
    return (size_t)lattice->n[AXIS_X] * (size_t)lattice->n[AXIS_Y] *
           (size_t)lattice->n[AXIS_Z];
}

static double tidy(double x)
{
    return fabs(x) < DBL_MIN ? 0.0 : x;
}

static enum status check_field(double *const field[3], size_t count, const char *name,
                               struct messages *messages)
{
    for (int axis = 0; axis < 3; axis++) {
        for (size_t k = 0; k < count; k++) {
            if (isfinite(field[axis][k]))
                continue;
            messages_add(messages, SEVERITY_ERROR, (struct place){0, 0},
                         "lattice: %s%s at point %zu is not a finite number", name,
                         axis_key((enum axis)axis), k);
            return STATUS_UNTRUSTED;
        }
    }
    return STATUS_OK;
}

static enum status check_fields(const struct lattice_field *lattice,
                                struct messages *messages)
{
    size_t count = point_count(lattice);
    enum status status = STATUS_OK;
    if (lattice->has_electric)
        status = check_field(lattice->e, count, "E", messages);
    if (!status && lattice->has_magnetic)
        status = check_field(lattice->b, count, "B", messages);
    return status;
}

static void write_vectors(struct sink *sink, const char *name, double *const field[3],
                          size_t count)
{
    sink_print(sink, "VECTORS %s double\n", name);
    for (size_t k = 0; k < count; k++)
        for (int c = 0; c < 3; c++)
            sink_number(sink, tidy(field[c][k]), c < 2 ? ' ' : '\n');
}

static double vtk_spacing(const struct lattice_field *lattice, enum axis axis)
{
    return lattice->n[axis] > 1 ? lattice->step[axis] : 1;
}

enum status lattice_map_write_vtk(struct sink *sink,
                                  const struct lattice_field *lattice,
                                  struct messages *messages)
{
    enum status status = check_fields(lattice, messages);
    if (status)
        return status;
    size_t count = point_count(lattice);
    const double *origin = lattice->origin;
    sink_print(sink, "# vtk DataFile Version 3.0\n");
    sink_print(sink, "evengap lattice: (X,Y,Z) = (x,y,z) in m, z along the beam; "
                     "electric_field in V/m, magnetic_flux_density in T along "
                     "(x,y,z); solid: 1 inside a part\n");
    sink_print(sink, "ASCII\nDATASET STRUCTURED_POINTS\nDIMENSIONS %d %d %d\n",
               lattice->n[0], lattice->n[1], lattice->n[2]);
    sink_print(sink, "ORIGIN %.15g %.15g %.15g\n", origin[0], origin[1], origin[2]);
    sink_print(sink, "SPACING %.15g %.15g %.15g\n", vtk_spacing(lattice, AXIS_X),
               vtk_spacing(lattice, AXIS_Y), vtk_spacing(lattice, AXIS_Z));
    sink_print(sink, "POINT_DATA %zu\n", count);
    sink_print(sink, "SCALARS solid int 1\nLOOKUP_TABLE default\n");
    for (size_t k = 0; k < count; k++)
        sink_print(sink, "%d\n", lattice->solid[k]);
    if (lattice->has_electric)
        write_vectors(sink, "electric_field", lattice->e, count);
    if (lattice->has_magnetic)
        write_vectors(sink, "magnetic_flux_density", lattice->b, count);
    return STATUS_OK;
}

static void write_origin(struct sink *sink, const char *symbol, const char *name,
                         bool present, enum plane_kind from)
{
    if (!present) {
        sink_print(sink, "# %s: not in this file, no %s plane was solved\n", symbol,
                   name);
        return;
    }
    const char *uniform = !plane_kind_is_along(from)           ? "z"
                          : plane_kind_axis(from, 1) == AXIS_X ? "y"
                                                               : "x";
    sink_print(sink, "# %s: from plane %s, uniform along %s\n", symbol,
               plane_kind_key(from), uniform);
}

static void write_csv_header(struct sink *sink, const struct lattice_field *lattice)
{
    sink_print(sink, "# evengap lattice: electric field E and flux density B\n");
    sink_print(sink, "# axes: z along the beam, x along the electric field, y from "
                     "pole to pole; right-handed\n");
    sink_print(sink, "# units: x, y, z in m; E in V/m; B in T; solid is 1 inside a "
                     "part, where the fields are 0\n");
    for (int axis = 0; axis < 3; axis++)
        sink_print(sink, "# %s: %d points from %.15g m in steps of %.15g m\n",
                   axis_key((enum axis)axis), lattice->n[axis], lattice->origin[axis],
                   lattice->step[axis]);
    sink_print(sink, "# order: x fastest, then y, then z\n");
    write_origin(sink, "E", "electric", lattice->has_electric, lattice->electric_from);
    write_origin(sink, "B", "magnetic", lattice->has_magnetic, lattice->magnetic_from);
    sink_print(sink, "x,y,z%s%s,solid\n", lattice->has_electric ? ",Ex,Ey,Ez" : "",
               lattice->has_magnetic ? ",Bx,By,Bz" : "");
}

/* origin + k step, with the rounding crumb at the centre swept away. */
static double coordinate(const struct lattice_field *lattice, int axis, int k)
{
    double x = lattice->origin[axis] + k * lattice->step[axis];
    return fabs(x) < 1e-9 * lattice->step[axis] ? 0 : x;
}

static void write_csv_row(struct sink *sink, const struct lattice_field *lattice,
                          size_t k)
{
    for (int c = 0; c < 3 && lattice->has_electric; c++)
        sink_number(sink, tidy(lattice->e[c][k]), ',');
    for (int c = 0; c < 3 && lattice->has_magnetic; c++)
        sink_number(sink, tidy(lattice->b[c][k]), ',');
    sink_bytes(sink, lattice->solid[k] ? "1\n" : "0\n", 2);
}

enum status lattice_map_write_csv(struct sink *sink,
                                  const struct lattice_field *lattice,
                                  struct messages *messages)
{
    enum status status = check_fields(lattice, messages);
    if (status)
        return status;
    write_csv_header(sink, lattice);
    size_t k = 0;
    for (int iz = 0; iz < lattice->n[AXIS_Z]; iz++) {
        for (int iy = 0; iy < lattice->n[AXIS_Y]; iy++) {
            for (int ix = 0; ix < lattice->n[AXIS_X]; ix++) {
                sink_number(sink, coordinate(lattice, AXIS_X, ix), ',');
                sink_number(sink, coordinate(lattice, AXIS_Y, iy), ',');
                sink_number(sink, coordinate(lattice, AXIS_Z, iz), ',');
                write_csv_row(sink, lattice, k++);
            }
        }
    }
    return STATUS_OK;
}
