/* SPDX-License-Identifier: GPL-3.0-or-later */

/* One place decides how many digits a number keeps, so that sheet, report and plots
 * never show different ones. */

#include "output/number.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#define FIXED_LOW   1e-3 /* below: exponent form */
#define FIXED_HIGH  1e6  /* from here on: exponent form */
#define DIGITS_MAX  9
#define NEGLIGIBLE  1e-290 /* an uncertainty below counts as none: 10^-lead overflows */
#define ROUND_GUARD 1e-6   /* keeps 2.0000000001 from being rounded up to 3 */

struct unit_row {
    const char *si;
    struct unit_choice choices[4]; /* factors rising; ends at factor 0 */
};

static const struct unit_row unit_table[] = {
    {"1", {{1, ""}}},
    {"m", {{1e-6, "um"}, {1e-3, "mm"}}},
    {"rad", {{1e-6, "urad"}, {1e-3, "mrad"}, {1, "rad"}}},
    {"V", {{1e-3, "mV"}, {1, "V"}, {1e3, "kV"}}},
    {"A", {{1e-3, "mA"}, {1, "A"}, {1e3, "kA"}}},
    {"T", {{1e-6, "uT"}, {1e-3, "mT"}, {1, "T"}}},
    {"T m", {{1e-6, "uT m"}, {1e-3, "mT m"}, {1, "T m"}}},
    {"V/m", {{1, "V/m"}, {1e3, "kV/m"}, {1e6, "MV/m"}}},
    {"F", {{1e-15, "fF"}, {1e-12, "pF"}, {1e-9, "nF"}}},
    {"C", {{1e-15, "fC"}, {1e-12, "pC"}, {1e-9, "nC"}, {1e-6, "uC"}}},
    {"J", {{1e-9, "nJ"}, {1e-6, "uJ"}, {1e-3, "mJ"}, {1, "J"}}},
    {"N", {{1e-9, "nN"}, {1e-6, "uN"}, {1e-3, "mN"}, {1, "N"}}},
    {"F/m", {{1e-12, "pF/m"}, {1e-9, "nF/m"}}},
    {"C/m", {{1e-12, "pC/m"}, {1e-9, "nC/m"}, {1e-6, "uC/m"}}},
    {"J/m", {{1e-9, "nJ/m"}, {1e-6, "uJ/m"}, {1e-3, "mJ/m"}, {1, "J/m"}}},
    {"N/m", {{1e-6, "uN/m"}, {1e-3, "mN/m"}, {1, "N/m"}}},
    {"Wb/m", {{1e-6, "uWb/m"}, {1e-3, "mWb/m"}, {1, "Wb/m"}}},
    {"m/s", {{1, "m/s"}, {1e3, "km/s"}}},
};

struct unit_choice unit_choose(const char *unit, double magnitude)
{
    for (size_t k = 0; k < sizeof unit_table / sizeof unit_table[0]; k++) {
        const struct unit_row *row = &unit_table[k];
        if (strcmp(row->si, unit) != 0)
            continue;
        struct unit_choice best = row->choices[0];
        for (int c = 1; c < 4 && row->choices[c].factor > 0; c++)
            if (fabs(magnitude) >= row->choices[c].factor * (1 - 1e-12))
                best = row->choices[c];
        return best;
    }
    return (struct unit_choice){1, unit};
}

/* The unit of the table with factor 1, or the largest. */
static struct unit_choice unit_plain(const char *unit)
{
    return unit_choose(unit, 1);
}

static int exponent_of(double x)
{
    return (int)floor(log10(fabs(x)) + 1e-12);
}

static void add_exponent(char *text, size_t size, int exponent)
{
    size_t used = strlen(text);
    (void)snprintf(text + used, size - used, "e%d", exponent);
}

static int needs_exponent(double magnitude)
{
    return magnitude > 0 && (magnitude < FIXED_LOW || magnitude >= FIXED_HIGH);
}

void number_plain(double value, int digits, char *text, size_t size)
{
    if (!isfinite(value)) {
        (void)snprintf(text, size, "not finite");
        return;
    }
    char rounded[NUMBER_TEXT]; /* rounding first: 9.9999e5 may become 1e6 */
    (void)snprintf(rounded, sizeof rounded, "%.*e", digits - 1, value);
    value = strtod(rounded, NULL) + 0.0;
    if (!needs_exponent(fabs(value))) {
        (void)snprintf(text, size, "%.*g", digits > 6 ? digits : 6, value);
        return;
    }
    char *mark = strchr(rounded, 'e'); /* pow(10, 324) would overflow */
    *mark = '\0';
    (void)snprintf(text, size, "%.*g", digits, strtod(rounded, NULL));
    add_exponent(text, size, (int)strtol(mark + 1, NULL, 10));
}

/* Decimals to show, and the uncertainty as a count of the last one. */
static int choose_decimals(double magnitude, double uncertainty, double *last)
{
    int lead = exponent_of(uncertainty);
    int digits = uncertainty * pow(10, -lead) < 1.95 ? 2 : 1;
    int decimals = digits - 1 - lead;
    int most = DIGITS_MAX - 1 - exponent_of(magnitude);
    if (decimals > most)
        decimals = most;
    *last = fmax(1, ceil(uncertainty * pow(10, decimals) * (1 - ROUND_GUARD)));
    return decimals;
}

/* With no decimals left the bracket counts whole units: 1230(30). */
static void print_bracket(double value, double uncertainty, char *text, size_t size)
{
    double last;
    double magnitude = fmax(fabs(value), uncertainty);
    int decimals = choose_decimals(magnitude, uncertainty, &last);
    double unit = decimals < 0 ? pow(10, -decimals) : 1;
    double shown = decimals < 0 ? round(value / unit) * unit : value;
    char number[NUMBER_TEXT];
    (void)snprintf(number, sizeof number, "%.*f", decimals < 0 ? 0 : decimals, shown);
    const char *digits = number;
    if (*digits == '-' && strspn(digits + 1, "0.") == strlen(digits + 1))
        digits++; /* no minus sign before a zero */
    (void)snprintf(text, size, "%s(%.0f)", digits, last * unit);
}

void number_format(double value, double uncertainty, char *text, size_t size)
{
    if (!isfinite(value) || !(uncertainty > NEGLIGIBLE) || !isfinite(uncertainty)) {
        number_plain(value, DIGITS_MAX, text, size);
        return;
    }
    double magnitude = fmax(fabs(value), uncertainty);
    int exponent = needs_exponent(magnitude) ? exponent_of(magnitude) : 0;
    double scale = pow(10, -exponent);
    print_bracket(value * scale, uncertainty * scale, text, size);
    if (exponent)
        add_exponent(text, size, exponent);
}

void number_quantity(double value, double uncertainty, const char *unit, char *text,
                     size_t size)
{
    double magnitude = fmax(fabs(value), uncertainty);
    struct unit_choice choice = unit_choose(unit, magnitude);
    if (magnitude == 0) /* an exact zero needs no small unit */
        choice = unit_plain(unit);
    number_format(value / choice.factor, uncertainty / choice.factor, text, size);
    size_t used = strlen(text);
    if (*choice.name)
        (void)snprintf(text + used, size - used, " %s", choice.name);
}
