/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The strip: all columns of a recording on one time axis, decoded on demand. A strip is an immutable view of
 * what was known when it was made; damage found later is learnt with hw_strip_refreshed. Reference-counted,
 * usable from any thread. It never holds more than the blocks in the cache. */
#pragma once

#include "core/strip/block_cache.h"
#include "core/strip/raster.h"
#include "core/strip/recording.h"
#include "core/strip/time_base.h"

#include <gio/gio.h>
#include <glib.h>
#include <stdbool.h>
#include <stdint.h>

typedef struct HwStrip HwStrip;

/* Reads times files, and the heads of the files whose columns the manifest does not give; decodes nothing.
 * Fails with HW_STRIP_ERROR_EMPTY where no block at all can be read, HW_STRIP_ERROR_MANIFEST where blocks
 * overlap. */
HwStrip *hw_strip_new(HwRecording *recording, HwBlockCache *cache, GError **error);
HwStrip *hw_strip_ref(HwStrip *strip);
void hw_strip_unref(HwStrip *strip);

/* A strip of the same recording that knows the damage found by decoding since (new reference; the same strip
 * where there is none). Column numbers are the same. Fails with HW_STRIP_ERROR_EMPTY where nothing readable
 * is left. */
HwStrip *hw_strip_refreshed(HwStrip *strip, GError **error);

HwRecording *hw_strip_get_recording(HwStrip *strip);
const HwTimeBase *hw_strip_get_time_base(HwStrip *strip);
int64_t hw_strip_get_n_columns(HwStrip *strip);
int hw_strip_get_n_rows(HwStrip *strip); /* the height every readable block has */

guint hw_strip_get_n_blocks(HwStrip *strip);
/* First column and count of a block of the manifest. */
void hw_strip_get_block_columns(HwStrip *strip, guint block, int64_t *first_col, int64_t *n_cols);
/* Block of a column position, and the position in it; false off the strip. */
bool hw_strip_locate(HwStrip *strip, double column, guint *block, double *column_in_block);
/* Why a block cannot be read, or NULL; borrowed. */
const char *hw_strip_get_damage(HwStrip *strip, guint block);

/* A block's samples (new reference). The file's digest is checked whenever it is read, so at each decode.
 * HW_STRIP_ERROR_DAMAGED where it cannot be read: the reason. G_IO_ERROR_CANCELLED, or G_IO_ERROR_FAILED
 * where memory fails: nothing is remembered then. */
HwRaster *hw_strip_get_raster(HwStrip *strip, guint block, HwPlane plane, GCancellable *cancellable,
                              GError **error);

/* As above but only if the cache holds it: NULL without an error where it does not. */
HwRaster *hw_strip_peek_raster(HwStrip *strip, guint block, HwPlane plane);

/* The colour of a block reduced by 16 columns and 4 rows (means rounded to 8 bits; red, green, blue and 255;
 * alpha over black; the last cells of a row or column may stand for fewer), kept in the cache: what an
 * overview is made of. The block itself is not kept for it. As above. */
HwRaster *hw_strip_get_reduced(HwStrip *strip, guint block, GCancellable *cancellable, GError **error);
HwRaster *hw_strip_peek_reduced(HwStrip *strip, guint block);
#define HW_REDUCED_COLUMNS 16
#define HW_REDUCED_ROWS 4

/* Decodes a block once, whatever the cache holds, and forgets it: for `inspect`. *notes gets HwRasterNote
 * flags. */
bool hw_strip_check_block(HwStrip *strip, guint block, guint *notes, GCancellable *cancellable,
                          GError **error);

/* How many times a block was decoded for this strip and those it was refreshed from or to. */
guint hw_strip_get_n_decoded(HwStrip *strip);

/* Why a block was found unreadable, by this strip or any it was refreshed from or to, NULL where it was not.
 * Owned by the caller. */
char *hw_strip_dup_found_damage(HwStrip *strip, guint block);

/* True where every block is readable as far as known and the camera has finished writing. */
bool hw_strip_is_whole(HwStrip *strip);

/* One grey row of linear light, 0 … 1, columns [first_col, first_col + n): NaN in voids. For the brightness
 * curve. */
bool hw_strip_read_light_row(HwStrip *strip, int row, int64_t first_col, int n, float *light,
                             GCancellable *cancellable, GError **error);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwStrip, hw_strip_unref)
