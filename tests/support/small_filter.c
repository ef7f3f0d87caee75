/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "tests/support/small_filter.h"

#include <stdlib.h>
#include <string.h>

#include "mesh/geometry_check.h"
#include "mesh/reader.h"

static const char TEXT[] =
    "evengap: 1\n"
    "beam:\n"
    "  mass: 39.948 u\n"
    "  charge: 1 e\n"
    "  energy: 5 keV\n"
    "  path: {from: -60 mm, to: 60 mm}\n"
    "  footprint: {x: 2 mm, y: 1.5 mm}\n"
    "  slit: {at: 300 mm, width: 0.5 mm}\n"
    "supplies:\n"
    "  plates: 311 V\n"
    "  coil: 3183 A\n"
    "planes:\n"
    "  electric_along:\n"
    "    region: {z: [-70 mm, 70 mm], x: [-40 mm, 40 mm]}\n"
    "    parts:\n"
    "      upper plate:\n"
    "        electrode: plates/2\n"
    "        box: {z: [-30 mm, 30 mm], x: [10 mm, 14 mm]}\n"
    "        twin: {across: x, potential: -plates/2, name: lower plate}\n"
    "  magnetic_along:\n"
    "    region: {z: [-70 mm, 70 mm], y: [-50 mm, 50 mm]}\n"
    "    parts:\n"
    "      upper pole:\n"
    "        pole: coil/2\n"
    "        box: {z: [-30 mm, 30 mm], y: [20 mm, 40 mm]}\n"
    "        twin: {across: y, potential: -coil/2, name: lower pole}\n"
    "  electric_across:\n"
    "    region: {x: [-40 mm, 40 mm], y: [-20 mm, 20 mm]}\n"
    "    parts:\n"
    "      upper plate:\n"
    "        electrode: plates/2\n"
    "        box: {x: [10 mm, 14 mm], y: [-14 mm, 14 mm]}\n"
    "        twin: {across: x, potential: -plates/2, name: lower plate}\n"
    "  magnetic_across:\n"
    "    region: {x: [-70 mm, 70 mm], y: [-50 mm, 50 mm]}\n"
    "    parts:\n"
    "      upper pole:\n"
    "        pole: coil/2\n"
    "        box: {x: [-45 mm, 45 mm], y: [20 mm, 40 mm]}\n"
    "        twin: {across: y, potential: -coil/2, name: lower pole}\n"
    "probes:\n"
    "  - {z: 4 mm, x: 1 mm, y: 1 mm, plane: electric_along}\n"
    "  - {z: 4 mm, x: 1 mm, y: 1 mm, plane: magnetic_along}\n"
    "  - {x: 11 mm}\n"
    "limits:\n"
    "  ratio_error: 0.9\n"
    "  kick: 1 rad\n"
    "  flat_length: 1 m\n"
    "lattice:\n"
    "  z: [-60 mm, 60 mm, 4 mm]\n"
    "  x: [-12 mm, 12 mm, 1 mm]\n"
    "  y: [-2 mm, 2 mm, 1 mm]\n"
    "grid: {fineness: 0.5}\n";

void small_filter(struct geometry *geometry)
{
    struct messages messages = {0};
    enum status status =
        reader_read_text("small.yaml", TEXT, strlen(TEXT), geometry, &messages);
    if (status == STATUS_OK)
        status = geometry_check(geometry, &messages);
    if (status != STATUS_OK)
        abort();
    messages_free(&messages);
}
