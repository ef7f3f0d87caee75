/* SPDX-License-Identifier: GPL-3.0-or-later */

/* The geometry of one edge. Everything about arcs goes through cross products with the
 * directions of their ends instead of angles, so a quarter circle that starts and ends
 * on the axes is handled without rounding. Membership and spans look at an edge as
 * stretches on which one coordinate runs one way; there a crossing with a grid line is
 * unique and has a closed form. */

#include "mesh/shape_internal.h"

#include "shared/constants.h"

bool arc_covers(const struct edge *arc, struct vec2 d)
{
    struct vec2 from = vec2_sub(arc->start, arc->centre);
    struct vec2 to = vec2_sub(arc->end, arc->centre);

    if (fabs(arc->sweep) >= 2 * PI)
        return true;
    if (arc->sweep < 0) {
        struct vec2 swap = from;
        from = to;
        to = swap;
    }
    if (fabs(arc->sweep) <= PI)
        return vec2_cross(from, d) >= 0 && vec2_cross(d, to) >= 0;
    return !(vec2_cross(to, d) > 0 && vec2_cross(d, from) > 0);
}

/* Like arc_covers, without the ends. */
static bool arc_passes(const struct edge *arc, struct vec2 d)
{
    struct vec2 from = vec2_sub(arc->start, arc->centre);
    struct vec2 to = vec2_sub(arc->end, arc->centre);

    if (!arc_covers(arc, d))
        return false;
    if (vec2_cross(from, d) == 0 && vec2_dot(from, d) > 0)
        return false;
    return !(vec2_cross(to, d) == 0 && vec2_dot(to, d) > 0);
}

static struct rise rise_between(const struct edge *edge, struct vec2 from,
                                struct vec2 to)
{
    struct rise rise = {from.a, from.b, to.a, to.b, 0, 0, edge->radius, 0};

    if (edge->radius > 0) {
        rise.centre_a = edge->centre.a;
        rise.centre_b = edge->centre.b;
        rise.side = (to.b > from.b) == (edge->sweep > 0) ? 1 : -1;
    }
    return rise;
}

int edge_rises(const struct edge *edge, struct rise rises[RISES_MAX])
{
    struct vec2 c = edge->centre;
    struct vec2 ends[2] = {{c.a, c.b + edge->radius}, {c.a, c.b - edge->radius}};
    struct vec2 from = edge->start;
    double ahead; /* positive if the arc sets out towards its top */
    int n = 0;

    if (edge->radius == 0) {
        rises[0] = rise_between(edge, edge->start, edge->end);
        return 1;
    }
    /* from the top or the bottom itself only the other one lies ahead: any order */
    ahead = (edge->start.a - c.a) * edge->sweep;
    for (int k = 0; k < 2; k++) {
        bool top = (k == 0) == (ahead > 0);
        if (!arc_passes(edge, (struct vec2){0, top ? 1 : -1}))
            continue;
        rises[n++] = rise_between(edge, from, ends[top ? 0 : 1]);
        from = ends[top ? 0 : 1];
    }
    rises[n++] = rise_between(edge, from, edge->end);
    return n;
}

double rise_position(const struct rise *rise, double at)
{
    double d = at - rise->centre_b;

    if (rise->b0 < rise->b1 ? at <= rise->b0 : at >= rise->b0)
        return rise->a0;
    if (rise->b0 < rise->b1 ? at >= rise->b1 : at <= rise->b1)
        return rise->a1;
    if (rise->side != 0)
        return rise->centre_a +
               rise->side * sqrt(fmax(0, (rise->radius - d) * (rise->radius + d)));
    /* from the nearer end, so that the ends come out exactly */
    d = (rise->a1 - rise->a0) / (rise->b1 - rise->b0);
    if (fabs(at - rise->b0) <= fabs(at - rise->b1))
        return rise->a0 + (at - rise->b0) * d;
    return rise->a1 + (at - rise->b1) * d;
}

static struct vec2 transposed(struct vec2 p)
{
    return (struct vec2){p.b, p.a};
}

struct edge edge_transposed(const struct edge *edge)
{
    return (struct edge){transposed(edge->start), transposed(edge->end),
                         transposed(edge->centre), edge->radius, -edge->sweep};
}

double edge_length(const struct edge *edge)
{
    if (edge->radius > 0)
        return edge->radius * fabs(edge->sweep);
    return vec2_length(vec2_sub(edge->end, edge->start));
}

