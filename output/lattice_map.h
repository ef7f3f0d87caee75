/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_OUTPUT_LATTICE_MAP_H
#define EVENGAP_OUTPUT_LATTICE_MAP_H

/* E and B together on the lattice, for trajectory programs: as a legacy VTK text file
 * and as a table. A field whose planes are all missing is left out, never written as
 * zero. */

#include "output/sink.h"
#include "solver/result.h"

/** STRUCTURED_POINTS in true (x, y, z) order, metres, x fastest; vectors
 *  electric_field (V/m) and magnetic_flux_density (T), scalar solid (1 inside a part),
 *  vectors electric_field_uncertainty and magnetic_flux_density_uncertainty: that of each
 *  component, absolute, rounded up to two digits; 0 for the component that is 0 by
 *  assumption and inside a part. The spacing of an axis with one point is written as 1.
 *  STATUS_UNTRUSTED with a message if a value is not finite. */
enum status lattice_map_write_vtk(struct sink *sink,
                                  const struct lattice_field *lattice,
                                  struct messages *messages) MUST_CHECK;

/** Lines starting with # state axes, units, origin, spacing, order and the plane each
 *  field comes from; then one row of names, then the rows
 *  x,y,z,Ex,Ey,Ez,Bx,By,Bz,solid with x fastest, followed by the uncertainties of the
 *  six components as above. Errors as above. */
enum status lattice_map_write_csv(struct sink *sink,
                                  const struct lattice_field *lattice,
                                  struct messages *messages) MUST_CHECK;

#endif
