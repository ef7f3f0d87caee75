/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_TESTS_SMALL_FILTER_H
#define EVENGAP_TESTS_SMALL_FILTER_H

/* A small filter with all four planes, read from a geometry text as a user's file is:
 * probes, limits and a lattice included, at half the default fineness. */

#include "mesh/geometry.h"

/** Fills *geometry; aborts on failure. Free with geometry_free. */
void small_filter(struct geometry *geometry);

#endif
