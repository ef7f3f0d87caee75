/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Fluxes of the dual faces beside an interface that runs through cells. Such a face gets
 * the formula on its 2 by 3 patch of nodes that is exact for the local solutions of the
 * interface (interface.h) and otherwise nearest to the flux between the two nodes of its
 * link. One flux serves both nodes of the link, so the scheme conserves flux.
 *
 * Where the interface has a corner, meets a conductor or is not smooth on the scale of
 * the patch, the flux stays that between the two nodes, with the coefficient averaged
 * over the sub-cells: in series along the link, in parallel across it.
 *
 * Order   2 in the potential at smooth interfaces; lower where it is averaged. */

#include "mesh/grid_internal.h"

#include <lapacke.h>
#include <math.h>
#include <string.h>

#include "mesh/interface.h"
#include "mesh/medium.h"
#include "shared/mem.h"

/* Places along and across a link where the sub-cells are looked at. */
enum { SUB_ALONG = 16, SUB_ACROSS = 8 };
/* A face nearer to the axis of a turned plane than this many patch widths is averaged:
 * the local solutions that are singular on the axis do not occur there. */
#define AXIS_WIDTHS 1.5
/* Directions less certain than this are left out of the formula. */
#define PATCH_RCOND 1e-10

/* One link with its patch, in coordinates along and across it. */
struct link {
    const struct grid *grid;
    struct face face;
    int k, m;             /* index of its node along and across the link */
    const double *along;  /* lines along the link */
    const double *across; /* lines across it, [across_count] */
    int across_count;
    bool mirror_low, mirror_high; /* the patch is continued by reflection */
};

static struct link link_of(const struct grid *grid, int node, enum leg leg)
{
    const int i = node % grid->na, j = node / grid->na;
    const bool east = leg == LEG_EAST;
    struct link link = {.grid = grid, .face = {node, leg, {0.0}}};
    link.k = east ? i : j;
    link.m = east ? j : i;
    link.along = east ? grid->a : grid->b;
    link.across = east ? grid->b : grid->a;
    link.across_count = east ? grid->nb : grid->na;
    link.mirror_low = link.m == 0;
    link.mirror_high = link.m == link.across_count - 1;
    return link;
}

static struct vec2 point_of(const struct link *link, double along, double across)
{
    return link->face.leg == LEG_EAST ? (struct vec2){along, across}
                                      : (struct vec2){across, along};
}

/* Line across the link at offset -1, 0, 1; reflected beyond the region. */
static double across_at(const struct link *link, int offset)
{
    const int m = link->m + offset;
    const double *lines = link->across;
    if (m < 0)
        return 2.0 * lines[0] - lines[1];
    if (m >= link->across_count)
        return 2.0 * lines[link->m] - lines[link->m - 1];
    return lines[m];
}

/* Ends of the dual face. */
static void face_ends(const struct link *link, double *low, double *high)
{
    const double here = across_at(link, 0);
    *low = link->mirror_low ? here : 0.5 * (here + across_at(link, -1));
    *high = link->mirror_high ? here : 0.5 * (here + across_at(link, 1));
}

/* Coefficient in series along the link at one place across it. */
static double series(const struct link *link, double across)
{
    const double from = link->along[link->k], to = link->along[link->k + 1];
    double sum = 0.0;
    int count = 0;
    for (int s = 0; s < SUB_ALONG; s++) {
        const double x = from + (to - from) * (s + 0.5) / SUB_ALONG;
        const int medium =
            plane_medium_at(link->grid->plane, point_of(link, x, across));
        if (medium == MEDIUM_CONDUCTOR)
            continue;
        sum += 1.0 / medium_coefficient(link->grid->plane, medium);
        count++;
    }
    return count > 0 ? count / sum : 1.0;
}

static double weight_at(const struct link *link, double along, double across)
{
    return plane_kind_is_turned(link->grid->plane->kind)
               ? point_of(link, along, across).b
               : 1.0;
}

/* Conductance of the link from the averaged sub-cells. */
static double averaged(const struct link *link)
{
    const double from = link->along[link->k], to = link->along[link->k + 1];
    double low, high, sum = 0.0;
    face_ends(link, &low, &high);
    for (int s = 0; s < SUB_ACROSS; s++) {
        const double y = low + (high - low) * (s + 0.5) / SUB_ACROSS;
        sum += series(link, y) * weight_at(link, 0.5 * (from + to), y);
    }
    return sum * (high - low) / SUB_ACROSS / (to - from);
}

