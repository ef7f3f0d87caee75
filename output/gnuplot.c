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
#define DATA_NAME   "plot.data"
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
    if (plot->data_path)
        (void)unlink(plot->data_path);
    mem_free(plot->script_path);
    mem_free(plot->data_path);
    *plot = (struct plot){0};
}

enum status plot_data(struct plot *plot, const struct folder *folder,
                      const double *values, size_t count, struct messages *messages)
{
    struct sink data = {0};
    plot->data_path = folder_path(folder, DATA_NAME);
    if (!plot->data_path)
        return STATUS_MEMORY;
    enum status status = sink_open(&data, plot->data_path, messages);
    if (status)
        return status;
    for (size_t k = 0; k < count; k++) {
        const float value = (float)values[k];
        sink_bytes(&data, &value, sizeof value);
    }
    return sink_close(&data, messages);
}

/* Descriptors of the child: nothing in, the picture out, complaints, the data. */
static int redirect(posix_spawn_file_actions_t *actions, const struct plot *plot,
                    const char *picture, const char *faults)
{
    const int flags = O_WRONLY | O_CREAT | O_TRUNC;
    int error = posix_spawn_file_actions_addopen(actions, 0, "/dev/null", O_RDONLY, 0);
    if (!error)
        error = posix_spawn_file_actions_addopen(actions, 1, picture, flags, 0666);
    if (!error)
        error = posix_spawn_file_actions_addopen(actions, 2, faults, flags, 0666);
    if (!error && plot->data_path)
        error =
            posix_spawn_file_actions_addopen(actions, 3, plot->data_path, O_RDONLY, 0);
    return error;
}

/* Starts gnuplot; 0 or an errno. */
static int start(const struct plot *plot, const char *picture, const char *faults,
                 pid_t *child)
{
    /* -d: the picture must not depend on anyone's gnuplot settings */
    char program[] = "gnuplot", defaults[] = "-d";
    char *const arguments[] = {program, defaults, plot->script_path, NULL};
    posix_spawn_file_actions_t actions;
    int error = posix_spawn_file_actions_init(&actions);
    if (error)
        return error;
    error = redirect(&actions, plot, picture, faults);
    if (!error)
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

static enum status draw(const struct plot *plot, const char *picture,
                        const char *faults, bool *drawn, struct messages *messages)
{
    const char *name = plot->name;
    pid_t child;
    int error = start(plot, picture, faults, &child);
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
        status = draw(plot, picture, faults, drawn, messages);
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
