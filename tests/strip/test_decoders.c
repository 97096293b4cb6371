/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Samples come out as they are stored, or the block is refused with a reason. Held against netpbm's pngtopnm
 * and libjpeg-turbo's djpeg, which apply no gamma either. */
#include "core/strip/image_block.h"
#include "core/strip/image_info.h"
#include "core/strip/strip_error.h"
#include "tests/strip/pictures.h"

#include <gio/gio.h>
#include <png.h>
#include <stdio.h>
#include <string.h>

/* ---- Other programs' samples ---- */

typedef struct {
    int width;
    int height;
    int channels;
    unsigned max;
    guint16 *samples;
} Pnm;

static void
pnm_clear(Pnm *pnm)
{
    g_clear_pointer(&pnm->samples, g_free);
}

G_DEFINE_AUTO_CLEANUP_CLEAR_FUNC(Pnm, pnm_clear)

/* P4, P5 or P6. */
static void
pnm_parse(const char *text, size_t size, Pnm *pnm)
{
    int kind = 0;
    int at = 0;
    pnm->max = 1;
    g_assert_cmpint(sscanf(text, "P%d %d %d%n", &kind, &pnm->width, &pnm->height, &at), ==, 3);
    if (kind != 4) {
        int more = 0;
        g_assert_cmpint(sscanf(text + at, " %u%n", &pnm->max, &more), ==, 1);
        at += more;
    }
    pnm->channels = kind == 6 ? 3 : 1;
    const uint8_t *bytes = (const uint8_t *)text + at + 1;
    size_t n = (size_t)pnm->width * (size_t)pnm->height * (size_t)pnm->channels;
    pnm->samples = g_new(guint16, n);
    size_t row_bytes = ((size_t)pnm->width + 7) / 8;
    size_t wanted = kind == 4 ? row_bytes * (size_t)pnm->height : n * (pnm->max > 255 ? 2 : 1);
    g_assert_cmpuint(size - (size_t)at - 1, ==, wanted);
    for (size_t i = 0; i < n; i++) {
        if (kind == 4) {
            size_t x = i % (size_t)pnm->width;
            size_t y = i / (size_t)pnm->width;
            pnm->samples[i] = (bytes[y * row_bytes + x / 8] >> (7 - x % 8) & 1) == 0; /* 1 is black */
        } else if (pnm->max > 255) {
            pnm->samples[i] = (guint16)(bytes[2 * i] << 8 | bytes[2 * i + 1]);
        } else {
            pnm->samples[i] = bytes[i];
        }
    }
}

static bool
has_program(const char *name)
{
    g_autofree char *path = g_find_program_in_path(name);
    if (path == NULL)
        g_test_message("%s is not installed: nothing is compared with it", name);
    return path != NULL;
}

/* What a program writes to its standard output. */
static char *
run(const char *const *words, size_t *size)
{
    g_autoptr(GError) error = NULL;
    g_autoptr(GSubprocess) process =
        g_subprocess_newv(words, G_SUBPROCESS_FLAGS_STDOUT_PIPE | G_SUBPROCESS_FLAGS_STDERR_SILENCE, &error);
    g_assert_no_error(error);
    g_autoptr(GBytes) output = NULL;
    g_subprocess_communicate(process, NULL, NULL, &output, NULL, &error);
    g_assert_no_error(error);
    g_assert_true(g_subprocess_get_successful(process));
    char *text = g_malloc(g_bytes_get_size(output) + 1);
    *size = g_bytes_get_size(output);
    if (*size > 0)
        memcpy(text, g_bytes_get_data(output, NULL), *size);
    text[*size] = '\0';
    return text;
}

static void
run_pnm(const char *const *words, Pnm *pnm)
{
    size_t size = 0;
    g_autofree char *text = run(words, &size);
    pnm_parse(text, size, pnm);
}

/* Samples of `channel` on are those of `pnm`; it may hold fewer bits (sBIT) and one channel for three equal
 * ones. */
static void
assert_equals_pnm(const char *file, const HwRaster *raster, int first_channel, int n_channels, const Pnm *pnm)
{
    int shift = 0;
    while (shift < raster->bits && (1u << (raster->bits - shift)) - 1 != pnm->max)
        shift++;
    g_assert_cmpint(shift, <, raster->bits);
    g_assert_cmpint(raster->width, ==, pnm->width);
    g_assert_cmpint(raster->height, ==, pnm->height);
    for (int row = 0; row < raster->height; row++) {
        for (int column = 0; column < raster->width; column++) {
            for (int c = 0; c < n_channels; c++) {
                unsigned ours = hw_raster_get(raster, column, row, first_channel + c) >> shift;
                size_t pixel = (size_t)(row * pnm->width + column) * (size_t)pnm->channels;
                unsigned theirs = pnm->samples[pixel + (size_t)(pnm->channels == 3 ? c : 0)];
                if (ours != theirs)
                    g_error("%s: column %d, row %d, channel %d is %u, should be %u", file, column, row, c,
                            ours, theirs);
            }
        }
    }
}

