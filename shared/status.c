/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "shared/status.h"

const char *status_text(enum status status)
{
    switch (status) {
    case STATUS_OK:
        return "done";
    case STATUS_INPUT:
        return "the input is wrong";
    case STATUS_MEMORY:
        return "not enough memory";
    case STATUS_SIZE:
        return "an argument is outside the range that can be handled";
    case STATUS_SINGULAR:
        return "the system has no unique answer";
    case STATUS_UNTRUSTED:
        return "the answer fails its own checks";
    case STATUS_WRITE:
        return "a result could not be written";
    case STATUS_COUNT:
        break;
    }
    return "unknown status";
}
