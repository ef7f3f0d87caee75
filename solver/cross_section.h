/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_CROSS_SECTION_H
#define EVENGAP_SOLVER_CROSS_SECTION_H

/* The fields a particle meets at a point (x, y) of the cross-section through the
 * reference point: from the across planes where they are present, else from the along
 * planes (E_x uniform along y, B_y uniform along x). */

#include "shared/attributes.h"
#include "shared/status.h"
#include "solver/result.h"
#include "solver/view.h"

enum { SECTION_POINTS = 41 };

/* Where the fields of the section come from; NULL if neither plane is there. */
struct section_source {
    const struct plane_solution *electric;
    const struct plane_solution *magnetic;
    double z; /* m, of the section, for along planes */
};

struct section_source section_source_of(const struct view *view);

/** Bits of the planes used. */
unsigned section_planes(const struct section_source *source);

/** E (x, y components, V/m) at (x, y); open is false inside a part or outside the
 *  region (fields are 0 there). The plane must be there. */
enum status section_electric(const struct section_source *source, double x, double y,
                             double e[2], bool *open) MUST_CHECK;

/** B (x, y components, T), the same. */
enum status section_magnetic(const struct section_source *source, double x, double y,
                             double b[2], bool *open) MUST_CHECK;

/** Ratio error at (x, y) against the reference point; open as above. Both planes must be
 *  there. */
enum status section_ratio_error(const struct section_source *source, double reference,
                                double x, double y, double *error,
                                bool *open) MUST_CHECK;

/** Pass speed u_ref at (x, y); STATUS_UNTRUSTED if B_y vanishes there. */
enum status section_reference(const struct section_source *source, double x, double y,
                              double *speed) MUST_CHECK;

/** The map over the footprint (SECTION_POINTS squared). present stays false without a
 *  footprint or without any plane. */
enum status section_map(const struct view *view, struct section *section) MUST_CHECK;

void section_free(struct section *section);

#endif
