/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "solver/blame.h"

#include "shared/mem.h"
#include "solver/stencil.h"

struct search {
    const struct grid *grid;
    char *seen; /* [nb*na] */
    int *stack; /* [nb*na] */
    int depth;
};

static void visit(struct search *search, int node)
{
    if (search->seen[node])
        return;
    search->seen[node] = 1;
    search->stack[search->depth++] = node;
}

/* Walks the space of a node and measures how firmly it is held. */
static struct blame measure_space(struct search *search, int start)
{
    const struct grid *grid = search->grid;
    struct blame blame = {
        {grid->a[start % grid->na], grid->b[start / grid->na]}, 0, 0.0};
    double fixed = 0.0, all = 0.0;
    visit(search, start);
    while (search->depth > 0) {
        struct stencil s;
        stencil_at(grid, search->stack[--search->depth], &s);
        blame.nodes++;
        for (int leg = 0; leg < LEG_COUNT; leg++) {
            const bool whole = s.node[leg] >= 0;
            all += s.weight[leg];
            if (whole && grid->owner[s.node[leg]] == OWNER_FREE)
                visit(search, s.node[leg]);
            else if (whole || s.part[leg] >= 0)
                fixed += s.weight[leg];
        }
    }
    blame.hold = all > 0.0 ? fixed / all : 0.0;
    return blame;
}

enum status blame_space(const struct grid *grid, struct blame *blame)
{
    const int nodes = grid->na * grid->nb;
    struct search search = {grid, MEM_NEW((size_t)nodes, char),
                            MEM_NEW((size_t)nodes, int), 0};
    enum status status =
        search.seen != NULL && search.stack != NULL ? STATUS_OK : STATUS_MEMORY;
    *blame = (struct blame){{0.0, 0.0}, 0, 2.0};
    for (int n = 0; n < nodes && status == STATUS_OK; n++) {
        if (grid->owner[n] != OWNER_FREE || search.seen[n])
            continue;
        const struct blame space = measure_space(&search, n);
        if (space.hold < blame->hold)
            *blame = space;
    }
    if (status == STATUS_OK && blame->nodes == 0)
        status = STATUS_SIZE;
    mem_free(search.seen);
    mem_free(search.stack);
    return status;
}