/* ---- Helpers ---- */

static HwRaster *
decode(const GByteArray *file, const char *name, HwPlane plane, GError **error)
{
    if (hw_image_kind(file->data, file->len) == HW_IMAGE_JPEG)
        return hw_jpeg_block_decode(file->data, file->len, plane, name, error);
    return hw_png_block_decode(file->data, file->len, name, error);
}

static HwRaster *
decode_whole(const GByteArray *file, HwPlane plane)
{
    g_autoptr(GError) error = NULL;
    HwRaster *raster = decode(file, "block.png", plane, &error);
    g_assert_no_error(error);
    return raster;
}

/* Refused as damage, in a clause that begins with the file's name and says `word`. */
static void
assert_refused(const uint8_t *data, size_t size, bool jpeg, const char *word)
{
    g_autoptr(GError) error = NULL;
    HwRaster *raster = jpeg ? hw_jpeg_block_decode(data, size, HW_PLANE_STORED, "block-00003", &error)
                            : hw_png_block_decode(data, size, "block-00003", &error);
    if (raster != NULL)
        g_error("%" G_GSIZE_FORMAT " bytes were decoded that should not be", size);
    g_assert_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED);
    g_assert_true(g_str_has_prefix(error->message, "block-00003 "));
    g_assert_false(g_str_has_suffix(error->message, "."));
    if (word != NULL && strstr(error->message, word) == NULL)
        g_error("\"%s\" does not say \"%s\"", error->message, word);
}

static GByteArray *
noise_bytes(size_t n)
{
    GByteArray *bytes = g_byte_array_sized_new((guint)n);
    uint32_t state = 20270613;
    for (size_t i = 0; i < n; i++) {
        uint8_t byte = picture_noise(&state);
        g_byte_array_append(bytes, &byte, 1);
    }
    return bytes;
}

/* Colours that change slowly, and a sharp edge. */
static GByteArray *
scene_rgb(int width, int height)
{
    GByteArray *bytes = g_byte_array_new();
    for (int y = 0; y < height; y++) {
        for (int x = 0; x < width; x++) {
            bool dark = (x - 40) * (x - 40) + (y - 30) * (y - 30) < 500;
            uint8_t pixel[3] = { (uint8_t)(dark ? 12 : 2 * x), (uint8_t)(dark ? 20 : 3 * y),
                                 (uint8_t)(dark ? 15 : x + y) };
            g_byte_array_append(bytes, pixel, 3);
        }
    }
    return bytes;
}

/* ---- PNG ---- */

static char *
dup_suite_path(void)
{
    const char *corpora = g_getenv("HALFWHEEL_CORPORA");
    char *path = corpora != NULL
                     ? g_build_filename(corpora, "pngsuite", NULL)
                     : g_test_build_filename(G_TEST_DIST, "..", "..", "shared", "corpora", "pngsuite", NULL);
    if (!g_file_test(path, G_FILE_TEST_IS_DIR)) {
        g_test_message("the PNG test suite is not at %s: nothing is compared with it", path);
        g_clear_pointer(&path, g_free);
    }
    return path;
}

/* Alpha of a file with a colour key (grey or RGB), from the PNG standard's own words: 0 where a pixel is the
 * key's in all samples (W3C PNG, tRNS). pngtopnm 11.1 takes no pixel of an RGB file for the key, so it cannot
 * serve. */
static void
assert_alpha_is_by_key(const char *name, const HwRaster *raster, const char *data, gsize size,
                       const Pnm *colours)
{
    const uint8_t *chunk = memmem(data, size, "tRNS", 4);
    g_assert_nonnull(chunk);
    g_assert_cmpuint(colours->max, ==, (1u << raster->bits) - 1);
    int n = raster->channels - 1;
    for (int i = 0; i < raster->width * raster->height; i++) {
        bool is_key = true;
        for (int c = 0; c < n; c++) {
            unsigned key = (unsigned)chunk[4 + 2 * c] << 8 | chunk[5 + 2 * c];
            is_key =
                is_key && colours->samples[i * colours->channels + (colours->channels == 3 ? c : 0)] == key;
        }
        unsigned alpha = hw_raster_get(raster, i % raster->width, i / raster->width, n);
        if (alpha != (is_key ? 0 : colours->max))
            g_error("%s: pixel %d has alpha %u", name, i, alpha);
    }
}

static void
compare_suite_file(const char *path, const char *name)
{
    g_autoptr(GError) error = NULL;
    g_autofree char *data = NULL;
    gsize size = 0;
    g_file_get_contents(path, &data, &size, &error);
    g_assert_no_error(error);
    g_autoptr(HwRaster) raster = hw_png_block_decode((const uint8_t *)data, size, name, &error);
    g_assert_no_error(error);
    g_auto(Pnm) colours = { 0 };
    run_pnm((const char *[]){ "pngtopnm", path, NULL }, &colours);
    assert_equals_pnm(name, raster, 0, raster->channels >= 3 ? 3 : 1, &colours);
    bool has_own_alpha = (data[25] & PNG_COLOR_MASK_ALPHA) != 0 || data[25] == PNG_COLOR_TYPE_PALETTE;
    if (!has_own_alpha && raster->channels % 2 == 0) {
        assert_alpha_is_by_key(name, raster, data, size, &colours);
    } else if (raster->channels % 2 == 0) {
        g_auto(Pnm) alphas = { 0 };
        run_pnm((const char *[]){ "pngtopnm", "-alpha", path, NULL }, &alphas);
        assert_equals_pnm(name, raster, raster->channels - 1, 1, &alphas);
    }
}

