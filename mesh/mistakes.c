/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Mistakes are passed on as they are found, in the order of the file. A file that is
 * wrong all over would drown its first, real mistake, so the flood is cut off. */
#include "mesh/mistakes.h"

#include <ctype.h>
#include <stdarg.h>
#include <stdio.h>
#include <string.h>

#define TEXT_MAX 1024 /* characters of a mistake; longer ones are cut */
#define WORD_MAX 40

bool mistakes_add(struct mistakes *mistakes, struct place place, const char *format,
                  ...)
{
    mistakes->count++;
    if (mistakes->count > MISTAKES_SHOWN + 1)
        return false;
    if (mistakes->count == MISTAKES_SHOWN + 1) {
        messages_add(mistakes->messages, SEVERITY_NOTE, place,
                     "there are more mistakes from here on; the first %d are shown",
                     MISTAKES_SHOWN);
        return false;
    }
    char text[TEXT_MAX];
    va_list arguments;
    va_start(arguments, format);
    (void)vsnprintf(text, sizeof text, format, arguments);
    va_end(arguments);
    messages_add(mistakes->messages, SEVERITY_ERROR, place, "%s", text);
    return false;
}

static size_t least(size_t p, size_t q, size_t r)
{
    size_t s = p < q ? p : q;
    return s < r ? s : r;
}

/* Insertions, deletions and changes of letters that turn p into q (Levenshtein 1966);
 * capital and small letters are the same. Both at most WORD_MAX long. */
static size_t edit_distance(const char *p, const char *q)
{
    size_t row[WORD_MAX + 1];
    size_t n = strlen(q);
    for (size_t j = 0; j <= n; j++)
        row[j] = j;
    for (size_t i = 1; p[i - 1] != '\0'; i++) {
        size_t diagonal = row[0];
        row[0] = i;
        for (size_t j = 1; j <= n; j++) {
            int same =
                tolower((unsigned char)p[i - 1]) == tolower((unsigned char)q[j - 1]);
            size_t changed = diagonal + (same ? 0 : 1);
            diagonal = row[j];
            row[j] = least(changed, row[j] + 1, row[j - 1] + 1);
        }
    }
    return row[n];
}

const char *nearest_word(const char *word, const char *const *candidates, size_t count)
{
    size_t length = strlen(word);
    size_t limit = length / 3 + 1; /* distance that is still a misspelling */
    const char *best = NULL;
    if (length > WORD_MAX)
        return NULL;
    for (size_t k = 0; k < count; k++) {
        if (strlen(candidates[k]) > WORD_MAX)
            continue;
        size_t distance = edit_distance(word, candidates[k]);
        if (distance <= limit && distance < length) {
            best = candidates[k];
            limit = distance > 0 ? distance - 1 : 0; /* later ones must be nearer */
        }
        if (distance == 0)
            return candidates[k];
    }
    return best;
}
