/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/base/base_error.h"
#include "core/base/digest.h"
#include "core/base/input.h"
#include "core/base/limits.h"
#include "core/strip/image_block.h"
#include "core/strip/image_info.h"
#include "core/strip/strip_error.h"
#include "core/strip/strip_parts.h"

#include <math.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

/* The block's file as it stands, its digest checked. NULL with the reason. */
static char *
read_file(const HwStripTable *table, const HwBlock *about, size_t *size, GError **error)
{
    int fd = hw_recording_open_file(table->recording, about->file, error);
    if (fd < 0)
        return NULL;
    GError *failure = NULL;
    g_autofree char *data =
        hw_input_read_fd(fd, about->file, (size_t)HW_MAX_BLOCK_FILE_BYTES, size, &failure);
    struct stat status;
    bool too_long = fstat(fd, &status) == 0 && status.st_size > HW_MAX_BLOCK_FILE_BYTES;
    close(fd);
    if (data == NULL) {
        /* No memory is not the file's fault: nothing is remembered of it. */
        bool no_memory = g_error_matches(failure, HW_BASE_ERROR, HW_BASE_ERROR_RANGE) && !too_long;
        g_autofree char *reason = g_strdup(failure->message);
        g_error_free(failure);
        if (g_str_has_suffix(reason, "."))
            reason[strlen(reason) - 1] = '\0';
        if (no_memory)
            g_set_error(error, G_IO_ERROR, G_IO_ERROR_FAILED, "%s; close other programs and try again.",
                        reason);
        else
            g_set_error_literal(error, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED, reason);
        return NULL;
    }
    if (about->sha256 != NULL) {
        HwDigest digest = hw_digest_bytes(data, *size);
        if (!hw_digest_equal_hex(&digest, about->sha256)) {
            g_set_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED,
                        "%s is altered: its SHA-256 is not the manifest's", about->file);
            return NULL;
        }
    }
    return g_steal_pointer(&data);
}

static HwRaster *
decode_plane(const uint8_t *data, size_t size, HwPlane plane, const char *file, GError **error)
{
    if (hw_image_kind(data, size) == HW_IMAGE_JPEG)
        return hw_jpeg_block_decode(data, size, plane, file, error);
    g_autoptr(HwRaster) raster = hw_png_block_decode(data, size, file, error);
    if (raster == NULL || plane == HW_PLANE_STORED)
        return g_steal_pointer(&raster);
    HwRaster *grey = hw_raster_dup_grey(raster);
    if (grey == NULL)
        g_set_error(error, G_IO_ERROR, G_IO_ERROR_FAILED,
                    "%s does not fit into memory; close other programs and try again.", file);
    return grey;
}

/* From the file to samples in the strip's order, held to what the recording says of them. */
static HwRaster *
decode_file(const HwStripTable *table, guint index, HwPlane plane, GCancellable *cancellable, GError **error)
{
    const HwBlock *about = hw_recording_get_block(table->recording, index);
    const HwStripBlock *block = &table->blocks[index];
    if (g_cancellable_set_error_if_cancelled(cancellable, error))
        return NULL;
    size_t size = 0;
    g_autofree char *data = read_file(table, about, &size, error);
    if (data == NULL || g_cancellable_set_error_if_cancelled(cancellable, error))
        return NULL;

    /* A wrong size is told from the head, before anything is decoded. */
    HwImageInfo head;
    if (!hw_image_info_parse((const uint8_t *)data, size, about->file, &head, error))
        return NULL;
    g_autofree char *reason = NULL;
    if (head.width != block->n_cols)
        reason = hw_strip_dup_count_reason(about->file, head.width, block->n_cols);
    else if (head.height != table->n_rows)
        reason = hw_strip_dup_rows_reason(about->file, head.height, table->n_rows);
    if (reason != NULL) {
        g_set_error_literal(error, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED, reason);
        return NULL;
    }
    HwRaster *raster = decode_plane((const uint8_t *)data, size, plane, about->file, error);
    if (raster != NULL && hw_recording_get_later(table->recording) == HW_SIDE_LEFT)
        hw_raster_mirror(raster);
    return raster;
}

/* As above; counts it, and remembers damage. */
static HwRaster *
decode_block(HwStripTable *table, guint index, HwPlane plane, GCancellable *cancellable, GError **error)
{
    GError *failure = NULL;
    HwRaster *raster = decode_file(table, index, plane, cancellable, &failure);
    pthread_mutex_lock(&table->lock);
    table->n_decoded++;
    pthread_mutex_unlock(&table->lock);
    if (g_error_matches(failure, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED))
        hw_strip_table_note_damage(table, index, failure->message);
    if (failure != NULL)
        g_propagate_error(error, failure);
    return raster;
}

