/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "tests/bench/model_plates.h"

#include <string.h>

#include "shared/mem.h"

const struct model_reference model_square = {{0.0, 40e-3, 55e-3, 60e-3, 65e-3, 75e-3},
                                             {49.9999997827e3, 49.9688828191e3,
                                              46.9465347357e3, 39.6826984003e3,
                                              27.8706574731e3, 10.8964685982e3},
                                             6868.00517925,
                                             9555.26162592};

const struct model_reference model_rounded = {{0.0, 40e-3, 55e-3, 60e-3, 65e-3, 75e-3},
                                              {49.9999997615e3, 49.9658573173e3,
                                               46.6986668524e3, 39.1455423941e3,
                                               27.3467218744e3, 10.6989416485e3},
                                              6845.50367817,
                                              9524.61541779};

static enum status plate(struct part *part, const char *name, double low, double high,
                         double rounding, double potential)
{
    part->kind = PART_ELECTRODE;
    part->name = mem_text(name);
    part->potential.constant = potential;
    if (part->name == NULL)
        return STATUS_MEMORY;
    return shape_init_box(&part->shape, (struct vec2){-60e-3, low},
                          (struct vec2){60e-3, high}, rounding);
}

enum status model_plates(double rounding, struct geometry *geometry)
{
    memset(geometry, 0, sizeof *geometry);
    geometry->fineness = 1.0;
    geometry->memory_budget = 20e9;
    struct plane *plane = &geometry->planes[PLANE_ELECTRIC_ALONG];
    plane->present = true;
    plane->kind = PLANE_ELECTRIC_ALONG;
    plane->low = (struct vec2){-150e-3, -40e-3};
    plane->high = (struct vec2){150e-3, 40e-3};
    plane->parts = MEM_NEW(2, struct part);
    if (plane->parts == NULL)
        return STATUS_MEMORY;
    plane->part_count = 2;
    enum status status =
        plate(&plane->parts[0], "upper plate", 10e-3, 14e-3, rounding, 500.0);
    if (status == STATUS_OK)
        status =
            plate(&plane->parts[1], "lower plate", -14e-3, -10e-3, rounding, -500.0);
    return status;
}
