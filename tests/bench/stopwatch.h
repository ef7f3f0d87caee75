/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_TESTS_STOPWATCH_H
#define EVENGAP_TESTS_STOPWATCH_H

/* Wall time and memory for the benchmarks. */

/** Seconds on a clock that only goes forward. */
double stopwatch_seconds(void);

/** Most memory this process has held at once so far (bytes). */
double stopwatch_peak_memory(void);

#endif
