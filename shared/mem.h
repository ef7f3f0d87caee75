/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SHARED_MEM_H
#define EVENGAP_SHARED_MEM_H

/* Checked memory: the one place that allocates. Every request is an array of n items
 * of a size; the product is checked for overflow. Tests make the k-th request fail
 * with mem_fail_at. */

#include <stddef.h>

#include "shared/attributes.h"
#include "shared/status.h"

/** Zeroed array of n items of `size` bytes; NULL if it does not fit or n*size
 *  overflows. n = 0 gives a valid pointer to free. */
void *mem_new(size_t n, size_t size);

/** Array resized to n items of `size` bytes; NULL (old array untouched) on failure.
 *  New items are not initialised. */
void *mem_resize(void *array, size_t n, size_t size);

/** Room for at least `need` items of `size` bytes in *array, which may move; *capacity
 *  grows at least twofold when it grows. STATUS_MEMORY leaves both as they are. */
enum status mem_grow(void **array, size_t *capacity, size_t need,
                     size_t size) MUST_CHECK;

/** Copy of a string; NULL if text is NULL or memory ran out. */
char *mem_text(const char *text);

/** Frees; NULL is fine. */
void mem_free(void *array);

/** For tests: the k-th request from now fails (1 = the next one); 0 switches off. */
void mem_fail_at(long k);

#define MEM_NEW(n, type) ((type *)mem_new((n), sizeof(type)))

#endif
