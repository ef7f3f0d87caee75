/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_OUTPUT_FOLDER_H
#define EVENGAP_OUTPUT_FOLDER_H

/* A folder that appears whole or not at all. Files are written into a folder of
 * another name beside the final place; committing swaps it in. Whatever stops the
 * program before that leaves the previous folder as it was.
 *
 * Only a folder that this program wrote is ever replaced: it must hold a summary.json
 * with the marker {"evengap": ..., "kind": ...} and nothing that is not in its list of
 * "files". An empty folder may be replaced too. */

#include <stddef.h>

#include "output/sink.h"
#include "shared/attributes.h"
#include "shared/message.h"
#include "shared/status.h"

#define FOLDER_MARKER_FILE "summary.json"

/* Caller-owned; zeroed is empty. */
struct folder {
    char *target;     /* final path, links resolved */
    char *staging;    /* where the files are now; NULL before begin and after the end */
    const char *kind; /* borrowed: "summary" or "drawing" */
    char **names;     /* [count] files made so far, in order */
    size_t count;
};

/** Says early, before any work, whether a folder could be put at `path`. STATUS_WRITE
 *  with a message: something else is there, or the parent is missing or cannot be
 *  written to. STATUS_MEMORY. */
enum status folder_check(const char *path, const char *kind,
                         struct messages *messages) MUST_CHECK;

/** Makes the staging folder. Errors as folder_check. */
enum status folder_begin(struct folder *folder, const char *path, const char *kind,
                         struct messages *messages) MUST_CHECK;

/** Opens a new file of the folder and adds its name to the list. */
enum status folder_open(struct folder *folder, const char *name, struct sink *sink,
                        struct messages *messages) MUST_CHECK;

/** Adds the name of a file that something else wrote into the staging folder. */
enum status folder_note(struct folder *folder, const char *name) MUST_CHECK;

/** Path of a file in the staging folder; caller frees; NULL if memory ran out. */
char *folder_path(const struct folder *folder, const char *name);

/** Puts the folder in place and removes the previous one. STATUS_WRITE leaves the
 *  previous folder in place. On systems that cannot swap two names in one step there
 *  is a moment in which only `<path>.old-...` exists. */
enum status folder_commit(struct folder *folder, struct messages *messages) MUST_CHECK;

/** Removes what is staged, if anything, and empties the struct. Safe on zeroed, after
 *  a commit, and twice. */
void folder_free(struct folder *folder);

#endif
