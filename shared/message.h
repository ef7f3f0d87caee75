/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SHARED_MESSAGE_H
#define EVENGAP_SHARED_MESSAGE_H

/* Messages for the user, collected rather than printed: several mistakes are reported
 * in one go, each with the place in the geometry file and the line itself. Nothing
 * below main prints them. */

#include <stddef.h>

#include "shared/attributes.h"

enum severity { SEVERITY_ERROR, SEVERITY_WARNING, SEVERITY_NOTE };

/* A place in the geometry file, counted from 1; line 0 means "the file as a whole". */
struct place {
    int line;
    int column;
};

struct message {
    enum severity severity;
    struct place place;
    char *text; /* one or more lines, no trailing newline */
};

/* Caller-owned; zeroed is valid and empty. */
struct messages {
    struct message *items; /* [count] in the order they were added */
    size_t count;
    size_t errors; /* how many items are SEVERITY_ERROR */
    int lost;      /* messages that could not be stored (out of memory) */
    char *file;    /* name shown before line:column; may be NULL */
    char *source;  /* the file's text, for showing lines; may be NULL */
};

/** Names the file and keeps a copy of its text for showing lines (either may be
 *  NULL). A copy that memory ran out for counts as lost. */
void messages_set_source(struct messages *messages, const char *file,
                         const char *source);

/** Adds one message; printf-style. messages may be NULL (nothing is kept). */
void messages_add(struct messages *messages, enum severity severity, struct place place,
                  const char *format, ...) PRINTF_LIKE(4, 5);

/** Text of message k as shown to the user: `file:line:column: error: text`, then the
 *  source line and a caret under the column. Caller frees with mem_free; NULL if
 *  memory ran out. */
char *messages_format(const struct messages *messages, size_t k);

/** Empties; safe on zeroed and twice. */
void messages_free(struct messages *messages);

#endif
