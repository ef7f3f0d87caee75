/* SPDX-License-Identifier: GPL-3.0-or-later */

/* The one piece of state a signal handler can have: which signal came. sink_open looks
 * at it, so a run that is stopped ends at the next file, not in the middle of one. */

#include "output/interrupt.h"

#include <signal.h>
#include <stddef.h>

static volatile sig_atomic_t caught;

static const int watched[] = {SIGINT, SIGTERM, SIGHUP};
#define WATCHED (sizeof watched / sizeof watched[0])

static void note(int signal_number)
{
    caught = signal_number;
}

void interrupt_watch(void)
{
    for (size_t k = 0; k < WATCHED; k++) {
        struct sigaction action = {.sa_handler = note}, old;
        (void)sigemptyset(&action.sa_mask);
        if (sigaction(watched[k], NULL, &old) == 0 && old.sa_handler == SIG_DFL)
            (void)sigaction(watched[k], &action, NULL);
    }
}

bool interrupt_seen(void)
{
    return caught != 0;
}

void interrupt_release(void)
{
    for (size_t k = 0; k < WATCHED; k++) {
        struct sigaction action = {.sa_handler = SIG_DFL}, old;
        (void)sigemptyset(&action.sa_mask);
        if (sigaction(watched[k], NULL, &old) == 0 && old.sa_handler == note)
            (void)sigaction(watched[k], &action, NULL);
    }
    if (caught)
        (void)raise(caught);
}
