/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Columns line up without measuring: an entry too long for its column moves the rest to
 * the next line. */

#include "output/sheet_layout.h"

#include <string.h>

void sheet_wrap(struct sink *sink, int indent, const char *text)
{
    int column = 0;
    while (*(text += strspn(text, " \n"))) {
        int length = (int)strcspn(text, " \n");
        if (column && column + 1 + length > SHEET_WIDTH) {
            sink_print(sink, "\n");
            column = 0;
        }
        int gap = column ? 1 : indent;
        sink_print(sink, "%*s%.*s", gap, "", length, text);
        column += gap + length;
        text += length;
    }
    sink_print(sink, "\n");
}

void sheet_heading(struct sink *sink, const char *text)
{
    sink_print(sink, "\n%s\n", text);
    for (size_t k = 0; text[k]; k++)
        sink_print(sink, "-");
    sink_print(sink, "\n");
}

void sheet_title(struct sink *sink, const char *text)
{
    if (strlen(text) <= SHEET_TITLE_COLUMN - 3)
        sink_print(sink, "  %-*s", SHEET_TITLE_COLUMN - 2, text);
    else
        sink_print(sink, "  %s\n%*s", text, SHEET_TITLE_COLUMN, "");
}
