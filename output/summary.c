/* SPDX-License-Identifier: GPL-3.0-or-later */

/* The tree is built whole and written in one go. Building is written as plain
 * statements: a put that fails for lack of memory is noted in the builder, and judged
 * once at the end. */

#include "output/summary.h"

#include <jansson.h>
#include <math.h>

#include "output/words.h"
#include "shared/mem.h"
#include "solver/figures_conductor.h"

#define DIGITS      16
#define MATRIX_NAME 256
#define SENTENCE    1000

struct builder {
    bool failed;
};

/* Takes ownership of value. */
static void put(struct builder *builder, json_t *object, const char *key, json_t *value)
{
    if (json_object_set_new(object, key, value))
        builder->failed = true;
}

/* Takes ownership of value; returns it for filling, NULL when it could not be stored. */
static json_t *append(struct builder *builder, json_t *array, json_t *value)
{
    if (!json_array_append_new(array, value))
        return value;
    builder->failed = true;
    return NULL;
}

static json_t *put_array(struct builder *builder, json_t *object, const char *key)
{
    json_t *array = json_array();
    put(builder, object, key, array);
    return builder->failed ? NULL : array;
}

static json_t *put_object(struct builder *builder, json_t *object, const char *key)
{
    json_t *child = json_object();
    put(builder, object, key, child);
    return builder->failed ? NULL : child;
}

static json_t *real(double value, bool known)
{
    return known && isfinite(value) ? json_real(value + 0.0) : json_null();
}

/* A file name may hold any bytes; JSON holds only UTF-8. Such a name keeps its ASCII
 * part. */
static json_t *repaired(const char *value)
{
    char *copy = mem_text(value);
    for (char *byte = copy; byte && *byte; byte++)
        if ((unsigned char)*byte >= 0x80)
            *byte = '?';
    json_t *string = copy ? json_string(copy) : NULL;
    mem_free(copy);
    return string;
}

static bool is_ascii(const char *value)
{
    for (; *value; value++)
        if ((unsigned char)*value >= 0x80)
            return false;
    return true;
}

static json_t *text(const char *value)
{
    if (!value)
        return json_null();
    json_t *string = json_string(value);
    return string || is_ascii(value) ? string : repaired(value);
}

static void put_head(struct builder *builder, json_t *root, const char *kind,
                     const struct geometry *geometry)
{
    put(builder, root, "evengap", json_integer(1));
    put(builder, root, "kind", text(kind));
    put(builder, root, "version", text(EVENGAP_VERSION));
    put(builder, root, "geometry", text(words_base_name(geometry->path)));
    put(builder, root, "title", text(geometry->title));
}

static void put_limit(struct builder *builder, json_t *array,
                      const struct verdict_item *item)
{
    const struct limit_rule *rule = geometry_limit_rule(item->limit);
    json_t *object = append(builder, array, json_object());
    put(builder, object, "limit", text(rule->key));
    put(builder, object, "sense", text(rule->at_least ? "at_least" : "at_most"));
    put(builder, object, "allowed", real(item->allowed, true));
    put(builder, object, "unit", text(rule->unit));
    put(builder, object, "figure", text(item->figure ? item->figure->name : NULL));
    put(builder, object, "value", real(item->value, item->judged));
    put(builder, object, "uncertainty", real(item->uncertainty, item->judged));
    put(builder, object, "judged", json_boolean(item->judged));
    put(builder, object, "met", json_boolean(item->met));
    put(builder, object, "reason", text(item->reason));
}

static void put_verdict(struct builder *builder, json_t *root,
                        const struct verdict *verdict)
{
    json_t *object = put_object(builder, root, "verdict");
    put(builder, object, "within_limits", json_boolean(verdict->all_met));
    json_t *array = put_array(builder, object, "limits");
    for (size_t k = 0; k < verdict->count; k++)
        put_limit(builder, array, &verdict->items[k]);
}

static void put_cautions(struct builder *builder, json_t *root,
                         const struct cautions *cautions)
{
    json_t *array = put_array(builder, root, "cautions");
    for (size_t k = 0; k < cautions->count; k++) {
        const struct caution *caution = &cautions->items[k];
        json_t *object = append(builder, array, json_object());
        put(builder, object, "figure", text(caution->figure));
        put(builder, object, "subject", text(caution->subject));
        put(builder, object, "text", text(caution->text));
    }
}

static void put_quality(struct builder *builder, json_t *array,
                        const struct quality *quality)
{
    json_t *object = append(builder, array, json_object());
    put(builder, object, "unknowns", json_integer(quality->unknowns));
    put(builder, object, "residual", real(quality->residual, true));
    put(builder, object, "reciprocal_condition", real(quality->rcond, true));
    put(builder, object, "flux_imbalance", real(quality->flux_imbalance, true));
}

