/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SOLVER_CAUTION_H
#define EVENGAP_SOLVER_CAUTION_H

/* Cautions: figures beyond what the trade has learnt to stay below. They inform and never
 * decide: the limits of the file do that. */

#include "shared/attributes.h"
#include "shared/status.h"
#include "solver/figure.h"

/* Fields in vacuum (common practice, no source; V/m). */
#define FIELD_UNPOLISHED    1e6   /* unpolished surfaces hold 1 to 2 kV/mm */
#define FIELD_POLISHED      5e6   /* polished and conditioned, gaps below about 10 mm */
#define FIELD_CREEP         0.3e6 /* along insulators 0.3 to 1 kV/mm */
#define FIELD_CREEP_HIGHEST 1e6

/* What goes with every list of cautions. */
#define CAUTIONS_STANDING                                                              \
    "Rules of thumb: they change neither the verdict nor the exit status. Follow the " \
    "codes that hold where the filter is used and leave design approval and "          \
    "installation to people licensed for it."

struct caution {
    char *text;         /* one sentence for people: what, where, against which bound */
    const char *figure; /* name of the figure it is about, static text */
    char *subject;      /* its part */
};

/* Caller-owned list; zeroed is empty. */
struct cautions {
    struct caution *items; /* [count] in the order of the figures */
    size_t count;
    size_t capacity;
};

/** One caution for every figure `surface_field` or `insulator_field` above the lowest of
 *  its bounds, naming the highest bound it exceeds. Missing figures give none; unsettled
 *  ones do. STATUS_MEMORY (the list is then empty). */
enum status cautions_of_figures(const struct figures *figures,
                                struct cautions *cautions) MUST_CHECK;

/** Empties; safe on zeroed and twice. */
void cautions_free(struct cautions *cautions);

#endif
