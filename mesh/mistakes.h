/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_MESH_MISTAKES_H
#define EVENGAP_MESH_MISTAKES_H

/* Counts the user's mistakes while they are passed on as messages, so that a reader or
 * a check can go on after a mistake and still tell at the end whether there was one. */

#include <stdbool.h>
#include <stddef.h>

#include "shared/attributes.h"
#include "shared/message.h"

#define MISTAKES_SHOWN 40 /* further mistakes are counted, not shown */

struct mistakes {
    struct messages *messages; /* borrowed; may be NULL */
    size_t count;
};

/** Adds an error message; printf-style. Always false, so that a failing function can
 *  return it. */
bool mistakes_add(struct mistakes *mistakes, struct place place, const char *format,
                  ...) PRINTF_LIKE(3, 4);

/** The candidate nearest to `word`, NULL if none is near enough to be a misspelling
 *  (about one letter in three wrong). Words beyond 40 characters have no neighbour. */
const char *nearest_word(const char *word, const char *const *candidates, size_t count);

#endif
