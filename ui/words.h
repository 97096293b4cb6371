/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Positions, scales and riders in words, as every part of the window says them. All results are the caller's.
 */
#pragma once

#include "ui/session.h"

/* "16:02:14.3770": time of day at a cell, as fine as a column is. */
char *hw_words_dup_time_of_day(HwSession *session, double cell);

/* "1:12:04.3770" since the start that holds for `category` (NULL: for all), or NULL where none is known. */
char *hw_words_dup_elapsed(HwSession *session, double cell, const char *category);

/* "column 1 234.5", or why there is none at this cell. */
char *hw_words_dup_column(HwSession *session, double cell);

/* Why there is no picture at a cell, or NULL where there is one; borrowed from the strip. */
const char *hw_words_void_reason(HwSession *session, double cell);

/* "1 : 8", "× 4", "1 : 1": the scale of a picture in the device's pixels. */
char *hw_words_dup_scale(double cells_per_px);

/* "Bram Oduya · Velo Aldermoor": what the start list says of a rider. */
char *hw_words_dup_rider(const HwRider *rider);

/* "reading line at 16:02:14.3770, 30 markers". */
char *hw_words_dup_picture(HwSession *session);

/* "finish", "intermediate sprint", … */
const char *hw_words_passage_kind(HwPassageKind kind);

/* "47", or "unnamed ?3". */
char *hw_words_dup_marker(const HwMarker *marker);
