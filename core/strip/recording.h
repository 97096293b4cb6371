/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A recording: the evidence as it came from the camera, a folder with recording.json, never changed. This is
 * the manifest, checked, and the way to its files; it decodes nothing. Immutable, reference-counted, usable
 * from any thread. */
#pragma once

#include "core/base/digest.h"
#include "core/base/instant.h"
#include "core/strip/transfer.h"

#include <gio/gio.h>
#include <glib.h>
#include <stdbool.h>
#include <stdint.h>

#define HW_RECORDING_VERSION 1
#define HW_RECORDING_MANIFEST "recording.json"

typedef enum { HW_SIDE_UNKNOWN, HW_SIDE_LEFT, HW_SIDE_RIGHT } HwSide;
typedef enum { HW_STAMP_START, HW_STAMP_MIDDLE, HW_STAMP_END } HwStampPlace;
typedef enum {
    HW_STAMPS_EVEN, /* first_ns and last_ns, the rest evenly between */
    HW_STAMPS_RATE, /* first_ns, the rest by the nominal rate */
    HW_STAMPS_TIMES /* a CSV file, one stamp a column */
} HwStampKind;

/* How the camera scanned. */
typedef struct {
    int64_t rate_nhz;    /* nominal scan rate in 10^-9 Hz (an exact decimal), 1 … 10^15 */
    double rate_hz;      /* the same for display and estimates */
    int64_t exposure_fs; /* in 10^-15 s (µs with 9 decimals), 0 where unknown (stamp middle) */
    bool exposure_known;
    HwStampPlace stamp;
    HwTransfer transfer;
    double slit_mm; /* what one column covers across the line; 0 unknown */
} HwScan;

/* One image file of consecutive columns. Strings are the recording's. */
typedef struct {
    const char *file;
    int64_t columns; /* 0: not given */
    HwStampKind stamps;
    int64_t first_ns;   /* EVEN, RATE: as written, not yet moved to the middle of the exposure */
    int64_t last_ns;    /* EVEN */
    const char *sha256; /* 64 hex digits or NULL */
    const char *times_file;
    const char *times_sha256;
} HwBlock;

typedef struct HwRecording HwRecording;

/* Opens a folder, or its recording.json. Refused whole (HW_STRIP_ERROR_MANIFEST, or HW_BASE_ERROR_* from
 * below): a manifest that is missing, not strict JSON or over its limits, an unknown version, values out of
 * range, unsafe or repeated names, files that are links or not regular, blocks that start before the former
 * one's end (as far as the manifest alone tells) or end before they start. A file that is missing is no error
 * here. */
HwRecording *hw_recording_open(const char *path, GError **error);

/* What a bare image needs to be told. */
typedef struct {
    int64_t rate_nhz;
    HwInstant epoch;
    char *epoch_text;
    int64_t exposure_fs;
    bool exposure_known;
    HwStampPlace stamp; /* MIDDLE unless told */
    HwSide later;       /* RIGHT unless told */
    HwSide travel;
    HwTransfer transfer;
} HwImageScan;

/* A bare PNG or JPEG as a recording of one block whose first column's stamp is 0. It has no manifest, so no
 * digest. */
HwRecording *hw_recording_open_image(const char *path, const HwImageScan *scan, GError **error);

/* True where the file begins as a PNG or JPEG does. */
bool hw_recording_path_is_image(const char *path);

HwRecording *hw_recording_ref(HwRecording *recording);
void hw_recording_unref(HwRecording *recording);

/* The path as given (without recording.json); its last part is the recording's NAME, by which files beside it
 * are found. */
const char *hw_recording_get_path(const HwRecording *recording);
/* PATH + suffix (".markers.csv") if that file is there, else NULL. Owned by the caller. */
char *hw_recording_dup_beside(const HwRecording *recording, const char *suffix);

const char *hw_recording_get_title(const HwRecording *recording); /* "" where none */
const char *hw_recording_get_camera(const HwRecording *recording);
const HwInstant *hw_recording_get_epoch(const HwRecording *recording);
HwSide hw_recording_get_travel(const HwRecording *recording); /* may be unknown */
HwSide hw_recording_get_later(const HwRecording *recording);
const HwScan *hw_recording_get_scan(const HwRecording *recording);
int64_t hw_recording_get_rows(const HwRecording *recording);        /* 0: not given */
bool hw_recording_is_complete(const HwRecording *recording);        /* false while still being written */
const json_t *hw_recording_get_scene(const HwRecording *recording); /* may be NULL */

guint hw_recording_get_n_blocks(const HwRecording *recording);
const HwBlock *hw_recording_get_block(const HwRecording *recording, guint index);

/* Opens a file the manifest names, under the rules of core/base/safe_path.h. −1 with HW_STRIP_ERROR_DAMAGED
 * whose message is the void's reason ("block-00003.png is missing"). */
int hw_recording_open_file(const HwRecording *recording, const char *file, GError **error);

/* SHA-256 of epoch text, LF, camera, LF, first block's file name, LF, its first_ns, LF. A first block with a
 * `times` file has no first_ns: nothing stands there, so that a damaged times file leaves the identity as it
 * is. */
const HwDigest *hw_recording_get_identity(const HwRecording *recording);

/* The first 16 hex digits of the identity, as markers carry them. Borrowed. */
const char *hw_recording_get_short_identity(const HwRecording *recording);

typedef void (*HwProgress)(double fraction, gpointer user_data);

/* Digest of the recording: SHA-256 of the lines that sha256sum prints for recording.json and every file it
 * names, sorted by name as bytes. Reads every file. *known is false, and no error, while a file is missing
 * (or there is no manifest). */
bool hw_recording_digest(const HwRecording *recording, HwProgress progress, gpointer user_data,
                         GCancellable *cancellable, bool *known, HwDigest *digest, GError **error);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwRecording, hw_recording_unref)
