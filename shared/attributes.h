/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_SHARED_ATTRIBUTES_H
#define EVENGAP_SHARED_ATTRIBUTES_H

/* Compiler attributes shared by all rooms; empty on compilers without them. */

#if defined(__GNUC__)
#define MUST_CHECK            __attribute__((warn_unused_result))
#define PRINTF_LIKE(fmt, arg) __attribute__((format(printf, fmt, arg)))
#else
#define MUST_CHECK
#define PRINTF_LIKE(fmt, arg)
#endif

#endif
