/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What became of a rider. "Not seen" is no DNF: it says only that no marker bears the bib. */
#pragma once

#include <stdbool.h>

typedef enum {
    HW_STATUS_OK,       /* crossed the line in this passage */
    HW_STATUS_LAP,      /* lapped or pulled: ranked by laps behind, then by order (from memory) */
    HW_STATUS_OTL,      /* over the time limit */
    HW_STATUS_DNF,      /* did not finish */
    HW_STATUS_ABD,      /* withdrew by choice (track) */
    HW_STATUS_DSQ,      /* disqualified */
    HW_STATUS_DNS,      /* did not start */
    HW_STATUS_NOT_SEEN, /* in the start list, no marker, no status given */
    HW_STATUS_UNKNOWN   /* crossed, but nothing tells who or in which category it was */
} HwStatus;

/* "ok", "LAP", … "not_seen", "unknown": as in files. */
const char *hw_status_get_word(HwStatus status);

/* A status as people write it in a start list: any case; DNS, DNF, ABD, OTL, DSQ, LAP, French NP, AB, HD, DBL
 * (from memory), "ok" or empty for none. "LAP 2" gives laps_behind 2, else 0. False, results untouched, for
 * anything else. */
bool hw_status_parse(const char *text, HwStatus *status, int *laps_behind);
