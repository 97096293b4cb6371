/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/strip/raster.h"

#include "core/base/limits.h"

#include <string.h>

HwRaster *
hw_raster_new(int width, int height, int channels, int bits)
{
    g_return_val_if_fail(width > 0 && height > 0, NULL);
    g_return_val_if_fail((int64_t)width * height <= HW_MAX_BLOCK_PIXELS, NULL);
    g_return_val_if_fail(channels >= 1 && channels <= 4, NULL);
    g_return_val_if_fail(bits == 1 || bits == 2 || bits == 4 || bits == 8 || bits == 16, NULL);
    HwRaster *raster = g_try_new0(HwRaster, 1);
    if (raster == NULL)
        return NULL;
    raster->width = width;
    raster->height = height;
    raster->channels = channels;
    raster->bits = bits;
    raster->bytes = (size_t)width * (size_t)height * (size_t)channels * (bits == 16 ? 2 : 1);
    raster->u8 = g_try_malloc(raster->bytes);
    if (raster->u8 == NULL) {
        g_free(raster);
        return NULL;
    }
    raster->refs = 1;
    return raster;
}

HwRaster *
hw_raster_ref(HwRaster *raster)
{
    g_atomic_int_inc(&raster->refs);
    return raster;
}

void
hw_raster_unref(HwRaster *raster)
{
    if (raster == NULL || !g_atomic_int_dec_and_test(&raster->refs))
        return;
    g_free(raster->u8);
    g_free(raster);
}

void
hw_raster_mirror(HwRaster *raster)
{
    size_t pixel = (size_t)raster->channels * (raster->bits == 16 ? 2 : 1);
    size_t stride = pixel * (size_t)raster->width;
    for (int row = 0; row < raster->height; row++) {
        uint8_t *left = raster->u8 + stride * (size_t)row;
        uint8_t *right = left + stride - pixel;
        for (; left < right; left += pixel, right -= pixel) {
            uint8_t kept[8];
            memcpy(kept, left, pixel);
            memcpy(left, right, pixel);
            memcpy(right, kept, pixel);
        }
    }
}

/* Grey under alpha, 16 bits: 65535 × grey × alpha / max². */
static void
grey_from_grey_alpha(const HwRaster *stored, HwRaster *grey)
{
    uint64_t max = (UINT64_C(1) << stored->bits) - 1;
    uint64_t whole = max * max;
    size_t n = (size_t)stored->width * (size_t)stored->height;
    for (size_t i = 0; i < n; i++) {
        uint64_t value = stored->bits == 16 ? stored->u16[2 * i] : stored->u8[2 * i];
        uint64_t alpha = stored->bits == 16 ? stored->u16[2 * i + 1] : stored->u8[2 * i + 1];
        grey->u16[i] = (uint16_t)((value * alpha * 65535 + whole / 2) / whole);
    }
}

/* The weights of JPEG's Y (ITU-T T.871: 0.299, 0.587, 0.114), in thousandths so that they are exact. */
static void
grey_from_colour(const HwRaster *stored, HwRaster *grey)
{
    size_t channels = (size_t)stored->channels;
    bool has_alpha = channels == 4;
    uint64_t max = (UINT64_C(1) << stored->bits) - 1;
    uint64_t whole = 1000 * max * (has_alpha ? max : 1);
    size_t n = (size_t)stored->width * (size_t)stored->height;
    if (stored->bits == 8 && !has_alpha) {
        for (size_t i = 0; i < n; i++) {
            const uint8_t *at = stored->u8 + 3 * i;
            grey->u16[i] = (uint16_t)(((299u * at[0] + 587u * at[1] + 114u * at[2]) * 257u + 500u) / 1000u);
        }
        return;
    }
    for (size_t i = 0; i < n; i++) {
        uint64_t sample[4] = { 0, 0, 0, 1 };
        for (size_t c = 0; c < channels; c++)
            sample[c] = stored->bits == 16 ? stored->u16[channels * i + c] : stored->u8[channels * i + c];
        uint64_t sum = 299 * sample[0] + 587 * sample[1] + 114 * sample[2];
        grey->u16[i] = (uint16_t)((sum * sample[3] * 65535 + whole / 2) / whole);
    }
}

HwRaster *
hw_raster_dup_grey(HwRaster *stored)
{
    if (stored->channels == 1)
        return hw_raster_ref(stored);
    HwRaster *grey = hw_raster_new(stored->width, stored->height, 1, 16);
    if (grey == NULL)
        return NULL;
    grey->notes = stored->notes;
    if (stored->channels == 2)
        grey_from_grey_alpha(stored, grey);
    else
        grey_from_colour(stored, grey);
    return grey;
}
