/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "solver/plane_result.h"

#include <string.h>

#include "mesh/grid_crop.h"
#include "shared/mem.h"

/* Only what lies in the region as drawn is shown. */
static void crop_plane(struct plane_result *plane)
{
    const struct grid_window drawn = grid_drawn(&plane->grid);
    grid_crop_nodes(&plane->grid, drawn, plane->potential);
    grid_crop_nodes(&plane->grid, drawn, plane->field_a);
    grid_crop_nodes(&plane->grid, drawn, plane->field_b);
    grid_crop(&plane->grid, drawn);
}

static enum status fill_fields(const struct plane_solution *finest,
                               struct plane_result *plane)
{
    const size_t nodes = (size_t)finest->grid.na * (size_t)finest->grid.nb;
    const double factor = plane_field_factor(finest->plane->kind);
    plane->field_a = MEM_NEW(nodes, double);
    plane->field_b = MEM_NEW(nodes, double);
    if (plane->field_a == NULL || plane->field_b == NULL)
        return STATUS_MEMORY;
    field_at_nodes(&finest->grid, finest->phi, finest->part_value, plane->field_a,
                   plane->field_b);
    enum status status =
        field_mend_nodes(finest->field, plane->field_a, plane->field_b);
    for (size_t n = 0; n < nodes; n++) {
        plane->field_a[n] *= factor;
        plane->field_b[n] *= factor;
    }
    return status;
}

static enum status keep_plane(struct plane_family *family, int levels,
                              struct plane_result *plane)
{
    struct plane_solution *finest = &family->slots[levels - 1];
    plane->present = true;
    plane->levels = levels;
    for (int l = 0; l < levels; l++)
        plane->quality[l] = family->slots[l].quality;
    enum status status = fill_fields(finest, plane);
    if (status != STATUS_OK)
        return status;
    field_destroy(&finest->field); /* it points into what moves now */
    plane->potential = finest->phi;
    finest->phi = NULL;
    plane->grid = finest->grid;
    memset(&finest->grid, 0, sizeof finest->grid);
    if (plane->open.done)
        crop_plane(plane);
    return STATUS_OK;
}

enum status plane_results_keep(struct solve *solve, struct plane_result *planes)
{
    enum status status = STATUS_OK;
    for (int k = 0; k < PLANE_KINDS && status == STATUS_OK; k++)
        if (solve->families[k] != NULL)
            status = keep_plane(solve->families[k], solve->levels, &planes[k]);
    return status;
}
