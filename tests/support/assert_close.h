/* SPDX-License-Identifier: GPL-3.0-or-later */
#ifndef EVENGAP_TESTS_ASSERT_CLOSE_H
#define EVENGAP_TESTS_ASSERT_CLOSE_H

/* The includes every cmocka test needs, in their required order, and a comparison of
 * doubles that rejects NaN (cmocka 1.1.5 has none). */

#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>

#include <cmocka.h>

#include <math.h>

#define assert_close(got, want, rel, abs_tol)                                          \
    do {                                                                               \
        double got_ = (got), want_ = (want);                                           \
        double bound_ = (abs_tol) + (rel)*fabs(want_);                                 \
        if (!(fabs(got_ - want_) <= bound_))                                           \
            fail_msg("%s = %.17g, want %.17g within %.3g (off by %.3g)", #got, got_,   \
                     want_, bound_, got_ - want_);                                     \
    } while (0)

/* got <= bound, and not NaN. */
#define assert_at_most(got, bound)                                                     \
    do {                                                                               \
        double got_ = (got), bound_ = (bound);                                         \
        if (!(got_ <= bound_))                                                         \
            fail_msg("%s = %.17g, want at most %.17g", #got, got_, bound_);            \
    } while (0)

#endif
