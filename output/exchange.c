/* SPDX-License-Identifier: GPL-3.0-or-later */

/* POSIX can rename a folder only onto an empty one. Linux can swap two names in one
 * step; it is asked by system call number, because not every C library wraps it. */

#if defined(__linux__)
#define _DEFAULT_SOURCE /* NOLINT: asks the C library for syscall() */
#include <fcntl.h>
#include <sys/syscall.h>
#include <unistd.h>
#endif

#include "output/exchange.h"

#include <errno.h>

#define EXCHANGE_FLAG 2U /* RENAME_EXCHANGE of the Linux system call interface */

int exchange_paths(const char *p, const char *q)
{
#if defined(SYS_renameat2)
    return (int)syscall(SYS_renameat2, AT_FDCWD, p, AT_FDCWD, q, EXCHANGE_FLAG);
#else
    (void)p;
    (void)q;
    errno = ENOSYS;
    return -1;
#endif
}
