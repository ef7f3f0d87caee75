/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_OUTPUT_COMMAND_H
#define EVENGAP_OUTPUT_COMMAND_H

/* The commands themselves, from file to exit status. */

#include <stdio.h>

#include "output/command_line.h"

enum exit_code {
    EXIT_DONE = 0,      /* done and within limits */
    EXIT_LIMIT = 1,     /* done, a limit is not met */
    EXIT_INPUT = 2,     /* the input is wrong */
    EXIT_UNTRUSTED = 3, /* the numbers cannot be trusted, or there was no memory */
    EXIT_WRITE = 4      /* the result could not be written */
};

/** Exit status for the way a command ended. */
enum exit_code command_exit_code(enum status status, bool within_limits);

/** evengap run. The sheet goes to `out`; progress to `progress` unless that is NULL;
 *  messages are left for the caller to print. */
enum exit_code command_run(const struct command *command, FILE *out, FILE *progress,
                           struct messages *messages);

/** evengap draw. The list of planes, parts and grid sizes goes to `out`. */
enum exit_code command_draw(const struct command *command, FILE *out,
                            struct messages *messages);

#endif
