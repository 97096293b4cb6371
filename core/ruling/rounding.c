/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/ruling/rounding.h"

#include <glib.h>

const char *const hw_rounding_words[] = { "down", "up", "half_up", "half_even", NULL };

int64_t
hw_round_elapsed(int64_t elapsed_ns, int64_t precision_ns, HwRounding rounding)
{
    g_return_val_if_fail(precision_ns > 0, elapsed_ns);
    int64_t quotient = elapsed_ns / precision_ns;
    int64_t rest = elapsed_ns % precision_ns;
    if (rest < 0) { /* to the floor, so that rest is from the multiple below */
        quotient--;
        rest += precision_ns;
    }
    int64_t to_next = precision_ns - rest;
    bool up = false;
    switch (rounding) {
    case HW_ROUND_DOWN:
        break;
    case HW_ROUND_UP:
        up = rest > 0;
        break;
    case HW_ROUND_HALF_UP:
        up = rest > 0 && rest >= to_next;
        break;
    case HW_ROUND_HALF_EVEN:
        up = rest > to_next || (rest == to_next && quotient % 2 != 0);
        break;
    }
    return (quotient + (up ? 1 : 0)) * precision_ns;
}
