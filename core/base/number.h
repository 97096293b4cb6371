/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Numbers in files: always with a point, never by the locale, the whole text or nothing. */
#pragma once

#include <stdbool.h>
#include <stdint.h>

/* Decimal integer with optional sign, no spaces. False where the text is anything else or out of [min, max].
 */
bool hw_number_parse_int64(const char *text, int64_t min, int64_t max, int64_t *value);

/* Decimal number, optional sign, fraction and exponent; never inf, nan or hex. */
bool hw_number_parse_double(const char *text, double *value);

/* As above, and a single comma stands for the point where there is no point ("0,668"). */
bool hw_number_parse_double_local(const char *text, double *value);

/* Unsigned decimal with at most `decimals` (0-18) places, as a whole number of 10^-decimals.
 * No sign, no exponent. False where the text has more places or does not fit. */
bool hw_number_parse_decimal(const char *text, int decimals, int64_t *scaled);

/* A double that came from JSON as a decimal with at most 9 places: value = scaled / 10^9, exactly recovered
 * for |value| < 4·10^6 (beyond, two such decimals may be one double). False where it has more places or is
 * larger. */
bool hw_number_nine_decimals(double value, int64_t *scaled);

/* The shortest text (at most 17 digits) that reads back as the same double. Owned by the caller. */
char *hw_number_dup_double(double value);

/* With `decimals` places, point as separator. Owned by the caller. */
char *hw_number_dup_fixed(double value, int decimals);
