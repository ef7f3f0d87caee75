/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SHARED_STATUS_H
#define EVENGAP_SHARED_STATUS_H

/* What a function that can fail returns. The list is closed and short: it tells the
 * caller what to do next; the human part (where, expected, found) goes into
 * struct messages. */

#include "shared/attributes.h"

enum status {
    STATUS_OK = 0,    /* done */
    STATUS_INPUT,     /* the user's input is wrong; messages say where */
    STATUS_MEMORY,    /* an allocation failed or would not fit */
    STATUS_SIZE,      /* an argument is outside the range a routine can handle */
    STATUS_SINGULAR,  /* the system has no unique answer */
    STATUS_UNTRUSTED, /* an answer came out but fails its own checks */
    STATUS_WRITE,     /* a result could not be written */
    STATUS_COUNT      /* number of values above; not a status */
};

/** One sentence for a status, without a full stop; never NULL. */
const char *status_text(enum status status);

#endif
