/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_MESH_GEOMETRY_CHECK_H
#define EVENGAP_MESH_GEOMETRY_CHECK_H

/* Judges a geometry as a whole, before any grid exists: overlaps of parts at different
 * potential, parts outside their region, unused supplies, planes without a driving
 * potential, probes, paths and lattices outside the solved region, paths through parts,
 * limits that lack what they need. */

#include "mesh/geometry.h"
#include "shared/attributes.h"
#include "shared/message.h"
#include "shared/status.h"

/** STATUS_INPUT if at least one error was added to messages; warnings may be added in
 *  either case. STATUS_MEMORY. */
enum status geometry_check(const struct geometry *geometry,
                           struct messages *messages) MUST_CHECK;

#endif
