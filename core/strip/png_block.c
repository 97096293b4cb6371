/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/base/limits.h"
#include "core/strip/image_block.h"
#include "core/strip/image_info.h"
#include "core/strip/strip_error.h"

#include <gio/gio.h>
#include <png.h>
#include <setjmp.h>
#include <stdbool.h>
#include <string.h>

/* What libpng's callbacks share. */
typedef struct {
    const uint8_t *data;
    size_t size;
    size_t place;
    bool cut;         /* it asked for more than there is */
    char reason[128]; /* its first complaint */
} Reader;

typedef struct {
    png_structp png;
    png_infop info;
} Decoder;

static void
keep_reason(Reader *reader, const char *message)
{
    if (reader->reason[0] == '\0')
        g_strlcpy(reader->reason, message, sizeof reader->reason);
}

static G_NORETURN void
on_error(png_structp png, png_const_charp message)
{
    keep_reason(png_get_error_ptr(png), message);
    png_longjmp(png, 1);
}

/* Only the chunks that make the picture are looked at, so each warning is about its pixels: an error. */
static void
on_warning(png_structp png, png_const_charp message)
{
    on_error(png, message);
}

static void
on_read(png_structp png, png_bytep bytes, size_t n)
{
    Reader *reader = png_get_io_ptr(png);
    if (reader->size - reader->place < n) {
        reader->cut = true;
        png_error(png, "the file ends early");
    }
    memcpy(bytes, reader->data + reader->place, n);
    reader->place += n;
}

static void
set_up(const Decoder *decoder, Reader *reader)
{
    png_structp png = decoder->png;
    png_set_read_fn(png, reader, on_read);
    png_set_user_limits(png, 0x7fffffff, 0x7fffffff);
    png_set_chunk_cache_max(png, 16);
    png_set_chunk_malloc_max(png, 1 << 20);
    png_set_benign_errors(png, 0);
    png_set_crc_action(png, PNG_CRC_ERROR_QUIT, PNG_CRC_ERROR_QUIT);
    /* All but IHDR, PLTE, tRNS, IDAT and IEND pass by: their CRC is checked, nothing is unpacked. */
    png_set_keep_unknown_chunks(png, PNG_HANDLE_CHUNK_NEVER, NULL, -1);
    png_read_info(png, decoder->info);
    png_set_packing(png);
    if (G_BYTE_ORDER == G_LITTLE_ENDIAN)
        png_set_swap(png);
}

/* Nothing with a clean-up of its own may be live in the functions that are jumped back to. */
static bool
read_head(const Decoder *decoder, Reader *reader)
{
    if (setjmp(png_jmpbuf(decoder->png)) != 0)
        return false;
    set_up(decoder, reader);
    return true;
}

static void
read_all_rows(const Decoder *decoder, HwRaster *raster)
{
    int n_passes = png_set_interlace_handling(decoder->png);
    png_read_update_info(decoder->png, decoder->info);
    size_t stride = raster->bytes / (size_t)raster->height;
    if (png_get_rowbytes(decoder->png, decoder->info) != stride)
        png_error(decoder->png, "its rows are not as long as its head says");
    for (int pass = 0; pass < n_passes; pass++)
        for (int row = 0; row < raster->height; row++)
            png_read_row(decoder->png, raster->u8 + stride * (size_t)row, NULL);
    png_read_end(decoder->png, NULL);
}

static bool
read_rows(const Decoder *decoder, HwRaster *raster)
{
    if (setjmp(png_jmpbuf(decoder->png)) != 0)
        return false;
    read_all_rows(decoder, raster);
    return true;
}

static void
set_reason(GError **error, const Reader *reader, const char *file)
{
    if (reader->cut)
        g_set_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED, "%s is cut: it ends inside the picture",
                    file);
    else
        g_set_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED, "%s is altered and cannot be decoded (%s)",
                    file, reader->reason);
}

static void
set_no_memory(GError **error, const char *file)
{
    g_set_error(error, G_IO_ERROR, G_IO_ERROR_FAILED,
                "%s does not fit into memory; close other programs and try again.", file);
}

/* Palette places turned into colours. A place the palette does not have is damage. */
static HwRaster *
look_up_palette(const Decoder *decoder, const HwRaster *places, const char *file, GError **error)
{
    png_colorp colours = NULL;
    int n_colours = 0;
    png_get_PLTE(decoder->png, decoder->info, &colours, &n_colours);
    png_bytep alphas = NULL;
    int n_alphas = 0;
    png_get_tRNS(decoder->png, decoder->info, &alphas, &n_alphas, NULL);
    bool has_alpha = n_alphas > 0 && alphas != NULL;
    g_autoptr(HwRaster) raster = hw_raster_new(places->width, places->height, has_alpha ? 4 : 3, 8);
    if (raster == NULL) {
        set_no_memory(error, file);
        return NULL;
    }
    size_t n = places->bytes;
    uint8_t *to = raster->u8;
    for (size_t i = 0; i < n; i++) {
        int place = places->u8[i];
        if (place >= n_colours) {
            g_set_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED,
                        "%s is altered: a pixel has colour %d of a palette of %d", file, place, n_colours);
            return NULL;
        }
        *to++ = colours[place].red;
        *to++ = colours[place].green;
        *to++ = colours[place].blue;
        if (has_alpha)
            *to++ = place < n_alphas ? alphas[place] : 255;
    }
    return g_steal_pointer(&raster);
}

