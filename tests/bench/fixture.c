/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "tests/bench/fixture.h"

#include <glib/gstdio.h>
#include <jpeglib.h>
#include <png.h>
#include <stdio.h>
#include <string.h>

/* RGB of a road, barriers and a few moving things, with a little noise: compresses about as a finish does. */
static guint8 *
paint(void)
{
    guint8 *rgb = g_malloc((gsize)FIXTURE_COLUMNS * FIXTURE_ROWS * 3);
    guint32 noise = 20270613;
    for (int row = 0; row < FIXTURE_ROWS; row++) {
        for (int column = 0; column < FIXTURE_COLUMNS; column++) {
            bool thing = (column / 90 % 3 == 1) && row > 100 && (column * 7 + row * 3) % 190 < 60;
            for (int channel = 0; channel < 3; channel++) {
                noise = noise * 1664525 + 1013904223;
                int base = thing ? 60 + 50 * channel : 90 + row / 8 + (row / 37 % 2) * 30;
                rgb[((gsize)row * FIXTURE_COLUMNS + (gsize)column) * 3 + (gsize)channel] =
                    (guint8)(base + (int)(noise >> 30));
            }
        }
    }
    return rgb;
}

static void
write_png(FILE *file, const guint8 *rgb)
{
    png_structp png = png_create_write_struct(PNG_LIBPNG_VER_STRING, NULL, NULL, NULL);
    png_infop info = png_create_info_struct(png);
    png_init_io(png, file);
    png_set_IHDR(png, info, FIXTURE_COLUMNS, FIXTURE_ROWS, 8, PNG_COLOR_TYPE_RGB, PNG_INTERLACE_NONE,
                 PNG_COMPRESSION_TYPE_DEFAULT, PNG_FILTER_TYPE_DEFAULT);
    png_write_info(png, info);
    for (int row = 0; row < FIXTURE_ROWS; row++)
        png_write_row(png, rgb + (gsize)row * FIXTURE_COLUMNS * 3);
    png_write_end(png, info);
    png_destroy_write_struct(&png, &info);
}

static void
write_jpeg(FILE *file, guint8 *rgb)
{
    struct jpeg_compress_struct jpeg;
    struct jpeg_error_mgr errors;
    jpeg.err = jpeg_std_error(&errors);
    jpeg_create_compress(&jpeg);
    jpeg_stdio_dest(&jpeg, file);
    jpeg.image_width = FIXTURE_COLUMNS;
    jpeg.image_height = FIXTURE_ROWS;
    jpeg.input_components = 3;
    jpeg.in_color_space = JCS_RGB;
    jpeg_set_defaults(&jpeg);
    jpeg_set_quality(&jpeg, 90, TRUE);
    jpeg_start_compress(&jpeg, TRUE);
    while (jpeg.next_scanline < jpeg.image_height) {
        JSAMPROW row = rgb + (gsize)jpeg.next_scanline * FIXTURE_COLUMNS * 3;
        jpeg_write_scanlines(&jpeg, &row, 1);
    }
    jpeg_finish_compress(&jpeg);
    jpeg_destroy_compress(&jpeg);
}

static char *
block_name(FixtureKind kind, guint block)
{
    return g_strdup_printf("block-%05u.%s", block, kind == FIXTURE_PNG ? "png" : "jpg");
}

char *
fixture_dup_block_path(const Fixture *fixture, guint block)
{
    g_autofree char *name = block_name(fixture->kind, block);
    return g_build_filename(fixture->folder, name, NULL);
}

static void
put(const char *path, const char *data, gsize size)
{
    g_autoptr(GError) error = NULL;
    if (!g_file_set_contents_full(path, data, (gssize)size, G_FILE_SET_CONTENTS_NONE, 0600, &error))
        g_error("%s", error->message);
}

Fixture *
fixture_new(FixtureKind kind, guint n_blocks, bool with_digests)
{
    Fixture *fixture = g_new0(Fixture, 1);
    fixture->folder = g_dir_make_tmp("halfwheel-bench-XXXXXX", NULL);
    fixture->n_blocks = n_blocks;
    fixture->kind = kind;

    g_autofree guint8 *rgb = paint();
    char *data = NULL;
    size_t size = 0;
    FILE *file = open_memstream(&data, &size);
    if (kind == FIXTURE_PNG)
        write_png(file, rgb);
    else
        write_jpeg(file, rgb);
    fclose(file);
    g_autofree char *digest = g_compute_checksum_for_data(G_CHECKSUM_SHA256, (guchar *)data, size);

    g_autoptr(GString) text = g_string_new(
        "{\"halfwheel_recording\": 1, \"title\": \"Bench\", \"epoch\": \"2027-06-13T16:02:11+02:00\", "
        "\"travel\": \"left\", \"scan\": {\"rate_hz\": 2000, \"exposure_us\": 400, \"stamp\": \"start\", "
        "\"transfer\": \"srgb\"}, \"blocks\": [");
    for (guint block = 0; block < n_blocks; block++) {
        g_autofree char *name = block_name(kind, block);
        g_autofree char *path = fixture_dup_block_path(fixture, block);
        put(path, data, size);
        gint64 first_ns = (gint64)block * FIXTURE_COLUMNS * 500000;
        g_string_append_printf(text,
                               "%s\n{\"file\": \"%s\", \"columns\": %d, \"first_ns\": %" G_GINT64_FORMAT
                               ", \"last_ns\": %" G_GINT64_FORMAT,
                               block > 0 ? "," : "", name, FIXTURE_COLUMNS, first_ns,
                               first_ns + (gint64)(FIXTURE_COLUMNS - 1) * 500000);
        if (with_digests)
            g_string_append_printf(text, ", \"sha256\": \"%s\"", digest);
        g_string_append_c(text, '}');
    }
    g_string_append(text, "]}\n");
    free(data);
    g_autofree char *manifest_path = g_build_filename(fixture->folder, "recording.json", NULL);
    put(manifest_path, text->str, text->len);
    fixture->manifest = g_string_free(g_steal_pointer(&text), FALSE);
    return fixture;
}

void
fixture_free(Fixture *fixture)
{
    if (fixture == NULL)
        return;
    for (guint block = 0; block < fixture->n_blocks; block++) {
        g_autofree char *path = fixture_dup_block_path(fixture, block);
        g_unlink(path);
    }
    g_autofree char *manifest_path = g_build_filename(fixture->folder, "recording.json", NULL);
    g_unlink(manifest_path);
    g_rmdir(fixture->folder);
    g_free(fixture->manifest);
    g_free(fixture->folder);
    g_free(fixture);
}
