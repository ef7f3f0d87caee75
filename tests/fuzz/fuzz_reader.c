/* SPDX-License-Identifier: GPL-3.0-or-later */
/* libFuzzer entry: whatever the text, reading and checking must end with a status and,
 * unless it is STATUS_OK, with a message; every message must be fit to show. */
#include <stdint.h>
#include <stdlib.h>

#include "mesh/geometry_check.h"
#include "mesh/reader.h"
#include "shared/mem.h"

int LLVMFuzzerTestOneInput(const uint8_t *data, size_t size);

static void show_all(const struct messages *messages)
{
    for (size_t k = 0; k < messages->count; k++) {
        char *text = messages_format(messages, k);
        if (text == NULL)
            abort();
        mem_free(text);
    }
}

int LLVMFuzzerTestOneInput(const uint8_t *data, size_t size)
{
    struct geometry geometry;
    struct messages messages = {0};
    char *text = mem_new(size + 1, 1); /* messages show lines of a C string */
    if (text == NULL)
        return 0;
    for (size_t k = 0; k < size; k++)
        text[k] = (char)data[k];
    messages_set_source(&messages, "fuzz.yaml", text);
    enum status status =
        reader_read_text("fuzz.yaml", text, size, &geometry, &messages);
    if (status == STATUS_OK)
        status = geometry_check(&geometry, &messages);
    if ((status == STATUS_INPUT) != (messages.errors > 0))
        abort();
    show_all(&messages);
    geometry_free(&geometry);
    messages_free(&messages);
    mem_free(text);
    return 0;
}
