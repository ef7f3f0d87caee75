/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "solver/progress.h"

#include <stdarg.h>
#include <stdio.h>

enum { STAGE_SIZE = 120 };

struct progress progress_part(const struct progress *whole, double from, double done)
{
    struct progress part = *whole;
    part.from = whole->from + from * (whole->done - whole->from);
    part.done = whole->from + done * (whole->done - whole->from);
    return part;
}

void progress_tell(const struct progress *progress, double fraction, const char *format,
                   ...)
{
    char stage[STAGE_SIZE];
    int used = 0;
    if (progress->call == NULL)
        return;
    if (progress->round > 0)
        used = snprintf(stage, sizeof stage, "refinement %d: ", progress->round);
    va_list arguments;
    va_start(arguments, format);
    (void)vsnprintf(stage + used, sizeof stage - (size_t)used, format, arguments);
    va_end(arguments);
    progress->call(progress->context, stage,
                   progress->from + fraction * (progress->done - progress->from));
}
