/* SPDX-License-Identifier: GPL-3.0-or-later */

/* Are the printed uncertainties honest? Cases with exact solutions, run as the program
 * runs a file, on the default family of grids: for each figure and probe reading the
 * value, its uncertainty, the true error, whether it lies inside, and the ratio of the
 * two. At the end the worst offenders, and the share inside and the median ratio by kind
 * of figure and by family of cases.
 *
 *     bench_honesty [fineness [levels [CSV]]]
 *
 * With CSV the values of every grid are written there, for calibrating extrapolate.c.
 * Ends with status 1 if the targets (honesty_tally.c) are missed. */

#include <stdio.h>
#include <stdlib.h>

#include "tests/bench/honesty_families.h"

static FILE *open_raw(const char *path, int levels)
{
    FILE *raw = fopen(path, "w");
    if (raw == NULL) {
        perror(path);
        exit(EXIT_FAILURE);
    }
    (void)fprintf(raw, "family;case;kind;a;b;exact;value;uncertainty;scale");
    for (int l = 0; l < levels; l++)
        (void)fprintf(raw, ";grid %d", l + 1);
    (void)fprintf(raw, "\n");
    return raw;
}

int main(int argc, char *argv[])
{
    struct honesty_tally tally = {.fineness = argc > 1 ? strtod(argv[1], NULL) : 1.0,
                                  .levels =
                                      argc > 2 ? (int)strtol(argv[2], NULL, 10) : 3};
    if (argc > 3)
        tally.raw = open_raw(argv[3], tally.levels);
    printf("  %-33s %17s %9s %9s %9s\n", "", "value", "stated", "error", "ratio");
    honesty_round(&tally);
    honesty_boxes(&tally);
    honesty_edges(&tally);
    honesty_clamps(&tally);
    honesty_turned(&tally);
    honesty_insulators(&tally);
    honesty_floating(&tally);
    honesty_conductors(&tally);
    honesty_open(&tally);
    const bool good = honesty_summary(&tally);
    const bool written = tally.raw == NULL || fclose(tally.raw) == 0;
    honesty_tally_free(&tally);
    return good && written ? EXIT_SUCCESS : EXIT_FAILURE;
}
