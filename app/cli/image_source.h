/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A PNG or JPEG of any length, read row by row with its samples as stored, so that it can be cut without ever
 * being held whole. For `cut` alone: blocks of a recording are decoded by core/strip. */
#pragma once

#include <gio/gio.h>
#include <glib.h>
#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

typedef struct HwImageSource HwImageSource;

/* What a row holds, and what a PNG made of such rows must say of itself. */
typedef struct {
    int64_t width;
    int64_t height;
    int bits;           /* of a sample: 1, 2, 4, 8, 16 */
    int colour_type;    /* as PNG numbers them */
    size_t pixel_bytes; /* in a row: samples of less than 8 bits take a byte each, 16 bits are big-endian */
} HwImageShape;

/* Opens the file. Fails (HW_STRIP_ERROR_DAMAGED, HW_BASE_ERROR) where it is neither PNG nor JPEG, damaged, of
 * a kind that is not read (CMYK), or would have to be held whole and is too large for that (interlaced,
 * progressive). */
HwImageSource *hw_image_source_open(const char *path, GError **error);
void hw_image_source_free(HwImageSource *source);

const HwImageShape *hw_image_source_get_shape(const HwImageSource *source);

/* The next row from the top, width × pixel_bytes bytes; height times. */
bool hw_image_source_read_row(HwImageSource *source, uint8_t *row, GError **error);

/* After the last row: whether the file ended as it should. */
bool hw_image_source_finish(HwImageSource *source, GError **error);

/* Hands palette, colour key, gAMA, cHRM, iCCP, sRGB and sBIT of a PNG on to one being written (png_structp,
 * png_infop, as pointers so that only two files know libpng). May raise libpng errors of `png`. */
void hw_image_source_copy_colour(HwImageSource *source, gpointer png, gpointer info);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwImageSource, hw_image_source_free)