static void put_open(struct builder *builder, json_t *plane,
                     const struct open_test *open)
{
    json_t *object = put_object(builder, plane, "open_sides");
    put(builder, object, "distance", real(open->distance, true));
    put(builder, object, "grid", json_integer(open->level + 1));
    put(builder, object, "largest_movement", real(open->moved, true));
    put(builder, object, "of_figure", text(open->moved_most));
    put(builder, object, "factor", real(open->factor, true));
    put(builder, object, "unsettled", json_integer(open->unsettled));
}

static void put_matrix(struct builder *builder, json_t *plane,
                       const struct matrix_view *view, const struct quality *quality)
{
    json_t *object = put_object(builder, plane, "capacitance_matrix");
    json_t *names = put_array(builder, object, "conductors");
    put(builder, object, "unit", text(view->first->unit));
    json_t *values = put_array(builder, object, "value");
    json_t *errors = put_array(builder, object, "uncertainty");
    for (size_t i = 0; i < view->count; i++) {
        char name[MATRIX_NAME];
        matrix_name(view, i, name, sizeof name);
        (void)append(builder, names, text(name));
        json_t *value_row = append(builder, values, json_array());
        json_t *error_row = append(builder, errors, json_array());
        for (size_t j = 0; j < view->count; j++) {
            const struct figure *entry = matrix_entry(view, i, j);
            const bool known = entry->state != FIGURE_MISSING;
            (void)append(builder, value_row, real(entry->value, known));
            (void)append(builder, error_row, real(entry->uncertainty, known));
        }
    }
    put(builder, object, "reciprocity", real(quality->reciprocity, true));
    put(builder, object, "row_sum", real(quality->row_sum, true));
}

static void put_plane(struct builder *builder, json_t *array, enum plane_kind kind,
                      const struct result *result)
{
    const struct plane_result *plane = &result->planes[kind];
    struct matrix_view matrix;
    json_t *object = append(builder, array, json_object());
    put(builder, object, "plane", text(plane_kind_key(kind)));
    json_t *axes = put_array(builder, object, "axes");
    (void)append(builder, axes, text(axis_key(plane_kind_axis(kind, 0))));
    (void)append(builder, axes, text(axis_key(plane_kind_axis(kind, 1))));
    json_t *grid = put_array(builder, object, "grid");
    (void)append(builder, grid, json_integer(plane->grid.na));
    (void)append(builder, grid, json_integer(plane->grid.nb));
    json_t *levels = put_array(builder, object, "levels");
    for (int k = 0; k < plane->levels; k++)
        put_quality(builder, levels, &plane->quality[k]);
    if (matrix_find(&result->figures, kind, &matrix))
        put_matrix(builder, object, &matrix, &plane->quality[plane->levels - 1]);
    if (plane->open.done)
        put_open(builder, object, &plane->open);
}

static void put_refined(struct builder *builder, json_t *array, enum plane_kind kind,
                        const struct accuracy_plane *plane)
{
    json_t *object = append(builder, array, json_object());
    put(builder, object, "plane", text(plane_kind_key(kind)));
    put(builder, object, "all_lines", real(plane->factor, true));
    json_t *parts = put_array(builder, object, "parts");
    for (size_t k = 0; k < plane->part_count; k++) {
        json_t *part = append(builder, parts, json_object());
        put(builder, part, "name", text(plane->parts[k].name));
        put(builder, part, "factor", real(plane->parts[k].factor, true));
    }
}

/* null where no accuracy was asked for. */
static void put_accuracy(struct builder *builder, json_t *root,
                         const struct result *result)
{
    const struct accuracy *accuracy = &result->accuracy;
    char sentence[SENTENCE];
    if (accuracy->state == ACCURACY_NOT_ASKED) {
        put(builder, root, "accuracy", json_null());
        return;
    }
    json_t *object = put_object(builder, root, "accuracy");
    accuracy_sentence(accuracy, sentence, sizeof sentence);
    put(builder, object, "within", real(accuracy->within, true));
    put(builder, object, "state", text(accuracy_key(accuracy->state)));
    put(builder, object, "text", text(sentence));
    put(builder, object, "of_limits", json_boolean(accuracy->of_limits));
    put(builder, object, "rounds", json_integer(accuracy->rounds));
    json_t *items = put_array(builder, object, "figures");
    for (size_t k = 0; k < accuracy->count; k++) {
        const struct accuracy_item *item = &accuracy->items[k];
        json_t *entry = append(builder, items, json_object());
        put(builder, entry, "name", text(item->name));
        put(builder, entry, "reached", real(item->reached, item->stands));
        put(builder, entry, "relative_to", text(item->of_limit ? "limit" : "value"));
        put(builder, entry, "met", json_boolean(item->met));
    }
    json_t *planes = put_array(builder, object, "refined");
    for (int k = 0; k < PLANE_KINDS; k++)
        if (result->planes[k].present)
            put_refined(builder, planes, (enum plane_kind)k, &accuracy->planes[k]);
}

