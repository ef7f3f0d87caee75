/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Gradients at the nodes: the parabola through a node and the ends of its two legs, or
 * a one-sided parabola on surfaces and sides. */

#include <math.h>

#include "solver/field.h"
#include "solver/stencil.h"

/* Slope at 0 of the parabola through (-back, before), (0, here), (front, after). */
static double slope_between(double back, double before, double here, double front,
                            double after)
{
    return ((after - here) / front * back + (here - before) / back * front) /
           (back + front);
}

/* Slope at 0 of the parabola through (0, here), (h1, p1), (h2, p2). */
static double slope_one_sided(double here, double h1, double p1, double h2, double p2)
{
    const double d1 = (p1 - here) / h1, d2 = (p2 - here) / h2;
    return (d1 * h2 - d2 * h1) / (h2 - h1);
}

static double end_value(const struct stencil *s, enum leg leg, const double *phi,
                        const double *part_value)
{
    return s->part[leg] >= 0 ? part_value[s->part[leg]] : phi[s->node[leg]];
}

/* Slope along one axis at a free node; a mirror side makes it zero. */
static double free_slope(const struct stencil *s, enum leg back, double here,
                         const double *phi, const double *part_value)
{
    const enum leg front = (enum leg)(back + 1);
    if (s->length[back] == 0.0 || s->length[front] == 0.0)
        return 0.0;
    return slope_between(s->length[back], end_value(s, back, phi, part_value), here,
                         s->length[front], end_value(s, front, phi, part_value));
}

/* Slope at a fixed node towards a free neighbour `step` nodes away along an axis; what
 * the neighbour's next leg ends on is the third point. */
static double surface_slope(const struct grid *grid, const double *phi,
                            const double *part_value, int node, enum leg leg, int step)
{
    struct stencil s;
    const int next = node + step;
    stencil_at(grid, next, &s);
    const bool forward = leg == LEG_EAST || leg == LEG_NORTH;
    const enum leg back = forward ? (enum leg)(leg - 1) : (enum leg)(leg + 1);
    const double h1 = s.length[back], h2 = h1 + s.length[leg];
    if (h2 <= h1) /* the neighbour lies on a mirror side */
        return 0.0;
    const double slope = slope_one_sided(phi[node], h1, phi[next], h2,
                                         end_value(&s, leg, phi, part_value));
    return forward ? slope : -slope;
}

static bool is_free(const struct grid *grid, int node)
{
    return grid->owner[node] == OWNER_FREE;
}

/* Normal slope of a fixed node along one axis: from its free side; where both sides are
 * free (a part one node thick) the two fields differ and the larger one is shown. */
static double fixed_slope(const struct grid *grid, const double *phi,
                          const double *part_value, int node, enum leg back, int k,
                          int count, int stride)
{
    const enum leg front = (enum leg)(back + 1);
    double before = 0.0, after = 0.0;
    if (k > 0 && is_free(grid, node - stride) &&
        grid_cut(grid, node - stride, front) == NULL)
        before = surface_slope(grid, phi, part_value, node, back, -stride);
    if (k + 1 < count && is_free(grid, node + stride) &&
        grid_cut(grid, node + stride, back) == NULL)
        after = surface_slope(grid, phi, part_value, node, front, stride);
    return fabs(before) > fabs(after) ? before : after;
}

void field_at_nodes(const struct grid *grid, const double *phi,
                    const double *part_value, double *gradient_a, double *gradient_b)
{
    for (int n = 0; n < grid->na * grid->nb; n++) {
        const int i = n % grid->na, j = n / grid->na;
        if (is_free(grid, n)) {
            struct stencil s;
            stencil_at(grid, n, &s);
            gradient_a[n] = free_slope(&s, LEG_WEST, phi[n], phi, part_value);
            gradient_b[n] = free_slope(&s, LEG_SOUTH, phi[n], phi, part_value);
        } else {
            gradient_a[n] =
                fixed_slope(grid, phi, part_value, n, LEG_WEST, i, grid->na, 1);
            gradient_b[n] =
                fixed_slope(grid, phi, part_value, n, LEG_SOUTH, j, grid->nb, grid->na);
        }
    }
}
