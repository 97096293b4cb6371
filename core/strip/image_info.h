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

/* Kind and size from a file that is open for reading (its offset is moved). False with HW_STRIP_ERROR_DAMAGED
 * whose message is the reason, beginning with `file`: another kind, cut, zero or over HW_MAX_BLOCK_PIXELS. */
bool hw_image_info_read(int fd, const char *file, HwImageInfo *info, GError **error);
