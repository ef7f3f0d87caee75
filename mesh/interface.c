/* SPDX-License-Identifier: GPL-3.0-or-later */

/* In the local frame, scaled by the size of the neighbourhood, the polynomial of a side is
 *     a + b n + c t + d n^2 + e n t + f t^2.
 * Side 0 has a, b, c, e, f free; d follows from the equation
 *     u_nn + u_tt + (slope of the weight / weight) . grad u = 0.
 * Along n = K t^2/2 continuity of u and of k (u_n - K t u_t) gives the other side:
 *     a' = a, c' = c, b' = (k/k') b, f' = f + K (b - b')/2,
 *     e' = K c + (k/k') (e - K c).
 * Source: jump conditions in a local frame as in LeVeque and Li, SIAM J. Numer. Anal.
 * 31, 1019 (1994) (from memory); here they make the fluxes of faces exact, so that the
 * scheme conserves flux. */

#include "mesh/interface.h"

#include <math.h>

#include "mesh/medium.h"
#include "mesh/shape_internal.h"

/* How far from the interface its two sides are looked at, as a share of the reach. */
#define SIDE_SHARE 1e-3
/* Places along the interface, in reaches, where both media are looked at. */
static const double WATCHED[] = {0.0, -0.5, 0.5, -1.0, 1.0};
enum { WATCHED_COUNT = sizeof WATCHED / sizeof WATCHED[0] };

struct side_terms {
    double a, b, c, d, e, f;
};

static struct vec2 tangent_of(const struct interface *interface)
{
    return (struct vec2){-interface->normal.b, interface->normal.a};
}

/* Point of the interface at distance t along its tangent, lifted by n. */
static struct vec2 place_on(const struct interface *interface, double t, double n)
{
    const double height = 0.5 * interface->curvature * t * t + n;
    return vec2_add(interface->origin, vec2_add(vec2_scale(interface->normal, height),
                                                vec2_scale(tangent_of(interface), t)));
}

/* Frame of an edge at the point of it nearest to `at`. */
static struct interface frame_of(const struct edge *edge, struct vec2 at)
{
    struct interface frame = {0};
    const double t = edge_fraction(edge, at);
    const struct vec2 along = edge_direction(edge, t);
    frame.origin = edge_point(edge, t);
    frame.normal = (struct vec2){along.b, -along.a};
    if (edge->radius > 0.0)
        frame.curvature = (edge->sweep > 0.0 ? -1.0 : 1.0) / edge->radius;
    return frame;
}

/* True if the same two media face each other all along the reach. */
static bool is_smooth(const struct plane *plane, const struct interface *frame,
                      double reach, int media[2])
{
    for (int k = 0; k < WATCHED_COUNT; k++)
        for (int side = 0; side < 2; side++) {
            const double n = (side ? 1.0 : -1.0) * SIDE_SHARE * reach;
            const int medium =
                plane_medium_at(plane, place_on(frame, WATCHED[k] * reach, n));
            if (k == 0)
                media[side] = medium;
            else if (medium != media[side])
                return false;
        }
    return media[0] != media[1] && media[0] != MEDIUM_CONDUCTOR &&
           media[1] != MEDIUM_CONDUCTOR;
}

/* Nearest frame of one insulator that is nearer than *nearest. */
static void find_in(const struct shape *shape, struct vec2 at, double *nearest,
                    struct interface *frame)
{
    for (size_t o = 0; o < shape->count; o++)
        for (size_t k = 0; k < shape->outlines[o].count; k++) {
            const struct edge *edge = &shape->outlines[o].edges[k];
            const double distance = vec2_length(vec2_sub(edge_nearest(edge, at), at));
            if (distance >= *nearest)
                continue;
            *nearest = distance;
            *frame = frame_of(edge, at);
        }
}

bool interface_find(const struct plane *plane, struct vec2 at, double reach,
                    struct interface *interface, int media[2])
{
    double nearest = reach;
    bool found = false;
    for (size_t p = 0; p < plane->part_count; p++) {
        const struct part *part = &plane->parts[p];
        double distance = nearest;
        struct interface frame = {0};
        int sides[2] = {0, 0};
        if (part_is_conductor(part))
            continue;
        find_in(&part->shape, at, &distance, &frame);
        if (distance >= nearest || !is_smooth(plane, &frame, reach, sides))
            continue;
        nearest = distance;
        found = true;
        *interface = frame;
        media[0] = sides[0];
        media[1] = sides[1];
    }
    if (!found)
        return false;
    interface->scale = reach;
    interface->coefficient[0] = medium_coefficient(plane, media[0]);
    interface->coefficient[1] = medium_coefficient(plane, media[1]);
    if (plane_kind_is_turned(plane->kind))
        interface->radius = interface->origin.b;
    return true;
}

/* d from the equation. */
static void close_side(const struct interface *f, struct side_terms *s)
{
    s->d = -s->f;
    if (f->radius > 0.0) {
        const double ratio = f->scale / f->radius;
        s->d -= 0.5 * ratio * (f->normal.b * s->b + tangent_of(f).b * s->c);
    }
}