static struct vec2 patch_point(const struct link *link, int n)
{
    return point_of(link, link->along[link->k + n % 2], across_at(link, n / 2 - 1));
}

/* True if a conductor owns a node of the patch or cuts one of its legs. */
static bool meets_conductor(const struct link *link)
{
    const struct grid *grid = link->grid;
    for (int n = 0; n < FACE_PATCH; n++) {
        const int node = face_patch(grid, &link->face, n);
        if (node < 0)
            continue;
        if (grid->owner[node] >= 0)
            return true;
        for (int leg = 0; leg < LEG_COUNT; leg++)
            if (grid_cut(grid, node, (enum leg)leg) != NULL)
                return true;
    }
    return false;
}

/* Side of the interface a patch node lies on; -1 if it is in a third medium. */
static int side_of(const struct link *link, struct vec2 at, const int media[2])
{
    /* Reflected points are looked up where they come from. */
    const struct plane *plane = link->grid->plane;
    struct vec2 p = at;
    if (p.a < plane->low.a)
        p.a = 2.0 * plane->low.a - p.a;
    if (p.a > plane->high.a)
        p.a = 2.0 * plane->high.a - p.a;
    if (p.b < plane->low.b)
        p.b = 2.0 * plane->low.b - p.b;
    if (p.b > plane->high.b)
        p.b = 2.0 * plane->high.b - p.b;
    const int medium = plane_medium_at(plane, p);
    return medium == media[0] ? 0 : medium == media[1] ? 1 : -1;
}

/* Ends of the face of a whole patch: at a mirror twice the face there is. */
static void whole_face_ends(const struct link *link, struct vec2 *p, struct vec2 *q)
{
    const double middle = 0.5 * (link->along[link->k] + link->along[link->k + 1]);
    const double here = across_at(link, 0);
    *p = point_of(link, middle, 0.5 * (here + across_at(link, -1)));
    *q = point_of(link, middle, 0.5 * (here + across_at(link, 1)));
}

/* Rows of the conditions (one per local solution), and what the two-point flux lacks. */
static bool conditions(const struct link *link, const struct interface *interface,
                       const int media[2], double conductance, double *matrix,
                       double *right)
{
    struct vec2 p, q;
    whole_face_ends(link, &p, &q);
    /* The face of a link to the north runs from east to west. */
    if (link->face.leg == LEG_EAST)
        interface_fluxes(interface, p, q, right);
    else
        interface_fluxes(interface, q, p, right);
    for (int n = 0; n < FACE_PATCH; n++) {
        const struct vec2 at = patch_point(link, n);
        const int side = side_of(link, at, media);
        const double base = n == 3 ? conductance : n == 2 ? -conductance : 0.0;
        if (side < 0)
            return false;
        interface_values(interface, at, side, &matrix[(size_t)n * INTERFACE_TERMS]);
        for (int m = 0; m < INTERFACE_TERMS; m++)
            right[m] -= base * matrix[n * INTERFACE_TERMS + m];
    }
    return true;
}

/* Reflected nodes are the same as those across the mirror. */
static void fold_weights(struct link *link)
{
    double *w = link->face.weight;
    if (!link->mirror_low && !link->mirror_high)
        return;
    const int from = link->mirror_low ? 0 : 4, to = link->mirror_low ? 4 : 0;
    for (int n = 0; n < 2; n++) {
        w[to + n] += w[from + n];
        w[from + n] = 0.0;
    }
    for (int n = 0; n < FACE_PATCH; n++)
        w[n] *= 0.5;
}

/* The six weights next to those of the averaged link that reproduce the fluxes of the
 * local solutions. */
