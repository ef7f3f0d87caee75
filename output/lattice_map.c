/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Both files walk the same points in the same order. The file states whatever a reader
 * would otherwise have to guess: which axis is fastest, units, and where a field that
 * was solved in a plane was taken as uniform. */

#include "output/lattice_map.h"

#include <float.h>
#include <math.h>
#include <stdio.h>

#include "solver/lattice_field.h"

#define UNCERTAINTY_TEXT 24

/* The uncertainty of a field, kept once per plane. */
struct margin {
    const struct lattice_field *lattice;
    enum plane_kind kind;
    double *const *sheet; /* [2] along the axes of the plane */
};

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

static struct margin margin_electric(const struct lattice_field *lattice)
{
    return (struct margin){lattice, lattice->electric_from, lattice->e_err};
}

static struct margin margin_magnetic(const struct lattice_field *lattice)
{
    return (struct margin){lattice, lattice->magnetic_from, lattice->b_err};
}

static enum status check_margin(struct margin margin, const char *name,
                                struct messages *messages)
{
    const enum axis axes[2] = {plane_kind_axis(margin.kind, 0),
                               plane_kind_axis(margin.kind, 1)};
    size_t count =
        (size_t)margin.lattice->n[axes[0]] * (size_t)margin.lattice->n[axes[1]];
    for (int c = 0; c < 2; c++) {
        for (size_t k = 0; k < count; k++) {
            if (isfinite(margin.sheet[c][k]))
                continue;
            messages_add(messages, SEVERITY_ERROR, (struct place){0, 0},
                         "lattice: the uncertainty of %s%s is not a finite number",
                         name, axis_key(axes[c]));
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
    if (!status && lattice->has_electric)
        status = check_margin(margin_electric(lattice), "E", messages);
    if (!status && lattice->has_magnetic)
        status = check_margin(margin_magnetic(lattice), "B", messages);
    return status;
}

/* Two digits, rounded up, as text: a third would say nothing, and this is several times
 * faster than printf. */
static size_t format_uncertainty(double value, char text[UNCERTAINTY_TEXT])
{
    if (!(value >= DBL_MIN)) {
        text[0] = '0';
        return 1;
    }
    int power = (int)floor(log10(value));
    /* Just above a whole number of units is that number: rounding must not add one. */
    int digits = (int)ceil(value / pow(10, power - 1) * (1 - 1e-12));
    if (digits >= 100) {
        digits = 10;
        power++;
    }
    size_t length = 0;
    text[length++] = (char)('0' + digits / 10);
    text[length++] = '.';
    text[length++] = (char)('0' + digits % 10);
    text[length++] = 'e';
    text[length++] = power < 0 ? '-' : '+';
    power = power < 0 ? -power : power;
    if (power >= 100)
        text[length++] = (char)('0' + power / 100);
    text[length++] = (char)('0' + power / 10 % 10);
    text[length++] = (char)('0' + power % 10);
    return length;
}

static void write_vectors(struct sink *sink, const char *name, double *const field[3],
                          size_t count)
{
    sink_print(sink, "VECTORS %s double\n", name);
    for (size_t k = 0; k < count; k++)
        for (int c = 0; c < 3; c++)
            sink_number(sink, tidy(field[c][k]), c < 2 ? ' ' : '\n');
}

/* The uncertainties at point k[3], three numbers with `after` behind the last. */
static void write_margin(struct sink *sink, struct margin margin, const int k[3],
                         char between, char after)
{
    const size_t n = lattice_sheet_index(margin.lattice, margin.kind, k);
    for (int axis = 0; axis < 3; axis++) {
        char text[UNCERTAINTY_TEXT];
        double value = 0;
        for (int c = 0; c < 2; c++)
            if ((int)plane_kind_axis(margin.kind, c) == axis)
                value = margin.sheet[c][n];
        size_t length = format_uncertainty(value, text);
        text[length++] = axis < 2 ? between : after;
        sink_bytes(sink, text, length);
    }
}

static void write_margins(struct sink *sink, const char *name, struct margin margin)
{
    const int *n = margin.lattice->n;
    int k[3];
    sink_print(sink, "VECTORS %s double\n", name);
    for (k[AXIS_Z] = 0; k[AXIS_Z] < n[AXIS_Z]; k[AXIS_Z]++)
        for (k[AXIS_Y] = 0; k[AXIS_Y] < n[AXIS_Y]; k[AXIS_Y]++)
            for (k[AXIS_X] = 0; k[AXIS_X] < n[AXIS_X]; k[AXIS_X]++)
                write_margin(sink, margin, k, ' ', '\n');
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
                     "(x,y,z), with their uncertainties; solid: 1 inside a part\n");
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
    if (lattice->has_electric)
        write_margins(sink, "electric_field_uncertainty", margin_electric(lattice));
    if (lattice->has_magnetic)
        write_margins(sink, "magnetic_flux_density_uncertainty",
                      margin_magnetic(lattice));
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
    const char *uniform = plane_kind_is_across(from)           ? "z"
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
                     "part, where the field of its plane is 0\n");
    sink_print(sink, "# uncertainty: of each component, absolute, in the unit of the "
                     "component\n");
    for (int axis = 0; axis < 3; axis++)
        sink_print(sink, "# %s: %d points from %.15g m in steps of %.15g m\n",
                   axis_key((enum axis)axis), lattice->n[axis], lattice->origin[axis],
                   lattice->step[axis]);
    sink_print(sink, "# order: x fastest, then y, then z\n");
    write_origin(sink, "E", "electric", lattice->has_electric, lattice->electric_from);
    write_origin(sink, "B", "magnetic", lattice->has_magnetic, lattice->magnetic_from);
    sink_print(
        sink, "x,y,z%s%s,solid%s%s\n", lattice->has_electric ? ",Ex,Ey,Ez" : "",
        lattice->has_magnetic ? ",Bx,By,Bz" : "",
        lattice->has_electric ? ",Ex_uncertainty,Ey_uncertainty,Ez_uncertainty" : "",
        lattice->has_magnetic ? ",Bx_uncertainty,By_uncertainty,Bz_uncertainty" : "");
}

