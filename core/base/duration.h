/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Durations in ns as text: "1:02:03.456", "12:04.31", "9.580". Never rounded here: ruling/rounding does that.
 */
#pragma once

#include <stdbool.h>
#include <stdint.h>

/* [[h:]m:]s[.f], minutes and seconds under 60 where something stands before them, at most 9 decimals.
 * False, *ns untouched, where the text is anything else. */
bool hw_duration_parse(const char *text, int64_t *ns);

/* A time of day "hh:mm[:ss[.f]]", 00:00 … 23:59:59.999999999. */
bool hw_duration_parse_time_of_day(const char *text, int64_t *ns);

/* "h:mm:ss.f" from an hour on, else "m:ss.f", with `decimals` (0-9) places, the rest cut. A leading "-" where
 * below zero. Owned by the caller. */
char *hw_duration_dup_text(int64_t ns, int decimals);

/* As above without minutes where there are none, with its sign: "+0.004", "+1:02". For gaps. */
char *hw_duration_dup_gap(int64_t ns, int decimals);

/* How many decimals show `precision_ns` (a power of ten up to a second, or more): 0 for a second or above, 3
 * for a ms. */
int hw_duration_decimals(int64_t precision_ns);
