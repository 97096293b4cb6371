/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Decoded samples of one block, exactly as stored, in the strip's own order: x grows with time.
 * Reference-counted, immutable once made. */
#pragma once

#include <glib.h>
#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

/* Which samples of a block are wanted. */
typedef enum {
    HW_PLANE_STORED, /* grey, grey+alpha, RGB or RGBA as in the file; palettes looked up, colour keys made
                        alpha */
    HW_PLANE_GREY /* one channel for measuring: grey as stored; a JPEG's Y; RGB by JPEG's weights; alpha over
                     black */
} HwPlane;

typedef struct {
    int width;    /* columns */
    int height;   /* rows */
    int channels; /* 1 grey, 2 grey and alpha, 3 RGB, 4 RGBA */
    int bits;     /* of a sample as stored: 1, 2, 4, 8 or 16; the largest is 2^bits − 1 */
    size_t bytes; /* of the samples */
    /* Row after row, channels together, one byte a sample; with 16 bits two, in the machine's order. */
    union {
        uint8_t *u8;
        uint16_t *u16;
    };
    guint notes; /* HwRasterNote flags */
    gint refs;
} HwRaster;

/* What the file says of its colours and is not acted on, only reported. */
typedef enum {
    HW_RASTER_NOTE_GAMA = 1 << 0,
    HW_RASTER_NOTE_ICC = 1 << 1,
    HW_RASTER_NOTE_CHRM = 1 << 2,
    HW_RASTER_NOTE_ORIENTATION = 1 << 3
} HwRasterNote;

/* NULL where the memory is not to be had. width, height > 0 and within HW_MAX_BLOCK_PIXELS. */
HwRaster *hw_raster_new(int width, int height, int channels, int bits);
HwRaster *hw_raster_ref(HwRaster *raster);
void hw_raster_unref(HwRaster *raster);

/* One sample, 0 … 2^bits − 1. */
static inline unsigned
hw_raster_get(const HwRaster *raster, int column, int row, int channel)
{
    size_t at =
        ((size_t)row * (size_t)raster->width + (size_t)column) * (size_t)raster->channels + (size_t)channel;
    return raster->bits == 16 ? raster->u16[at] : raster->u8[at];
}

/* Turns left and right about, in place, before the raster is shared. */
void hw_raster_mirror(HwRaster *raster);

/* The grey of stored samples, for images that have none of their own (new raster; itself, referenced, where
 * it is grey already). RGB and alpha give 16 bits, so that the weights lose nothing. NULL where memory fails.
 */
HwRaster *hw_raster_dup_grey(HwRaster *stored);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwRaster, hw_raster_unref)
