/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_OUTPUT_NUMBER_H
#define EVENGAP_OUTPUT_NUMBER_H

/* Numbers as people read them: as many digits as the uncertainty lets stand, the
 * uncertainty of the last digits in brackets, in the unit the workshop uses. */

#include <stddef.h>

#define NUMBER_TEXT 64 /* bytes that hold any formatted number with its unit */

/* A unit for people: value in SI = number shown * factor. */
struct unit_choice {
    double factor;
    const char *name; /* static text; "" for a pure number */
};

/** The unit in which a value of this magnitude (SI) in the SI unit `unit` is shown;
 *  the SI unit itself when the unit is not known here. */
struct unit_choice unit_choose(const char *unit, double magnitude);

/** "1.23457(8)": value 1.23457 with uncertainty 0.00008. The uncertainty is rounded up
 *  to one digit, or two where the first is 1; at most nine digits are shown. Very large
 *  and very small numbers get an exponent, "1.2(1)e-4". An uncertainty of 0 means
 *  exact: up to nine digits, no bracket. text[size], size >= NUMBER_TEXT. */
void number_format(double value, double uncertainty, char *text, size_t size);

/** Value without a stated uncertainty, `digits` significant digits, the same exponent
 *  style. */
void number_plain(double value, int digits, char *text, size_t size);

/** number_format in the unit chosen for the value, a space, and the unit. value,
 *  uncertainty: SI, in `unit`. */
void number_quantity(double value, double uncertainty, const char *unit, char *text,
                     size_t size);

#endif
