/* SPDX-License-Identifier: GPL-3.0-or-later */

/* A disk can fill up at any byte. Rather than testing every print, the sink keeps the
 * errno of the first failure (a later fclose would have lost it) and stops writing. */

#include "output/sink.h"

#include <errno.h>
#include <fcntl.h>
#include <stdarg.h>
#include <string.h>
#include <unistd.h>

#include "output/digits.h"
#include "output/interrupt.h"
#include "shared/mem.h"

#define FILE_MODE 0666 /* narrowed by the umask */

void sink_wrap(struct sink *sink, FILE *file)
{
    *sink = (struct sink){.file = file};
}

static void report(const char *path, int failure, struct messages *messages)
{
    messages_add(messages, SEVERITY_ERROR, (struct place){0, 0}, "cannot write %s: %s",
                 path ? path : "the terminal output", strerror(failure));
}

enum status sink_open(struct sink *sink, const char *path, struct messages *messages)
{
    *sink = (struct sink){0};
    if (interrupt_seen()) {
        messages_add(messages, SEVERITY_ERROR, (struct place){0, 0},
                     "stopped by a signal before %s was written", path);
        return STATUS_WRITE;
    }
    sink->path = mem_text(path);
    if (!sink->path)
        return STATUS_MEMORY;
    int descriptor = open(path, O_WRONLY | O_CREAT | O_EXCL | O_CLOEXEC, FILE_MODE);
    if (descriptor >= 0)
        sink->file = fdopen(descriptor, "w");
    if (sink->file)
        return STATUS_OK;
    report(path, errno, messages);
    if (descriptor >= 0)
        (void)close(descriptor);
    sink_drop(sink);
    return STATUS_WRITE;
}

static void note_failure(struct sink *sink)
{
    sink->failure = errno ? errno : EIO;
}

void sink_print(struct sink *sink, const char *format, ...)
{
    if (sink->failure)
        return;
    va_list arguments;
    va_start(arguments, format);
    errno = 0;
    if (vfprintf(sink->file, format, arguments) < 0)
        note_failure(sink);
    va_end(arguments);
}

void sink_number(struct sink *sink, double value, char after)
{
    char text[DIGITS_TEXT + 1];
    size_t length = digits_write(value, text);
    text[length++] = after;
    sink_bytes(sink, text, length);
}

void sink_bytes(struct sink *sink, const void *bytes, size_t length)
{
    if (sink->failure)
        return;
    errno = 0;
    if (fwrite(bytes, 1, length, sink->file) != length)
        note_failure(sink);
}

enum status sink_close(struct sink *sink, struct messages *messages)
{
    if (!sink->file)
        return STATUS_OK;
    errno = 0;
    int bad = sink->path ? fclose(sink->file) : fflush(sink->file);
    if (bad && !sink->failure)
        note_failure(sink);
    sink->file = NULL;
    enum status status = sink->failure ? STATUS_WRITE : STATUS_OK;
    if (status)
        report(sink->path, sink->failure, messages);
    sink_drop(sink);
    return status;
}

void sink_drop(struct sink *sink)
{
    if (sink->file && sink->path)
        (void)fclose(sink->file);
    mem_free(sink->path);
    *sink = (struct sink){0};
}