/* PngSuite of 2017-07-19 by Willem van Schaik. */
static void
test_png_suite_equals_pngtopnm(void)
{
    g_autofree char *folder = dup_suite_path();
    if (folder == NULL || !has_program("pngtopnm"))
        return;
    g_autoptr(GDir) names = g_dir_open(folder, 0, NULL);
    guint n_compared = 0;
    for (const char *name = g_dir_read_name(names); name != NULL; name = g_dir_read_name(names)) {
        if (name[0] == 'x' || !g_str_has_suffix(name, ".png"))
            continue;
        g_autofree char *path = g_build_filename(folder, name, NULL);
        compare_suite_file(path, name);
        n_compared++;
    }
    g_test_message("%u files are equal sample for sample", n_compared);
    g_assert_cmpuint(n_compared, ==, 161);
}

static void
test_png_suite_broken_is_refused(void)
{
    g_autofree char *folder = dup_suite_path();
    if (folder == NULL)
        return;
    g_autoptr(GDir) names = g_dir_open(folder, 0, NULL);
    guint n_refused = 0;
    for (const char *name = g_dir_read_name(names); name != NULL; name = g_dir_read_name(names)) {
        if (name[0] != 'x' || !g_str_has_suffix(name, ".png"))
            continue;
        g_autofree char *path = g_build_filename(folder, name, NULL);
        g_autofree char *data = NULL;
        gsize size = 0;
        g_assert_true(g_file_get_contents(path, &data, &size, NULL));
        g_test_message("%s", name);
        assert_refused((const uint8_t *)data, size, false, NULL);
        n_refused++;
    }
    g_assert_cmpuint(n_refused, ==, 14);
}

static unsigned
packed_sample(const uint8_t *samples, size_t stride, int row, size_t index, int bits)
{
    const uint8_t *line = samples + stride * (size_t)row;
    if (bits == 16)
        return (unsigned)line[2 * index] << 8 | line[2 * index + 1];
    size_t bit = index * (size_t)bits;
    return (unsigned)line[bit / 8] >> (8 - bits - (int)(bit % 8)) & ((1u << bits) - 1);
}

/* Every colour type and depth, interlaced or not, at sizes that end inside a byte and inside a pass. */
static void
test_png_samples_are_those_written(void)
{
    static const struct {
        int colour_type;
        int bits;
        int channels;
    } kinds[] = {
        { PNG_COLOR_TYPE_GRAY, 1, 1 },        { PNG_COLOR_TYPE_GRAY, 2, 1 },
        { PNG_COLOR_TYPE_GRAY, 4, 1 },        { PNG_COLOR_TYPE_GRAY, 8, 1 },
        { PNG_COLOR_TYPE_GRAY, 16, 1 },       { PNG_COLOR_TYPE_GRAY_ALPHA, 8, 2 },
        { PNG_COLOR_TYPE_GRAY_ALPHA, 16, 2 }, { PNG_COLOR_TYPE_RGB, 8, 3 },
        { PNG_COLOR_TYPE_RGB, 16, 3 },        { PNG_COLOR_TYPE_RGBA, 8, 4 },
        { PNG_COLOR_TYPE_RGBA, 16, 4 },
    };
    g_autoptr(GByteArray) noise = noise_bytes(16384);
    for (size_t k = 0; k < G_N_ELEMENTS(kinds) * 2; k++) {
        PngWish wish = { .width = 21,
                         .height = 13,
                         .bits = kinds[k / 2].bits,
                         .colour_type = kinds[k / 2].colour_type,
                         .interlaced = k % 2 == 1,
                         .samples = noise->data };
        int channels = kinds[k / 2].channels;
        g_autoptr(GByteArray) file = picture_png(&wish);
        g_autoptr(HwRaster) raster = decode_whole(file, HW_PLANE_STORED);
        g_assert_cmpint(raster->bits, ==, wish.bits);
        g_assert_cmpint(raster->channels, ==, channels);
        size_t stride = ((size_t)wish.width * (size_t)(channels * wish.bits) + 7) / 8;
        for (int row = 0; row < wish.height; row++)
            for (int column = 0; column < wish.width; column++)
                for (int c = 0; c < channels; c++)
                    g_assert_cmpuint(
                        hw_raster_get(raster, column, row, c), ==,
                        packed_sample(noise->data, stride, row, (size_t)(column * channels + c), wish.bits));
    }
}

