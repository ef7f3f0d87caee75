/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Read, check, look at the target, work, write, print: each step only after the one
 * before it succeeded. The target is looked at before the long work. */

#include "output/command.h"

#include <string.h>

#include "mesh/geometry_check.h"
#include "mesh/grid.h"
#include "mesh/reader.h"
#include "output/folder.h"
#include "output/number.h"
#include "output/result_folder.h"
#include "output/sheet.h"
#include "shared/mem.h"
#include "solver/run.h"

enum exit_code command_exit_code(enum status status, bool within_limits)
{
    switch (status) {
    case STATUS_OK:
        return within_limits ? EXIT_DONE : EXIT_LIMIT;
    case STATUS_INPUT:
        return EXIT_INPUT;
    case STATUS_WRITE:
        return EXIT_WRITE;
    case STATUS_MEMORY:
    case STATUS_SIZE:
    case STATUS_SINGULAR:
    case STATUS_UNTRUSTED:
    case STATUS_COUNT:
        break;
    }
    return EXIT_UNTRUSTED;
}

/* Never leaves a failure without a word. */
static void explain(enum status status, struct messages *messages)
{
    if (status && (status == STATUS_MEMORY || messages->errors == 0))
        messages_add(messages, SEVERITY_ERROR, (struct place){0, 0}, "%s",
                     status_text(status));
}

static enum status load(const struct command *command, struct geometry *geometry,
                        struct messages *messages)
{
    enum status status = reader_read_file(command->file, geometry, messages);
    return status ? status : geometry_check(geometry, messages);
}

static void show_progress(void *context, const char *stage, double fraction)
{
    FILE *file = context;
    (void)fprintf(file, "\r\033[K%3.0f %% %s", fraction * 100, stage);
    (void)fflush(file);
}

static void clear_progress(FILE *file)
{
    if (!file)
        return;
    (void)fprintf(file, "\r\033[K");
    (void)fflush(file);
}

static enum status solve(const struct command *command, const struct geometry *geometry,
                         FILE *progress, struct result *result,
                         struct messages *messages)
{
    struct run_options options = {.fineness = command->fineness,
                                  .levels = command->grids,
                                  .within = command->within,
                                  .progress = progress ? show_progress : NULL,
                                  .context = progress};
    enum status status = run_geometry(geometry, &options, result, messages);
    clear_progress(progress);
    return status;
}

static enum status print_sheet(const struct result *result, FILE *out,
                               struct messages *messages)
{
    struct sink sink;
    sink_wrap(&sink, out);
    sheet_write(&sink, result);
    return sink_close(&sink, messages);
}

enum exit_code command_run(const struct command *command, FILE *out, FILE *progress,
                           struct messages *messages)
{
    struct geometry geometry = {0};
    struct result result = {0};
    char *path = command_folder(command);
    enum status status = path ? load(command, &geometry, messages) : STATUS_MEMORY;
    if (!status)
        status = folder_check(path, RESULT_KIND, messages);
    if (!status)
        status = solve(command, &geometry, progress, &result, messages);
    if (!status)
        status = result_folder_write(&result, path, messages);
    if (!status && !command->quiet)
        status = print_sheet(&result, out, messages);
    explain(status, messages);
    enum exit_code code = command_exit_code(status, result.verdict.all_met);
    result_free(&result);
    geometry_free(&geometry);
    mem_free(path);
    return code;
}

static enum status build_grids(const struct command *command,
                               const struct geometry *geometry, struct grid *grids,
                               struct messages *messages)
{
    double fineness = command->fineness > 0 ? command->fineness : geometry->fineness;
    enum status worst = STATUS_OK;
    for (int k = 0; k < PLANE_KINDS; k++) {
        if (!geometry->planes[k].present)
            continue;
        enum status status =
            grid_build(&geometry->planes[k],
                       &(struct grid_request){.fineness = fineness,
                                              .level = 0,
                                              .memory_budget = geometry->memory_budget},
                       &grids[k], messages);
        if (status == STATUS_MEMORY)
            return status;
        if (status)
            worst = status; /* go on: the other planes may have mistakes too */
    }
    return worst;
}

