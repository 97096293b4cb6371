/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "tests/strip/pictures.h"

#include <glib/gstdio.h>
#include <png.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include <jpeglib.h>

static void
append_png(png_structp png, png_bytep bytes, size_t n)
{
    g_byte_array_append(png_get_io_ptr(png), bytes, (guint)n);
}

static void
flush_png(png_structp png)
{
    (void)png;
}

static void
set_transparency(png_structp png, png_infop info, const PngWish *wish)
{
    if (wish->n_alphas > 0) {
        png_set_tRNS(png, info, wish->alphas, wish->n_alphas, NULL);
    } else if (wish->has_key) {
        png_color_16 key = {
            .gray = wish->key[0], .red = wish->key[0], .green = wish->key[1], .blue = wish->key[2]
        };
        png_set_tRNS(png, info, NULL, 0, &key);
    }
}

/* A failing writer ends the test program, which is what libpng does by itself. */
GByteArray *
picture_png(const PngWish *wish)
{
    GByteArray *file = g_byte_array_new();
    png_structp png = png_create_write_struct(PNG_LIBPNG_VER_STRING, NULL, NULL, NULL);
    png_infop info = png_create_info_struct(png);
    png_set_write_fn(png, file, append_png, flush_png);
    png_set_user_limits(png, 0x7fffffff, 0x7fffffff);
    png_set_IHDR(png, info, (png_uint_32)wish->width, (png_uint_32)wish->height, wish->bits,
                 wish->colour_type, wish->interlaced ? PNG_INTERLACE_ADAM7 : PNG_INTERLACE_NONE,
                 PNG_COMPRESSION_TYPE_DEFAULT, PNG_FILTER_TYPE_DEFAULT);
    if (wish->n_colours > 0) {
        png_color palette[256];
        for (int i = 0; i < wish->n_colours; i++)
            palette[i] =
                (png_color){ wish->palette[3 * i], wish->palette[3 * i + 1], wish->palette[3 * i + 2] };
        png_set_PLTE(png, info, palette, wish->n_colours);
    }
    set_transparency(png, info, wish);
    png_set_check_for_invalid_index(png, 0);
    png_write_info(png, info);
    if (wish->chunk != NULL)
        png_write_chunk(png, (png_const_bytep)wish->chunk, wish->chunk_data, wish->chunk_size);
    int n_passes = png_set_interlace_handling(png);
    size_t stride = png_get_rowbytes(png, info);
    for (int pass = 0; pass < n_passes; pass++)
        for (int row = 0; row < wish->height; row++)
            png_write_row(png, wish->samples + stride * (size_t)row);
    png_write_end(png, info);
    png_destroy_write_struct(&png, &info);
    return file;
}

static GByteArray *
compress(const uint8_t *samples, int width, int height, int components, int quality,
         const jpeg_scan_info *scans, int n_scans)
{
    struct jpeg_compress_struct jpeg;
    struct jpeg_error_mgr errors;
    unsigned char *bytes = NULL;
    unsigned long size = 0;
    jpeg.err = jpeg_std_error(&errors);
    jpeg_create_compress(&jpeg);
    jpeg_mem_dest(&jpeg, &bytes, &size);
    jpeg.image_width = (JDIMENSION)width;
    jpeg.image_height = (JDIMENSION)height;
    jpeg.input_components = components;
    jpeg.in_color_space = components == 1 ? JCS_GRAYSCALE : components == 3 ? JCS_RGB : JCS_CMYK;
    jpeg_set_defaults(&jpeg);
    jpeg_set_quality(&jpeg, quality, TRUE);
    jpeg.scan_info = scans;
    jpeg.num_scans = n_scans;
    jpeg_start_compress(&jpeg, TRUE);
    while (jpeg.next_scanline < jpeg.image_height) {
        JSAMPROW row = (JSAMPROW)samples + (size_t)jpeg.next_scanline * (size_t)(width * components);
        jpeg_write_scanlines(&jpeg, &row, 1);
    }
    jpeg_finish_compress(&jpeg);
    jpeg_destroy_compress(&jpeg);
    GByteArray *file = g_byte_array_new();
    g_byte_array_append(file, bytes, (guint)size);
    free(bytes);
    return file;
}

GByteArray *
picture_jpeg(const uint8_t *samples, int width, int height, int components, int quality)
{
    return compress(samples, width, height, components, quality, NULL, 0);
}

GByteArray *
picture_jpeg_of_many_scans(const uint8_t *samples, int width, int height)
{
    jpeg_scan_info scans[1 + 4 * 63] = { { .comps_in_scan = 1 } };
    int n = 1;
    for (int low = 3; low >= 0; low--)
        for (int k = 1; k < 64; k++)
            scans[n++] = (jpeg_scan_info){
                .comps_in_scan = 1, .Ss = k, .Se = k, .Ah = low == 3 ? 0 : low + 1, .Al = low
            };
    return compress(samples, width, height, 1, 90, scans, n);
}

uint8_t
picture_noise(uint32_t *state)
{
    *state = *state * 1664525u + 1013904223u;
    return (uint8_t)(*state >> 24);
}

GByteArray *
picture_grey_png(int width, int height, uint8_t (*value)(int column, int row))
{
    g_autofree uint8_t *samples = g_malloc((size_t)width * (size_t)height);
    for (int row = 0; row < height; row++)
        for (int column = 0; column < width; column++)
            samples[row * width + column] = value(column, row);
    PngWish wish = { .width = width, .height = height, .bits = 8, .samples = samples };
    return picture_png(&wish);
}

char *
folder_new(void)
{
    g_autoptr(GError) error = NULL;
    char *path = g_dir_make_tmp("hw-strip-XXXXXX", &error);
    g_assert_no_error(error);
    return path;
}

void
folder_remove(char *path)
{
    g_autoptr(GDir) folder = g_dir_open(path, 0, NULL);
    for (const char *name = g_dir_read_name(folder); name != NULL; name = g_dir_read_name(folder)) {
        g_autofree char *file = g_build_filename(path, name, NULL);
        g_unlink(file);
    }
    g_rmdir(path);
    g_free(path);
}

void
folder_write(const char *folder, const char *name, const void *data, size_t size)
{
    g_autofree char *path = g_build_filename(folder, name, NULL);
    g_autoptr(GError) error = NULL;
    g_file_set_contents(path, data, (gssize)size, &error);
    g_assert_no_error(error);
}