static void
test_palette_becomes_colours(void)
{
    static const uint8_t palette[] = { 10, 20, 30, 40, 50, 60, 70, 80, 90 };
    static const uint8_t alphas[] = { 255, 7 };
    static const uint8_t samples[] = { 0x18 }; /* places 0 1 2 0, two bits each */
    PngWish wish = { .width = 4,
                     .height = 1,
                     .bits = 2,
                     .colour_type = PNG_COLOR_TYPE_PALETTE,
                     .samples = samples,
                     .palette = palette,
                     .n_colours = 3 };
    g_autoptr(GByteArray) plain = picture_png(&wish);
    g_autoptr(HwRaster) colours = decode_whole(plain, HW_PLANE_STORED);
    g_assert_cmpint(colours->channels, ==, 3);
    g_assert_cmpint(colours->bits, ==, 8);
    g_assert_cmpmem(colours->u8, colours->bytes,
                    ((const uint8_t[]){ 10, 20, 30, 40, 50, 60, 70, 80, 90, 10, 20, 30 }), 12);

    wish.alphas = alphas;
    wish.n_alphas = 2;
    g_autoptr(GByteArray) clear = picture_png(&wish);
    g_autoptr(HwRaster) with_alpha = decode_whole(clear, HW_PLANE_STORED);
    g_assert_cmpint(with_alpha->channels, ==, 4);
    g_assert_cmpmem(with_alpha->u8, with_alpha->bytes,
                    ((const uint8_t[]){ 10, 20, 30, 255, 40, 50, 60, 7, 70, 80, 90, 255, 10, 20, 30, 255 }),
                    16);
}

static void
test_colour_outside_palette_is_damage(void)
{
    static const uint8_t palette[] = { 10, 20, 30, 40, 50, 60, 70, 80, 90 };
    static const uint8_t samples[] = { 0x1b }; /* the last place is 3, of a palette of 3 */
    PngWish wish = { .width = 4,
                     .height = 1,
                     .bits = 2,
                     .colour_type = PNG_COLOR_TYPE_PALETTE,
                     .samples = samples,
                     .palette = palette,
                     .n_colours = 3 };
    g_autoptr(GByteArray) file = picture_png(&wish);
    assert_refused(file->data, file->len, false, "palette");
}

static void
test_colour_key_becomes_alpha(void)
{
    static const uint8_t grey_samples[] = { 0x1b }; /* 0 1 2 3 */
    PngWish wish = {
        .width = 4, .height = 1, .bits = 2, .samples = grey_samples, .has_key = true, .key = { 2 }
    };
    g_autoptr(GByteArray) grey_file = picture_png(&wish);
    g_autoptr(HwRaster) grey = decode_whole(grey_file, HW_PLANE_STORED);
    g_assert_cmpint(grey->bits, ==, 2);
    g_assert_cmpmem(grey->u8, grey->bytes, ((const uint8_t[]){ 0, 3, 1, 3, 2, 0, 3, 3 }), 8);

    /* 16 bits: all of them count. */
    static const uint8_t colours[] = { 1, 2, 3, 4, 5, 6, 1, 2, 3, 4, 5, 7 };
    PngWish deep = { .width = 2,
                     .height = 1,
                     .bits = 16,
                     .colour_type = PNG_COLOR_TYPE_RGB,
                     .samples = colours,
                     .has_key = true,
                     .key = { 0x0102, 0x0304, 0x0506 } };
    g_autoptr(GByteArray) deep_file = picture_png(&deep);
    g_autoptr(HwRaster) keyed = decode_whole(deep_file, HW_PLANE_STORED);
    g_assert_cmpint(keyed->channels, ==, 4);
    g_assert_cmpmem(keyed->u16, keyed->bytes,
                    ((const uint16_t[]){ 0x0102, 0x0304, 0x0506, 0, 0x0102, 0x0304, 0x0507, 65535 }), 16);
}

static GByteArray *
noise_png(int width, int height)
{
    g_autoptr(GByteArray) noise = noise_bytes((size_t)width * (size_t)height * 3);
    PngWish wish = {
        .width = width, .height = height, .bits = 8, .colour_type = PNG_COLOR_TYPE_RGB, .samples = noise->data
    };
    return picture_png(&wish);
}

static void
test_png_cut_anywhere_is_refused(void)
{
    g_autoptr(GByteArray) file = noise_png(60, 50);
    for (guint size = 0; size < file->len; size += size < 80 || size + 80 > file->len ? 1 : 256)
        assert_refused(file->data, size, false, NULL);
}

static void
test_png_one_byte_changed_is_refused(void)
{
    g_autoptr(GByteArray) file = noise_png(40, 30);
    for (guint at = 0; at < file->len; at += at < 60 || at + 60 > file->len ? 1 : 61) {
        file->data[at] ^= 0x10;
        assert_refused(file->data, file->len, false, NULL);
        file->data[at] ^= 0x10;
    }
    g_autoptr(HwRaster) raster = decode_whole(file, HW_PLANE_STORED);
    g_assert_nonnull(raster);
}

