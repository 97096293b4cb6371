/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/base/wide.h"

#include <glib.h>

__extension__ typedef __int128 HwWide;

bool
hw_muldiv_half_even(int64_t value, int64_t numerator, int64_t denominator, int64_t *result)
{
    g_return_val_if_fail(denominator > 0, false);
    HwWide product = (HwWide)value * numerator;
    HwWide quotient = product / denominator;
    HwWide rest = product % denominator;
    HwWide twice = 2 * (rest < 0 ? -rest : rest);
    bool up = twice > denominator || (twice == denominator && quotient % 2 != 0);
    if (up)
        quotient += product < 0 ? -1 : 1;
    if (quotient > INT64_MAX || quotient < INT64_MIN)
        return false;
    *result = (int64_t)quotient;
    return true;
}

int64_t
hw_muldiv_known(int64_t value, int64_t numerator, int64_t denominator)
{
    int64_t result = 0;
    bool fits = hw_muldiv_half_even(value, numerator, denominator, &result);
    g_assert(fits);
    return result;
}
