/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_OUTPUT_WORDS_H
#define EVENGAP_OUTPUT_WORDS_H

/* Wording that the sheet and the report share, so that both say the same. */

#include <stddef.h>

#include <stdbool.h>

#include "mesh/geometry.h"
#include "solver/figure.h"
#include "solver/result.h"

/** Heading of a group of figures. */
const char *words_group(enum figure_group group);

/** What a limit is about, in words. */
const char *words_limit(enum limit_kind kind);

/** Key of a figure's state: "good", "unsettled", "missing". */
const char *words_state(enum figure_state state);

/** What solving this plane in two dimensions takes for granted. */
const char *words_assumption(enum plane_kind kind);

/** How to read a picture of the result folder, one or two sentences; NULL where it
 *  explains itself. */
const char *words_picture(const char *name);

/** What the node potential of a plane is called, with its unit. */
const char *words_potential(enum plane_kind kind);

/** Cautions that go with every result; caution k, NULL past the last. */
const char *words_caution(size_t k);

/** The verdict in one line; text[size]. */
void words_verdict(const struct verdict *verdict, char *text, size_t size);

/** True for a term of an expansion that is zero for practical purposes, below
 *  WORDS_ZERO_TERM with its uncertainty: sheet and report leave it out, the summary keeps
 *  it. */
bool words_is_zero_term(const struct figure *figure);

#define WORDS_ZERO_TERM 1e-9

/** File name without its folders; "" for NULL. */
const char *words_base_name(const char *path);

#endif