/* CRC-32 as PNG has it (W3C PNG, annex D). */
static uint32_t
crc_of(const uint8_t *bytes, size_t n)
{
    uint32_t crc = 0xffffffff;
    for (size_t i = 0; i < n; i++) {
        crc ^= bytes[i];
        for (int bit = 0; bit < 8; bit++)
            crc = (crc & 1) != 0 ? crc >> 1 ^ 0xedb88320 : crc >> 1;
    }
    return ~crc;
}

static void
put_u32(uint8_t *at, uint32_t value)
{
    for (int i = 0; i < 4; i++)
        at[i] = (uint8_t)(value >> (24 - 8 * i));
}

static void
claim_size(GByteArray *png, uint32_t width, uint32_t height)
{
    put_u32(png->data + 16, width);
    put_u32(png->data + 20, height);
    put_u32(png->data + 29, crc_of(png->data + 12, 17));
}

static void
test_png_that_claims_too_much_is_refused(void)
{
    g_autoptr(GByteArray) file = noise_png(8, 8);
    claim_size(file, 65536, 32768); /* 2^31 pixels */
    assert_refused(file->data, file->len, false, "65536 × 32768");
    claim_size(file, 0x7fffffff, 0x7fffffff);
    assert_refused(file->data, file->len, false, "claims");
    claim_size(file, 0xffffffff, 0xffffffff);
    assert_refused(file->data, file->len, false, "claims");
    claim_size(file, 0, 8);
    assert_refused(file->data, file->len, false, "no width");
    /* Within the limit, but no file of this size can hold it. */
    claim_size(file, 16384, 8192);
    assert_refused(file->data, file->len, false, "cannot hold");
}

/* libpng by itself ends at a million columns. */
static void
test_png_wider_than_a_million_is_read(void)
{
    int width = 1000003;
    g_autoptr(GByteArray) noise = noise_bytes((size_t)width);
    PngWish wish = { .width = width, .height = 1, .bits = 8, .samples = noise->data };
    g_autoptr(GByteArray) file = picture_png(&wish);
    g_autoptr(HwRaster) raster = decode_whole(file, HW_PLANE_STORED);
    g_assert_cmpint(raster->width, ==, width);
    g_assert_cmpmem(raster->u8, raster->bytes, noise->data, noise->len);
}

/* A chunk of text that unpacks to very much is passed by, its CRC checked. */
static void
test_packed_text_is_never_unpacked(void)
{
    static const uint8_t sample = 99;
    g_autoptr(GByteArray) zeros = g_byte_array_new();
    g_byte_array_set_size(zeros, 64 << 20);
    memset(zeros->data, 0, zeros->len);
    g_autoptr(GZlibCompressor) packer = g_zlib_compressor_new(G_ZLIB_COMPRESSOR_FORMAT_ZLIB, 9);
    g_autoptr(GByteArray) text = g_byte_array_new();
    g_byte_array_append(text, (const uint8_t *)"bomb\0", 6);
    uint8_t packed[1 << 18];
    gsize n_read = 0;
    gsize n_written = 0;
    g_assert_cmpint(g_converter_convert(G_CONVERTER(packer), zeros->data, zeros->len, packed, sizeof packed,
                                        G_CONVERTER_INPUT_AT_END, &n_read, &n_written, NULL),
                    ==, G_CONVERTER_FINISHED);
    g_byte_array_append(text, packed, (guint)n_written);
    PngWish wish = { .width = 1,
                     .height = 1,
                     .bits = 8,
                     .samples = &sample,
                     .chunk = "zTXt",
                     .chunk_data = text->data,
                     .chunk_size = text->len };
    g_autoptr(GByteArray) file = picture_png(&wish);
    g_autoptr(HwRaster) raster = decode_whole(file, HW_PLANE_STORED);
    g_assert_cmpuint(raster->u8[0], ==, 99);
    file->data[8 + 25 + 100] ^= 1; /* inside the text */
    assert_refused(file->data, file->len, false, "CRC");
}

/* More picture than the head says is no harmless surplus: the head or the picture is wrong. */
static void
test_png_with_more_rows_than_its_head_is_refused(void)
{
    g_autoptr(GByteArray) file = noise_png(40, 30);
    claim_size(file, 40, 29);
    assert_refused(file->data, file->len, false, NULL);
}

