/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A recording as a fact of a case: where it lay, which it is, and the digests of its files at the time. Kept
 * as the fact "recording", its key the short identity. The recording itself stays outside the case. */
#pragma once

#include "core/base/json.h"
#include "core/strip/recording.h"

#include <gio/gio.h>
#include <glib.h>

/* The fact's value (new reference); reads every file the manifest names. A file that is missing or
 * cannot be read has no digest. NULL with an error: a bare image or a path that is not UTF-8
 * (HW_CASE_ERROR_ACT), cancelled. */
json_t *hw_recording_to_fact(const HwRecording *recording, GCancellable *cancellable, GError **error);

/* Opens the recording of a fact: at its absolute path, else beside the case by its last name. NULL where it
 * is in neither place, or only another recording is there; `case_path` begins the sentence. */
HwRecording *hw_recording_open_fact(const json_t *fact, const char *case_path, GError **error);

/* A file that is no longer what it was when the fact was made. */
typedef struct {
    char *file; /* of a block, or recording.json */
    char *what; /* a clause: "was changed" */
} HwChangedFile;

/* The changed files in the manifest's order (HwChangedFile; new array, empty where all is as it was): a
 * block counts as changed where its times file is. NULL with an error: a fact of another form, cancelled. */
GArray *hw_recording_find_changes(const HwRecording *recording, const json_t *fact, const char *where,
                                  GCancellable *cancellable, GError **error);