/* Polynomial of term m on one side. */
static struct side_terms term_of(const struct interface *f, int m, int side)
{
    struct side_terms s = {0.0, 0.0, 0.0, 0.0, 0.0, 0.0};
    double *const free_terms[INTERFACE_TERMS] = {&s.a, &s.b, &s.c, &s.e, &s.f};
    *free_terms[m] = 1.0;
    if (side == 1) {
        const double ratio = f->coefficient[0] / f->coefficient[1];
        const double bend = f->curvature * f->scale;
        const double slope = s.b;
        s.b *= ratio;
        s.f += 0.5 * bend * (slope - s.b);
        s.e = bend * s.c + ratio * (s.e - bend * s.c);
    }
    close_side(f, &s);
    return s;
}

static void local_of(const struct interface *f, struct vec2 at, double *n, double *t)
{
    const struct vec2 d = vec2_scale(vec2_sub(at, f->origin), 1.0 / f->scale);
    *n = vec2_dot(d, f->normal);
    *t = vec2_dot(d, tangent_of(f));
}

void interface_values(const struct interface *interface, struct vec2 at, int side,
                      double *value)
{
    double n, t;
    local_of(interface, at, &n, &t);
    for (int m = 0; m < INTERFACE_TERMS; m++) {
        const struct side_terms s = term_of(interface, m, side);
        value[m] = s.a + s.b * n + s.c * t + s.d * n * n + s.e * n * t + s.f * t * t;
    }
}

/* coefficient * weight * slope along `face` of term m at a point. */
static double flux_density(const struct interface *f, const struct side_terms *s,
                           int side, struct vec2 at, struct vec2 face)
{
    double n, t;
    local_of(f, at, &n, &t);
    const double slope_n = s->b + 2.0 * s->d * n + s->e * t;
    const double slope_t = s->c + s->e * n + 2.0 * s->f * t;
    const double weight = f->radius > 0.0 ? at.b : 1.0;
    return f->coefficient[side] * weight / f->scale *
           (slope_n * vec2_dot(face, f->normal) +
            slope_t * vec2_dot(face, tangent_of(f)));
}

/* Simpson's rule is exact here. */
static void add_stretch(const struct interface *f, struct vec2 p, struct vec2 q,
                        double *flux)
{
    const struct vec2 d = vec2_sub(q, p), middle = vec2_scale(vec2_add(p, q), 0.5);
    const double length = vec2_length(d);
    if (length == 0.0)
        return;
    const struct vec2 face = {d.b / length, -d.a / length};
    double n, t;
    local_of(f, middle, &n, &t);
    const int side = n > 0.5 * f->curvature * f->scale * t * t;
    for (int m = 0; m < INTERFACE_TERMS; m++) {
        const struct side_terms s = term_of(f, m, side);
        flux[m] += length / 6.0 *
                   (flux_density(f, &s, side, p, face) +
                    4.0 * flux_density(f, &s, side, middle, face) +
                    flux_density(f, &s, side, q, face));
    }
}

/* Fractions in (0, 1) where the face crosses the interface, in order. */
static int crossings(const struct interface *f, struct vec2 p, struct vec2 q,
                     double *at)
{
    double n0, t0, n1, t1;
    local_of(f, p, &n0, &t0);
    local_of(f, q, &n1, &t1);
    const double k = 0.5 * f->curvature * f->scale, dn = n1 - n0, dt = t1 - t0;
    /* n0 + s dn = k (t0 + s dt)^2 */
    const double a = k * dt * dt, b = 2.0 * k * t0 * dt - dn, c = k * t0 * t0 - n0;
    const double under = b * b - 4.0 * a * c;
    double roots[2] = {-1.0, -1.0};
    int count = 0;
    if (under < 0.0)
        return 0;
    const double m = -0.5 * (b + copysign(sqrt(under), b));
    if (m != 0.0)
        roots[0] = c / m;
    if (a != 0.0)
        roots[1] = m / a;
    if (roots[0] > roots[1]) {
        const double swap = roots[0];
        roots[0] = roots[1];
        roots[1] = swap;
    }
    for (int r = 0; r < 2; r++)
        if (roots[r] > 0.0 && roots[r] < 1.0)
            at[count++] = roots[r];
    return count;
}

void interface_fluxes(const struct interface *interface, struct vec2 p, struct vec2 q,
                      double *flux)
{
    double at[2];
    const int count = crossings(interface, p, q, at);
    struct vec2 from = p;
    for (int m = 0; m < INTERFACE_TERMS; m++)
        flux[m] = 0.0;
    for (int k = 0; k < count; k++) {
        const struct vec2 to = vec2_add(p, vec2_scale(vec2_sub(q, p), at[k]));
        add_stretch(interface, from, to, flux);
        from = to;
    }
    add_stretch(interface, from, q, flux);
}