/* An alpha channel, 0 where all samples are those of the key, else the largest. */
static HwRaster *
add_key_alpha(const HwRaster *plain, const unsigned key[3], const char *file, GError **error)
{
    int channels = plain->channels;
    unsigned max = (1u << plain->bits) - 1;
    HwRaster *raster = hw_raster_new(plain->width, plain->height, channels + 1, plain->bits);
    if (raster == NULL) {
        set_no_memory(error, file);
        return NULL;
    }
    size_t n = (size_t)plain->width * (size_t)plain->height;
    size_t from = 0;
    size_t to = 0;
    for (size_t i = 0; i < n; i++) {
        bool is_key = true;
        for (int c = 0; c < channels; c++, from++, to++) {
            unsigned sample = plain->bits == 16 ? plain->u16[from] : plain->u8[from];
            is_key = is_key && sample == (key[c] & max);
            if (plain->bits == 16)
                raster->u16[to] = (uint16_t)sample;
            else
                raster->u8[to] = (uint8_t)sample;
        }
        if (plain->bits == 16)
            raster->u16[to++] = is_key ? 0 : (uint16_t)max;
        else
            raster->u8[to++] = is_key ? 0 : (uint8_t)max;
    }
    return raster;
}

/* What the chunks passed by say of colours; the file is known to be whole. */
static guint
find_notes(const uint8_t *data, size_t size)
{
    guint notes = 0;
    size_t place = 8;
    while (size - place >= 12) {
        const uint8_t *chunk = data + place;
        size_t length = (size_t)chunk[0] << 24 | (size_t)chunk[1] << 16 | (size_t)chunk[2] << 8 | chunk[3];
        const char *type = (const char *)chunk + 4;
        if (length > size - place - 12 || memcmp(type, "IEND", 4) == 0)
            break;
        if (memcmp(type, "gAMA", 4) == 0)
            notes |= HW_RASTER_NOTE_GAMA;
        else if (memcmp(type, "iCCP", 4) == 0)
            notes |= HW_RASTER_NOTE_ICC;
        else if (memcmp(type, "cHRM", 4) == 0)
            notes |= HW_RASTER_NOTE_CHRM;
        else if (memcmp(type, "eXIf", 4) == 0 && hw_image_exif_orientation(chunk + 8, length) != 1)
            notes |= HW_RASTER_NOTE_ORIENTATION;
        place += 12 + length;
    }
    return notes;
}

static HwRaster *
decode(const Decoder *decoder, Reader *reader, const char *file, GError **error)
{
    if (!read_head(decoder, reader)) {
        set_reason(error, reader, file);
        return NULL;
    }
    png_structp png = decoder->png;
    int width = (int)png_get_image_width(png, decoder->info);
    int height = (int)png_get_image_height(png, decoder->info);
    int depth = png_get_bit_depth(png, decoder->info);
    int channels = png_get_channels(png, decoder->info);
    int colour_type = png_get_color_type(png, decoder->info);

    /* Deflate makes at most 1,032 bytes of one (a match of 258 in two bits): what promises more is cut, and
     * is not given the memory it asks for. */
    uint64_t raw = ((uint64_t)width * (uint64_t)channels * (uint64_t)depth + 7) / 8 * (uint64_t)height;
    if (raw / 1032 > reader->size) {
        g_set_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED,
                    "%s is cut: its %" G_GSIZE_FORMAT " bytes cannot hold the %d × %d pixels it claims", file,
                    reader->size, width, height);
        return NULL;
    }
    g_autoptr(HwRaster) raster = hw_raster_new(width, height, channels, depth);
    if (raster == NULL) {
        set_no_memory(error, file);
        return NULL;
    }
    if (!read_rows(decoder, raster)) {
        set_reason(error, reader, file);
        return NULL;
    }
    if (colour_type == PNG_COLOR_TYPE_PALETTE)
        return look_up_palette(decoder, raster, file, error);
    png_color_16p colour = NULL;
    if (png_get_tRNS(png, decoder->info, NULL, NULL, &colour) != 0 && colour != NULL) {
        unsigned grey_key[3] = { colour->gray, 0, 0 };
        unsigned colour_key[3] = { colour->red, colour->green, colour->blue };
        return add_key_alpha(raster, channels == 1 ? grey_key : colour_key, file, error);
    }
    return g_steal_pointer(&raster);
}

HwRaster *
hw_png_block_decode(const uint8_t *data, size_t size, const char *file, GError **error)
{
    HwImageInfo about;
    if (!hw_image_info_parse(data, size, file, &about, error))
        return NULL;
    Reader reader = { .data = data, .size = size };
    Decoder decoder = { png_create_read_struct(PNG_LIBPNG_VER_STRING, &reader, on_error, on_warning), NULL };
    if (decoder.png != NULL)
        decoder.info = png_create_info_struct(decoder.png);
    HwRaster *raster = NULL;
    if (decoder.info == NULL)
        set_no_memory(error, file);
    else
        raster = decode(&decoder, &reader, file, error);
    if (raster != NULL)
        raster->notes = find_notes(data, size);
    png_destroy_read_struct(&decoder.png, &decoder.info, NULL);
    return raster;
}