static void
test_colour_chunks_are_noted_not_applied(void)
{
    static const uint8_t samples[] = { 1, 50, 120, 200 };
    static const uint8_t gamma[] = { 0, 0, 0xb1, 0x8f };
    static const uint8_t turned[] = { 'M', 'M', 0, 42, 0, 0, 0, 8, 0, 1, 1, 0x12, 0,
                                      3,   0,   0, 0,  1, 0, 6, 0, 0, 0, 0, 0,    0 };
    static const uint8_t upright[] = { 'I', 'I', 42, 0, 8, 0, 0, 0, 1, 0, 0x12, 1, 3,
                                       0,   1,   0,  0, 0, 1, 0, 0, 0, 0, 0,    0, 0 };
    static const uint8_t chromaticity[32] = { 0 };
    static const struct {
        const char *chunk;
        const uint8_t *data;
        size_t size;
        guint notes;
    } cases[] = {
        { "gAMA", gamma, sizeof gamma, HW_RASTER_NOTE_GAMA },
        { "cHRM", chromaticity, sizeof chromaticity, HW_RASTER_NOTE_CHRM },
        { "iCCP", gamma, sizeof gamma, HW_RASTER_NOTE_ICC },
        { "eXIf", turned, sizeof turned, HW_RASTER_NOTE_ORIENTATION },
        { "eXIf", upright, sizeof upright, 0 },
        { "tEXt", (const uint8_t *)"a\0b", 3, 0 },
    };
    for (size_t i = 0; i < G_N_ELEMENTS(cases); i++) {
        PngWish wish = { .width = 4,
                         .height = 1,
                         .bits = 8,
                         .samples = samples,
                         .chunk = cases[i].chunk,
                         .chunk_data = cases[i].data,
                         .chunk_size = cases[i].size };
        g_autoptr(GByteArray) file = picture_png(&wish);
        g_autoptr(HwRaster) raster = decode_whole(file, HW_PLANE_STORED);
        g_assert_cmpmem(raster->u8, raster->bytes, samples, sizeof samples);
        g_assert_cmpuint(raster->notes, ==, cases[i].notes);
    }
}

/* ---- JPEG ---- */

/* Made by cjpeg with the words given, then compared with djpeg in both planes. */
static void
compare_jpeg(const char *folder, const char *source, const char *const *options, bool y_is_own)
{
    g_autofree char *ppm = g_build_filename(folder, source, NULL);
    g_autofree char *jpg = g_build_filename(folder, "picture.jpg", NULL);
    g_autoptr(GPtrArray) words = g_ptr_array_new();
    g_ptr_array_add(words, (gpointer) "cjpeg");
    for (guint i = 0; options[i] != NULL; i++)
        g_ptr_array_add(words, (gpointer)options[i]);
    g_ptr_array_add(words, (gpointer) "-outfile");
    g_ptr_array_add(words, jpg);
    g_ptr_array_add(words, ppm);
    g_ptr_array_add(words, NULL);
    size_t size = 0;
    g_autofree char *nothing = run((const char *const *)words->pdata, &size);
    g_autofree char *data = NULL;
    g_assert_true(g_file_get_contents(jpg, &data, &size, NULL));
    g_autoptr(GError) error = NULL;
    g_autoptr(HwRaster) stored =
        hw_jpeg_block_decode((const uint8_t *)data, size, HW_PLANE_STORED, "picture.jpg", &error);
    g_assert_no_error(error);
    g_auto(Pnm) colours = { 0 };
    run_pnm((const char *[]){ "djpeg", "-dct", "int", "-pnm", jpg, NULL }, &colours);
    g_assert_cmpint(stored->channels, ==, colours.channels);
    assert_equals_pnm(options[0], stored, 0, stored->channels, &colours);

    g_autoptr(HwRaster) grey =
        hw_jpeg_block_decode((const uint8_t *)data, size, HW_PLANE_GREY, "picture.jpg", &error);
    g_assert_no_error(error);
    g_assert_cmpint(grey->channels, ==, 1);
    if (y_is_own) {
        g_auto(Pnm) luma = { 0 };
        run_pnm((const char *[]){ "djpeg", "-grayscale", "-dct", "int", "-pnm", jpg, NULL }, &luma);
        assert_equals_pnm(options[0], grey, 0, 1, &luma);
    } else {
        g_autoptr(HwRaster) weighed = hw_raster_dup_grey(stored);
        g_assert_cmpmem(grey->u8, grey->bytes, weighed->u8, weighed->bytes);
    }
}

static void
test_jpeg_equals_djpeg(void)
{
    if (!has_program("cjpeg") || !has_program("djpeg"))
        return;
    char *folder = folder_new();
    g_autoptr(GByteArray) scene = scene_rgb(101, 67);
    g_autoptr(GString) ppm = g_string_new("P6\n101 67\n255\n");
    g_string_append_len(ppm, (const char *)scene->data, scene->len);
    folder_write(folder, "scene.ppm", ppm->str, ppm->len);
    static const char *const options[][8] = {
        { "-quality", "85", NULL },
        { "-quality", "85", "-sample", "1x1", NULL },
        { "-quality", "60", "-sample", "2x1", NULL },
        { "-quality", "85", "-progressive", NULL },
        { "-quality", "85", "-grayscale", NULL },
        { "-quality", "30", "-grayscale", "-progressive", NULL },
        { "-quality", "92", "-restart", "1", "-optimize", NULL },
    };
    for (size_t i = 0; i < G_N_ELEMENTS(options); i++)
        compare_jpeg(folder, "scene.ppm", options[i], true);
    compare_jpeg(folder, "scene.ppm", (const char *[]){ "-rgb", NULL }, false);
    folder_remove(folder);
}

