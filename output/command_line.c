/* SPDX-License-Identifier: GPL-3.0-or-later */

/* A table of options and one loop. A mistyped word is answered with the nearest known
 * one, because that is nearly always what was meant. */

#include "output/command_line.h"

#include <errno.h>
#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "output/words.h"
#include "shared/mem.h"
#include "solver/accuracy.h"

#define FOR_RUN   1U
#define FOR_DRAW  2U
#define WORD_SIZE 64 /* longer words have no near neighbour */

enum option_kind {
    OPTION_OUTPUT,
    OPTION_FINENESS,
    OPTION_GRIDS,
    OPTION_WITHIN,
    OPTION_QUIET
};

struct option_rule {
    const char *name;
    enum option_kind kind;
    bool has_value;
    unsigned commands;
};

static const struct option_rule option_rules[] = {
    {"--output", OPTION_OUTPUT, true, FOR_RUN | FOR_DRAW},
    {"--fineness", OPTION_FINENESS, true, FOR_RUN | FOR_DRAW},
    {"--grids", OPTION_GRIDS, true, FOR_RUN},
    {"--within", OPTION_WITHIN, true, FOR_RUN},
    {"--quiet", OPTION_QUIET, false, FOR_RUN | FOR_DRAW},
};
#define OPTION_RULES (sizeof option_rules / sizeof option_rules[0])

static const char *const command_names[] = {
    [COMMAND_RUN] = "run", [COMMAND_DRAW] = "draw"};

static enum status mistake(struct messages *messages, const char *what,
                           const char *word, const char *nearest)
{
    if (nearest)
        messages_add(messages, SEVERITY_ERROR, (struct place){0, 0},
                     "%s '%s'; did you mean '%s'?", what, word, nearest);
    else
        messages_add(messages, SEVERITY_ERROR, (struct place){0, 0},
                     "%s '%s'; see evengap --help", what, word);
    return STATUS_INPUT;
}

static size_t least(size_t p, size_t q)
{
    return p < q ? p : q;
}

/* Single-letter edits from p to q, by the usual table kept as one row.
 * Source: Wagner and Fischer (1974), J. ACM 21, 168 (recalled). */
static size_t edits(const char *p, const char *q)
{
    size_t row[WORD_SIZE + 1], m = strlen(p), n = strlen(q);
    if (m > WORD_SIZE || n > WORD_SIZE)
        return WORD_SIZE;
    for (size_t j = 0; j <= n; j++)
        row[j] = j;
    for (size_t i = 1; i <= m; i++) {
        size_t diagonal = row[0];
        row[0] = i;
        for (size_t j = 1; j <= n; j++) {
            size_t change = diagonal + (p[i - 1] != q[j - 1]);
            diagonal = row[j];
            row[j] = least(change, least(row[j], row[j - 1]) + 1);
        }
    }
    return row[n];
}

static void consider(const char *word, const char *known, const char **nearest,
                     size_t *distance)
{
    size_t d = edits(word, known);
    if (d < *distance) {
        *nearest = known;
        *distance = d;
    }
}

/* Edits from which on a word is no longer a slip of a known one. Two swapped letters
 * count as two edits, so short words need some room. */
static size_t slip(const char *word)
{
    size_t half = strlen(word) / 2 + 1;
    return half < 3 ? 3 : half;
}

static enum status unknown_option(const char *word, unsigned command,
                                  struct messages *messages)
{
    const char *nearest = NULL;
    size_t distance = slip(word);
    for (size_t k = 0; k < OPTION_RULES; k++)
        if (option_rules[k].commands & command)
            consider(word, option_rules[k].name, &nearest, &distance);
    consider(word, "--help", &nearest, &distance);
    return mistake(messages, "unknown option", word, nearest);
}

static enum status unknown_command(const char *word, struct messages *messages)
{
    const char *nearest = NULL;
    size_t distance = slip(word);
    bool option = *word == '-';
    if (option) {
        consider(word, "--help", &nearest, &distance);
        consider(word, "--version", &nearest, &distance);
    } else {
        consider(word, "run", &nearest, &distance);
        consider(word, "draw", &nearest, &distance);
    }
    return mistake(messages, option ? "unknown option" : "unknown command", word,
                   nearest);
}

/* A number from least to most; NaN is none. */
static enum status parse_number(const char *name, const char *text, double least,
                                double most, double *number, struct messages *messages)
{
    char *end;
    errno = 0;
    double value = strtod(text, &end);
    if (end != text && !*end && !errno && value >= least && value <= most) {
        *number = value;
        return STATUS_OK;
    }
    messages_add(messages, SEVERITY_ERROR, (struct place){0, 0},
                 "%s takes a number from %g to %g, not '%s'", name, least, most, text);
    return STATUS_INPUT;
}

static enum status parse_grids(const char *text, struct command *command,
                               struct messages *messages)
{
    if (text[0] >= '0' + GRIDS_LEAST && text[0] <= '0' + GRIDS_MOST && !text[1]) {
        command->grids = text[0] - '0';
        return STATUS_OK;
    }
    messages_add(messages, SEVERITY_ERROR, (struct place){0, 0},
                 "--grids takes a whole number from %d to %d, not '%s'", GRIDS_LEAST,
                 GRIDS_MOST, text);
    return STATUS_INPUT;
}

