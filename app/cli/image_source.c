/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "app/cli/image_source.h"

#include "core/base/base_error.h"
#include "core/base/limits.h"
#include "core/strip/image_info.h"
#include "core/strip/strip_error.h"

#include <errno.h>
#include <fcntl.h>
#include <setjmp.h>
#include <stdio.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

#include <jpeglib.h>
#include <png.h>

struct HwImageSource {
    char *path;
    FILE *file;
    HwImageShape shape;
    int64_t next_row;
    char fault[256]; /* what the decoder said last */
    jmp_buf back;

    png_structp png; /* NULL for a JPEG */
    png_infop info;
    uint8_t *whole; /* all rows of an interlaced PNG */

    bool is_jpeg;
    struct jpeg_decompress_struct jpeg;
    struct jpeg_error_mgr jpeg_errors;
};

static bool
damaged(HwImageSource *source, GError **error)
{
    g_set_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED,
                "%s is damaged at row %" G_GINT64_FORMAT " (%s); fetch it again from the camera.",
                source->path, source->next_row, source->fault);
    return false;
}

static bool
refused(HwImageSource *source, const char *why, GError **error)
{
    g_set_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED, "%s %s.", source->path, why);
    return false;
}

static void G_GNUC_NORETURN
png_failed(png_structp png, png_const_charp message)
{
    HwImageSource *source = png_get_error_ptr(png);
    g_strlcpy(source->fault, message, sizeof source->fault);
    longjmp(source->back, 1);
}

/* Warnings concern chunks beside the samples; the samples' own checksums are errors. */
static void
png_warned(png_structp png, png_const_charp message)
{
    (void)png;
    (void)message;
}

static void G_GNUC_NORETURN
jpeg_failed(j_common_ptr common)
{
    HwImageSource *source = common->client_data;
    char message[JMSG_LENGTH_MAX];
    common->err->format_message(common, message);
    g_strlcpy(source->fault, message, sizeof source->fault);
    longjmp(source->back, 1);
}

/* libjpeg goes on after a cut or altered file with only a warning; the first one is kept. */
static void
jpeg_said(j_common_ptr common, int level)
{
    HwImageSource *source = common->client_data;
    if (level >= 0)
        return;
    if (common->err->num_warnings++ == 0) {
        char message[JMSG_LENGTH_MAX];
        common->err->format_message(common, message);
        g_strlcpy(source->fault, message, sizeof source->fault);
    }
}

static bool
over_block_limit(const HwImageSource *source)
{
    return source->shape.height > HW_MAX_BLOCK_PIXELS / source->shape.width;
}

static bool
read_whole_png(HwImageSource *source, GError **error)
{
    if (over_block_limit(source))
        return refused(source, "is interlaced and too large to be held whole; save it without interlacing",
                       error);
    size_t row_bytes = (size_t)source->shape.width * source->shape.pixel_bytes;
    source->whole = g_try_malloc0_n((gsize)source->shape.height, row_bytes);
    if (source->whole == NULL)
        return refused(source, "is interlaced and does not fit into memory; save it without interlacing",
                       error);
    int passes = png_set_interlace_handling(source->png);
    png_read_update_info(source->png, source->info);
    for (int pass = 0; pass < passes; pass++) {
        for (int64_t row = 0; row < source->shape.height; row++)
            png_read_row(source->png, source->whole + (size_t)row * row_bytes, NULL);
    }
    return true;
}

static bool
open_png(HwImageSource *source, GError **error)
{
    source->png = png_create_read_struct(PNG_LIBPNG_VER_STRING, source, png_failed, png_warned);
    source->info = source->png != NULL ? png_create_info_struct(source->png) : NULL;
    if (source->info == NULL)
        return refused(source, "cannot be read for want of memory", error);
    if (setjmp(source->back) != 0)
        return damaged(source, error);
    png_set_user_limits(source->png, PNG_UINT_31_MAX, PNG_UINT_31_MAX);
    png_init_io(source->png, source->file);
    png_read_info(source->png, source->info);
    HwImageShape *shape = &source->shape;
    shape->width = png_get_image_width(source->png, source->info);
    shape->height = png_get_image_height(source->png, source->info);
    shape->bits = png_get_bit_depth(source->png, source->info);
    shape->colour_type = png_get_color_type(source->png, source->info);
    shape->pixel_bytes = (size_t)png_get_channels(source->png, source->info) * (shape->bits == 16 ? 2 : 1);
    png_set_packing(source->png);
    if (png_get_interlace_type(source->png, source->info) != PNG_INTERLACE_NONE)
        return read_whole_png(source, error);
    png_read_update_info(source->png, source->info);
    return true;
}

static bool
open_jpeg(HwImageSource *source, GError **error)
{
    source->jpeg.err = jpeg_std_error(&source->jpeg_errors);
    source->jpeg_errors.error_exit = jpeg_failed;
    source->jpeg_errors.emit_message = jpeg_said;
    source->jpeg.client_data = source;
    if (setjmp(source->back) != 0)
        return damaged(source, error);
    jpeg_create_decompress(&source->jpeg);
    source->is_jpeg = true;
    jpeg_stdio_src(&source->jpeg, source->file);
    jpeg_read_header(&source->jpeg, TRUE);
    HwImageShape *shape = &source->shape;
    shape->width = source->jpeg.image_width;
    shape->height = source->jpeg.image_height;
    shape->bits = 8;
    bool grey = source->jpeg.num_components == 1;
    if (source->jpeg.jpeg_color_space == JCS_CMYK || source->jpeg.jpeg_color_space == JCS_YCCK)
        return refused(source, "is a CMYK JPEG, made for printing; save it as grey or RGB", error);
    if (jpeg_has_multiple_scans(&source->jpeg) && over_block_limit(source))
        return refused(source,
                       "is a progressive JPEG too large to be held whole; save it as baseline JPEG or PNG",
                       error);
    source->jpeg.out_color_space = grey ? JCS_GRAYSCALE : JCS_RGB;
    source->jpeg.dct_method = JDCT_ISLOW;
    shape->colour_type = grey ? PNG_COLOR_TYPE_GRAY : PNG_COLOR_TYPE_RGB;
    shape->pixel_bytes = grey ? 1 : 3;
    jpeg_start_decompress(&source->jpeg);
    return true;
}