/* What a cache's maker is handed. */
typedef struct {
    HwStrip *strip;
    guint block;
    HwPlane plane;
    GCancellable *cancellable;
} Request;

/* The file as it was found, and what the strip expects of it: strips of a recording that grows share their
 * blocks, strips that number them otherwise do not. Only of blocks that have a file. */
static char *
dup_key(HwStrip *strip, guint block, const char *what)
{
    const HwStripTable *table = strip->table;
    return g_strdup_printf("%s\n%" G_GINT64_FORMAT " %d %d %s", table->blocks[block].key,
                           table->blocks[block].n_cols, table->n_rows,
                           (int)hw_recording_get_later(table->recording), what);
}

static const char *
plane_word(HwPlane plane)
{
    return plane == HW_PLANE_GREY ? "grey" : "stored";
}

static HwRaster *
make_plane(gpointer user_data, GError **error)
{
    const Request *request = user_data;
    if (request->plane == HW_PLANE_GREY) {
        /* Samples that are grey already need no second decode. */
        g_autofree char *key = dup_key(request->strip, request->block, plane_word(HW_PLANE_STORED));
        g_autoptr(HwRaster) stored = hw_block_cache_peek(request->strip->table->cache, key);
        if (stored != NULL && stored->channels == 1)
            return g_steal_pointer(&stored);
    }
    return decode_block(request->strip->table, request->block, request->plane, request->cancellable, error);
}

/* From the cache, or made. A failure that another strip's decode left there is noted for this one too. */
static HwRaster *
get_cached(const Request *request, const char *what, HwBlockMaker make, GError **error)
{
    HwStripTable *table = request->strip->table;
    GError *failure = NULL;
    if (request->strip->damage[request->block] != NULL) {
        g_set_error_literal(error, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED,
                            request->strip->damage[request->block]);
        return NULL;
    }
    g_autofree char *key = dup_key(request->strip, request->block, what);
    HwRaster *raster = hw_block_cache_get(table->cache, key, make, (gpointer)request, &failure);
    if (raster != NULL)
        return raster;
    if (g_error_matches(failure, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED))
        hw_strip_table_note_damage(table, request->block, failure->message);
    g_propagate_error(error, failure);
    return NULL;
}

HwRaster *
hw_strip_get_raster(HwStrip *strip, guint block, HwPlane plane, GCancellable *cancellable, GError **error)
{
    g_return_val_if_fail(block < strip->table->n_blocks, NULL);
    Request request = { strip, block, plane, cancellable };
    return get_cached(&request, plane_word(plane), make_plane, error);
}

HwRaster *
hw_strip_peek_raster(HwStrip *strip, guint block, HwPlane plane)
{
    g_return_val_if_fail(block < strip->table->n_blocks, NULL);
    if (strip->damage[block] != NULL)
        return NULL;
    g_autofree char *key = dup_key(strip, block, plane_word(plane));
    return hw_block_cache_peek(strip->table->cache, key);
}

/* Red, green and blue of one sample in parts of 255, under its alpha over black. */
static void
read_colour(const HwRaster *raster, int column, int row, float scale, float colour[3])
{
    bool has_alpha = raster->channels == 2 || raster->channels == 4;
    float alpha =
        has_alpha ? (float)hw_raster_get(raster, column, row, raster->channels - 1) * scale / 255.0f : 1.0f;
    for (int c = 0; c < 3; c++)
        colour[c] = (float)hw_raster_get(raster, column, row, raster->channels >= 3 ? c : 0) * scale * alpha;
}

static HwRaster *
reduce(const HwRaster *raster)
{
    int width = (raster->width + HW_REDUCED_COLUMNS - 1) / HW_REDUCED_COLUMNS;
    int height = (raster->height + HW_REDUCED_ROWS - 1) / HW_REDUCED_ROWS;
    HwRaster *reduced = hw_raster_new(width, height, 4, 8);
    if (reduced == NULL)
        return NULL;
    float scale = 255.0f / (float)((1u << raster->bits) - 1);
    g_autofree float *sums = g_new(float, 3 * (size_t)width);
    uint8_t *to = reduced->u8;
    for (int y = 0; y < height; y++) {
        int first_row = y * HW_REDUCED_ROWS;
        int end_row = MIN(first_row + HW_REDUCED_ROWS, raster->height);
        memset(sums, 0, 3 * (size_t)width * sizeof *sums);
        for (int row = first_row; row < end_row; row++) {
            for (int column = 0; column < raster->width; column++) {
                float colour[3];
                float *sum = sums + 3 * (column / HW_REDUCED_COLUMNS);
                read_colour(raster, column, row, scale, colour);
                sum[0] += colour[0];
                sum[1] += colour[1];
                sum[2] += colour[2];
            }
        }
        for (int x = 0; x < width; x++) {
            int n_cols = MIN(HW_REDUCED_COLUMNS, raster->width - x * HW_REDUCED_COLUMNS);
            float n = (float)(n_cols * (end_row - first_row));
            for (int c = 0; c < 3; c++)
                *to++ = (uint8_t)(sums[3 * x + c] / n + 0.5f);
            *to++ = 255;
        }
    }
    return reduced;
}