static void
test_jpeg_cut_anywhere_is_refused(void)
{
    g_autoptr(GByteArray) scene = noise_bytes(90 * 70 * 3);
    g_autoptr(GByteArray) file = picture_jpeg(scene->data, 90, 70, 3, 90);
    for (guint size = 0; size<file->len; size += size + 80> file->len ? 1 : 64)
        assert_refused(file->data, size, true, size < 3 ? NULL : "cut");
}

static void
test_jpeg_in_printing_colours_is_refused(void)
{
    g_autoptr(GByteArray) noise = noise_bytes(16 * 16 * 4);
    g_autoptr(GByteArray) file = picture_jpeg(noise->data, 16, 16, 4, 90);
    assert_refused(file->data, file->len, true, "CMYK");
}

/* The frame header's place: after SOF0, length. */
static guint
find_frame(const GByteArray *jpeg)
{
    for (guint at = 2; at + 9 < jpeg->len; at += 2 + ((guint)jpeg->data[at + 2] << 8 | jpeg->data[at + 3]))
        if (jpeg->data[at + 1] == 0xc0)
            return at;
    g_assert_not_reached();
}

static void
test_jpeg_of_12_bits_is_refused(void)
{
    g_autoptr(GByteArray) noise = noise_bytes(256);
    g_autoptr(GByteArray) file = picture_jpeg(noise->data, 16, 16, 1, 90);
    file->data[find_frame(file) + 4] = 12;
    assert_refused(file->data, file->len, true, "12 bits");
}

static void
test_jpeg_that_claims_too_much_is_refused(void)
{
    g_autoptr(GByteArray) noise = noise_bytes(256);
    g_autoptr(GByteArray) file = picture_jpeg(noise->data, 16, 16, 1, 90);
    guint at = find_frame(file);
    memset(file->data + at + 5, 0xff, 4);
    assert_refused(file->data, file->len, true, "65535 × 65535");
    memset(file->data + at + 5, 0, 2);
    assert_refused(file->data, file->len, true, "no width or no height");
}

/* A progressive file of very many scans keeps a decoder busy for long. */
static void
test_jpeg_of_very_many_scans_is_refused(void)
{
    g_autoptr(GByteArray) noise = noise_bytes(64);
    g_autoptr(GByteArray) file = picture_jpeg_of_many_scans(noise->data, 8, 8);
    assert_refused(file->data, file->len, true, "scans");
}

static void
test_jpeg_marks_are_noted(void)
{
    static const uint8_t exif[] = { 0xff, 0xe1, 0, 34, 'E', 'x', 'i', 'f', 0,    0, 'I', 'I',
                                    42,   0,    8, 0,  0,   0,   1,   0,   0x12, 1, 3,   0,
                                    1,    0,    0, 0,  3,   0,   0,   0,   0,    0, 0,   0 };
    static const uint8_t profile[] = { 0xff, 0xe2, 0,   16,  'I', 'C', 'C', '_', 'P',
                                       'R',  'O',  'F', 'I', 'L', 'E', 0,   1,   1 };
    g_autoptr(GByteArray) noise = noise_bytes(256);
    g_autoptr(GByteArray) file = picture_jpeg(noise->data, 16, 16, 1, 90);
    g_autoptr(HwRaster) plain = decode_whole(file, HW_PLANE_STORED);
    g_assert_cmpuint(plain->notes, ==, 0);
    g_autoptr(GByteArray) marked = g_byte_array_new();
    g_byte_array_append(marked, file->data, 2);
    g_byte_array_append(marked, exif, sizeof exif);
    g_byte_array_append(marked, profile, sizeof profile);
    g_byte_array_append(marked, file->data + 2, file->len - 2);
    g_autoptr(HwRaster) raster = decode_whole(marked, HW_PLANE_STORED);
    g_assert_cmpuint(raster->notes, ==, HW_RASTER_NOTE_ORIENTATION | HW_RASTER_NOTE_ICC);
    g_assert_cmpmem(raster->u8, raster->bytes, plain->u8, plain->bytes);
}

/* ---- Both ---- */

static void
test_other_files_are_refused(void)
{
    static const char page[] = "<!DOCTYPE html><html><title>404 Not Found</title></html>";
    assert_refused((const uint8_t *)page, sizeof page - 1, false, "neither a PNG nor a JPEG");
    assert_refused((const uint8_t *)"", 0, false, "empty");
    assert_refused((const uint8_t *)"GIF89a\1\0\1\0", 10, true, "neither a PNG nor a JPEG");
}

