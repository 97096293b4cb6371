/* SPDX-License-Identifier: GPL-3.0-or-later */
/* How fast blocks decode through the strip, against libpng's and libjpeg's bare speed on the same files: read
 * the file, decode every row, nothing else. Rounds alternate, the ratio is taken round by round.
 *
 * The strip keeps what it decodes, so the bare decoder does too: each block has memory of its own till the
 * round ends. That the system must find that memory costs up to a sixth of a JPEG's time; against a decoder
 * that uses one buffer over and over (and so keeps nothing) the ratio is printed as well. */
#include "core/strip/strip.h"
#include "tests/bench/fixture.h"
#include "tests/bench/spread.h"

#include <jpeglib.h>
#include <png.h>
#include <stdio.h>
#include <string.h>

enum { BLOCKS = 12, ROUNDS = 15 };

typedef struct {
    const guint8 *data;
    gsize size;
    gsize at;
} Bytes;

static void
take(png_structp png, png_bytep into, size_t size)
{
    Bytes *bytes = png_get_io_ptr(png);
    if (size > bytes->size - bytes->at)
        png_error(png, "cut");
    memcpy(into, bytes->data + bytes->at, size);
    bytes->at += size;
}

static void
decode_png(const guint8 *data, gsize size, guint8 *rgb)
{
    Bytes bytes = { data, size, 0 };
    png_structp png = png_create_read_struct(PNG_LIBPNG_VER_STRING, NULL, NULL, NULL);
    png_infop info = png_create_info_struct(png);
    png_set_read_fn(png, &bytes, take);
    png_read_info(png, info);
    for (int row = 0; row < FIXTURE_ROWS; row++)
        png_read_row(png, rgb + (gsize)row * FIXTURE_COLUMNS * 3, NULL);
    png_read_end(png, NULL);
    png_destroy_read_struct(&png, &info, NULL);
}

static void
decode_jpeg(const guint8 *data, gsize size, guint8 *rgb)
{
    struct jpeg_decompress_struct jpeg;
    struct jpeg_error_mgr errors;
    jpeg.err = jpeg_std_error(&errors);
    jpeg_create_decompress(&jpeg);
    jpeg_mem_src(&jpeg, data, size);
    jpeg_read_header(&jpeg, TRUE);
    jpeg.dct_method = JDCT_ISLOW;
    jpeg_start_decompress(&jpeg);
    while (jpeg.output_scanline < jpeg.output_height) {
        JSAMPROW row = rgb + (gsize)jpeg.output_scanline * FIXTURE_COLUMNS * 3;
        jpeg_read_scanlines(&jpeg, &row, 1);
    }
    jpeg_finish_decompress(&jpeg);
    jpeg_destroy_decompress(&jpeg);
}

/* Each block into memory of its own, or all into `one` where it is not NULL. */
static double
bare_ns(const Fixture *fixture, guint8 *one)
{
    guint8 *kept[BLOCKS] = { NULL };
    int64_t begun = spread_now_ns();
    for (guint block = 0; block < BLOCKS; block++) {
        g_autofree char *path = fixture_dup_block_path(fixture, block);
        g_autofree char *data = NULL;
        gsize size;
        if (!g_file_get_contents(path, &data, &size, NULL))
            g_error("%s is gone", path);
        guint8 *rgb = one != NULL ? one : g_malloc((gsize)FIXTURE_COLUMNS * FIXTURE_ROWS * 3);
        (fixture->kind == FIXTURE_PNG ? decode_png : decode_jpeg)((const guint8 *)data, size, rgb);
        kept[block] = one != NULL ? NULL : rgb;
    }
    double took = (double)(spread_now_ns() - begun);
    for (guint block = 0; block < BLOCKS; block++)
        g_free(kept[block]);
    return took;
}

static double
strip_ns(const Fixture *fixture)
{
    g_autoptr(GError) error = NULL;
    g_autoptr(HwRecording) recording = hw_recording_open(fixture->folder, &error);
    g_autoptr(HwBlockCache) cache = hw_block_cache_new((size_t)256 << 20);
    g_autoptr(HwStrip) strip = recording != NULL ? hw_strip_new(recording, cache, &error) : NULL;
    if (strip == NULL)
        g_error("%s", error->message);
    int64_t begun = spread_now_ns();
    for (guint block = 0; block < BLOCKS; block++) {
        g_autoptr(HwRaster) raster = hw_strip_get_raster(strip, block, HW_PLANE_STORED, NULL, &error);
        if (raster == NULL)
            g_error("%s", error->message);
    }
    return (double)(spread_now_ns() - begun);
}

static void
compare(const char *words, FixtureKind kind, bool with_digests, bool keep, double aim)
{
    g_autoptr(Fixture) fixture = fixture_new(kind, BLOCKS, with_digests);
    g_autofree guint8 *one = keep ? NULL : g_malloc((gsize)FIXTURE_COLUMNS * FIXTURE_ROWS * 3);
    double ratios[ROUNDS];
    bare_ns(fixture, one);
    strip_ns(fixture);
    for (int round = 0; round < ROUNDS; round++) {
        double bare = bare_ns(fixture, one);
        ratios[round] = bare / strip_ns(fixture);
    }
    spread_print(words, spread_of(ratios, ROUNDS), true, aim);
}

int
main(void)
{
    compare("PNG, speed through the strip over libpng's", FIXTURE_PNG, false, true, 0.9);
    compare("JPEG, speed through the strip over libjpeg's", FIXTURE_JPEG, false, true, 0.9);
    compare("PNG, the same with its digest checked", FIXTURE_PNG, true, true, 0);
    compare("JPEG, the same with its digest checked", FIXTURE_JPEG, true, true, 0);
    compare("PNG, over libpng's into one buffer", FIXTURE_PNG, false, false, 0);
    compare("JPEG, over libjpeg's into one buffer", FIXTURE_JPEG, false, false, 0);
    return 0;
}
