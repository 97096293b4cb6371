/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/strip/image_block.h"
#include "core/strip/image_info.h"
#include "core/strip/strip_error.h"

#include <gio/gio.h>
#include <setjmp.h>
#include <stdbool.h>
#include <stdio.h>
#include <string.h>

#include <jerror.h>
#include <jpeglib.h>

/* A progressive file may ask for the whole picture to be gone through once for each of its scans; usual ones
 * have about ten. */
enum { MAX_SCANS = 200 };

typedef struct {
    struct jpeg_decompress_struct jpeg;
    struct jpeg_error_mgr errors;
    struct jpeg_progress_mgr progress;
    jmp_buf back;
    int code; /* libjpeg's number of the complaint */
    bool too_many_scans;
    char reason[JMSG_LENGTH_MAX];
} Decoder;

static G_NORETURN void
on_error(j_common_ptr jpeg)
{
    Decoder *decoder = jpeg->client_data;
    decoder->code = jpeg->err->msg_code;
    jpeg->err->format_message(jpeg, decoder->reason);
    longjmp(decoder->back, 1);
}

/* Level −1 is a warning: libjpeg goes on with made-up pixels, so it ends here. Others are traces. */
static void
on_message(j_common_ptr jpeg, int level)
{
    if (level < 0)
        on_error(jpeg);
}

static void
on_output(j_common_ptr jpeg)
{
    (void)jpeg;
}

static void
on_progress(j_common_ptr jpeg)
{
    Decoder *decoder = jpeg->client_data;
    if (decoder->jpeg.input_scan_number <= MAX_SCANS)
        return;
    decoder->too_many_scans = true;
    longjmp(decoder->back, 1);
}

/* Nothing with a clean-up of its own may be live in the functions that are jumped back to. */
static bool
read_head(Decoder *decoder, const uint8_t *data, size_t size)
{
    if (setjmp(decoder->back) != 0)
        return false;
    jpeg_create_decompress(&decoder->jpeg);
    decoder->progress.progress_monitor = on_progress;
    decoder->jpeg.progress = &decoder->progress;
    jpeg_mem_src(&decoder->jpeg, data, size);
    jpeg_save_markers(&decoder->jpeg, JPEG_APP0 + 1, 4096);
    jpeg_save_markers(&decoder->jpeg, JPEG_APP0 + 2, 12);
    jpeg_read_header(&decoder->jpeg, TRUE);
    return true;
}

static bool
start(Decoder *decoder, J_COLOR_SPACE wanted)
{
    if (setjmp(decoder->back) != 0)
        return false;
    decoder->jpeg.dct_method = JDCT_ISLOW;
    decoder->jpeg.out_color_space = wanted;
    jpeg_start_decompress(&decoder->jpeg);
    return true;
}

static void
read_all_rows(Decoder *decoder, HwRaster *raster)
{
    size_t stride = raster->bytes / (size_t)raster->height;
    while (decoder->jpeg.output_scanline < decoder->jpeg.output_height) {
        JSAMPROW row = raster->u8 + stride * decoder->jpeg.output_scanline;
        jpeg_read_scanlines(&decoder->jpeg, &row, 1);
    }
    jpeg_finish_decompress(&decoder->jpeg);
}

static bool
read_rows(Decoder *decoder, HwRaster *raster)
{
    if (setjmp(decoder->back) != 0)
        return false;
    read_all_rows(decoder, raster);
    return true;
}

static void
set_reason(GError **error, const Decoder *decoder, const char *file)
{
    if (decoder->too_many_scans)
        g_set_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED,
                    "%s has more than %d scans, which no camera writes", file, MAX_SCANS);
    else if (decoder->code == JERR_BAD_PRECISION)
        g_set_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED,
                    "%s is a JPEG with %d bits a sample, only those with 8 are read (have it written as PNG)",
                    file, decoder->jpeg.data_precision);
    else if (decoder->code == JWRN_JPEG_EOF || decoder->code == JERR_INPUT_EOF ||
             decoder->code == JERR_INPUT_EMPTY)
        g_set_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED, "%s is cut: it ends inside the picture",
                    file);
    else
        g_set_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED, "%s is altered and cannot be decoded (%s)",
                    file, decoder->reason);
}

