/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The grid section: how fine, and how much memory. Bytes are no unit of the units
 * library, so they have their own short table. */
#include <math.h>
#include <string.h>

#include "mesh/expression.h"
#include "mesh/reader_sections.h"

#define FINENESS_MIN 0.1
#define FINENESS_MAX 20.0
#define MEMORY_MIN   1e6  /* B: less cannot hold any grid */
#define MEMORY_MAX   1e15 /* B */

static void read_fineness(struct reader *reader, const struct node *node,
                          double *fineness)
{
    double value;
    if (!reader_positive(reader, node, "fineness", &wanted_number, &value))
        return;
    if (value < FINENESS_MIN || value > FINENESS_MAX)
        reader_expected(reader, node, "fineness", "a number from 0.1 to 20");
    else
        *fineness = value;
}

static bool parse_bytes(const char *text, double *bytes)
{
    static const struct {
        const char *unit;
        double bytes;
    } units[] = {
        {"B", 1},     {"kB", 1e3},     {"MB", 1e6},        {"GB", 1e9},
        {"TB", 1e12}, {"KiB", 1024.0}, {"MiB", 1048576.0}, {"GiB", 1073741824.0},
    };
    text += strspn(text, " ");
    if (!expression_number(&text, bytes))
        return false;
    text += strspn(text, " ");
    for (size_t k = 0; k < sizeof units / sizeof units[0]; k++) {
        if (strcmp(units[k].unit, text) != 0)
            continue;
        *bytes *= units[k].bytes;
        return *bytes >= MEMORY_MIN && *bytes <= MEMORY_MAX;
    }
    return false;
}

static void read_memory(struct reader *reader, const struct node *node, double *memory)
{
    double bytes;
    if (node->kind == NODE_SCALAR && parse_bytes(node->text, &bytes))
        *memory = bytes;
    else
        reader_expected(reader, node, "memory",
                        "an amount from 1 MB to 1000 TB, such as 2 GB or 512 MiB");
}

void reader_grid(struct reader *reader, const struct node *node)
{
    static const char *const keys[] = {"fineness", "memory", NULL};
    if (node == NULL)
        return;
    (void)reader_mapping(reader, node, "grid", keys);
    if (node_find(node, "fineness") != NULL)
        read_fineness(reader, node_find(node, "fineness"), &reader->geometry->fineness);
    if (node_find(node, "memory") != NULL)
        read_memory(reader, node_find(node, "memory"),
                    &reader->geometry->memory_budget);
}
