/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_OUTPUT_INTERRUPT_H
#define EVENGAP_OUTPUT_INTERRUPT_H

/* SIGINT, SIGTERM and SIGHUP while files are being staged: noted instead of obeyed at
 * once, so that the half-written folder can be removed first. */

#include <stdbool.h>

/** Notes the signals from now on; a signal that is ignored stays ignored. */
void interrupt_watch(void);

/** True once a watched signal has come. */
bool interrupt_seen(void);

/** Puts the default behaviour back and, if a signal came, sends it to the process
 *  again: then this does not return. */
void interrupt_release(void);

#endif
