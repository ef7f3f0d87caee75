/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_OUTPUT_SINK_H
#define EVENGAP_OUTPUT_SINK_H

/* A stream that remembers its first failure. Writers print without looking; the one
 * who closes the sink learns whether everything arrived, and why not. */

#include <stdio.h>

#include "shared/attributes.h"
#include "shared/message.h"
#include "shared/status.h"

/* Caller-owned; zeroed is closed. */
struct sink {
    FILE *file;
    char *path;  /* for messages; NULL for a wrapped stream */
    int failure; /* errno of the first failed write; 0 if none */
};

/** Sink on an open stream, which stays open after sink_close. */
void sink_wrap(struct sink *sink, FILE *file);

/** Creates the file `path` (must not exist yet). STATUS_WRITE with a message,
 *  STATUS_MEMORY. */
enum status sink_open(struct sink *sink, const char *path,
                      struct messages *messages) MUST_CHECK;

/** Prints; after a failure nothing is written any more. */
void sink_print(struct sink *sink, const char *format, ...) PRINTF_LIKE(2, 3);

/** Prints a number as %.12g would, and then one character; fast (digits.h). */
void sink_number(struct sink *sink, double value, char after);

/** Writes length bytes. */
void sink_bytes(struct sink *sink, const void *bytes, size_t length);

/** Flushes and closes (a wrapped stream is only flushed). STATUS_WRITE with a message
 *  naming file and reason if any write failed. Safe on zeroed. */
enum status sink_close(struct sink *sink, struct messages *messages) MUST_CHECK;

/** Closes without judging; for the way out after another failure. Safe on zeroed. */
void sink_drop(struct sink *sink);

#endif
