/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_MESH_DOCUMENT_TEXT_H
#define EVENGAP_MESH_DOCUMENT_TEXT_H

/* Text of a YAML document: is it text at all, and what do its scalars say. Only for
 * document.c. */

#include <stdbool.h>
#include <stddef.h>

#include "mesh/document.h"

struct fy_token;

/** True if text[length] is UTF-8 without binary content and not too long; else a
 *  mistake has been added. */
bool text_is_readable(const char *text, size_t length, struct mistakes *mistakes);

/** True if there is no control character but tab and newline. */
bool text_is_printable(const char *text);

/** Copy of the text of a token (a zero inside becomes a control character, so that it
 *  is refused later); NULL if memory ran out. */
char *token_text(struct fy_token *token);

/** Fills text, literal, quoted and place of a scalar node from its token (NULL:
 *  nothing written). False if memory ran out. */
bool scalar_text(struct fy_token *token, const char *source, size_t length,
                 struct node *node);

#endif
