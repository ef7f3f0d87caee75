/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "mesh/geometry.h"

bool linear_equal(const struct linear *p, const struct linear *q, size_t supply_count)
{
    if (p->constant != q->constant)
        return false;
    for (size_t s = 0; s < supply_count; s++) {
        const double gain_p = p->gain != NULL ? p->gain[s] : 0.0;
        const double gain_q = q->gain != NULL ? q->gain[s] : 0.0;
        if (gain_p != gain_q)
            return false;
    }
    return true;
}