struct vec2 edge_point(const struct edge *edge, double t)
{
    struct vec2 d = vec2_sub(edge->start, edge->centre);
    double c = cos(t * edge->sweep);
    double s = sin(t * edge->sweep);

    if (t <= 0)
        return edge->start;
    if (t >= 1)
        return edge->end;
    if (edge->radius == 0)
        return vec2_add(vec2_scale(edge->start, 1 - t), vec2_scale(edge->end, t));
    return vec2_add(edge->centre, (struct vec2){c * d.a - s * d.b, s * d.a + c * d.b});
}

struct vec2 edge_direction(const struct edge *edge, double t)
{
    struct vec2 d = vec2_sub(edge->end, edge->start);
    double k;

    if (edge->radius > 0) {
        d = vec2_sub(edge_point(edge, t), edge->centre);
        k = edge->sweep > 0 ? 1 : -1;
        d = (struct vec2){-k * d.b, k * d.a};
    }
    return vec2_scale(d, 1 / vec2_length(d));
}

double edge_fraction(const struct edge *edge, struct vec2 p)
{
    struct vec2 u = vec2_sub(edge->end, edge->start);
    struct vec2 from = vec2_sub(edge->start, edge->centre);
    struct vec2 d = vec2_sub(p, edge->centre);
    double angle;

    if (edge->radius == 0) {
        double t = vec2_dot(vec2_sub(p, edge->start), u) / vec2_dot(u, u);
        return fmin(1, fmax(0, t));
    }
    if (!arc_covers(edge, d)) {
        double near_start = vec2_length(vec2_sub(p, edge->start));
        return near_start <= vec2_length(vec2_sub(p, edge->end)) ? 0 : 1;
    }
    angle = atan2(vec2_cross(from, d), vec2_dot(from, d));
    angle = edge->sweep < 0 ? -angle : angle;
    if (angle < 0)
        angle += 2 * PI;
    return fmin(1, angle / fabs(edge->sweep));
}

struct vec2 edge_nearest(const struct edge *edge, struct vec2 p)
{
    struct vec2 d = vec2_sub(p, edge->centre);
    double length;

    if (edge->radius == 0)
        return edge_point(edge, edge_fraction(edge, p));
    length = vec2_length(d);
    if (length > 0 && arc_covers(edge, d))
        return vec2_add(edge->centre, vec2_scale(d, edge->radius / length));
    if (vec2_length(vec2_sub(p, edge->start)) <= vec2_length(vec2_sub(p, edge->end)))
        return edge->start;
    return edge->end;
}

static void include(struct vec2 p, struct vec2 *low, struct vec2 *high)
{
    low->a = fmin(low->a, p.a);
    low->b = fmin(low->b, p.b);
    high->a = fmax(high->a, p.a);
    high->b = fmax(high->b, p.b);
}

void edge_bounds(const struct edge *edge, struct vec2 *low, struct vec2 *high)
{
    static const struct vec2 axes[4] = {{1, 0}, {0, 1}, {-1, 0}, {0, -1}};

    *low = *high = edge->start;
    include(edge->end, low, high);
    for (int k = 0; k < 4 && edge->radius > 0; k++)
        if (arc_passes(edge, axes[k]))
            include(vec2_add(edge->centre, vec2_scale(axes[k], edge->radius)), low,
                    high);
}

/* A box that holds the edge, cheaper than edge_bounds: for an arc, its circle. */
static void edge_cover(const struct edge *edge, struct vec2 *low, struct vec2 *high)
{
    struct vec2 r = {edge->radius, edge->radius};

    *low = *high = edge->start;
    include(edge->end, low, high);
    if (edge->radius > 0) {
        include(vec2_sub(edge->centre, r), low, high);
        include(vec2_add(edge->centre, r), low, high);
    }
}

bool edge_reaches(const struct edge *edge, struct vec2 low, struct vec2 high,
                  double tolerance)
{
    struct vec2 l;
    struct vec2 h;

    edge_cover(edge, &l, &h);
    return l.a <= high.a + tolerance && low.a <= h.a + tolerance &&
           l.b <= high.b + tolerance && low.b <= h.b + tolerance;
}

bool edges_near(const struct edge *e, const struct edge *f, double tolerance)
{
    struct vec2 low;
    struct vec2 high;

    edge_cover(f, &low, &high);
    return edge_reaches(e, low, high, tolerance);
}