static guint
find_notes(const Decoder *decoder)
{
    guint notes = 0;
    for (jpeg_saved_marker_ptr at = decoder->jpeg.marker_list; at != NULL; at = at->next) {
        if (at->marker == JPEG_APP0 + 2 && at->data_length >= 12 && memcmp(at->data, "ICC_PROFILE", 12) == 0)
            notes |= HW_RASTER_NOTE_ICC;
        if (at->marker == JPEG_APP0 + 1 && at->data_length > 6 && memcmp(at->data, "Exif\0", 6) == 0 &&
            hw_image_exif_orientation(at->data + 6, at->data_length - 6) != 1)
            notes |= HW_RASTER_NOTE_ORIENTATION;
    }
    return notes;
}

/* What to ask libjpeg for. Y is what a JPEG has of its own; one that holds RGB is turned to grey later. */
static bool
choose_colours(const Decoder *decoder, HwPlane plane, const char *file, J_COLOR_SPACE *wanted, GError **error)
{
    J_COLOR_SPACE held = decoder->jpeg.jpeg_color_space;
    if (held == JCS_GRAYSCALE || (held == JCS_YCbCr && plane == HW_PLANE_GREY)) {
        *wanted = JCS_GRAYSCALE;
        return true;
    }
    if (held == JCS_YCbCr || held == JCS_RGB) {
        *wanted = JCS_RGB;
        return true;
    }
    if (held == JCS_CMYK || held == JCS_YCCK)
        g_set_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED,
                    "%s is a JPEG in printing colours (CMYK), whose light cannot be told", file);
    else
        g_set_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED,
                    "%s is a JPEG with %d colour channels, only grey and colour are read", file,
                    decoder->jpeg.num_components);
    return false;
}

static HwRaster *
decode(Decoder *decoder, HwPlane plane, const char *file, GError **error)
{
    J_COLOR_SPACE wanted;
    if (!choose_colours(decoder, plane, file, &wanted, error))
        return NULL;
    if (!start(decoder, wanted)) {
        set_reason(error, decoder, file);
        return NULL;
    }
    g_autoptr(HwRaster) raster =
        hw_raster_new((int)decoder->jpeg.output_width, (int)decoder->jpeg.output_height,
                      decoder->jpeg.output_components, 8);
    if (raster == NULL) {
        g_set_error(error, G_IO_ERROR, G_IO_ERROR_FAILED,
                    "%s does not fit into memory; close other programs and try again.", file);
        return NULL;
    }
    raster->notes = find_notes(decoder); /* finishing forgets the markers */
    if (!read_rows(decoder, raster)) {
        set_reason(error, decoder, file);
        return NULL;
    }
    if (plane == HW_PLANE_STORED)
        return g_steal_pointer(&raster);
    HwRaster *grey = hw_raster_dup_grey(raster);
    if (grey == NULL)
        g_set_error(error, G_IO_ERROR, G_IO_ERROR_FAILED,
                    "%s does not fit into memory; close other programs and try again.", file);
    return grey;
}

HwRaster *
hw_jpeg_block_decode(const uint8_t *data, size_t size, HwPlane plane, const char *file, GError **error)
{
    HwImageInfo about;
    if (!hw_image_info_parse(data, size, file, &about, error))
        return NULL;
    Decoder *decoder = g_new0(Decoder, 1);
    decoder->jpeg.err = jpeg_std_error(&decoder->errors);
    decoder->jpeg.client_data = decoder;
    decoder->errors.error_exit = on_error;
    decoder->errors.emit_message = on_message;
    decoder->errors.output_message = on_output;
    HwRaster *raster = NULL;
    if (read_head(decoder, data, size))
        raster = decode(decoder, plane, file, error);
    else
        set_reason(error, decoder, file);
    jpeg_destroy_decompress(&decoder->jpeg);
    g_free(decoder);
    return raster;
}
