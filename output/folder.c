/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Replacing a folder is the one dangerous thing the program does to a user's disk. So
 * the old one is recognised by its own summary.json first, strangers' files in it are a
 * reason to refuse, and it is removed only after the new one stands in its place. */

#define _XOPEN_SOURCE 700 /* NOLINT: asks the C library for realpath() */

#include "output/folder.h"

#include <dirent.h>
#include <errno.h>
#include <jansson.h>
#include <stdbool.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

#include "output/exchange.h"
#include "shared/mem.h"

#define PLACE_NONE ((struct place){0, 0})

static char *join(const char *first, const char *middle, const char *last)
{
    size_t size = strlen(first) + strlen(middle) + strlen(last) + 1;
    char *text = MEM_NEW(size, char);
    if (text)
        (void)snprintf(text, size, "%s%s%s", first, middle, last);
    return text;
}

static enum status refuse(struct messages *messages, const char *path,
                          const char *reason)
{
    messages_add(messages, SEVERITY_ERROR, PLACE_NONE,
                 "cannot put the result at %s: %s", path, reason);
    return STATUS_WRITE;
}

/* Path without trailing slashes and with links of an existing folder resolved. */
static char *resolve(const char *path)
{
    char *real = realpath(path, NULL);
    if (real) {
        char *copy = mem_text(real);
        free(real);
        return copy;
    }
    char *copy = mem_text(path);
    if (!copy)
        return NULL;
    for (size_t n = strlen(copy); n > 1 && copy[n - 1] == '/'; n--)
        copy[n - 1] = '\0';
    return copy;
}

static bool is_listed(const json_t *files, const char *name)
{
    size_t k;
    json_t *entry;
    json_array_foreach(files, k, entry)
    {
        const char *text = json_string_value(entry);
        if (text && strcmp(text, name) == 0)
            return true;
    }
    return false;
}

static bool is_dot(const char *name)
{
    return strcmp(name, ".") == 0 || strcmp(name, "..") == 0;
}

/* Looks for an entry that is not in the list (files may be NULL: nothing is). */
static enum status check_entries(const char *path, const json_t *files,
                                 struct messages *messages)
{
    DIR *directory = opendir(path);
    if (!directory)
        return refuse(messages, path, strerror(errno));
    enum status status = STATUS_OK;
    for (struct dirent *entry; !status && (entry = readdir(directory));) {
        if (is_dot(entry->d_name) || is_listed(files, entry->d_name))
            continue;
        messages_add(messages, SEVERITY_ERROR, PLACE_NONE,
                     "cannot put the result at %s: the folder exists and holds '%s', "
                     "which evengap did not write; move it or choose another folder "
                     "with --output",
                     path, entry->d_name);
        status = STATUS_WRITE;
    }
    (void)closedir(directory);
    return status;
}

static bool has_marker(const json_t *root, const char *kind)
{
    const char *found = json_string_value(json_object_get(root, "kind"));
    return json_is_integer(json_object_get(root, "evengap")) && found &&
           strcmp(found, kind) == 0;
}

static enum status check_ours(const char *path, const char *kind,
                              struct messages *messages)
{
    char *marker = join(path, "/", FOLDER_MARKER_FILE);
    if (!marker)
        return STATUS_MEMORY;
    json_t *root = json_load_file(marker, 0, NULL);
    mem_free(marker);
    const json_t *files =
        has_marker(root, kind) ? json_object_get(root, "files") : NULL;
    enum status status = check_entries(path, files, messages);
    json_decref(root);
    return status;
}

static enum status check_parent(const char *path, struct messages *messages)
{
    char *parent = mem_text(path);
    if (!parent)
        return STATUS_MEMORY;
    char *slash = strrchr(parent, '/');
    if (slash)
        slash[slash == parent ? 1 : 0] = '\0';
    int bad = access(slash ? parent : ".", W_OK | X_OK);
    mem_free(parent);
    return bad ? refuse(messages, path, strerror(errno)) : STATUS_OK;
}

static enum status check_target(const char *path, const char *kind,
                                struct messages *messages)
{
    struct stat found;
    if (!*path || is_dot(path))
        return refuse(messages, path, "not a name for a new folder");
    if (lstat(path, &found) == 0) {
        if (!S_ISDIR(found.st_mode))
            return refuse(messages, path, "something that is not a folder is there");
        enum status status = check_ours(path, kind, messages);
        if (status)
            return status;
    } else if (errno != ENOENT) {
        return refuse(messages, path, strerror(errno));
    }
    return check_parent(path, messages);
}

