/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Help texts. They are kept apart from the parser so that both stay readable. */

#include "output/command_line.h"

#define EXIT_HELP                                                                      \
    "Exit status:\n"                                                                   \
    "  0  done, and every limit of the file is met\n"                                  \
    "  1  done, but a limit is not met\n"                                              \
    "  2  the command line or the geometry file is wrong\n"                            \
    "  3  no numbers that can be trusted (singular or not converged system, or out\n"  \
    "     of memory)\n"                                                                \
    "  4  the result could not be written; a previous result is left as it was\n"

#define OUTPUT_HELP                                                                    \
    "                   An existing folder is replaced only if it was written by\n"    \
    "                   this command and holds nothing else\n"

static const char overview[] =
    "evengap: fields and pass speed of crossed-field velocity filters\n"
    "\n"
    "Usage:\n"
    "  evengap run FILE [options]    solve, judge, and write a result folder\n"
    "  evengap draw FILE [options]   picture of parts and grid, without solving\n"
    "  evengap run --help            options of a command\n"
    "  evengap --help                this text\n"
    "  evengap --version             version of the program\n"
    "\n"
    "FILE is a geometry file. Results go to stdout, messages to stderr.\n"
    "\n" EXIT_HELP;

static const char run[] =
    "Usage: evengap run FILE [options]\n"
    "\n"
    "Solves the planes of the geometry file, prints the sheet of figures, and writes "
    "a\n"
    "result folder with sheet.txt, summary.json, report.html, path.csv, maps (VTK and\n"
    "CSV) and plots (SVG).\n"
    "\n"
    "Options:\n"
    "  --output DIR     result folder; default: FILE without suffix + "
    ".result.\n" OUTPUT_HELP
    "  --fineness F     grid lines per axis relative to the default, 0.1 to 20;\n"
    "                   default: as the file says, else 1\n"
    "  --grids N        grids of the family, 2 or 3; default 3. Two are quicker, but\n"
    "                   the order of convergence is then assumed, not measured\n"
    "  --within X       relative accuracy, 1e-12 to 0.1, of the figures that limits\n"
    "                   refer to (of limit or value, whichever is larger); without\n"
    "                   limits, of the main figures and the probes. Refines where the\n"
    "                   error comes from until it is met or the memory budget of the\n"
    "                   file is spent, and says which\n"
    "  --quiet          no sheet and no progress; only messages and the exit status\n"
    "  --help           this text\n"
    "\n" EXIT_HELP;

static const char draw[] =
    "Usage: evengap draw FILE [options]\n"
    "\n"
    "Draws the parts and the coarsest grid of every plane as understood, without\n"
    "solving, and lists planes, parts and grid sizes.\n"
    "\n"
    "Options:\n"
    "  --output DIR     folder; default: FILE without suffix + .drawing.\n" OUTPUT_HELP
    "  --fineness F     grid lines per axis relative to the default, 0.1 to 20;\n"
    "                   default: as the file says, else 1\n"
    "  --quiet          no list; only messages and the exit status\n"
    "  --help           this text\n"
    "\n" EXIT_HELP;

const char *command_help(enum command_kind topic)
{
    switch (topic) {
    case COMMAND_RUN:
        return run;
    case COMMAND_DRAW:
        return draw;
    case COMMAND_HELP:
    case COMMAND_VERSION:
        break;
    }
    return overview;
}
