/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Files are read whole before anything is parsed: they are small, and a file that
 * changes meanwhile cannot confuse the parser. Pipes and devices are refused, as they
 * might never end. */
#include "mesh/text_file.h"

#include <errno.h>
#include <stdio.h>

#include <sys/stat.h>

#include "shared/mem.h"

/* strerror may share a buffer between threads; these are the reasons that occur. */
static const char *open_reason(int error)
{
    switch (error) {
    case ENOENT:
        return "there is no such file";
    case EACCES:
        return "reading it is not permitted";
    case ENOTDIR:
        return "a part of its path is no directory";
    case ENAMETOOLONG:
        return "its name is too long";
    default:
        return "it cannot be opened";
    }
}

static const char *check_kind(const char *path, size_t max_bytes, size_t *length)
{
    struct stat info;
    if (stat(path, &info) != 0)
        return open_reason(errno);
    if (S_ISDIR(info.st_mode))
        return "it is a directory";
    if (!S_ISREG(info.st_mode))
        return "it is no ordinary file";
    if (info.st_size < 0 || (unsigned long long)info.st_size > max_bytes)
        return "it is too long";
    *length = (size_t)info.st_size;
    return NULL;
}

static enum status read_whole(FILE *file, char **text, size_t *length,
                              const char **reason)
{
    char *made = mem_new(*length + 1, 1);
    if (made == NULL)
        return STATUS_MEMORY;
    size_t got = fread(made, 1, *length, file);
    if (ferror(file)) {
        mem_free(made);
        *reason = "it cannot be read";
        return STATUS_INPUT;
    }
    *text = made;
    *length = got;
    return STATUS_OK;
}

enum status text_file_read(const char *path, size_t max_bytes, char **text,
                           size_t *length, const char **reason)
{
    *text = NULL;
    *length = 0;
    size_t size = 0;
    *reason = check_kind(path, max_bytes, &size);
    if (*reason != NULL)
        return STATUS_INPUT;
    FILE *file = fopen(path, "rb");
    if (file == NULL) {
        *reason = open_reason(errno);
        return STATUS_INPUT;
    }
    enum status status = read_whole(file, text, &size, reason);
    if (fclose(file) != 0 && status == STATUS_OK) {
        mem_free(*text);
        *text = NULL;
        *reason = "it cannot be read";
        status = STATUS_INPUT;
    }
    *length = status == STATUS_OK ? size : 0;
    return status;
}