enum status folder_check(const char *path, const char *kind, struct messages *messages)
{
    char *target = resolve(path);
    if (!target)
        return STATUS_MEMORY;
    enum status status = check_target(target, kind, messages);
    mem_free(target);
    return status;
}

/* mkdtemp keeps others out; a result folder gets the rights any new folder would. */
static int open_to_umask(const char *path)
{
    mode_t mask = umask(0);
    (void)umask(mask);
    return chmod(path, 0777 & ~mask);
}

enum status folder_begin(struct folder *folder, const char *path, const char *kind,
                         struct messages *messages)
{
    *folder = (struct folder){.kind = kind};
    folder->target = resolve(path);
    char *staging = folder->target ? join(folder->target, ".new-", "XXXXXX") : NULL;
    if (!staging)
        return STATUS_MEMORY;
    enum status status = check_target(folder->target, kind, messages);
    if (!status && !mkdtemp(staging))
        status = refuse(messages, folder->target, strerror(errno));
    if (status) {
        mem_free(staging);
        return status;
    }
    folder->staging = staging;
    if (open_to_umask(staging))
        return refuse(messages, folder->target, strerror(errno));
    return STATUS_OK;
}

char *folder_path(const struct folder *folder, const char *name)
{
    return join(folder->staging, "/", name);
}

enum status folder_note(struct folder *folder, const char *name)
{
    char *copy = mem_text(name);
    char **names =
        copy ? mem_resize(folder->names, folder->count + 1, sizeof *names) : NULL;
    if (!names) {
        mem_free(copy);
        return STATUS_MEMORY;
    }
    folder->names = names;
    folder->names[folder->count++] = copy;
    return STATUS_OK;
}

enum status folder_open(struct folder *folder, const char *name, struct sink *sink,
                        struct messages *messages)
{
    *sink = (struct sink){0};
    enum status status = folder_note(folder, name);
    if (status)
        return status;
    char *path = folder_path(folder, name);
    status = path ? sink_open(sink, path, messages) : STATUS_MEMORY;
    mem_free(path);
    return status;
}

/* Removes a folder of plain files. */
static int remove_flat(const char *path)
{
    DIR *directory = opendir(path);
    if (!directory)
        return -1;
    for (struct dirent *entry; (entry = readdir(directory));) {
        if (!is_dot(entry->d_name))
            (void)unlinkat(dirfd(directory), entry->d_name, 0);
    }
    (void)closedir(directory);
    return rmdir(path);
}

/* For systems without a swap. Leaves the path of the previous folder in staging. */
static int move_aside(struct folder *folder)
{
    char *aside = join(folder->target, ".old-", strrchr(folder->staging, '-') + 1);
    if (!aside) {
        errno = ENOMEM;
        return -1;
    }
    int bad = rename(folder->target, aside);
    if (!bad && rename(folder->staging, folder->target)) {
        int reason = errno;
        (void)rename(aside, folder->target);
        errno = reason;
        bad = -1;
    }
    if (bad) {
        mem_free(aside);
        return bad;
    }
    mem_free(folder->staging);
    folder->staging = aside;
    return 0;
}

static void remove_previous(const char *path, struct messages *messages)
{
    if (remove_flat(path))
        messages_add(messages, SEVERITY_WARNING, PLACE_NONE,
                     "the previous result could not be removed and is now %s: %s", path,
                     strerror(errno));
}

enum status folder_commit(struct folder *folder, struct messages *messages)
{
    enum status status = check_target(folder->target, folder->kind, messages);
    if (status)
        return status;
    struct stat found;
    if (lstat(folder->target, &found)) { /* nothing there: a rename is one step */
        if (rename(folder->staging, folder->target))
            return refuse(messages, folder->target, strerror(errno));
    } else {
        if (exchange_paths(folder->staging, folder->target) && move_aside(folder))
            return refuse(messages, folder->target, strerror(errno));
        remove_previous(folder->staging, messages);
    }
    mem_free(folder->staging);
    folder->staging = NULL;
    return STATUS_OK;
}

void folder_free(struct folder *folder)
{
    if (folder->staging)
        (void)remove_flat(folder->staging);
    for (size_t k = 0; k < folder->count; k++)
        mem_free(folder->names[k]);
    mem_free(folder->names);
    mem_free(folder->staging);
    mem_free(folder->target);
    *folder = (struct folder){0};
}
