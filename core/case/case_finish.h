/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What a case says of its finish, read back from its facts: the recording they were made on, the markers, the
 * documents and settings; and the list these give, which is never stored. */
#pragma once

#include "core/case/case.h"
#include "core/ruling/finish_list.h"

#include <gio/gio.h>
#include <glib.h>

/* How lists are derived from facts; a case made under another number is refused, never derived otherwise. */
#define HW_DERIVATION_VERSION 1

typedef struct {
    HwRecording *recording;
    HwStrip *strip;
    HwMarkers *markers;
    HwStartList *start_list; /* NULL where the case has none; likewise below */
    HwRace *race;
    HwRules *rules;
    HwCalibration *calibration;
    HwInstant *gun;
    char *passage;
    GPtrArray *problems; /* char*: which files of the recording changed, and which markers stand on them */
} HwCaseFinish;

/* Reads everything and holds the recording's files against the digests in the case; decodes nothing. NULL
 * with an error: a fact of another form, a recording that is not found or is another, a marker whose place is
 * no longer there, cancelled. */
HwCaseFinish *hw_case_finish_read(const HwCase *held, GCancellable *cancellable, GError **error);
void hw_case_finish_free(HwCaseFinish *finish);

/* The finish list, with the problems of `finish` behind its own. Decodes the blocks that carry markers, and
 * refreshes the strip. */
HwFinishList *hw_case_finish_derive(HwCaseFinish *finish, GCancellable *cancellable, GError **error);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwCaseFinish, hw_case_finish_free)
