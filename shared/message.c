/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Messages are kept as plain text with a place; the line of the file is looked up only
 * when a message is shown. Text from the user's file may hold anything, so control
 * characters are replaced before it can reach a terminal. */
#include "shared/message.h"

#include <stdarg.h>
#include <stdio.h>
#include <string.h>

#include "shared/mem.h"

#define LINE_SHOWN 100 /* characters of a source line that are shown at most */
#define LEAD_SHOWN 60  /* of these, characters before the caret in a long line */

void messages_set_source(struct messages *messages, const char *file,
                         const char *source)
{
    if (messages == NULL)
        return;
    mem_free(messages->file);
    mem_free(messages->source);
    messages->file = mem_text(file);
    messages->source = mem_text(source);
    if ((file != NULL && messages->file == NULL) ||
        (source != NULL && messages->source == NULL))
        messages->lost++;
}

/* Room for one more item; the array doubles whenever its count is a power of two. */
static int messages_grow(struct messages *messages)
{
    size_t count = messages->count;
    if ((count & (count - 1)) != 0)
        return 1;
    size_t capacity = count == 0 ? 1 : 2 * count;
    struct message *items =
        mem_resize(messages->items, capacity, sizeof(struct message));
    if (items != NULL)
        messages->items = items;
    return items != NULL;
}

PRINTF_LIKE(1, 0) static char *format_text(const char *format, va_list arguments)
{
    va_list again;
    va_copy(again, arguments);
    int length = vsnprintf(NULL, 0, format, arguments);
    char *text = length < 0 ? NULL : mem_new((size_t)length + 1, 1);
    if (text != NULL)
        (void)vsnprintf(text, (size_t)length + 1, format, again);
    va_end(again);
    return text;
}

void messages_add(struct messages *messages, enum severity severity, struct place place,
                  const char *format, ...)
{
    if (messages == NULL)
        return;
    va_list arguments;
    va_start(arguments, format);
    char *text = format_text(format, arguments);
    va_end(arguments);
    if (text == NULL || !messages_grow(messages)) {
        mem_free(text);
        messages->lost++;
        return;
    }
    messages->items[messages->count++] = (struct message){severity, place, text};
    if (severity == SEVERITY_ERROR)
        messages->errors++;
}

static const char *severity_word(enum severity severity)
{
    switch (severity) {
    case SEVERITY_ERROR:
        return "error";
    case SEVERITY_WARNING:
        return "warning";
    case SEVERITY_NOTE:
        break;
    }
    return "note";
}

static int is_continuation(char c) /* a UTF-8 byte that starts no character */
{
    return ((unsigned char)c & 0xC0) == 0x80;
}

/* Start of a line (counted from 1) of the source; NULL if there is no such line. */
static const char *find_line(const char *source, int line)
{
    for (int k = 1; source != NULL && k < line; k++) {
        source = strchr(source, '\n');
        if (source != NULL)
            source++;
    }
    return source;
}

/* Steps over at most n characters, not beyond the end of the line. */
static const char *skip_characters(const char *text, int n)
{
    while (n > 0 && *text != '\0' && *text != '\n' && *text != '\r') {
        text++;
        while (is_continuation(*text))
            text++;
        n--;
    }
    return text;
}

static void replace_controls(char *text)
{
    for (; *text != '\0'; text++) {
        unsigned char c = (unsigned char)*text;
        if ((c < 0x20 && c != '\n' && c != '\t') || c == 0x7F)
            *text = '?';
    }
}

/* The source line and the caret below it: "\n  line\n  ^". Empty text if the place is
 * unknown, NULL if memory ran out. Tabs are repeated so that the caret lines up. */
static char *quote_line(const struct messages *messages, struct place place)
{
    const char *line = place.line > 0 ? find_line(messages->source, place.line) : NULL;
    if (line == NULL || place.column < 1)
        return mem_text("");
    int before = place.column - 1;
    if (before > LEAD_SHOWN) {
        line = skip_characters(line, before - LEAD_SHOWN);
        before = LEAD_SHOWN;
    }
    const char *caret = skip_characters(line, before);
    const char *end = skip_characters(line, LINE_SHOWN);
    size_t shown = (size_t)(end - line);
    char *text = mem_new(shown + (size_t)(caret - line) + 8, 1);
    if (text == NULL)
        return NULL;
    char *at = text + sprintf(text, "\n  %.*s\n  ", (int)shown, line);
    for (const char *c = line; c < caret; c++)
        if (!is_continuation(*c))
            *at++ = *c == '\t' ? '\t' : ' ';
    *at = '^';
    return text;
}

static void format_place(char *text, size_t size, struct place place)
{
    text[0] = '\0';
    if (place.line > 0 && place.column > 0)
        (void)snprintf(text, size, "%d:%d: ", place.line, place.column);
    else if (place.line > 0)
        (void)snprintf(text, size, "%d: ", place.line);
}

char *messages_format(const struct messages *messages, size_t k)
{
    const struct message *message = &messages->items[k];
    char *quote = quote_line(messages, message->place);
    if (quote == NULL)
        return NULL;
    char where[32];
    format_place(where, sizeof where, message->place);
    const char *file = messages->file != NULL ? messages->file : "";
    const char *colon = messages->file == NULL ? "" : where[0] != '\0' ? ":" : ": ";
    const char *word = severity_word(message->severity);
    size_t size = strlen(file) + strlen(colon) + strlen(where) + strlen(word) +
                  strlen(message->text) + strlen(quote) + 3;
    char *text = mem_new(size, 1);
    if (text != NULL) {
        (void)snprintf(text, size, "%s%s%s%s: %s%s", file, colon, where, word,
                       message->text, quote);
        replace_controls(text);
    }
    mem_free(quote);
    return text;
}

void messages_free(struct messages *messages)
{
    if (messages == NULL)
        return;
    for (size_t k = 0; k < messages->count; k++)
        mem_free(messages->items[k].text);
    mem_free(messages->items);
    mem_free(messages->file);
    mem_free(messages->source);
    *messages = (struct messages){0};
}
