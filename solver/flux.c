/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Every node gets a label: fixed nodes that of their owner, free nodes with a leg cut by
 * a part that of the part, all others none. The flux out of a part is the sum over the
 * links that leave its label, each a central difference over a whole leg. Cut legs are
 * never used: fluxes taken from unequal arms do not converge. */

#include "solver/flux.h"

#include <math.h>
#include <string.h>

#include "shared/mem.h"

static int *labels_of(const struct grid *grid)
{
    const size_t nodes = (size_t)grid->na * (size_t)grid->nb;
    int *label = MEM_NEW(nodes, int);
    if (label == NULL)
        return NULL;
    memcpy(label, grid->owner, nodes * sizeof *label);
    for (size_t k = 0; k < grid->cut_count; k++)
        label[grid->cuts[k].node] = grid->cuts[k].part;
    return label;
}

struct totals {
    double *part;
    double *side;
    double gross; /* sum of the absolute fluxes of all links credited */
};

static void credit(struct totals *totals, int label, double flux)
{
    if (label == OWNER_FREE)
        return;
    totals->gross += fabs(flux);
    if (label >= 0)
        totals->part[label] += flux;
    else
        totals->side[OWNER_SIDE - label] += flux;
}

static void add_link(const struct grid *grid, const double *phi, const int *label,
                     int node, enum leg leg, struct totals *totals)
{
    const int next = leg == LEG_EAST ? node + 1 : node + grid->na;
    if (label[node] == label[next])
        return;
    const double flux = stencil_flux(grid, phi, node, leg);
    credit(totals, label[node], flux);
    credit(totals, label[next], -flux);
}

enum status flux_measure(const struct grid *grid, const double *phi, double *part,
                         double side[SIDE_COUNT], double *imbalance)
{
    struct totals totals = {part, side, 0.0};
    const size_t parts = grid->plane->part_count;
    int *label = labels_of(grid);
    if (label == NULL)
        return STATUS_MEMORY;
    for (size_t p = 0; p < parts; p++)
        part[p] = 0.0;
    for (int s = 0; s < SIDE_COUNT; s++)
        side[s] = 0.0;
    for (int n = 0; n < grid->na * grid->nb; n++) {
        if (n % grid->na + 1 < grid->na)
            add_link(grid, phi, label, n, LEG_EAST, &totals);
        if (n / grid->na + 1 < grid->nb)
            add_link(grid, phi, label, n, LEG_NORTH, &totals);
    }
    double sum = 0.0;
    for (size_t p = 0; p < parts; p++)
        sum += part[p];
    for (int s = 0; s < SIDE_COUNT; s++)
        sum += side[s];
    *imbalance = totals.gross > 0.0 ? fabs(sum) / totals.gross : 0.0;
    mem_free(label);
    return STATUS_OK;
}
