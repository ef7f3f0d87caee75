/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "solver/cross_section.h"

#include <math.h>
#include <string.h>

#include "shared/mem.h"

struct section_source section_source_of(const struct view *view)
{
    const struct plane_solution *const *p = view->planes;
    struct section_source source = {p[PLANE_ELECTRIC_ACROSS], p[PLANE_MAGNETIC_ACROSS],
                                    view->geometry->reference_z};
    if (source.electric == NULL)
        source.electric = p[PLANE_ELECTRIC_ALONG];
    if (source.magnetic == NULL)
        source.magnetic = p[PLANE_MAGNETIC_ALONG];
    return source;
}

unsigned section_planes(const struct section_source *source)
{
    unsigned planes = 0;
    if (source->electric != NULL)
        planes |= plane_bit(source->electric->plane->kind);
    if (source->magnetic != NULL)
        planes |= plane_bit(source->magnetic->plane->kind);
    return planes;
}

/* Field of a plane at a point of the section; out = {x, y} components. */
static enum status section_field(const struct plane_solution *plane, double z, double x,
                                 double y, double out[2], bool *open)
{
    const enum plane_kind kind = plane->plane->kind;
    const bool along = plane_kind_is_along(kind);
    const bool magnetic = plane_kind_is_magnetic(kind);
    const struct vec2 at =
        along ? (struct vec2){z, magnetic ? y : x} : (struct vec2){x, y};
    double field[2];
    int part;
    out[0] = out[1] = 0.0;
    *open = field_covers(&plane->grid, at);
    if (!*open)
        return STATUS_OK;
    enum status status = plane_field(plane, at, field, &part);
    *open = part < 0;
    if (!along) {
        out[0] = field[0];
        out[1] = field[1];
    } else {
        out[magnetic ? 1 : 0] = field[1];
    }
    return status;
}

enum status section_electric(const struct section_source *source, double x, double y,
                             double e[2], bool *open)
{
    return section_field(source->electric, source->z, x, y, e, open);
}

enum status section_magnetic(const struct section_source *source, double x, double y,
                             double b[2], bool *open)
{
    return section_field(source->magnetic, source->z, x, y, b, open);
}

enum status section_reference(const struct section_source *source, double x, double y,
                              double *speed)
{
    double e[2], b[2];
    bool open;
    *speed = 0.0;
    enum status status = section_electric(source, x, y, e, &open);
    if (status == STATUS_OK)
        status = section_magnetic(source, x, y, b, &open);
    if (status == STATUS_OK && b[1] == 0.0)
        status = STATUS_UNTRUSTED;
    if (status == STATUS_OK)
        *speed = e[0] / b[1];
    return status;
}

enum status section_ratio_error(const struct section_source *source, double reference,
                                double x, double y, double *error, bool *open)
{
    double e[2], b[2];
    bool open_e = false, open_b = false;
    *error = 0.0;
    enum status status = section_electric(source, x, y, e, &open_e);
    if (status == STATUS_OK)
        status = section_magnetic(source, x, y, b, &open_b);
    *open = open_e && open_b && b[1] != 0.0;
    if (status == STATUS_OK && *open)
        *error = e[0] / b[1] / reference - 1.0;
    return status;
}

static enum status section_allocate(struct section *s,
                                    const struct section_source *from)
{
    const size_t n = SECTION_POINTS;
    double **electric[] = {&s->e_x, &s->e_y}, **magnetic[] = {&s->b_x, &s->b_y};
    s->nx = s->ny = n;
    s->x = MEM_NEW(n, double);
    s->y = MEM_NEW(n, double);
    bool good = s->x != NULL && s->y != NULL;
    for (int k = 0; k < 2; k++) {
        if (from->electric != NULL)
            good = (*electric[k] = MEM_NEW(n * n, double)) != NULL && good;
        if (from->magnetic != NULL)
            good = (*magnetic[k] = MEM_NEW(n * n, double)) != NULL && good;
    }
    if (from->electric != NULL && from->magnetic != NULL)
        good = (s->ratio_error = MEM_NEW(n * n, double)) != NULL && good;
    return good ? STATUS_OK : STATUS_MEMORY;
}

static enum status section_node(const struct section_source *source, double reference,
                                struct section *s, size_t node)
{
    const double x = s->x[node % s->nx], y = s->y[node / s->nx];
    double e[2] = {0.0, 0.0}, b[2] = {0.0, 0.0};
    bool open;
    enum status status = STATUS_OK;
    if (source->electric != NULL) {
        status = section_electric(source, x, y, e, &open);
        s->e_x[node] = e[0];
        s->e_y[node] = e[1];
    }
    if (source->magnetic != NULL && status == STATUS_OK) {
        status = section_magnetic(source, x, y, b, &open);
        s->b_x[node] = b[0];
        s->b_y[node] = b[1];
    }
    if (s->ratio_error != NULL && b[1] != 0.0)
        s->ratio_error[node] = e[0] / b[1] / reference - 1.0;
    return status;
}

enum status section_map(const struct view *view, struct section *section)
{
    const struct geometry *g = view->geometry;
    const struct section_source source = section_source_of(view);
    double reference = 1.0;
    memset(section, 0, sizeof *section);
    if (!g->beam.has_footprint || (source.electric == NULL && source.magnetic == NULL))
        return STATUS_OK;
    enum status status = section_allocate(section, &source);
    if (status != STATUS_OK)
        return status;
    for (int k = 0; k < SECTION_POINTS; k++) {
        const double t = 2.0 * k / (SECTION_POINTS - 1) - 1.0;
        section->x[k] = t * g->beam.half_x;
        section->y[k] = t * g->beam.half_y;
    }
    if (section->ratio_error != NULL)
        status = section_reference(&source, g->reference_x, g->reference_y, &reference);
    for (size_t n = 0; n < section->nx * section->ny && status == STATUS_OK; n++)
        status = section_node(&source, reference, section, n);
    section->present = status == STATUS_OK;
    return status;
}

void section_free(struct section *section)
{
    double *arrays[] = {section->x,   section->y,   section->e_x,        section->e_y,
                        section->b_x, section->b_y, section->ratio_error};
    for (size_t k = 0; k < sizeof arrays / sizeof *arrays; k++)
        mem_free(arrays[k]);
    memset(section, 0, sizeof *section);
}
