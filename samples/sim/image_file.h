/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Writes one block's samples as PNG or JPEG, always with the same settings. Errors name the file.
 */
#pragma once

#include <glib.h>
#include <stdint.h>

typedef struct {
    int columns, rows, channels; /* channels 1 or 3 */
    int bits;                    /* 8 or 16 (PNG) */
    const uint16_t *samples;     /* column after column, each from the top */
    gboolean later_left;         /* the image's later columns lie on its left */
} SimImage;

gboolean sim_image_write_png(const SimImage *image, const char *path, GError **error);
gboolean sim_image_write_jpeg(const SimImage *image, int quality, const char *path, GError **error);
