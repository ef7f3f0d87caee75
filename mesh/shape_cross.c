/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Where two edges meet. All candidates are found on the endless lines and full circles
 * (crossings, feet of perpendiculars, points on the line of centres) together with the
 * ends of both edges; a candidate counts if it lies within tolerance of both edges.
 * The same list thus serves for crossings (tiny tolerance) and for touching (the
 * caller's tolerance), tangent circles and overlapping faces included. */

#include "mesh/shape_internal.h"

struct meetings {
    const struct edge *e;
    const struct edge *f;
    double tolerance;
    struct vec2 *points; /* [MEETINGS_MAX] */
    int count;
};

static void offer(struct meetings *meetings, struct vec2 p)
{
    struct vec2 from_e = vec2_sub(p, edge_nearest(meetings->e, p));
    struct vec2 from_f = vec2_sub(p, edge_nearest(meetings->f, p));

    if (meetings->count < MEETINGS_MAX && vec2_length(from_e) <= meetings->tolerance &&
        vec2_length(from_f) <= meetings->tolerance)
        meetings->points[meetings->count++] = p;
}

static void offer_lines(struct meetings *meetings)
{
    struct vec2 u = vec2_sub(meetings->e->end, meetings->e->start);
    struct vec2 v = vec2_sub(meetings->f->end, meetings->f->start);
    struct vec2 w = vec2_sub(meetings->f->start, meetings->e->start);
    double cross = vec2_cross(u, v);

    /* nearly parallel lines meet at an end of one of them, if at all */
    if (fabs(cross) <= 1e-14 * vec2_length(u) * vec2_length(v))
        return;
    offer(meetings,
          vec2_add(meetings->e->start, vec2_scale(u, vec2_cross(w, v) / cross)));
}

static void offer_line_arc(struct meetings *meetings, const struct edge *line,
                           const struct edge *arc)
{
    struct vec2 d = vec2_sub(line->end, line->start);
    struct vec2 foot;
    double h;
    double half;

    d = vec2_scale(d, 1 / vec2_length(d));
    foot = vec2_add(line->start,
                    vec2_scale(d, vec2_dot(vec2_sub(arc->centre, line->start), d)));
    h = fabs(vec2_cross(d, vec2_sub(arc->centre, line->start)));
    offer(meetings, foot);
    if (h >= arc->radius)
        return;
    half = sqrt((arc->radius - h) * (arc->radius + h));
    offer(meetings, vec2_add(foot, vec2_scale(d, half)));
    offer(meetings, vec2_sub(foot, vec2_scale(d, half)));
}

static void offer_arcs(struct meetings *meetings)
{
    const struct edge *e = meetings->e;
    const struct edge *f = meetings->f;
    struct vec2 d = vec2_sub(f->centre, e->centre);
    double distance = vec2_length(d);
    double x;
    double y2;

    if (distance == 0) /* meet along a stretch, found by its ends, or not at all */
        return;
    d = vec2_scale(d, 1 / distance);
    offer(meetings, vec2_add(e->centre, vec2_scale(d, e->radius)));
    offer(meetings, vec2_sub(e->centre, vec2_scale(d, e->radius)));
    x = 0.5 * (distance + (e->radius - f->radius) * (e->radius + f->radius) / distance);
    y2 = (e->radius - x) * (e->radius + x);
    if (!(y2 > 0))
        return;
    for (int side = -1; side <= 1; side += 2) {
        double y = side * sqrt(y2);
        offer(meetings,
              vec2_add(e->centre, (struct vec2){x * d.a - y * d.b, x * d.b + y * d.a}));
    }
}

int edge_meetings(const struct edge *e, const struct edge *f, double tolerance,
                  struct vec2 points[MEETINGS_MAX])
{
    struct meetings meetings = {e, f, tolerance, points, 0};

    if (!edges_near(e, f, tolerance))
        return 0;
    offer(&meetings, e->start);
    offer(&meetings, e->end);
    offer(&meetings, f->start);
    offer(&meetings, f->end);
    if (e->radius > 0 && f->radius > 0)
        offer_arcs(&meetings);
    else if (e->radius > 0)
        offer_line_arc(&meetings, f, e);
    else if (f->radius > 0)
        offer_line_arc(&meetings, e, f);
    else
        offer_lines(&meetings);
    return meetings.count;
}