/* origin + k step, with the rounding crumb at the centre swept away. */
static double coordinate(const struct lattice_field *lattice, int axis, int k)
{
    double x = lattice->origin[axis] + k * lattice->step[axis];
    return fabs(x) < 1e-9 * lattice->step[axis] ? 0 : x;
}

static void write_csv_row(struct sink *sink, const struct lattice_field *lattice,
                          const int k[3], size_t n)
{
    for (int axis = 0; axis < 3; axis++)
        sink_number(sink, coordinate(lattice, axis, k[axis]), ',');
    for (int c = 0; c < 3 && lattice->has_electric; c++)
        sink_number(sink, tidy(lattice->e[c][n]), ',');
    for (int c = 0; c < 3 && lattice->has_magnetic; c++)
        sink_number(sink, tidy(lattice->b[c][n]), ',');
    sink_bytes(sink, lattice->solid[n] ? "1," : "0,", 2);
    if (lattice->has_electric)
        write_margin(sink, margin_electric(lattice), k, ',',
                     lattice->has_magnetic ? ',' : '\n');
    if (lattice->has_magnetic)
        write_margin(sink, margin_magnetic(lattice), k, ',', '\n');
}

enum status lattice_map_write_csv(struct sink *sink,
                                  const struct lattice_field *lattice,
                                  struct messages *messages)
{
    enum status status = check_fields(lattice, messages);
    if (status)
        return status;
    write_csv_header(sink, lattice);
    size_t n = 0;
    int k[3];
    for (k[AXIS_Z] = 0; k[AXIS_Z] < lattice->n[AXIS_Z]; k[AXIS_Z]++)
        for (k[AXIS_Y] = 0; k[AXIS_Y] < lattice->n[AXIS_Y]; k[AXIS_Y]++)
            for (k[AXIS_X] = 0; k[AXIS_X] < lattice->n[AXIS_X]; k[AXIS_X]++)
                write_csv_row(sink, lattice, k, n++);
    return STATUS_OK;
}
