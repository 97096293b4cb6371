/* SPDX-License-Identifier: GPL-3.0-or-later */
/* An instant: a point of civil time with the offset it was written with (RFC 3339). Not a duration, not a
 * stamp.
 *
 * Seconds are counted through leap seconds, so differences are true elapsed time and second 60 has a place of
 * its own. Leap seconds are those of the IERS list to the end of 2016; a second 60 that is not on it is
 * refused. */
#pragma once

#include <glib.h>
#include <stdbool.h>
#include <stdint.h>

typedef struct {
    int64_t s;           /* since 1970-01-01T00:00:00Z, leap seconds counted */
    int32_t ns;          /* 0 … 999,999,999 */
    int16_t offset_min;  /* minutes east of UTC, −1439 … 1439 */
    bool offset_unknown; /* written -00:00 */
} HwInstant;

/* RFC 3339 date-time, the whole text. Decimals beyond the ninth round half to even.
 * On failure *instant keeps its value and the error's message is the reason as a clause ("… has no offset"),
 * which the caller's sentence names the file for. */
bool hw_instant_parse(const char *text, HwInstant *instant, GError **error);

/* RFC 3339 text with `decimals` (0-9) places, the rest cut, at the instant's own offset. */
char *hw_instant_dup_text(const HwInstant *instant, int decimals);

/* "hh:mm:ss.f" at the instant's own offset, the rest cut: for people, who know the day. */
char *hw_instant_dup_time_of_day(const HwInstant *instant, int decimals);

/* later − earlier in ns. False, *ns untouched, where it does not fit 64 bits (292 years). */
bool hw_instant_difference(const HwInstant *later, const HwInstant *earlier, int64_t *ns);

/* The instant `ns` after (negative: before) `start`, at its offset. */
HwInstant hw_instant_plus(const HwInstant *start, int64_t ns);

/* <0, 0, >0 as a is before, at, after b; the offset does not matter. */
int hw_instant_compare(const HwInstant *a, const HwInstant *b);

/* The latest instant with time of day `time_of_day_ns` (0 … < 24 h, at the offset of `limit`) that is not
 * after `limit`. */
HwInstant hw_instant_latest_time_of_day(const HwInstant *limit, int64_t time_of_day_ns);

/* TAI − UTC in whole seconds at the instant (10 before 1972). */
int hw_instant_tai_minus_utc_s(const HwInstant *instant);
