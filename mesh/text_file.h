/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_MESH_TEXT_FILE_H
#define EVENGAP_MESH_TEXT_FILE_H

#include <stddef.h>

#include "shared/attributes.h"
#include "shared/status.h"

/** Reads a regular file of at most max_bytes whole. *text is NUL-terminated and
 *  allocated. STATUS_INPUT with a static *reason ("no such file or directory", ...) if
 *  it cannot be read; STATUS_MEMORY. */
enum status text_file_read(const char *path, size_t max_bytes, char **text,
                           size_t *length, const char **reason) MUST_CHECK;

#endif
