/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A small recording on disk for lists to be derived on: 1000 Hz and stamped at the middle of the exposure, so
 * that column c is the instant c ms after the epoch, 2027-06-13T16:00:00+02:00. */
#pragma once

#include "core/ruling/finish_list.h"

#include <glib.h>

typedef struct {
    char *folder;
    HwRecording *recording;
    HwBlockCache *cache;
    HwStrip *strip;
} Fixture;

#define FIXTURE_BLOCK_COLUMNS 4000
#define FIXTURE_BLOCKS 3 /* the third begins 1 s late: a void before it */

Fixture *fixture_new(void);

/* The same with even stamps, of which those of the second block have room for `missing` columns more than it
 * has. */
Fixture *fixture_new_with_drop(int missing);
void fixture_free(Fixture *fixture);

/* What a list is derived from; NULL where there is none. */
typedef struct {
    const char *markers;    /* rows "bib,column,…" under the header */
    const char *header;     /* NULL: "bib,column" */
    const char *start_list; /* whole CSV */
    const char *race;       /* JSON without braces and version: "\"starts\":[…]" */
    const char *rules;
    const char *gun;
    const char *passage;
} Case;

/* The list, every step asserted. */
HwFinishList *fixture_list(Fixture *fixture, const Case *given);

/* The same where a failure is expected: NULL, and *error. */
HwFinishList *fixture_try(Fixture *fixture, const Case *given, GError **error);

/* The row of a bib (and category, NULL for any); asserted to be there. */
const HwFinishRow *fixture_row(const HwFinishList *list, const char *bib, const char *category);

/* "12 47 3": the bibs of all rows with a place, in order. */
char *fixture_dup_places(const HwFinishList *list);

/* True where some problem holds all of the words (NULL-ended). */
bool fixture_says(const HwFinishList *list, ...) G_GNUC_NULL_TERMINATED;

G_DEFINE_AUTOPTR_CLEANUP_FUNC(Fixture, fixture_free)
