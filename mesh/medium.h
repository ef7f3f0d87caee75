/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_MESH_MEDIUM_H
#define EVENGAP_MESH_MEDIUM_H

/* What fills a place of a plane: an insulator, named by its part index, vacuum, or a
 * conductor. Where insulators overlap the later part holds, and conductors hold before
 * insulators. */

#include <stdbool.h>

#include "mesh/geometry.h"

enum {
    MEDIUM_VACUUM = -1,
    MEDIUM_CONDUCTOR = -2,
    MEDIUM_MIXED = -3, /* of a cell: more than one */
    MEDIUM_BORDER = -4 /* of a node: on an interface that follows a grid line */
};

/** True if the plane has insulators. */
bool plane_has_media(const struct plane *plane);

/** The medium at a point. */
int plane_medium_at(const struct plane *plane, struct vec2 at);

/** Coefficient of a medium: the relative permittivity, 1 in vacuum. */
double medium_coefficient(const struct plane *plane, int medium);

#endif