static enum status apply_option(const struct option_rule *rule, const char *value,
                                struct command *command, struct messages *messages)
{
    switch (rule->kind) {
    case OPTION_OUTPUT:
        command->output = value;
        if (*value)
            return STATUS_OK;
        messages_add(messages, SEVERITY_ERROR, (struct place){0, 0},
                     "--output takes the name of a folder");
        return STATUS_INPUT;
    case OPTION_FINENESS:
        return parse_number(rule->name, value, FINENESS_LEAST, FINENESS_MOST,
                            &command->fineness, messages);
    case OPTION_GRIDS:
        return parse_grids(value, command, messages);
    case OPTION_WITHIN:
        return parse_number(rule->name, value, ACCURACY_LEAST, ACCURACY_MOST,
                            &command->within, messages);
    case OPTION_QUIET:
        command->quiet = true;
        break;
    }
    return STATUS_OK;
}

static const struct option_rule *find_rule(const char *word, size_t length,
                                           unsigned command)
{
    for (size_t k = 0; k < OPTION_RULES; k++) {
        const struct option_rule *rule = &option_rules[k];
        if ((rule->commands & command) && strlen(rule->name) == length &&
            strncmp(rule->name, word, length) == 0)
            return rule;
    }
    return NULL;
}

/* Takes one option at argv[*k], and its value from the next word if need be. */
static enum status parse_option(int argc, char *const argv[], int *k,
                                struct command *command, struct messages *messages)
{
    const char *word = argv[*k];
    unsigned mask = command->kind == COMMAND_RUN ? FOR_RUN : FOR_DRAW;
    size_t length = strcspn(word, "=");
    const struct option_rule *rule = find_rule(word, length, mask);
    if (!rule)
        return unknown_option(word, mask, messages);
    const char *value = word[length] ? word + length + 1 : NULL;
    if (value && !rule->has_value) {
        messages_add(messages, SEVERITY_ERROR, (struct place){0, 0},
                     "%s takes no value", rule->name);
        return STATUS_INPUT;
    }
    if (!value && rule->has_value && ++*k < argc)
        value = argv[*k];
    if (!value && rule->has_value) {
        messages_add(messages, SEVERITY_ERROR, (struct place){0, 0}, "%s needs a value",
                     rule->name);
        return STATUS_INPUT;
    }
    return apply_option(rule, value, command, messages);
}

static enum status take_file(const char *word, struct command *command,
                             struct messages *messages)
{
    if (command->file)
        return mistake(messages, "more than one geometry file: unexpected", word, NULL);
    command->file = word;
    return STATUS_OK;
}

static bool is_help(const char *word)
{
    return strcmp(word, "--help") == 0 || strcmp(word, "-h") == 0;
}

static void ask_help(struct command *command, enum command_kind topic)
{
    *command = (struct command){.kind = COMMAND_HELP, .topic = topic};
}

static enum status parse_rest(int argc, char *const argv[], struct command *command,
                              struct messages *messages)
{
    enum status status = STATUS_OK;
    bool options = true;
    for (int k = 2; !status && k < argc; k++) {
        const char *word = argv[k];
        if (options && is_help(word)) {
            ask_help(command, command->kind);
            return STATUS_OK;
        }
        if (options && strcmp(word, "--") == 0)
            options = false;
        else if (options && word[0] == '-' && word[1])
            status = parse_option(argc, argv, &k, command, messages);
        else
            status = take_file(word, command, messages);
    }
    if (!status && !command->file) {
        messages_add(messages, SEVERITY_ERROR, (struct place){0, 0},
                     "evengap %s needs a geometry file; see evengap %s --help", argv[1],
                     argv[1]);
        status = STATUS_INPUT;
    }
    return status;
}

enum status command_parse(int argc, char *const argv[], struct command *command,
                          struct messages *messages)
{
    *command = (struct command){0};
    if (argc < 2) {
        messages_add(messages, SEVERITY_ERROR, (struct place){0, 0},
                     "nothing to do; see evengap --help");
        return STATUS_INPUT;
    }
    if (is_help(argv[1])) {
        ask_help(command, COMMAND_HELP);
        return STATUS_OK;
    }
    if (strcmp(argv[1], "--version") == 0) {
        command->kind = COMMAND_VERSION;
        return STATUS_OK;
    }
    for (int kind = COMMAND_RUN; kind <= COMMAND_DRAW; kind++) {
        if (strcmp(argv[1], command_names[kind]) == 0) {
            command->kind = (enum command_kind)kind;
            return parse_rest(argc, argv, command, messages);
        }
    }
    return unknown_command(argv[1], messages);
}

/* Length of path without the suffix of its last name. */
static size_t stem_length(const char *path)
{
    const char *base = words_base_name(path);
    const char *dot = strrchr(base, '.');
    return dot && dot != base ? (size_t)(dot - path) : strlen(path);
}

char *command_folder(const struct command *command)
{
    if (command->output)
        return mem_text(command->output);
    size_t length = stem_length(command->file);
    size_t size = length + sizeof ".drawing";
    char *path = MEM_NEW(size, char);
    if (path)
        (void)snprintf(path, size, "%.*s%s", (int)length, command->file,
                       command->kind == COMMAND_DRAW ? ".drawing" : ".result");
    return path;
}
