/* SPDX-License-Identifier: GPL-3.0-or-later */

/* The child gets files, not pipes, so neither side can block on the other; and its
 * standard output is the picture, so the script names no path that would need
 * quoting. */

#include "output/gnuplot.h"

#include <errno.h>
#include <fcntl.h>
#include <spawn.h>
#include <stdio.h>
#include <string.h>
#include <sys/wait.h>
#include <unistd.h>

#include "shared/mem.h"

#define SCRIPT_NAME "plot.script"
#define FAULTS_NAME "plot.faults"
#define TAIL        "</svg>"

extern char **environ;

void plot_quote(struct sink *sink, const char *text)
{
    sink_print(sink, "'");
    for (; *text; text++) {
        if (*text == '\'')
            sink_print(sink, "''");
        else
            sink_print(sink, "%c", (unsigned char)*text < ' ' ? ' ' : *text);
    }
    sink_print(sink, "'");
}

enum status plot_begin(struct plot *plot, const struct folder *folder, const char *name,
                       int width, int height, struct messages *messages)
{
    *plot = (struct plot){.name = name};
    plot->script_path = folder_path(folder, SCRIPT_NAME);
    if (!plot->script_path)
        return STATUS_MEMORY;
    enum status status = sink_open(&plot->script, plot->script_path, messages);
    if (status) {
        plot_drop(plot);
        return status;
    }
    sink_print(&plot->script,
               "set terminal svg size %d,%d font 'DejaVu Sans,14' noenhanced "
               "background rgb 'white'\nset encoding utf8\n",
               width, height);
    return STATUS_OK;
}

void plot_drop(struct plot *plot)
{
    sink_drop(&plot->script);
    if (plot->script_path)
        (void)unlink(plot->script_path);
    mem_free(plot->script_path);
    *plot = (struct plot){0};
}

/* Starts gnuplot; 0 or an errno. */
static int start(char *script, const char *picture, const char *faults, pid_t *child)
{
    /* -d: the picture must not depend on anyone's gnuplot settings */
    char program[] = "gnuplot", defaults[] = "-d";
    char *const arguments[] = {program, defaults, script, NULL};
    posix_spawn_file_actions_t actions;
    int error = posix_spawn_file_actions_init(&actions);
    if (error)
        return error;
    int flags = O_WRONLY | O_CREAT | O_TRUNC;
    if (!(error = posix_spawn_file_actions_addopen(&actions, 0, "/dev/null", O_RDONLY,
                                                   0)) &&
        !(error =
              posix_spawn_file_actions_addopen(&actions, 1, picture, flags, 0666)) &&
        !(error = posix_spawn_file_actions_addopen(&actions, 2, faults, flags, 0666)))
        error = posix_spawnp(child, "gnuplot", &actions, NULL, arguments, environ);
    (void)posix_spawn_file_actions_destroy(&actions);
    return error;
}

/* Exit status of the child; -1 if it did not end by itself. */
static int wait_for(pid_t child)
{
    int state = 0;
    while (waitpid(child, &state, 0) < 0)
        if (errno != EINTR)
            return -1;
    return WIFEXITED(state) ? WEXITSTATUS(state) : -1;
}

static void warn_missing(const char *name, const char *reason,
                         struct messages *messages)
{
    messages_add(messages, SEVERITY_WARNING, (struct place){0, 0},
                 "%s is not drawn: gnuplot could not be started (%s)", name, reason);
}

/* Shows the first line gnuplot complained with. */
static void warn_rejected(const char *name, const char *faults,
                          struct messages *messages)
{
    char line[256] = "";
    FILE *file = fopen(faults, "r");
    while (file && fgets(line, sizeof line, file) &&
           strspn(line, " \t^\n") == strlen(line))
        continue;
    if (file)
        (void)fclose(file);
    line[strcspn(line, "\n")] = '\0';
    messages_add(messages, SEVERITY_WARNING, (struct place){0, 0},
                 "%s is not drawn: gnuplot failed%s%s", name, *line ? ": " : "", line);
}

/* gnuplot does not tell when the disk is full; a picture without its end does. */
static enum status check_whole(const char *picture, struct messages *messages)
{
    char tail[32] = "";
    FILE *file = fopen(picture, "r");
    size_t length = 0;
    if (file && fseek(file, -(long)(sizeof tail - 1), SEEK_END) == 0)
        length = fread(tail, 1, sizeof tail - 1, file);
    if (file)
        (void)fclose(file);
    tail[length] = '\0';
    if (strstr(tail, TAIL))
        return STATUS_OK;
    messages_add(messages, SEVERITY_ERROR, (struct place){0, 0},
                 "cannot write %s: the picture is cut short", picture);
    return STATUS_WRITE;
}

static enum status draw(char *script, const char *picture, const char *faults,
                        const char *name, bool *drawn, struct messages *messages)
{
    pid_t child;
    int error = start(script, picture, faults, &child);
    int result = error ? 127 : wait_for(child);
    if (result == 127)
        warn_missing(name, strerror(error ? error : ENOENT), messages);
    else if (result)
        warn_rejected(name, faults, messages);
    *drawn = result == 0;
    return *drawn ? check_whole(picture, messages) : STATUS_OK;
}

enum status plot_end(struct plot *plot, struct folder *folder, bool *drawn,
                     struct messages *messages)
{
    const char *name = plot->name;
    *drawn = false;
    char *picture = folder_path(folder, name),
         *faults = folder_path(folder, FAULTS_NAME);
    enum status status = sink_close(&plot->script, messages);
    if (!status && !(picture && faults))
        status = STATUS_MEMORY;
    if (!status)
        status = draw(plot->script_path, picture, faults, name, drawn, messages);
    if (!status && *drawn)
        status = folder_note(folder, name);
    if (picture && (status || !*drawn))
        (void)unlink(picture);
    if (faults)
        (void)unlink(faults);
    mem_free(picture);
    mem_free(faults);
    plot_drop(plot);
    return status;
}