/* 0.299, 0.587, 0.114 of 65535, rounded by hand; 200 under alpha 128: 65535 × 200 × 128 / 255² = 25800.8. */
static void
test_grey_has_the_weights_of_jpeg(void)
{
    g_autoptr(HwRaster) colours = hw_raster_new(5, 1, 3, 8);
    static const uint8_t samples[] = { 255, 0, 0, 0, 255, 0, 0, 0, 255, 255, 255, 255, 100, 150, 200 };
    memcpy(colours->u8, samples, sizeof samples);
    g_autoptr(HwRaster) grey = hw_raster_dup_grey(colours);
    g_assert_cmpint(grey->bits, ==, 16);
    /* 0.299 · 100 + 0.587 · 150 + 0.114 · 200 = 140.75; × 257 = 36172.75 */
    g_assert_cmpmem(grey->u16, grey->bytes, ((const uint16_t[]){ 19595, 38469, 7471, 65535, 36173 }), 10);

    g_autoptr(HwRaster) clear = hw_raster_new(2, 1, 2, 8);
    memcpy(clear->u8, ((const uint8_t[]){ 200, 128, 255, 0 }), 4);
    g_autoptr(HwRaster) over_black = hw_raster_dup_grey(clear);
    g_assert_cmpmem(over_black->u16, over_black->bytes, ((const uint16_t[]){ 25801, 0 }), 4);

    g_autoptr(HwRaster) deep = hw_raster_new(1, 1, 4, 16);
    memcpy(deep->u16, ((const uint16_t[]){ 65535, 65535, 65535, 32768 }), 8);
    g_autoptr(HwRaster) half = hw_raster_dup_grey(deep);
    g_assert_cmpuint(half->u16[0], ==, 32768);

    g_autoptr(HwRaster) own = hw_raster_new(1, 1, 1, 4);
    g_autoptr(HwRaster) same = hw_raster_dup_grey(own);
    g_assert_true(same == own);
}

static void
test_mirroring_keeps_pixels_whole(void)
{
    g_autoptr(HwRaster) colours = hw_raster_new(3, 2, 3, 8);
    for (guint i = 0; i < 18; i++)
        colours->u8[i] = (uint8_t)i;
    hw_raster_mirror(colours);
    g_assert_cmpmem(colours->u8, 18,
                    ((const uint8_t[]){ 6, 7, 8, 3, 4, 5, 0, 1, 2, 15, 16, 17, 12, 13, 14, 9, 10, 11 }), 18);
    g_autoptr(HwRaster) deep = hw_raster_new(2, 1, 4, 16);
    for (guint i = 0; i < 8; i++)
        deep->u16[i] = (uint16_t)(1000 + i);
    hw_raster_mirror(deep);
    g_assert_cmpmem(deep->u16, 16, ((const uint16_t[]){ 1004, 1005, 1006, 1007, 1000, 1001, 1002, 1003 }),
                    16);
}

int
main(int argc, char **argv)
{
    g_test_init(&argc, &argv, NULL);
    g_test_add_func("/decoders/png_suite_equals_pngtopnm", test_png_suite_equals_pngtopnm);
    g_test_add_func("/decoders/png_suite_broken_is_refused", test_png_suite_broken_is_refused);
    g_test_add_func("/decoders/png_samples_are_those_written", test_png_samples_are_those_written);
    g_test_add_func("/decoders/palette_becomes_colours", test_palette_becomes_colours);
    g_test_add_func("/decoders/colour_outside_palette_is_damage", test_colour_outside_palette_is_damage);
    g_test_add_func("/decoders/colour_key_becomes_alpha", test_colour_key_becomes_alpha);
    g_test_add_func("/decoders/png_cut_anywhere_is_refused", test_png_cut_anywhere_is_refused);
    g_test_add_func("/decoders/png_one_byte_changed_is_refused", test_png_one_byte_changed_is_refused);
    g_test_add_func("/decoders/png_that_claims_too_much_is_refused",
                    test_png_that_claims_too_much_is_refused);
    g_test_add_func("/decoders/png_wider_than_a_million_is_read", test_png_wider_than_a_million_is_read);
    g_test_add_func("/decoders/packed_text_is_never_unpacked", test_packed_text_is_never_unpacked);
    g_test_add_func("/decoders/png_with_more_rows_than_its_head_is_refused",
                    test_png_with_more_rows_than_its_head_is_refused);
    g_test_add_func("/decoders/colour_chunks_are_noted_not_applied",
                    test_colour_chunks_are_noted_not_applied);
    g_test_add_func("/decoders/jpeg_equals_djpeg", test_jpeg_equals_djpeg);
    g_test_add_func("/decoders/jpeg_cut_anywhere_is_refused", test_jpeg_cut_anywhere_is_refused);
    g_test_add_func("/decoders/jpeg_in_printing_colours_is_refused",
                    test_jpeg_in_printing_colours_is_refused);
    g_test_add_func("/decoders/jpeg_of_12_bits_is_refused", test_jpeg_of_12_bits_is_refused);
    g_test_add_func("/decoders/jpeg_that_claims_too_much_is_refused",
                    test_jpeg_that_claims_too_much_is_refused);
    g_test_add_func("/decoders/jpeg_of_very_many_scans_is_refused", test_jpeg_of_very_many_scans_is_refused);
    g_test_add_func("/decoders/jpeg_marks_are_noted", test_jpeg_marks_are_noted);
    g_test_add_func("/decoders/other_files_are_refused", test_other_files_are_refused);
    g_test_add_func("/decoders/grey_has_the_weights_of_jpeg", test_grey_has_the_weights_of_jpeg);
    g_test_add_func("/decoders/mirroring_keeps_pixels_whole", test_mirroring_keeps_pixels_whole);
    return g_test_run();
}
