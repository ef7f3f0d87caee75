/* SPDX-License-Identifier: GPL-3.0-or-later */

/* The file keeps the solution where it was computed, on the graded lines, so a viewer
 * shows what the solver saw and nothing was resampled. */

#include "output/plane_vtk.h"

#include <float.h>
#include <math.h>

/* Readers that go through C++ streams reject numbers below the normal range, and a
 * minus sign on a zero only clutters. */
static double tidy(double x)
{
    return fabs(x) < DBL_MIN ? 0.0 : x;
}

static enum status check_finite(const double *values, size_t count, const char *what,
                                enum plane_kind kind, struct messages *messages)
{
    for (size_t k = 0; k < count; k++) {
        if (isfinite(values[k]))
            continue;
        messages_add(messages, SEVERITY_ERROR, (struct place){0, 0},
                     "%s: the %s of node %zu is not a finite number",
                     plane_kind_key(kind), what, k);
        return STATUS_UNTRUSTED;
    }
    return STATUS_OK;
}

static void write_header(struct sink *sink, enum plane_kind kind,
                         const struct grid *grid)
{
    const char *a = axis_key(plane_kind_axis(kind, 0));
    const char *b = axis_key(plane_kind_axis(kind, 1));
    bool magnetic = plane_kind_is_magnetic(kind);
    sink_print(sink, "# vtk DataFile Version 3.0\n");
    sink_print(sink,
               "evengap %s, finest grid: (X,Y,Z) = (%s,%s,0) in m; potential in %s; "
               "%s in %s along (%s,%s,0); part: index, -1 free, -2..-5 wall at low %s, "
               "high %s, low %s, high %s\n",
               plane_kind_key(kind), a, b, magnetic ? "A" : "V",
               magnetic ? "magnetic_flux_density" : "electric_field",
               magnetic ? "T" : "V/m", a, b, a, a, b, b);
    sink_print(sink, "ASCII\nDATASET RECTILINEAR_GRID\nDIMENSIONS %d %d 1\n", grid->na,
               grid->nb);
}

static void write_lines(struct sink *sink, const char *name, const double *lines,
                        int count)
{
    sink_print(sink, "%s_COORDINATES %d double\n", name, count);
    for (int k = 0; k < count; k++)
        sink_print(sink, "%.17g\n", tidy(lines[k]));
}

static void write_scalars(struct sink *sink, const struct plane_result *plane,
                          size_t count)
{
    sink_print(sink, "SCALARS potential double 1\nLOOKUP_TABLE default\n");
    for (size_t k = 0; k < count; k++)
        sink_number(sink, tidy(plane->potential[k]), '\n');
    sink_print(sink, "SCALARS part int 1\nLOOKUP_TABLE default\n");
    for (size_t k = 0; k < count; k++)
        sink_print(sink, "%d\n", plane->grid.owner[k]);
}

enum status plane_vtk_write(struct sink *sink, enum plane_kind kind,
                            const struct plane_result *plane, struct messages *messages)
{
    const struct grid *grid = &plane->grid;
    size_t count = (size_t)grid->na * (size_t)grid->nb;
    enum status status = STATUS_OK;
    if ((status = check_finite(plane->potential, count, "potential", kind, messages)) ||
        (status = check_finite(plane->field_a, count, "field", kind, messages)) ||
        (status = check_finite(plane->field_b, count, "field", kind, messages)))
        return status;
    write_header(sink, kind, grid);
    write_lines(sink, "X", grid->a, grid->na);
    write_lines(sink, "Y", grid->b, grid->nb);
    sink_print(sink, "Z_COORDINATES 1 double\n0\nPOINT_DATA %zu\n", count);
    write_scalars(sink, plane, count);
    sink_print(sink, "VECTORS %s double\n",
               plane_kind_is_magnetic(kind) ? "magnetic_flux_density"
                                            : "electric_field");
    for (size_t k = 0; k < count; k++) {
        sink_number(sink, tidy(plane->field_a[k]), ' ');
        sink_number(sink, tidy(plane->field_b[k]), ' ');
        sink_bytes(sink, "0\n", 2);
    }
    return STATUS_OK;
}