static bool make_exact(struct link *link, const struct interface *interface,
                       const int media[2], double conductance)
{
    double matrix[INTERFACE_TERMS * FACE_PATCH], right[FACE_PATCH] = {0.0};
    lapack_int pivots[FACE_PATCH] = {0}, rank = 0;
    if (link->mirror_low || link->mirror_high)
        conductance *= 2.0;
    if (!conditions(link, interface, media, conductance, matrix, right) ||
        LAPACKE_dgelsy(LAPACK_COL_MAJOR, INTERFACE_TERMS, FACE_PATCH, 1, matrix,
                       INTERFACE_TERMS, right, FACE_PATCH, pivots, PATCH_RCOND,
                       &rank) != 0)
        return false;
    right[2] -= conductance;
    right[3] += conductance;
    memcpy(link->face.weight, right, sizeof link->face.weight);
    fold_weights(link);
    return true;
}

static bool near_axis(const struct link *link)
{
    if (!plane_kind_is_turned(link->grid->plane->kind))
        return false;
    struct vec2 p, q;
    whole_face_ends(link, &p, &q);
    const double width =
        fmax(fabs(q.b - p.b), link->face.leg == LEG_NORTH
                                  ? link->along[link->k + 1] - link->along[link->k]
                                  : 0.0);
    return fmin(p.b, q.b) < AXIS_WIDTHS * width;
}

static void fill_face(struct link *link)
{
    const double from = link->along[link->k], to = link->along[link->k + 1];
    const double conductance = averaged(link);
    const double reach =
        fmax(to - from, fmax(across_at(link, 1) - across_at(link, 0),
                             across_at(link, 0) - across_at(link, -1)));
    const struct vec2 middle = point_of(link, 0.5 * (from + to), across_at(link, 0));
    struct interface interface;
    int media[2];
    if (!near_axis(link) && !meets_conductor(link) &&
        interface_find(link->grid->plane, middle, reach, &interface, media) &&
        make_exact(link, &interface, media, conductance))
        return;
    link->face.weight[2] = -conductance;
    link->face.weight[3] = conductance;
}

/* Cell beside a link, below (0) or above (1) it across; -1 beyond the region. */
static int cell_beside(const struct link *link, int above)
{
    const int k = link->k, m = link->m - 1 + above, cells = link->grid->na - 1;
    if (m < 0 || m >= link->across_count - 1)
        return -1;
    return link->face.leg == LEG_EAST ? m * cells + k : k * cells + m;
}

static bool is_special(const struct link *link)
{
    const int next = link->face.leg == LEG_EAST ? link->face.node + 1
                                                : link->face.node + link->grid->na;
    for (int above = 0; above < 2; above++) {
        const int cell = cell_beside(link, above);
        if (cell >= 0 && link->grid->medium[cell] == MEDIUM_MIXED)
            return link->grid->owner[link->face.node] == OWNER_FREE ||
                   link->grid->owner[next] == OWNER_FREE;
    }
    return false;
}

static enum status add_face(struct grid *grid, size_t *capacity, struct link *link)
{
    void *array = grid->faces;
    enum status status =
        mem_grow(&array, capacity, grid->face_count + 1, sizeof *grid->faces);
    grid->faces = array;
    if (status != STATUS_OK)
        return status;
    fill_face(link);
    grid->faces[grid->face_count++] = link->face;
    return STATUS_OK;
}

static enum status find_in_row(struct grid *grid, int j, size_t *capacity)
{
    enum status status = STATUS_OK;
    for (int i = 0; i < grid->na && status == STATUS_OK; i++)
        for (int north = 0; north < 2 && status == STATUS_OK; north++) {
            const int node = j * grid->na + i;
            const enum leg leg = north ? LEG_NORTH : LEG_EAST;
            if (north ? j + 1 >= grid->nb : i + 1 >= grid->na)
                continue;
            struct link link = link_of(grid, node, leg);
            if (is_special(&link) && grid_cut(grid, node, leg) == NULL)
                status = add_face(grid, capacity, &link);
        }
    return status;
}

enum status grid_find_faces(struct grid *grid)
{
    size_t capacity = 0;
    enum status status = STATUS_OK;
    grid->first_face = MEM_NEW((size_t)grid->nb + 1, int);
    if (grid->first_face == NULL)
        return STATUS_MEMORY;
    for (int j = 0; j < grid->nb && status == STATUS_OK; j++) {
        grid->first_face[j] = (int)grid->face_count;
        status = find_in_row(grid, j, &capacity);
    }
    grid->first_face[grid->nb] = (int)grid->face_count;
    return status;
}
