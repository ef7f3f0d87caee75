/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "solver/equation.h"

static void add(struct equation *equation, int node, int part, double weight)
{
    if (weight != 0.0)
        equation->terms[equation->count++] = (struct equation_term){node, part, weight};
}

void equation_at(const struct grid *grid, int node, struct equation *equation)
{
    struct stencil s;
    stencil_at(grid, node, &s);
    equation->count = 0;
    for (int leg = 0; leg < LEG_COUNT; leg++)
        add(equation, s.node[leg], s.part[leg], s.weight[leg]);
    for (int k = 0; k < CORNER_COUNT; k++)
        if (s.corner[k] != 0.0)
            add(equation, stencil_corner(grid, node, (enum corner)k), -1, s.corner[k]);
}
