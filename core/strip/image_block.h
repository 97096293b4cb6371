/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The two decoders. Each takes a whole file in memory and gives samples as stored: gAMA, iCCP, cHRM and Exif
 * orientation are noted, never applied. NULL with HW_STRIP_ERROR_DAMAGED whose message, beginning with
 * `file`, is the void's reason: cut, altered (a CRC or a decoder's warning counts), over HW_MAX_BLOCK_PIXELS,
 * CMYK. No decoder keeps state between calls. */
#pragma once

#include "core/strip/raster.h"

#include <glib.h>
#include <stddef.h>
#include <stdint.h>

HwRaster *hw_png_block_decode(const uint8_t *data, size_t size, const char *file, GError **error);

/* GREY asks libjpeg for Y alone; STORED gives grey or RGB (JDCT_ISLOW). */
HwRaster *hw_jpeg_block_decode(const uint8_t *data, size_t size, HwPlane plane, const char *file,
                               GError **error);
