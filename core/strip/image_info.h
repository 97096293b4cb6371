/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What the head of an image file says: its kind and size, without decoding it. */
#pragma once

#include <glib.h>
#include <stdbool.h>
#include <stddef.h>
#include <stdint.h>

typedef enum { HW_IMAGE_OTHER, HW_IMAGE_PNG, HW_IMAGE_JPEG } HwImageKind;

typedef struct {
    HwImageKind kind;
    int64_t width;
    int64_t height;
} HwImageInfo;

/* By the first bytes only (at least 8). */
HwImageKind hw_image_kind(const uint8_t *data, size_t size);

/* Kind and size from a file that is open for reading (its offset is left as it was). False with
 * HW_STRIP_ERROR_DAMAGED whose message is the reason, beginning with `file`: another kind, cut, zero or over
 * HW_MAX_BLOCK_PIXELS; *info is untouched then. */
bool hw_image_info_read(int fd, const char *file, HwImageInfo *info, GError **error);

/* The same of a whole file in memory. */
bool hw_image_info_parse(const uint8_t *data, size_t size, const char *file, HwImageInfo *info,
                         GError **error);

/* Orientation that an Exif block (a TIFF file, without JPEG's "Exif" sign) asks for, 1 … 8; 1 (as stored)
 * where it asks for none or is broken. */
int hw_image_exif_orientation(const uint8_t *exif, size_t size);
