/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Rounding of elapsed times to a rule set's precision. Only elapsed times are rounded: a difference of two
 * rounded times is exact, a rounded difference would not reconcile with them. */
#pragma once

#include <stdbool.h>
#include <stdint.h>

typedef enum { HW_ROUND_DOWN, HW_ROUND_UP, HW_ROUND_HALF_UP, HW_ROUND_HALF_EVEN } HwRounding;

/* "down", "up", "half_up", "half_even"; NULL-ended, in the order of HwRounding. */
extern const char *const hw_rounding_words[];

/* `elapsed_ns` ≥ 0 to a multiple of precision_ns > 0. Times below zero round by the same rule on the number
 * line (down is towards minus infinity). */
int64_t hw_round_elapsed(int64_t elapsed_ns, int64_t precision_ns, HwRounding rounding);
