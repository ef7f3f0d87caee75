/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "tests/bench/stopwatch.h"

#include <sys/resource.h>
#include <time.h>

double stopwatch_seconds(void)
{
    struct timespec now = {0, 0};
    (void)clock_gettime(CLOCK_MONOTONIC, &now);
    return (double)now.tv_sec + 1e-9 * (double)now.tv_nsec;
}

double stopwatch_peak_memory(void)
{
    struct rusage usage = {0};
    (void)getrusage(RUSAGE_SELF, &usage);
    return 1024.0 * (double)usage.ru_maxrss; /* Linux counts in KiB */
}
