/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_OUTPUT_EXCHANGE_H
#define EVENGAP_OUTPUT_EXCHANGE_H

/** Swaps two existing paths of one file system in a single step, so that there is no
 *  moment at which either name is missing. 0 on success; -1 with errno (ENOSYS where
 *  the system cannot do it). */
int exchange_paths(const char *p, const char *q);

#endif
