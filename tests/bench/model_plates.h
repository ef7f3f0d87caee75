/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_TESTS_MODEL_PLATES_H
#define EVENGAP_TESTS_MODEL_PLATES_H

/* The model plates: two plates 120 mm by 4 mm, gap 20 mm, at +-500 V, centred in a
 * grounded box 300 mm by 80 mm; and their reference values. */

#include "mesh/geometry.h"
#include "shared/status.h"

enum { MODEL_POINTS = 6 };

struct model_reference {
    double z[MODEL_POINTS];     /* m */
    double field[MODEL_POINTS]; /* V/m, |E_x| on the axis */
    double integral;            /* V, |integral of E_x dz| over the box */
    double charge;              /* V, |charge of the upper plate per metre| / eps0 */
};

/* From an independent boundary-integral computation that agrees with itself to 1e-12. */
extern const struct model_reference model_square;  /* sharp corners */
extern const struct model_reference model_rounded; /* corners rounded by 1 mm */

/** A geometry with electric_along filled: plates with the given rounding (m). Free with
 *  geometry_free. */
enum status model_plates(double rounding, struct geometry *geometry);

#endif
