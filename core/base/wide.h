/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Products of times and counts, through 128 bits, rounded half to even. */
#pragma once

#include <stdbool.h>
#include <stdint.h>

/* value × numerator / denominator, rounded half to even.
 * denominator > 0. Returns false, and leaves *result alone, where the result does not fit 64 bits. */
bool hw_muldiv_half_even(int64_t value, int64_t numerator, int64_t denominator, int64_t *result);

/* As above; the result is known to fit (asserted). */
int64_t hw_muldiv_known(int64_t value, int64_t numerator, int64_t denominator);
