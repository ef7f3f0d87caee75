/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_OUTPUT_COMMAND_LINE_H
#define EVENGAP_OUTPUT_COMMAND_LINE_H

/* What the user typed, understood. */

#include <stdbool.h>

#include "shared/attributes.h"
#include "shared/message.h"
#include "shared/status.h"

#define FINENESS_LEAST 0.1
#define FINENESS_MOST  20.0
#define GRIDS_LEAST    2 /* one grid gives no uncertainty */
#define GRIDS_MOST     3

enum command_kind { COMMAND_RUN, COMMAND_DRAW, COMMAND_HELP, COMMAND_VERSION };

struct command {
    enum command_kind kind;
    enum command_kind topic; /* COMMAND_HELP: RUN, DRAW, or HELP for the overview */
    const char *file;        /* borrowed from argv */
    const char *output;      /* borrowed; NULL: beside the file */
    double fineness;         /* 0: as the file says */
    int grids;               /* 0: the default */
    double within;           /* relative accuracy asked for; 0: none */
    bool quiet;
};

/** Understands argv[argc] (argv[0] is skipped). Options may stand before or after FILE,
 *  as `--name value` or `--name=value`; `--` ends them. STATUS_INPUT with a message
 *  that names the nearest known word. */
enum status command_parse(int argc, char *const argv[], struct command *command,
                          struct messages *messages) MUST_CHECK;

/** Help on a topic, ready to print. */
const char *command_help(enum command_kind topic);

/** Folder the command writes to: as asked, or the file's name without its suffix and
 *  with `.result` (run) or `.drawing` (draw). Caller frees; NULL if memory ran out. */
char *command_folder(const struct command *command);

#endif
