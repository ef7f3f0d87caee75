/* SPDX-License-Identifier: GPL-3.0-or-later */

/* The program: understands the command line, hands over to a command, prints what is
 * left to say, and turns it all into an exit status. */

#include <stdio.h>
#include <unistd.h>

#include "output/command.h"
#include "output/sink.h"
#include "shared/mem.h"

static void print_messages(const struct messages *messages)
{
    for (size_t k = 0; k < messages->count; k++) {
        char *text = messages_format(messages, k);
        (void)fprintf(stderr, "%s\n", text ? text : messages->items[k].text);
        mem_free(text);
    }
    if (messages->lost)
        (void)fprintf(stderr, "error: out of memory; %d messages are lost\n",
                      messages->lost);
}

static enum exit_code print_text(const char *text, struct messages *messages)
{
    struct sink sink;
    sink_wrap(&sink, stdout);
    sink_print(&sink, "%s", text);
    return command_exit_code(sink_close(&sink, messages), true);
}

static enum exit_code execute(const struct command *command, struct messages *messages)
{
    FILE *progress = !command->quiet && isatty(STDERR_FILENO) ? stderr : NULL;
    switch (command->kind) {
    case COMMAND_RUN:
        return command_run(command, stdout, progress, messages);
    case COMMAND_DRAW:
        return command_draw(command, stdout, messages);
    case COMMAND_VERSION:
        return print_text("evengap " EVENGAP_VERSION "\n", messages);
    case COMMAND_HELP:
        break;
    }
    return print_text(command_help(command->topic), messages);
}

int main(int argc, char *argv[])
{
    struct messages messages = {0};
    struct command command;
    enum status status = command_parse(argc, argv, &command, &messages);
    enum exit_code code =
        status ? command_exit_code(status, true) : execute(&command, &messages);
    print_messages(&messages);
    messages_free(&messages);
    return (int)code;
}
