/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Pictures and recordings that the tests of this folder make for themselves. */
#pragma once

#include <glib.h>
#include <stdbool.h>
#include <stdint.h>

/* What a PNG to be made is. `samples` as libpng takes them: rows of packed pixels, 16 bits big-endian. */
typedef struct {
    int width;
    int height;
    int bits;
    int colour_type; /* PNG_COLOR_TYPE_… */
    bool interlaced;
    const uint8_t *samples;
    const uint8_t *palette; /* n_colours × RGB */
    int n_colours;
    const uint8_t *alphas; /* of the palette's first colours */
    int n_alphas;
    bool has_key;
    uint16_t key[3];   /* grey in the first, or RGB */
    const char *chunk; /* one more chunk before the picture, or NULL */
    const uint8_t *chunk_data;
    size_t chunk_size;
} PngWish;

GByteArray *picture_png(const PngWish *wish);

/* Baseline, 8 bits, `components` 1 (grey), 3 (RGB, turned to YCbCr) or 4 (CMYK). */
GByteArray *picture_jpeg(const uint8_t *samples, int width, int height, int components, int quality);

/* Grey, progressive, in 253 scans. */
GByteArray *picture_jpeg_of_many_scans(const uint8_t *samples, int width, int height);

/* The next of a fixed series of bytes that look random. */
uint8_t picture_noise(uint32_t *state);

/* A grey PNG of `width` × `height` whose sample at (column, row) is value(column, row). */
GByteArray *picture_grey_png(int width, int height, uint8_t (*value)(int column, int row));

/* A new temporary folder; remove it with folder_remove (which frees the path). */
char *folder_new(void);
void folder_remove(char *path);
void folder_write(const char *folder, const char *name, const void *data, size_t size);
