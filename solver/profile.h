/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_PROFILE_H
#define EVENGAP_SOLVER_PROFILE_H

/* The profile along the path, combined over the levels of the family. */

#include "shared/attributes.h"
#include "shared/status.h"
#include "solver/path.h"
#include "solver/result.h"

/** Combines paths[count] (coarse to fine) into a profile. */
enum status profile_combine(const struct path *paths, int count,
                            struct profile *profile) MUST_CHECK;

void profile_free(struct profile *profile);

#endif
