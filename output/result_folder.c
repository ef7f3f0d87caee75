/* SPDX-License-Identifier: GPL-3.0-or-later */

/* The order matters twice: the report embeds the pictures, and the summary, written
 * last, lists every file. A folder with a summary is a complete one. */

#include "output/result_folder.h"

#include <stdio.h>

#include "output/folder.h"
#include "output/interrupt.h"
#include "output/lattice_map.h"
#include "output/path_csv.h"
#include "output/plane_vtk.h"
#include "output/plot_convergence.h"
#include "output/plot_path.h"
#include "output/plot_plane.h"
#include "output/plot_section.h"
#include "output/report.h"
#include "output/sheet.h"
#include "output/summary.h"

#define NAME_SIZE 64

/* Closes after a writer: its failure comes first. */
static enum status finish(struct sink *sink, enum status status,
                          struct messages *messages)
{
    if (!status)
        status = sink_close(sink, messages);
    sink_drop(sink);
    return status;
}

static enum status write_plane(struct folder *folder, const struct result *result,
                               enum plane_kind kind, struct messages *messages)
{
    struct sink sink;
    char name[NAME_SIZE];
    bool drawn;
    (void)snprintf(name, sizeof name, "%s.vtk", plane_kind_key(kind));
    enum status status = folder_open(folder, name, &sink, messages);
    if (status)
        return status;
    status = plane_vtk_write(&sink, kind, &result->planes[kind], messages);
    status = finish(&sink, status, messages);
    if (!status)
        status = plot_plane_potential(folder, kind, &result->geometry->planes[kind],
                                      &result->planes[kind], &drawn, messages);
    return status;
}

static enum status write_path(struct folder *folder, const struct result *result,
                              struct messages *messages)
{
    struct sink sink;
    bool drawn;
    if (!result->profile.present)
        return STATUS_OK;
    enum status status = folder_open(folder, "path.csv", &sink, messages);
    if (status)
        return status;
    path_csv_write(&sink, &result->profile);
    status = finish(&sink, STATUS_OK, messages);
    return status ? status : plot_path(folder, result, &drawn, messages);
}

static enum status write_lattice(struct folder *folder,
                                 const struct lattice_field *lattice,
                                 struct messages *messages)
{
    struct sink sink;
    if (!lattice->present)
        return STATUS_OK;
    enum status status = folder_open(folder, "lattice.vtk", &sink, messages);
    if (status)
        return status;
    status = finish(&sink, lattice_map_write_vtk(&sink, lattice, messages), messages);
    if (!status)
        status = folder_open(folder, "lattice.csv", &sink, messages);
    if (status)
        return status;
    return finish(&sink, lattice_map_write_csv(&sink, lattice, messages), messages);
}

static enum status write_sheet(struct folder *folder, const struct result *result,
                               struct messages *messages)
{
    struct sink sink;
    enum status status = folder_open(folder, "sheet.txt", &sink, messages);
    if (status)
        return status;
    sheet_write(&sink, result);
    return finish(&sink, STATUS_OK, messages);
}

static enum status write_summary(struct folder *folder, const struct result *result,
                                 struct messages *messages)
{
    struct sink sink;
    enum status status = folder_open(folder, FOLDER_MARKER_FILE, &sink, messages);
    if (status)
        return status;
    status = summary_write(&sink, result, folder->names, folder->count);
    return finish(&sink, status, messages);
}

static enum status write_all(struct folder *folder, const struct result *result,
                             struct messages *messages)
{
    enum status status = STATUS_OK;
    bool drawn;
    for (int k = 0; !status && k < PLANE_KINDS; k++)
        if (result->planes[k].present)
            status = write_plane(folder, result, (enum plane_kind)k, messages);
    if (!status)
        status = write_path(folder, result, messages);
    if (!status)
        status = plot_section(folder, result, &drawn, messages);
    if (!status)
        status = plot_convergence(folder, result, &drawn, messages);
    if (!status)
        status = write_lattice(folder, &result->lattice, messages);
    if (!status)
        status = write_sheet(folder, result, messages);
    if (!status)
        status = report_write(folder, result, messages);
    if (!status)
        status = write_summary(folder, result, messages);
    return status;
}

enum status result_folder_write(const struct result *result, const char *path,
                                struct messages *messages)
{
    struct folder folder = {0};
    interrupt_watch();
    enum status status = folder_begin(&folder, path, RESULT_KIND, messages);
    if (!status)
        status = write_all(&folder, result, messages);
    if (!status)
        status = folder_commit(&folder, messages);
    folder_free(&folder);
    interrupt_release();
    return status;
}

static enum status write_drawing(struct folder *folder, const struct geometry *geometry,
                                 const struct grid *grids, struct messages *messages)
{
    struct sink sink;
    enum status status = STATUS_OK;
    for (int k = 0; !status && k < PLANE_KINDS; k++) {
        bool drawn = true;
        if (geometry->planes[k].present)
            status = plot_plane_grid(folder, &geometry->planes[k], &grids[k], &drawn,
                                     messages);
        if (!status && !drawn) {
            messages_add(messages, SEVERITY_ERROR, (struct place){0, 0},
                         "there is no drawing without gnuplot");
            status = STATUS_WRITE;
        }
    }
    if (!status)
        status = folder_open(folder, FOLDER_MARKER_FILE, &sink, messages);
    if (status)
        return status;
    status = summary_write_drawing(&sink, geometry, folder->names, folder->count);
    return finish(&sink, status, messages);
}

enum status result_folder_write_drawing(const struct geometry *geometry,
                                        const struct grid *grids, const char *path,
                                        struct messages *messages)
{
    struct folder folder = {0};
    interrupt_watch();
    enum status status = folder_begin(&folder, path, DRAWING_KIND, messages);
    if (!status)
        status = write_drawing(&folder, geometry, grids, messages);
    if (!status)
        status = folder_commit(&folder, messages);
    folder_free(&folder);
    interrupt_release();
    return status;
}
