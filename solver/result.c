/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "solver/result.h"

#include <string.h>

#include "shared/mem.h"
#include "solver/cross_section.h"
#include "solver/lattice_field.h"
#include "solver/profile.h"
#include "solver/verdict.h"

static void plane_result_free(struct plane_result *plane)
{
    grid_free(&plane->grid);
    mem_free(plane->potential);
    mem_free(plane->field_a);
    mem_free(plane->field_b);
}

void result_free(struct result *result)
{
    for (int k = 0; k < PLANE_KINDS; k++)
        plane_result_free(&result->planes[k]);
    verdict_free(&result->verdict);
    cautions_free(&result->cautions);
    accuracy_free(&result->accuracy);
    figures_free(&result->figures);
    profile_free(&result->profile);
    section_free(&result->section);
    lattice_free(&result->lattice);
    mem_free(result->probes);
    memset(result, 0, sizeof *result);
}
