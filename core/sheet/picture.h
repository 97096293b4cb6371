/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The annotated picture: an excerpt of the strip, or two riders side by side at one scale, with ruler,
 * pennants, places and gaps, voids, and a foot that says what it is and what it rests on. Never mirrored:
 * riders face the way they rode. Light, opaque, the same for the same input, to the byte. */
#pragma once

#include "core/base/digest.h"
#include "core/ruling/finish_list.h"
#include "core/ruling/markers.h"
#include "core/strip/strip.h"

#include <gio/gio.h>
#include <glib.h>
#include <stdbool.h>
#include <stdint.h>

typedef enum {
    HW_EXCERPT_MARKERS, /* from before the first marker to behind the last; all where there is none */
    HW_EXCERPT_ALL,
    HW_EXCERPT_STRETCH, /* from_ns to to_ns */
    HW_EXCERPT_PAIR     /* two riders, side by side at the same scale */
} HwExcerpt;

typedef enum {
    HW_PICTURE_PNG, /* one picture, however wide */
    HW_PICTURE_PDF  /* A4 landscape; what is wider is cut into pages that overlap */
} HwPictureFormat;

/* Everything is borrowed for the call. Start from hw_picture_init. */
typedef struct {
    HwStrip *strip;
    HwSide travel;            /* the recording's, or the judge's answer; where unknown the picture says so */
    const HwFinishList *list; /* places, times and gaps; may be NULL */
    const HwMarkers *markers; /* may be NULL: then those rows of the list that crossed */
    HwExcerpt excerpt;
    int64_t from_ns, to_ns; /* STRETCH, since the epoch */
    const char *bib_a;      /* PAIR */
    const char *bib_b;
    const char *event;   /* "" where none; the recording's title is set by init */
    const char *passage; /* "" where none */
    const char *rules;   /* one line, hw_rules_dup_line; "" where no rule set was applied, and it says so */
    const char *version; /* "provisional" */
    const HwDigest *digest;           /* of the recording; NULL where not known, and it says so */
    const HwCalibration *calibration; /* NULL: the nominal rate stands, and it says so */
    double p_order_limit; /* up to this chance of the other order two riders count as told apart */
    bool has_start;       /* the ruler counts from start_ns, else it shows the time of day */
    int64_t start_ns;     /* since the epoch */
    double px_per_column; /* PNG: 1/64 … 16; both ways of the picture grow with it */
} HwPicture;

/* The whole recording, nothing else known, 1 px a column, "provisional". Texts are the recording's. */
void hw_picture_init(HwPicture *picture, HwStrip *strip);

/* By the end of the name, ".png" or ".pdf" in any case; "-" is PNG. False with HW_SHEET_ERROR_FORMAT. */
bool hw_picture_format_of(const char *path, HwPictureFormat *format, GError **error);

/* Decodes the blocks of the excerpt, so that damage is shown; writes through core/base/output.h ("-" is
 * standard output). Memory stays bounded whatever the width: pixels of a wide PNG are kept in an unnamed file
 * beside the output. On failure, or when cancelled (G_IO_ERROR_CANCELLED), what was at `path` stays.
 * `progress` may be NULL. Any thread. Fails (HW_SHEET_ERROR_PLACE) where the stretch or a rider of the pair
 * is not on the strip. */
bool hw_picture_write(const HwPicture *picture, const char *path, HwPictureFormat format, bool force,
                      HwProgress progress, gpointer user_data, GCancellable *cancellable, GError **error);
