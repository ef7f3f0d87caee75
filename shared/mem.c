/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "shared/mem.h"

#include <stdint.h>
#include <stdlib.h>
#include <string.h>

/* The only state in the library below main: a countdown that tests arm. */
static long failure_countdown = 0;

static int request_refused(size_t n, size_t size)
{
    if (failure_countdown > 0 && --failure_countdown == 0)
        return 1;
    return size != 0 && n > SIZE_MAX / size;
}

void *mem_new(size_t n, size_t size)
{
    if (request_refused(n, size))
        return NULL;
    return calloc(n > 0 ? n : 1, size > 0 ? size : 1);
}

void *mem_resize(void *array, size_t n, size_t size)
{
    if (request_refused(n, size))
        return NULL;
    size_t bytes = n * size;
    return realloc(array, bytes > 0 ? bytes : 1);
}

enum status mem_grow(void **array, size_t *capacity, size_t need, size_t size)
{
    if (need <= *capacity)
        return STATUS_OK;
    size_t n = *capacity < 8 ? 16 : 2 * *capacity;
    if (n < need)
        n = need;
    void *grown = mem_resize(*array, n, size);
    if (grown == NULL)
        return STATUS_MEMORY;
    *array = grown;
    *capacity = n;
    return STATUS_OK;
}

char *mem_text(const char *text)
{
    if (text == NULL)
        return NULL;
    size_t length = strlen(text);
    char *copy = mem_new(length + 1, 1);
    if (copy != NULL)
        memcpy(copy, text, length + 1);
    return copy;
}

void mem_free(void *array)
{
    free(array);
}

void mem_fail_at(long k)
{
    failure_countdown = k;
}
