/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/strip/image_info.h"

#include "core/base/limits.h"
#include "core/strip/strip_error.h"

#include <errno.h>
#include <string.h>
#include <unistd.h>

/* Bytes at a place, from a descriptor or from memory. */
typedef struct {
    int fd; /* −1: memory */
    const uint8_t *data;
    size_t size;
} Source;

static const uint8_t png_signature[8] = { 0x89, 'P', 'N', 'G', '\r', '\n', 0x1a, '\n' };

HwImageKind
hw_image_kind(const uint8_t *data, size_t size)
{
    if (size >= sizeof png_signature && memcmp(data, png_signature, sizeof png_signature) == 0)
        return HW_IMAGE_PNG;
    if (size >= 3 && data[0] == 0xff && data[1] == 0xd8 && data[2] == 0xff)
        return HW_IMAGE_JPEG;
    return HW_IMAGE_OTHER;
}

/* All n bytes at a place, or false. */
static bool
source_read(const Source *source, uint64_t place, uint8_t *bytes, size_t n)
{
    if (source->fd < 0) {
        if (place > source->size || source->size - place < n)
            return false;
        memcpy(bytes, source->data + place, n);
        return true;
    }
    size_t have = 0;
    while (have < n) {
        ssize_t got = pread(source->fd, bytes + have, n - have, (off_t)(place + have));
        if (got < 0 && errno == EINTR)
            continue;
        if (got <= 0)
            return false;
        have += (size_t)got;
    }
    return true;
}

static bool
fail(GError **error, const char *file, const char *reason)
{
    g_set_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED, "%s %s", file, reason);
    return false;
}

static bool
png_head(const Source *source, const char *file, HwImageInfo *info, GError **error)
{
    uint8_t head[16];
    if (!source_read(source, sizeof png_signature, head, sizeof head))
        return fail(error, file, "is cut: it ends inside its head");
    if (memcmp(head, "\0\0\0\rIHDR", 8) != 0)
        return fail(error, file, "is altered: it begins as a PNG but has no PNG head");
    info->width = (int64_t)head[8] << 24 | head[9] << 16 | head[10] << 8 | head[11];
    info->height = (int64_t)head[12] << 24 | head[13] << 16 | head[14] << 8 | head[15];
    return true;
}

/* From marker to marker up to the first frame header (ITU-T T.81, annex B). */
static bool
jpeg_head(const Source *source, const char *file, HwImageInfo *info, GError **error)
{
    uint64_t place = 2;
    for (;;) {
        uint8_t head[4];
        if (!source_read(source, place, head, 2))
            return fail(error, file, "is cut: it ends inside its head");
        if (head[0] != 0xff)
            return fail(error, file, "is altered: its head is no JPEG head");
        unsigned marker = head[1];
        if (marker == 0xff) { /* fill byte */
            place++;
            continue;
        }
        if (marker == 0x01 || (marker >= 0xd0 && marker <= 0xd7)) {
            place += 2;
            continue;
        }
        if (marker == 0xd9 || marker == 0xda || marker == 0x00 || marker == 0xd8)
            return fail(error, file, "is altered: it has no size before its picture");
        if (!source_read(source, place + 2, head, 2))
            return fail(error, file, "is cut: it ends inside its head");
        uint64_t length = (uint64_t)head[0] << 8 | head[1];
        if (length < 2)
            return fail(error, file, "is altered: its head is no JPEG head");
        bool is_frame =
            marker >= 0xc0 && marker <= 0xcf && marker != 0xc4 && marker != 0xc8 && marker != 0xcc;
        if (is_frame) {
            uint8_t frame[5];
            if (length < 8 || !source_read(source, place + 4, frame, sizeof frame))
                return fail(error, file, "is cut: it ends inside its head");
            info->height = frame[1] << 8 | frame[2];
            info->width = frame[3] << 8 | frame[4];
            return true;
        }
        place += 2 + length;
    }
}

static bool
info_from_source(const Source *source, const char *file, HwImageInfo *info, GError **error)
{
    uint8_t first[8];
    if (!source_read(source, 0, first, 1))
        return fail(error, file, "is empty or cannot be read");
    if (!source_read(source, 0, first, sizeof first))
        return fail(error, file, "is cut: it ends inside its head");
    HwImageInfo found = { hw_image_kind(first, sizeof first), 0, 0 };
    if (found.kind == HW_IMAGE_OTHER)
        return fail(error, file, "is neither a PNG nor a JPEG picture");
    bool ok = found.kind == HW_IMAGE_PNG ? png_head(source, file, &found, error)
                                         : jpeg_head(source, file, &found, error);
    if (!ok)
        return false;
    if (found.width == 0 || found.height == 0)
        return fail(error, file, "is altered: its head gives no width or no height");
    /* Both are below 2^32, but their product may pass 2^63. */
    if (found.width > HW_MAX_BLOCK_PIXELS || found.height > HW_MAX_BLOCK_PIXELS / found.width) {
        g_set_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED,
                    "%s claims %" G_GINT64_FORMAT " × %" G_GINT64_FORMAT
                    " pixels, more than the %" G_GINT64_FORMAT " a block may have",
                    file, found.width, found.height, HW_MAX_BLOCK_PIXELS);
        return false;
    }
    *info = found;
    return true;
}

bool
hw_image_info_read(int fd, const char *file, HwImageInfo *info, GError **error)
{
    Source source = { .fd = fd };
    return info_from_source(&source, file, info, error);
}

bool
hw_image_info_parse(const uint8_t *data, size_t size, const char *file, HwImageInfo *info, GError **error)
{
    Source source = { .fd = -1, .data = data, .size = size };
    return info_from_source(&source, file, info, error);
}

static unsigned
tiff_u16(const uint8_t *at, bool big)
{
    return big ? (unsigned)at[0] << 8 | at[1] : (unsigned)at[1] << 8 | at[0];
}

static uint32_t
tiff_u32(const uint8_t *at, bool big)
{
    return big ? (uint32_t)tiff_u16(at, big) << 16 | tiff_u16(at + 2, big)
               : (uint32_t)tiff_u16(at + 2, big) << 16 | tiff_u16(at, big);
}

int
hw_image_exif_orientation(const uint8_t *exif, size_t size)
{
    enum { TAG_ORIENTATION = 0x0112, TYPE_SHORT = 3, ENTRY_BYTES = 12 };
    if (size < 8 || (memcmp(exif, "II*\0", 4) != 0 && memcmp(exif, "MM\0*", 4) != 0))
        return 1;
    bool big = exif[0] == 'M';
    size_t at = tiff_u32(exif + 4, big);
    if (at > size || size - at < 2)
        return 1;
    unsigned n = tiff_u16(exif + at, big);
    at += 2;
    for (unsigned i = 0; i < n && size - at >= ENTRY_BYTES; i++, at += ENTRY_BYTES) {
        if (tiff_u16(exif + at, big) != TAG_ORIENTATION || tiff_u16(exif + at + 2, big) != TYPE_SHORT)
            continue;
        unsigned value = tiff_u16(exif + at + 8, big);
        return value >= 1 && value <= 8 ? (int)value : 1;
    }
    return 1;
}
