/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What a window opens: a recording with its strip and axis, and the markers, start list, race and rule set
 * that go with it. A plain bundle, made off the main thread and handed over whole; it decides nothing. */
#pragma once

#include "core/measure/calibration.h"
#include "core/ruling/finish_list.h"
#include "core/strip/axis.h"
#include "core/strip/strip.h"

#include <gio/gio.h>
#include <glib.h>
#include <stdbool.h>

/* What is to be opened. Paths that are NULL are looked for beside the recording (NAME.markers.csv and so on);
 * one that is given must be there. */
typedef struct {
    char *recording;
    char *markers;
    char *start_list;
    char *race;
    char *rules;   /* an id or a path; NULL: no rule set */
    char *passage; /* to rank, of several; NULL: the race's, or the only one */
    bool has_scan;
    HwImageScan scan; /* for a bare image */
} HwOpenRequest;

HwOpenRequest *hw_open_request_new(const char *recording);
HwOpenRequest *hw_open_request_copy(const HwOpenRequest *request);
void hw_open_request_free(HwOpenRequest *request);

typedef struct {
    HwOpenRequest *request; /* with the paths that were found */
    HwRecording *recording;
    HwStrip *strip; /* knows the damage of the blocks that carry markers */
    HwAxis *axis;
    HwMarkers *markers;      /* never NULL */
    HwStartList *start_list; /* may be NULL; likewise below */
    HwRace *race;
    HwRules *rules;
    HwCalibration *calibration;
    guint n_unchecked_blocks;
    char *markers_path;    /* where the markers are kept, whether there or not */
    char *markers_on_disk; /* SHA-256 in hex of that file as it was read; NULL: there was none */
} HwDocument;

/* Opens everything a request names. Any thread; reads files and decodes the blocks that carry markers. NULL
 * with a sentence that names the file, or G_IO_ERROR_CANCELLED. */
HwDocument *hw_document_open(const HwOpenRequest *request, GCancellable *cancellable, GError **error);

/* The finish list as the command line makes it of the same files: recording and files opened anew with a
 * cache of their own. `markers_csv` stands in for the markers file where it is not NULL. Any thread. */
HwFinishList *hw_document_derive_anew(const HwOpenRequest *request, const char *markers_csv,
                                      GCancellable *cancellable, GError **error);

void hw_document_free(HwDocument *document);

/* SHA-256 of a file's content in hex; NULL where it cannot be read. Owned by the caller. */
char *hw_document_dup_file_digest(const char *path);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwOpenRequest, hw_open_request_free)
G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwDocument, hw_document_free)