/* What the file gives of a part: potential, charge or permittivity. */
static void describe_given(const struct geometry *geometry, const struct part *part,
                           enum plane_kind kind, char *text, size_t size)
{
    char number[NUMBER_TEXT];
    if (part->kind == PART_INSULATOR) {
        number_format(part->permittivity, 0, number, sizeof number);
        (void)snprintf(text, size, "eps %s", number);
    } else if (part->kind == PART_FLOATING && part->charge == 0) {
        (void)snprintf(text, size, "uncharged");
    } else if (part->kind == PART_FLOATING) {
        number_quantity(part->charge, 0, plane_kind_is_turned(kind) ? "C" : "C/m", text,
                        size);
    } else {
        number_quantity(geometry_potential(geometry, &part->potential), 0,
                        plane_kind_is_magnetic(kind) ? "A" : "V", text, size);
    }
}

static void list_part(struct sink *sink, const struct geometry *geometry,
                      const struct part *part, enum plane_kind kind)
{
    struct vec2 low, high;
    char value[NUMBER_TEXT + 8];
    shape_bounds(&part->shape, &low, &high);
    describe_given(geometry, part, kind, value, sizeof value);
    sink_print(sink, "    %-9s %-28s %-11s %.6g..%.6g, %.6g..%.6g mm\n",
               part_kind_key(part->kind), part->name, value, low.a * 1e3, high.a * 1e3,
               low.b * 1e3, high.b * 1e3);
}

static void list_plane(struct sink *sink, const struct geometry *geometry,
                       const struct plane *plane, const struct grid *grid)
{
    const char *a = axis_key(plane_kind_axis(plane->kind, 0));
    const char *b = axis_key(plane_kind_axis(plane->kind, 1));
    sink_print(sink, "\n%s\n", plane_kind_key(plane->kind));
    sink_print(sink, "  region %s %.6g..%.6g mm, %s %.6g..%.6g mm\n", a,
               plane->low.a * 1e3, plane->high.a * 1e3, b, plane->low.b * 1e3,
               plane->high.b * 1e3);
    sink_print(sink, "  sides %s: %s, %s; %s: %s, %s\n", a,
               side_kind_key(plane->sides[SIDE_A_LOW].kind),
               side_kind_key(plane->sides[SIDE_A_HIGH].kind), b,
               side_kind_key(plane->sides[SIDE_B_LOW].kind),
               side_kind_key(plane->sides[SIDE_B_HIGH].kind));
    sink_print(sink, "  coarsest grid %d by %d lines, %d unknowns, %zu cut legs\n",
               grid->na, grid->nb, grid->free_count, grid->cut_count);
    sink_print(sink, "  %zu parts (%s range, %s range)\n", plane->part_count, a, b);
    for (size_t k = 0; k < plane->part_count; k++)
        list_part(sink, geometry, &plane->parts[k], plane->kind);
}

static enum status list_geometry(const struct geometry *geometry,
                                 const struct grid *grids, const char *path, FILE *out,
                                 struct messages *messages)
{
    struct sink sink;
    sink_wrap(&sink, out);
    sink_print(&sink, "%s\n", geometry->title ? geometry->title : "(untitled)");
    sink_print(&sink, "drawn in %s\n", path);
    for (int k = 0; k < PLANE_KINDS; k++)
        if (geometry->planes[k].present)
            list_plane(&sink, geometry, &geometry->planes[k], &grids[k]);
    return sink_close(&sink, messages);
}

enum exit_code command_draw(const struct command *command, FILE *out,
                            struct messages *messages)
{
    struct geometry geometry = {0};
    struct grid grids[PLANE_KINDS];
    memset(grids, 0, sizeof grids);
    char *path = command_folder(command);
    enum status status = path ? load(command, &geometry, messages) : STATUS_MEMORY;
    if (!status)
        status = folder_check(path, DRAWING_KIND, messages);
    if (!status)
        status = build_grids(command, &geometry, grids, messages);
    if (!status)
        status = result_folder_write_drawing(&geometry, grids, path, messages);
    if (!status && !command->quiet)
        status = list_geometry(&geometry, grids, path, out, messages);
    explain(status, messages);
    for (int k = 0; k < PLANE_KINDS; k++)
        grid_free(&grids[k]);
    geometry_free(&geometry);
    mem_free(path);
    return command_exit_code(status, true);
}
