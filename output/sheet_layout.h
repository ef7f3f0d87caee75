/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_OUTPUT_SHEET_LAYOUT_H
#define EVENGAP_OUTPUT_SHEET_LAYOUT_H

/* Columns and rows that the parts of the sheet share. */

#include "output/sink.h"

enum {
    SHEET_WIDTH = 88,
    SHEET_TITLE_COLUMN = 43,
    SHEET_VALUE_COLUMN = 26,
    SHEET_NOTE_INDENT = 6,
    SHEET_TEXT = 512 /* bytes of a composed line */
};

/** Prints text indented and wrapped at SHEET_WIDTH columns. */
void sheet_wrap(struct sink *sink, int indent, const char *text);

/** Prints an underlined heading after an empty line. */
void sheet_heading(struct sink *sink, const char *text);

/** First column of a row; goes to a new line when the title does not fit. */
void sheet_title(struct sink *sink, const char *text);

#endif
