/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_MESH_READER_H
#define EVENGAP_MESH_READER_H

/* Reads a geometry file (YAML 1.2) into the geometry model. Every mistake becomes a
 * message with its place; reading goes on after a mistake so that several are reported
 * in one go. */

#include "mesh/geometry.h"
#include "shared/attributes.h"
#include "shared/message.h"
#include "shared/status.h"

/** Reads the file at `path`. STATUS_INPUT: at least one error message was added and
 *  the geometry is empty; STATUS_MEMORY. Outline files are looked up beside `path`. */
enum status reader_read_file(const char *path, struct geometry *geometry,
                             struct messages *messages) MUST_CHECK;

/** Reads text[length] as if it were the file `path` (also the entry for fuzzing). */
enum status reader_read_text(const char *path, const char *text, size_t length,
                             struct geometry *geometry,
                             struct messages *messages) MUST_CHECK;

#endif
