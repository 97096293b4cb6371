/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "app/cli/png_slice.h"

#include "core/base/base_error.h"
#include "core/base/output.h"

#include <setjmp.h>

#include <png.h>

struct HwPngSlice {
    char *path;
    size_t offset; /* of the first column in a row, in bytes */
    HwOutput *output;
    HwDigestSum *sum;
    png_structp png;
    png_infop info;
    GError *fault; /* of the output, while libpng is being left */
    jmp_buf back;
};

static void G_GNUC_NORETURN
slice_failed(png_structp png, png_const_charp message)
{
    HwPngSlice *slice = png_get_error_ptr(png);
    if (slice->fault == NULL)
        g_set_error(&slice->fault, HW_BASE_ERROR, HW_BASE_ERROR_IO, "%s cannot be written: %s.", slice->path,
                    message);
    longjmp(slice->back, 1);
}

static void
slice_warned(png_structp png, png_const_charp message)
{
    (void)png;
    (void)message;
}

static void
slice_write(png_structp png, png_bytep data, png_size_t size)
{
    HwPngSlice *slice = png_get_io_ptr(png);
    hw_digest_sum_add(slice->sum, data, size);
    if (!hw_output_write(slice->output, data, size, &slice->fault))
        png_error(png, "output");
}

static void
slice_flush(png_structp png)
{
    (void)png;
}

static bool
leave(HwPngSlice *slice, GError **error)
{
    g_propagate_error(error, g_steal_pointer(&slice->fault));
    return false;
}

static bool
write_head(HwPngSlice *slice, HwImageSource *source, int64_t n, GError **error)
{
    const HwImageShape *shape = hw_image_source_get_shape(source);
    if (setjmp(slice->back) != 0)
        return leave(slice, error);
    png_set_user_limits(slice->png, PNG_UINT_31_MAX, PNG_UINT_31_MAX);
    png_set_write_fn(slice->png, slice, slice_write, slice_flush);
    png_set_IHDR(slice->png, slice->info, (png_uint_32)n, (png_uint_32)shape->height, shape->bits,
                 shape->colour_type, PNG_INTERLACE_NONE, PNG_COMPRESSION_TYPE_DEFAULT,
                 PNG_FILTER_TYPE_DEFAULT);
    hw_image_source_copy_colour(source, slice->png, slice->info);
    png_write_info(slice->png, slice->info);
    png_set_packing(slice->png);
    return true;
}

HwPngSlice *
hw_png_slice_new(const char *path, HwImageSource *source, int64_t first, int64_t n, GError **error)
{
    g_autoptr(HwPngSlice) slice = g_new0(HwPngSlice, 1);
    slice->path = g_strdup(path);
    slice->offset = (size_t)first * hw_image_source_get_shape(source)->pixel_bytes;
    slice->output = hw_output_open(path, false, error);
    if (slice->output == NULL)
        return NULL;
    slice->sum = hw_digest_sum_new();
    slice->png = png_create_write_struct(PNG_LIBPNG_VER_STRING, slice, slice_failed, slice_warned);
    slice->info = slice->png != NULL ? png_create_info_struct(slice->png) : NULL;
    if (slice->info == NULL) {
        g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_IO, "%s cannot be written for want of memory.", path);
        return NULL;
    }
    return write_head(slice, source, n, error) ? g_steal_pointer(&slice) : NULL;
}

void
hw_png_slice_free(HwPngSlice *slice)
{
    if (slice == NULL)
        return;
    if (slice->png != NULL)
        png_destroy_write_struct(&slice->png, &slice->info);
    if (slice->sum != NULL)
        hw_digest_sum_free(slice->sum);
    hw_output_free(slice->output);
    g_clear_error(&slice->fault);
    g_free(slice->path);
    g_free(slice);
}

bool
hw_png_slice_write_row(HwPngSlice *slice, const uint8_t *row, GError **error)
{
    if (setjmp(slice->back) != 0)
        return leave(slice, error);
    png_write_row(slice->png, row + slice->offset);
    return true;
}

bool
hw_png_slice_finish(HwPngSlice *slice, HwDigest *digest, GError **error)
{
    if (setjmp(slice->back) != 0)
        return leave(slice, error);
    png_write_end(slice->png, NULL);
    *digest = hw_digest_sum_finish(g_steal_pointer(&slice->sum));
    return hw_output_commit(slice->output, error);
}