/* The block is taken from the cache if it is there but never put there: an overview of a long recording would
 * drive out everything else. */
static HwRaster *
make_reduced(gpointer user_data, GError **error)
{
    const Request *request = user_data;
    g_autoptr(HwRaster) raster = hw_strip_peek_raster(request->strip, request->block, HW_PLANE_STORED);
    if (raster == NULL)
        raster =
            decode_block(request->strip->table, request->block, HW_PLANE_STORED, request->cancellable, error);
    if (raster == NULL)
        return NULL;
    HwRaster *reduced = reduce(raster);
    if (reduced == NULL)
        g_set_error_literal(error, G_IO_ERROR, G_IO_ERROR_FAILED,
                            "The overview does not fit into memory; close other programs and try again.");
    return reduced;
}

HwRaster *
hw_strip_get_reduced(HwStrip *strip, guint block, GCancellable *cancellable, GError **error)
{
    g_return_val_if_fail(block < strip->table->n_blocks, NULL);
    Request request = { strip, block, HW_PLANE_STORED, cancellable };
    return get_cached(&request, "reduced", make_reduced, error);
}

HwRaster *
hw_strip_peek_reduced(HwStrip *strip, guint block)
{
    g_return_val_if_fail(block < strip->table->n_blocks, NULL);
    if (strip->damage[block] != NULL)
        return NULL;
    g_autofree char *key = dup_key(strip, block, "reduced");
    return hw_block_cache_peek(strip->table->cache, key);
}

bool
hw_strip_check_block(HwStrip *strip, guint block, guint *notes, GCancellable *cancellable, GError **error)
{
    g_return_val_if_fail(block < strip->table->n_blocks, false);
    if (strip->table->blocks[block].damage != NULL) {
        g_set_error_literal(error, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED,
                            strip->table->blocks[block].damage);
        return false;
    }
    g_autoptr(HwRaster) raster = decode_block(strip->table, block, HW_PLANE_STORED, cancellable, error);
    if (raster == NULL)
        return false;
    *notes = raster->notes;
    return true;
}

/* Light of the columns [first, first + n) of a block's row. */
static void
read_block_light(HwStrip *strip, const HwRaster *grey, int row, int first, int n, float *light)
{
    const HwTransfer *transfer = &hw_recording_get_scan(strip->table->recording)->transfer;
    double max = (double)((1u << grey->bits) - 1);
    if (grey->bits == 16) {
        for (int i = 0; i < n; i++)
            light[i] = (float)hw_transfer_to_light(transfer, hw_raster_get(grey, first + i, row, 0) / max);
        return;
    }
    float table[256];
    for (int code = 0; code < 1 << grey->bits; code++)
        table[code] = (float)hw_transfer_to_light(transfer, code / max);
    for (int i = 0; i < n; i++)
        light[i] = table[hw_raster_get(grey, first + i, row, 0)];
}

bool
hw_strip_read_light_row(HwStrip *strip, int row, int64_t first_col, int n, float *light,
                        GCancellable *cancellable, GError **error)
{
    if (row < 0 || row >= strip->table->n_rows) {
        g_set_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_PLACE,
                    "The picture has no row %d; its rows are 0 to %d.", row, strip->table->n_rows - 1);
        return false;
    }
    for (int i = 0; i < n; i++)
        light[i] = NAN;
    int64_t end_col = MIN(first_col + n, hw_strip_get_n_columns(strip));
    int64_t col = MAX(first_col, 0);
    while (col < end_col) {
        guint block;
        double in_block;
        if (!hw_strip_locate(strip, (double)col, &block, &in_block))
            break;
        const HwStripBlock *about = &strip->table->blocks[block];
        int64_t stop_col = MIN(end_col, about->first_col + about->n_cols);
        GError *failure = NULL;
        g_autoptr(HwRaster) grey = hw_strip_get_raster(strip, block, HW_PLANE_GREY, cancellable, &failure);
        if (grey != NULL) {
            read_block_light(strip, grey, row, (int)(col - about->first_col), (int)(stop_col - col),
                             light + (col - first_col));
        } else if (g_error_matches(failure, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED)) {
            g_error_free(failure);
        } else {
            g_propagate_error(error, failure);
            return false;
        }
        col = stop_col;
    }
    return true;
}
