/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The text is looked at before the YAML library sees it: what is not UTF-8 or holds
 * control characters is refused with the place where it starts. */
#include "mesh/document_text.h"

#include <string.h>

#include <libfyaml.h>

#include "shared/mem.h"

/* Bytes of the UTF-8 character at text, 0 if it is malformed (Unicode 15, table 3-7). */
static size_t utf8_length(const unsigned char *text, size_t left)
{
    unsigned char c = text[0];
    if (c < 0x80)
        return 1;
    size_t n = c >= 0xC2 && c <= 0xDF     ? 2
               : (c & 0xF0) == 0xE0       ? 3
               : (c >= 0xF0 && c <= 0xF4) ? 4
                                          : 0;
    if (n == 0 || n > left)
        return 0;
    for (size_t k = 1; k < n; k++)
        if ((text[k] & 0xC0) != 0x80)
            return 0;
    bool outside = (c == 0xE0 && text[1] < 0xA0) || (c == 0xED && text[1] > 0x9F) ||
                   (c == 0xF0 && text[1] < 0x90) || (c == 0xF4 && text[1] > 0x8F);
    return outside ? 0 : n;
}

static bool is_control(unsigned char c)
{
    return (c < 0x20 && c != '\n' && c != '\t' && c != '\r') || c == 0x7F;
}

bool text_is_readable(const char *text, size_t length, struct mistakes *mistakes)
{
    struct place place = {1, 1};
    if (length > DOCUMENT_BYTES_MAX)
        return mistakes_add(mistakes, (struct place){0, 0},
                            "the file is too long; expected at most %d bytes; found "
                            "%zu",
                            DOCUMENT_BYTES_MAX, length);
    for (size_t k = 0; k < length;) {
        size_t n = utf8_length((const unsigned char *)text + k, length - k);
        if (n == 0 || is_control((unsigned char)text[k]))
            return mistakes_add(mistakes, (struct place){place.line, 0},
                                "this is no text file; expected UTF-8 text; found the "
                                "byte 0x%02X",
                                (unsigned)(unsigned char)text[k]);
        place.column++;
        if (text[k] == '\n')
            place = (struct place){place.line + 1, 1};
        k += n;
    }
    return true;
}

bool text_is_printable(const char *text)
{
    for (; *text != '\0'; text++)
        if (is_control((unsigned char)*text))
            return false;
    return true;
}

char *token_text(struct fy_token *token)
{
    size_t length = 0;
    const char *text = token != NULL ? fy_token_get_text(token, &length) : NULL;
    char *copy = mem_new(length + 1, 1);
    if (copy == NULL)
        return NULL;
    for (size_t k = 0; text != NULL && k < length; k++)
        copy[k] = text[k] != '\0' ? text[k] : '\x01';
    return copy;
}

/* The library's mark of a quoted scalar is behind the opening quote already. */
static bool stands_at(const char *text, const struct fy_mark *mark, const char *source,
                      size_t length)
{
    size_t size = strlen(text);
    size_t start = mark->input_pos;
    return start <= length && size <= length - start &&
           memcmp(source + start, text, size) == 0 && strchr(text, '\n') == NULL;
}

bool scalar_text(struct fy_token *token, const char *source, size_t length,
                 struct node *node)
{
    node->text = token_text(token);
    if (node->text == NULL)
        return false;
    const struct fy_mark *mark = token != NULL ? fy_token_start_mark(token) : NULL;
    node->quoted = token != NULL && fy_token_scalar_style(token) != FYSS_PLAIN;
    node->literal = mark != NULL && stands_at(node->text, mark, source, length);
    size_t size = strlen(node->text);
    if (size > 0 && node->text[size - 1] == '\n') /* the end of a block */
        node->text[size - 1] = '\0';
    return true;
}