static void put_figure(struct builder *builder, json_t *array,
                       const struct figure *figure)
{
    static const char *const groups[FIGURE_GROUPS] = {"beam", "along", "across",
                                                      "hardware"};
    bool known = figure->state != FIGURE_MISSING;
    json_t *object = append(builder, array, json_object());
    put(builder, object, "name", text(figure->name));
    put(builder, object, "title", text(figure->title));
    put(builder, object, "subject", text(figure->subject));
    put(builder, object, "group", text(groups[figure->group]));
    json_t *planes = put_array(builder, object, "planes");
    for (unsigned k = 0; k < PLANE_KINDS; k++)
        if (figure->planes & (1U << k))
            (void)append(builder, planes, text(plane_kind_key((enum plane_kind)k)));
    put(builder, object, "value", real(figure->value, known));
    put(builder, object, "uncertainty", real(figure->uncertainty, known));
    json_t *grids = put_array(builder, object, "grids");
    for (int k = 0; k < figure->grid_count; k++)
        (void)append(builder, grids, real(figure->grids[k], true));
    put(builder, object, "unit", text(figure->unit));
    put(builder, object, "state", text(words_state(figure->state)));
    put(builder, object, "note", text(figure->note));
}

/* {"z": first, "x": second}, by the axes of the plane. */
static void put_pair(struct builder *builder, json_t *object, const char *key,
                     enum plane_kind kind, double first, double second)
{
    json_t *pair = put_object(builder, object, key);
    put(builder, pair, axis_key(plane_kind_axis(kind, 0)), real(first, true));
    put(builder, pair, axis_key(plane_kind_axis(kind, 1)), real(second, true));
}

static void put_probe(struct builder *builder, json_t *array,
                      const struct geometry *geometry,
                      const struct probe_reading *probe)
{
    enum plane_kind kind = probe->plane;
    bool magnetic = plane_kind_is_magnetic(kind);
    json_t *object = append(builder, array, json_object());
    put(builder, object, "index", json_integer((json_int_t)probe->probe));
    put(builder, object, "plane", text(plane_kind_key(kind)));
    put_pair(builder, object, "place", kind, probe->at.a, probe->at.b);
    put(builder, object, "potential", real(probe->potential, true));
    put(builder, object, "potential_uncertainty", real(probe->potential_err, true));
    put(builder, object, "potential_unit", text(magnetic ? "A" : "V"));
    put_pair(builder, object, "field", kind, probe->field[0], probe->field[1]);
    put_pair(builder, object, "field_uncertainty", kind, probe->field_err[0],
             probe->field_err[1]);
    put(builder, object, "field_unit", text(magnetic ? "T" : "V/m"));
    const struct plane *plane = &geometry->planes[kind];
    bool inside = probe->part >= 0 && (size_t)probe->part < plane->part_count;
    put(builder, object, "part", text(inside ? plane->parts[probe->part].name : NULL));
}

static void put_files(struct builder *builder, json_t *root, char *const *files,
                      size_t count)
{
    json_t *array = put_array(builder, root, "files");
    for (size_t k = 0; k < count; k++)
        (void)append(builder, array, text(files[k]));
}

static int dump_part(const char *buffer, size_t size, void *context)
{
    sink_bytes(context, buffer, size);
    return 0;
}

static enum status dump(struct sink *sink, json_t *root, bool failed)
{
    size_t flags = JSON_INDENT(2) | JSON_PRESERVE_ORDER | JSON_REAL_PRECISION(DIGITS);
    if (!failed && json_dump_callback(root, dump_part, sink, flags))
        failed = true;
    sink_print(sink, "\n");
    json_decref(root);
    return failed ? STATUS_MEMORY : STATUS_OK;
}

enum status summary_write(struct sink *sink, const struct result *result,
                          char *const *files, size_t file_count)
{
    struct builder builder = {false};
    const struct geometry *geometry = result->geometry;
    json_t *root = json_object();
    put_head(&builder, root, "summary", geometry);
    put_verdict(&builder, root, &result->verdict);
    put_cautions(&builder, root, &result->cautions);
    put_accuracy(&builder, root, result);
    json_t *planes = put_array(&builder, root, "planes");
    for (int k = 0; k < PLANE_KINDS; k++)
        if (result->planes[k].present)
            put_plane(&builder, planes, (enum plane_kind)k, result);
    json_t *figures = put_array(&builder, root, "figures");
    for (size_t k = 0; k < result->figures.count; k++)
        put_figure(&builder, figures, &result->figures.items[k]);
    json_t *probes = put_array(&builder, root, "probes");
    for (size_t k = 0; k < result->probe_count; k++)
        put_probe(&builder, probes, geometry, &result->probes[k]);
    put_files(&builder, root, files, file_count);
    return dump(sink, root, builder.failed);
}

enum status summary_write_drawing(struct sink *sink, const struct geometry *geometry,
                                  char *const *files, size_t file_count)
{
    struct builder builder = {false};
    json_t *root = json_object();
    put_head(&builder, root, "drawing", geometry);
    put_files(&builder, root, files, file_count);
    return dump(sink, root, builder.failed);
}
