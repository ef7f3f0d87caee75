/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_OUTPUT_DIGITS_H
#define EVENGAP_OUTPUT_DIGITS_H

/* Numbers as text for the big files: what printf's %.12g gives, several times faster.
 * Locale-free. */

#include <stddef.h>

enum { DIGITS_SHOWN = 12, DIGITS_TEXT = 32 };

/** Writes value with DIGITS_SHOWN significant digits into text[DIGITS_TEXT], trailing
 *  zeros dropped, NUL-terminated; returns its length. The last digit may differ from
 *  printf's where the value lies within 1e-3 of half a unit of it. Values below 1e-9 or
 *  from 1e15 on in size go through printf. */
size_t digits_write(double value, char text[DIGITS_TEXT]);

#endif
