/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "samples/sim/image_file.h"

#include "samples/sim/scenario.h"

#include <stdio.h>

#include <jpeglib.h>
#include <png.h>

/* Row after row as the file wants it, 16 bits high byte first. */
static void
fill_row(const SimImage *m, int row, uint8_t *out)
{
    for (int x = 0; x < m->columns; x++) {
        int column = m->later_left ? m->columns - 1 - x : x;
        const uint16_t *s = m->samples + ((gsize)column * (gsize)m->rows + (gsize)row) * (gsize)m->channels;
        for (int c = 0; c < m->channels; c++) {
            if (m->bits == 16)
                *out++ = (uint8_t)(s[c] >> 8);
            *out++ = (uint8_t)s[c];
        }
    }
}

static FILE *
open_file(const char *path, GError **error)
{
    FILE *f = fopen(path, "wb");
    if (f == NULL)
        g_set_error(error, sim_error_quark(), 2, "%s can't be written; choose a folder that can.", path);
    return f;
}

static gboolean
close_file(FILE *f, const char *path, GError **error)
{
    gboolean ok = !ferror(f);
    if (fclose(f) != 0 || !ok) {
        g_set_error(error, sim_error_quark(), 2, "%s could not be written whole; is the disk full?", path);
        return FALSE;
    }
    return TRUE;
}

gboolean
sim_image_write_png(const SimImage *m, const char *path, GError **error)
{
    FILE *f = open_file(path, error);
    if (f == NULL)
        return FALSE;
    png_structp png = png_create_write_struct(PNG_LIBPNG_VER_STRING, NULL, NULL, NULL);
    png_infop info = png_create_info_struct(png);
    uint8_t *row = g_malloc((gsize)m->columns * (gsize)m->channels * 2);
    if (setjmp(png_jmpbuf(png)) == 0) {
        png_init_io(png, f);
        png_set_compression_level(png, 9);
        png_set_IHDR(png, info, (png_uint_32)m->columns, (png_uint_32)m->rows, m->bits,
                     m->channels == 1 ? PNG_COLOR_TYPE_GRAY : PNG_COLOR_TYPE_RGB, PNG_INTERLACE_NONE,
                     PNG_COMPRESSION_TYPE_DEFAULT, PNG_FILTER_TYPE_DEFAULT);
        png_write_info(png, info);
        for (int r = 0; r < m->rows; r++) {
            fill_row(m, r, row);
            png_write_row(png, row);
        }
        png_write_end(png, NULL);
    }
    png_destroy_write_struct(&png, &info);
    g_free(row);
    return close_file(f, path, error);
}

gboolean
sim_image_write_jpeg(const SimImage *m, int quality, const char *path, GError **error)
{
    FILE *f = open_file(path, error);
    if (f == NULL)
        return FALSE;
    struct jpeg_compress_struct jpeg;
    struct jpeg_error_mgr errors;
    jpeg.err = jpeg_std_error(&errors);
    jpeg_create_compress(&jpeg);
    jpeg_stdio_dest(&jpeg, f);
    jpeg.image_width = (JDIMENSION)m->columns;
    jpeg.image_height = (JDIMENSION)m->rows;
    jpeg.input_components = m->channels;
    jpeg.in_color_space = m->channels == 1 ? JCS_GRAYSCALE : JCS_RGB;
    jpeg_set_defaults(&jpeg);
    jpeg_set_quality(&jpeg, quality, TRUE);
    jpeg.dct_method = JDCT_ISLOW;
    jpeg.optimize_coding = TRUE;
    jpeg_start_compress(&jpeg, TRUE);
    g_autofree uint8_t *row = g_malloc((gsize)m->columns * (gsize)m->channels * 2);
    for (int r = 0; r < m->rows; r++) {
        fill_row(m, r, row);
        JSAMPROW line = row;
        jpeg_write_scanlines(&jpeg, &line, 1);
    }
    jpeg_finish_compress(&jpeg);
    jpeg_destroy_compress(&jpeg);
    return close_file(f, path, error);
}
