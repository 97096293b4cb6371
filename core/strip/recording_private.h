/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What the files of a recording share among themselves: recording.c (the object), recording_read.c (the
 * manifest's reading), recording_digest.c (the digest). For no one else. */
#pragma once

#include "core/base/limits.h"
#include "core/strip/recording.h"

#include <glib.h>

/* Scan rates are kept in 10^-9 Hz. */
#define HW_MAX_RATE_NHZ (INT64_C(1000000000) * HW_MAX_RATE_HZ)

struct HwRecording {
    gint references;
    char *path;       /* without slashes at its end */
    char *stem;       /* what the names of files beside it begin with */
    char *image_file; /* a bare image's own name, else NULL */
    int folder_fd;    /* −1 for a bare image */
    json_t *root;     /* the manifest, which owns most strings; NULL for a bare image */

    const char *title;
    const char *camera;
    char *epoch_text;
    HwInstant epoch;
    HwSide travel;
    HwSide later;
    HwScan scan;
    int64_t rows;
    bool complete;
    const json_t *scene;
    GArray *blocks; /* of HwBlock */

    HwDigest identity;
    char short_identity[17];
};

/* With one reference and every optional value at its default. */
HwRecording *hw_recording_new_blank(const char *path);

/* Once epoch, camera and the first block are there. */
void hw_recording_set_identity(HwRecording *recording);
