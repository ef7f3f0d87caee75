/* SPDX-License-Identifier: GPL-3.0-or-later */

/* The value is scaled by an exact power of ten to a whole number of DIGITS_SHOWN digits,
 * which are then printed with a point among them. */

#include "output/digits.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

static const double POWERS[] = {1e0,  1e1,  1e2,  1e3,  1e4,  1e5,  1e6,  1e7,
                                1e8,  1e9,  1e10, 1e11, 1e12, 1e13, 1e14, 1e15,
                                1e16, 1e17, 1e18, 1e19, 1e20, 1e21, 1e22};

#define LEAST 1e-9
#define MOST  1e15

/* Below this printf's %g changes to an exponent; so does this. */
#define LEAST_PLAIN 1e-4

/* Decimal exponent of a size in [LEAST, MOST): 10^e <= size < 10^(e+1). */
static int exponent_of(double size)
{
    int e = size >= 1.0 ? 0 : -9;
    while (e < 0 ? size * POWERS[-e] >= 10.0 : size >= POWERS[e + 1])
        e++;
    return e;
}

static double scaled(double size, int power)
{
    return power >= 0 ? size * POWERS[power] : size / POWERS[-power];
}

/* The DIGITS_SHOWN decimal digits of a whole number; returns how many are left when
 * trailing zeros are dropped (at least 1). */
static int spell(unsigned long long whole, char digits[DIGITS_SHOWN])
{
    int count = DIGITS_SHOWN;
    for (int k = DIGITS_SHOWN - 1; k >= 0; k--) {
        digits[k] = (char)('0' + whole % 10);
        whole /= 10;
    }
    while (count > 1 && digits[count - 1] == '0')
        count--;
    return count;
}

/* Digits with the point after position e (e < 0: zeros first). */
static size_t write_plain(char *text, const char *digits, int count, int e)
{
    size_t n = 0;
    if (e < 0) {
        text[n++] = '0';
        text[n++] = '.';
        for (int k = -1; k > e; k--)
            text[n++] = '0';
    }
    for (int k = 0; k < count || k <= e; k++) {
        if (k == e + 1 && e >= 0)
            text[n++] = '.';
        text[n++] = k < count ? digits[k] : '0';
    }
    return n;
}

static size_t write_exponent(char *text, const char *digits, int count, int e)
{
    size_t n = write_plain(text, digits, count, 0);
    text[n++] = 'e';
    text[n++] = '-';
    text[n++] = (char)('0' + -e / 10);
    text[n++] = (char)('0' + -e % 10);
    return n;
}

size_t digits_write(double value, char text[DIGITS_TEXT])
{
    char digits[DIGITS_SHOWN];
    const double size = fabs(value);
    size_t n = 0;
    if (!(size >= LEAST && size < MOST)) /* zero and NaN too */
        return (size_t)snprintf(text, DIGITS_TEXT, "%.*g", DIGITS_SHOWN, value);
    int e = exponent_of(size);
    unsigned long long whole =
        (unsigned long long)llround(scaled(size, DIGITS_SHOWN - 1 - e));
    if (whole >= (unsigned long long)POWERS[DIGITS_SHOWN]) {
        whole /= 10;
        e++;
    }
    const int count = spell(whole, digits);
    if (value < 0.0)
        text[n++] = '-';
    if (e >= DIGITS_SHOWN)
        return (size_t)snprintf(text, DIGITS_TEXT, "%.*g", DIGITS_SHOWN, value);
    if (size < LEAST_PLAIN && e < -4)
        n += write_exponent(text + n, digits, count, e);
    else
        n += write_plain(text + n, digits, count, e);
    text[n] = '\0';
    return n;
}