static bool
open_file(HwImageSource *source, HwImageKind *kind, GError **error)
{
    int fd = open(source->path, O_RDONLY | O_CLOEXEC | O_NONBLOCK);
    struct stat about;
    if (fd < 0 || fstat(fd, &about) != 0) {
        g_set_error(error, HW_BASE_ERROR, errno == ENOENT ? HW_BASE_ERROR_NOT_FOUND : HW_BASE_ERROR_IO,
                    "%s cannot be opened: %s; check the name.", source->path, g_strerror(errno));
        return false;
    }
    uint8_t head[8] = { 0 };
    ssize_t got = S_ISREG(about.st_mode) ? pread(fd, head, sizeof head, 0) : 0;
    source->file = fdopen(fd, "rb");
    *kind = got == (ssize_t)sizeof head ? hw_image_kind(head, sizeof head) : HW_IMAGE_OTHER;
    if (*kind == HW_IMAGE_OTHER)
        return refused(source, "is neither a PNG nor a JPEG; name an image of one of these kinds", error);
    return true;
}

HwImageSource *
hw_image_source_open(const char *path, GError **error)
{
    g_autoptr(HwImageSource) source = g_new0(HwImageSource, 1);
    source->path = g_strdup(path);
    HwImageKind kind;
    if (!open_file(source, &kind, error))
        return NULL;
    if (!(kind == HW_IMAGE_PNG ? open_png(source, error) : open_jpeg(source, error)))
        return NULL;
    return g_steal_pointer(&source);
}

void
hw_image_source_free(HwImageSource *source)
{
    if (source == NULL)
        return;
    if (source->png != NULL)
        png_destroy_read_struct(&source->png, &source->info, NULL);
    if (source->is_jpeg)
        jpeg_destroy_decompress(&source->jpeg);
    if (source->file != NULL)
        fclose(source->file);
    g_free(source->whole);
    g_free(source->path);
    g_free(source);
}

const HwImageShape *
hw_image_source_get_shape(const HwImageSource *source)
{
    return &source->shape;
}

bool
hw_image_source_read_row(HwImageSource *source, uint8_t *row, GError **error)
{
    size_t row_bytes = (size_t)source->shape.width * source->shape.pixel_bytes;
    if (setjmp(source->back) != 0)
        return damaged(source, error);
    if (source->whole != NULL)
        memcpy(row, source->whole + (size_t)source->next_row * row_bytes, row_bytes);
    else if (source->png != NULL)
        png_read_row(source->png, row, NULL);
    else if (jpeg_read_scanlines(&source->jpeg, &row, 1) != 1 || source->jpeg_errors.num_warnings > 0)
        return damaged(source, error);
    source->next_row++;
    return true;
}

bool
hw_image_source_finish(HwImageSource *source, GError **error)
{
    if (setjmp(source->back) != 0)
        return damaged(source, error);
    if (source->png != NULL)
        png_read_end(source->png, NULL);
    else
        jpeg_finish_decompress(&source->jpeg);
    return !source->is_jpeg || source->jpeg_errors.num_warnings == 0 || damaged(source, error);
}

static void
copy_profile(HwImageSource *source, png_structp png, png_infop info)
{
    png_charp name;
    png_bytep profile;
    png_uint_32 size;
    int compression;
    if (png_get_iCCP(source->png, source->info, &name, &compression, &profile, &size) != 0)
        png_set_iCCP(png, info, name, compression, profile, size);
    int intent;
    if (png_get_sRGB(source->png, source->info, &intent) != 0)
        png_set_sRGB(png, info, intent);
    png_fixed_point gamma;
    if (png_get_gAMA_fixed(source->png, source->info, &gamma) != 0)
        png_set_gAMA_fixed(png, info, gamma);
    png_fixed_point xy[8];
    if (png_get_cHRM_fixed(source->png, source->info, &xy[0], &xy[1], &xy[2], &xy[3], &xy[4], &xy[5], &xy[6],
                           &xy[7]) != 0)
        png_set_cHRM_fixed(png, info, xy[0], xy[1], xy[2], xy[3], xy[4], xy[5], xy[6], xy[7]);
    png_color_8p significant;
    if (png_get_sBIT(source->png, source->info, &significant) != 0)
        png_set_sBIT(png, info, significant);
}

void
hw_image_source_copy_colour(HwImageSource *source, gpointer png, gpointer info)
{
    if (source->png == NULL)
        return;
    png_colorp palette;
    int n_colours;
    if (png_get_PLTE(source->png, source->info, &palette, &n_colours) != 0)
        png_set_PLTE(png, info, palette, n_colours);
    png_bytep alpha;
    int n_alpha;
    png_color_16p key;
    if (png_get_tRNS(source->png, source->info, &alpha, &n_alpha, &key) != 0)
        png_set_tRNS(png, info, alpha, n_alpha, key);
    copy_profile(source, png, info);
}
