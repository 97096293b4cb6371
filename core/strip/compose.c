/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/strip/compose.h"

#include "core/strip/strip_error.h"

#include <math.h>
#include <string.h>

/* From here on an overview is made of reduced blocks. */
#define REDUCED_CELLS_PER_PX 32.0
#define REDUCED_ROWS_PER_PX 4.0

enum { N_TONES = 4096 };

/* A stretch of the axis that lies in the view and in one block or one void. Cells are whole. */
typedef struct {
    int64_t first_cell;
    int64_t end_cell;
    bool picture;
    guint block;
    int64_t first_col; /* in the block: of first_cell */
} Part;

/* What one pixel takes of a line of source cells, in one direction. */
typedef struct {
    int first;
    int last;
    float first_weight; /* cells between count 1 */
    float last_weight;  /* 0 where first == last */
    float total;
} Box;

/* One row of pixels: what it takes of the picture's height. */
typedef struct {
    double start_row; /* clipped to the picture */
    double end_row;
    float inside; /* 0 … 1: how much of the pixel is picture */
} RowSpan;

/* A pixel column that more than one part, or the end of the axis, shares. */
typedef struct {
    int t;
    float picture; /* weights; the rest lies beyond the axis */
    float empty;
    float *sums; /* height × RGB, picture only */
} Seam;

typedef struct {
    HwStrip *strip;
    const HwViewMap *map;
    GCancellable *cancellable;
    bool cached_only;
    bool holes;
    bool reduced;
    bool box_columns; /* else nearest */
    bool box_rows;
    uint32_t *pixels;
    int stride;
    double *edges; /* width + 1 axis positions, rising: pixel t in time order covers [t], [t + 1] */
    RowSpan *rows;
    GArray *seams;
    int *seam_at; /* place in seams of a pixel t, −1 where it has none */
    bool as_stored;
    uint8_t tone8[256];
    uint8_t tone_fine[N_TONES];
} Composer;

/* ---- Tone and colours ---- */

static double
apply_tone(const HwTone *tone, double code)
{
    double shown = (pow(code, 1.0 / tone->gamma) - 0.5) * tone->contrast + 0.5 + tone->brightness;
    return CLAMP(shown, 0.0, 1.0);
}

static void
set_tone(Composer *self, const HwTone *tone)
{
    self->as_stored = tone->brightness == 0.0 && tone->contrast == 1.0 && tone->gamma == 1.0;
    for (int i = 0; i < 256; i++)
        self->tone8[i] = self->as_stored ? (uint8_t)i : (uint8_t)(apply_tone(tone, i / 255.0) * 255.0 + 0.5);
    for (int i = 0; i < N_TONES; i++)
        self->tone_fine[i] = (uint8_t)(apply_tone(tone, i / (double)(N_TONES - 1)) * 255.0 + 0.5);
}

/* A mean, 0 … 255, as it is shown. */
static inline uint32_t
show(const Composer *self, float mean)
{
    if (self->as_stored)
        return (uint32_t)(mean + 0.5f);
    return self->tone_fine[(int)(mean * ((N_TONES - 1) / 255.0f) + 0.5f)];
}

static inline uint32_t
pack(uint32_t red, uint32_t green, uint32_t blue)
{
    return 0xff000000u | red << 16 | green << 8 | blue;
}

static uint32_t
mix(uint32_t colour, uint32_t other, float share)
{
    if (share >= 1.0f)
        return colour;
    uint32_t mixed = 0xff000000u;
    for (int shift = 0; shift < 24; shift += 8) {
        float a = (float)(colour >> shift & 0xff);
        float b = (float)(other >> shift & 0xff);
        mixed |= (uint32_t)(a * share + b * (1.0f - share) + 0.5f) << shift;
    }
    return mixed;
}

/* ---- Where things are ---- */

static inline int
pixel_x(const Composer *self, int t)
{
    return self->map->later_left ? self->map->width_px - 1 - t : t;
}

static void
lay_out_edges(Composer *self)
{
    const HwViewMap *map = self->map;
    for (int t = 0; t <= map->width_px; t++)
        self->edges[t] = hw_view_map_cell(map, map->later_left ? map->width_px - t : t);
    double n_rows = hw_strip_get_n_rows(self->strip);
    for (int y = 0; y < map->height_px; y++) {
        double start = hw_view_map_row(map, y);
        double end = hw_view_map_row(map, y + 1);
        RowSpan *row = &self->rows[y];
        if (self->box_rows) {
            row->start_row = CLAMP(start, 0.0, n_rows);
            row->end_row = CLAMP(end, 0.0, n_rows);
            row->inside = (float)((row->end_row - row->start_row) / (end - start));
        } else {
            double middle = floor((start + end) / 2.0);
            row->start_row = middle;
            row->end_row = middle + 1.0;
            row->inside = middle >= 0.0 && middle < n_rows ? 1.0f : 0.0f;
        }
    }
}

/* Adds what of a run is in view, block by block. */
static void
add_run(const Composer *self, const HwAxisSpan *span, int64_t from_cell, int64_t end_cell, GArray *parts)
{
    while (from_cell < end_cell) {
        int64_t column = span->first_col + (from_cell - span->first_cell);
        Part part = { .first_cell = from_cell, .end_cell = end_cell, .picture = true };
        double in_block;
        if (!hw_strip_locate(self->strip, (double)column, &part.block, &in_block))
            return;
        int64_t block_col;
        int64_t n_cols;
        hw_strip_get_block_columns(self->strip, part.block, &block_col, &n_cols);
        part.first_col = column - block_col;
        part.end_cell = MIN(end_cell, from_cell + n_cols - part.first_col);
        g_array_append_val(parts, part);
        from_cell = part.end_cell;
    }
}

static GArray *
find_parts(const Composer *self, const HwAxis *axis)
{
    GArray *parts = g_array_new(FALSE, FALSE, sizeof(Part));
    double first = self->edges[0];
    double last = self->edges[self->map->width_px];
    if (hw_axis_get_n_cells(axis) == 0 || last <= 0.0 || first >= (double)hw_axis_get_n_cells(axis))
        return parts;
    int64_t from_cell = (int64_t)floor(MAX(first, 0.0));
    int64_t end_cell = (int64_t)ceil(MIN(last, (double)hw_axis_get_n_cells(axis)));
    for (guint i = hw_axis_span_at(axis, (double)from_cell); i < hw_axis_get_n_spans(axis); i++) {
        const HwAxisSpan *span = hw_axis_get_span(axis, i);
        int64_t from = MAX(from_cell, span->first_cell);
        int64_t end = MIN(end_cell, span->first_cell + span->n_cells);
        if (span->first_cell >= end_cell)
            break;
        if (from >= end)
            continue;
        if (span->void_index < 0) {
            add_run(self, span, from, end, parts);
        } else {
            Part part = { .first_cell = from, .end_cell = end };
            g_array_append_val(parts, part);
        }
    }
    return parts;
}

/* The pixels t, end excluded, that take something of a part. */
static void
pixels_of_part(const Composer *self, const Part *part, int *first_t, int *end_t)
{
    const HwViewMap *map = self->map;
    double scale = map->cells_per_px;
    double from = ((double)part->first_cell - self->edges[0]) / scale;
    double end = ((double)part->end_cell - self->edges[0]) / scale;
    int t = (int)CLAMP(floor(from) - 1.0, 0.0, (double)map->width_px);
    int stop = (int)CLAMP(ceil(end) + 1.0, 0.0, (double)map->width_px);
    /* The division may be off by a hair; the edges themselves decide. */
    if (self->box_columns) {
        while (t < stop && self->edges[t + 1] <= (double)part->first_cell)
            t++;
        while (stop > t && self->edges[stop - 1] >= (double)part->end_cell)
            stop--;
    } else {
        while (t < stop && floor((self->edges[t] + self->edges[t + 1]) / 2.0) < (double)part->first_cell)
            t++;
        while (stop > t && floor((self->edges[stop - 1] + self->edges[stop]) / 2.0) >= (double)part->end_cell)
            stop--;
    }
    *first_t = t;
    *end_t = stop;
}

static bool
is_shared(const Composer *self, const Part *part, int t)
{
    return self->box_columns &&
           (self->edges[t] < (double)part->first_cell || self->edges[t + 1] > (double)part->end_cell);
}

/* How much of pixel t a part covers, 0 … 1. */
static float
share_of(const Composer *self, const Part *part, int t)
{
    double start = MAX(self->edges[t], (double)part->first_cell);
    double end = MIN(self->edges[t + 1], (double)part->end_cell);
    return (float)((end - start) / (self->edges[t + 1] - self->edges[t]));
}

/* The seam at t, made on demand; NULL where memory fails. */
static Seam *
seam_for(Composer *self, int t)
{
    if (self->seam_at[t] < 0) {
        Seam seam = { .t = t, .sums = g_try_new0(float, 3 * (size_t)self->map->height_px) };
        if (seam.sums == NULL)
            return NULL;
        self->seam_at[t] = (int)self->seams->len;
        g_array_append_val(self->seams, seam);
    }
    return &g_array_index(self->seams, Seam, self->seam_at[t]);
}

static void
seam_clear(gpointer data)
{
    g_free(((Seam *)data)->sums);
}

/* ---- Averaging ---- */

/* The box [start, end) of cells of size `reduction`, all within `n`. */
static Box
box_of(double start, double end, int reduction, int n)
{
    start /= reduction;
    end /= reduction;
    Box box;
    box.first = (int)CLAMP(floor(start), 0.0, (double)(n - 1));
    box.last = (int)CLAMP(ceil(end) - 1.0, (double)box.first, (double)(n - 1));
    box.total = (float)(end - start);
    if (box.first == box.last) {
        box.first_weight = box.total;
        box.last_weight = 0.0f;
    } else {
        box.first_weight = (float)(box.first + 1 - start);
        box.last_weight = (float)(end - box.last);
    }
    return box;
}

/* Adds weight × one row of samples, in parts of 255, to a line; grey in one channel, colours in three. */
static void
add_row(const HwRaster *raster, int row, int first_col, int n_cols, float weight, float *line)
{
    int channels = raster->channels;
    size_t at = ((size_t)row * (size_t)raster->width + (size_t)first_col) * (size_t)channels;
    float scale = weight * 255.0f / (float)((1u << raster->bits) - 1);
    if (channels % 2 == 1) {
        int n = n_cols * channels;
        if (raster->bits == 16) {
            const uint16_t *from = raster->u16 + at;
            for (int i = 0; i < n; i++)
                line[i] += scale * (float)from[i];
        } else {
            const uint8_t *from = raster->u8 + at;
            for (int i = 0; i < n; i++)
                line[i] += scale * (float)from[i];
        }
        return;
    }
    float alpha_scale = 1.0f / (float)((1u << raster->bits) - 1);
    for (int i = 0; i < n_cols; i++, at += (size_t)channels) {
        bool deep = raster->bits == 16;
        float alpha =
            (float)(deep ? raster->u16[at + (size_t)channels - 1] : raster->u8[at + (size_t)channels - 1]) *
            alpha_scale;
        for (int c = 0; c < channels - 1; c++)
            *line++ +=
                scale * alpha * (float)(deep ? raster->u16[at + (size_t)c] : raster->u8[at + (size_t)c]);
    }
}

/* A painter of one block: its samples and what each of its pixels takes of them. */
typedef struct {
    const HwRaster *raster;
    int column_reduction;
    int row_reduction;
    int n_channels; /* of the line: 1 or 3 */
    int first_t;
    int n_t;
    Box *boxes; /* n_t */
    int first_col;
    int n_cols; /* of the line */
    float *line;
} Painter;

static void
painter_clear(Painter *painter)
{
    g_free(painter->boxes);
    g_free(painter->line);
}

G_DEFINE_AUTO_CLEANUP_CLEAR_FUNC(Painter, painter_clear)

static bool
painter_set_up(Painter *painter, const Composer *self, const Part *part, int first_t, int end_t)
{
    const HwRaster *raster = painter->raster;
    painter->n_channels = raster->channels >= 3 ? 3 : 1;
    painter->first_t = first_t;
    painter->n_t = end_t - first_t;
    painter->boxes = g_try_new(Box, painter->n_t);
    if (painter->boxes == NULL)
        return false;
    double shift = (double)part->first_col - (double)part->first_cell; /* axis → column of the block */
    for (int i = 0; i < painter->n_t; i++) {
        double start = self->edges[first_t + i];
        double end = self->edges[first_t + i + 1];
        if (self->box_columns) {
            start = MAX(start, (double)part->first_cell);
            end = MIN(end, (double)part->end_cell);
            painter->boxes[i] = box_of(start + shift, end + shift, painter->column_reduction, raster->width);
        } else {
            int column = (int)(floor((start + end) / 2.0) + shift) / painter->column_reduction;
            painter->boxes[i] = (Box){ column, column, 1.0f, 0.0f, 1.0f };
        }
    }
    painter->first_col = painter->boxes[0].first;
    painter->n_cols = painter->boxes[painter->n_t - 1].last + 1 - painter->first_col;
    painter->line = g_try_new(float, (size_t)painter->n_cols *(size_t)painter->n_channels);
    return painter->line != NULL;
}

/* The block's rows under one row of pixels, averaged. */
static void
painter_fill_line(Painter *painter, const RowSpan *span)
{
    size_t n = (size_t)painter->n_cols * (size_t)painter->n_channels;
    Box box = box_of(span->start_row, span->end_row, painter->row_reduction, painter->raster->height);
    memset(painter->line, 0, n * sizeof *painter->line);
    for (int row = box.first; row <= box.last; row++) {
        float weight = row == box.first ? box.first_weight : row == box.last ? box.last_weight : 1.0f;
        add_row(painter->raster, row, painter->first_col, painter->n_cols, weight / box.total, painter->line);
    }
}

/* The mean of pixel i, RGB. Grey and colour are written out apart: this is where shrinking spends its time.
 */
static inline void
painter_read(const Painter *painter, int i, float colour[3])
{
    const Box *box = &painter->boxes[i];
    int n_between = box->last - box->first - 1;
    float share = 1.0f / box->total;
    if (painter->n_channels == 1) {
        const float *from = painter->line + (box->first - painter->first_col);
        float sum = from[0] * box->first_weight;
        for (int k = 1; k <= n_between; k++)
            sum += from[k];
        if (n_between >= 0)
            sum += from[n_between + 1] * box->last_weight;
        colour[0] = colour[1] = colour[2] = MIN(sum * share, 255.0f);
        return;
    }
    const float *from = painter->line + 3 * (size_t)(box->first - painter->first_col);
    float red = from[0] * box->first_weight;
    float green = from[1] * box->first_weight;
    float blue = from[2] * box->first_weight;
    from += 3;
    for (int k = 0; k < n_between; k++, from += 3) {
        red += from[0];
        green += from[1];
        blue += from[2];
    }
    if (n_between >= 0) {
        red += from[0] * box->last_weight;
        green += from[1] * box->last_weight;
        blue += from[2] * box->last_weight;
    }
    colour[0] = MIN(red * share, 255.0f);
    colour[1] = MIN(green * share, 255.0f);
    colour[2] = MIN(blue * share, 255.0f);
}

/* ---- Painting ---- */

/* One cell a pixel, 8 bits, no alpha: straight from the samples. */
static void
paint_nearest(const Composer *self, const Painter *painter)
{
    const HwRaster *raster = painter->raster;
    const uint8_t *tone = self->tone8;
    size_t channels = (size_t)raster->channels;
    size_t row_bytes = channels * (size_t)raster->width;
    ptrdiff_t step = self->map->later_left ? -1 : 1;
    int first_x = pixel_x(self, painter->first_t);
    int left_x = MIN(first_x, pixel_x(self, painter->first_t + painter->n_t - 1));
    int done_row = -1;
    for (int y = 0; y < self->map->height_px; y++) {
        if (self->rows[y].inside == 0.0f)
            continue;
        int row = (int)self->rows[y].start_row / painter->row_reduction;
        uint32_t *line = self->pixels + (ptrdiff_t)y * self->stride;
        if (row == done_row) {
            memcpy(line + left_x, line - self->stride + left_x, sizeof *line * (size_t)painter->n_t);
            continue;
        }
        const uint8_t *samples = raster->u8 + row_bytes * (size_t)row;
        uint32_t *to = line + first_x;
        if (channels == 1) {
            for (int i = 0; i < painter->n_t; i++, to += step)
                *to = 0xff000000u | tone[samples[painter->boxes[i].first]] * 0x010101u;
        } else {
            for (int i = 0; i < painter->n_t; i++, to += step) {
                const uint8_t *at = samples + channels * (size_t)painter->boxes[i].first;
                *to = pack(tone[at[0]], tone[at[1]], tone[at[2]]);
            }
        }
        done_row = row;
    }
}

static void
paint_means(Composer *self, const Part *part, Painter *painter)
{
    double line_row = -1.0; /* where rows are repeated: the one that the line holds */
    for (int y = 0; y < self->map->height_px; y++) {
        const RowSpan *span = &self->rows[y];
        if (span->inside == 0.0f)
            continue;
        if (self->box_rows || span->start_row != line_row)
            painter_fill_line(painter, span);
        line_row = span->start_row;
        uint32_t *line = self->pixels + (ptrdiff_t)y * self->stride;
        for (int i = 0; i < painter->n_t; i++) {
            int t = painter->first_t + i;
            float colour[3];
            painter_read(painter, i, colour);
            if (self->seam_at[t] >= 0) {
                float share = share_of(self, part, t);
                float *sums = g_array_index(self->seams, Seam, self->seam_at[t]).sums + 3 * (size_t)y;
                for (int c = 0; c < 3; c++)
                    sums[c] += colour[c] * share;
            } else {
                uint32_t shown = pack(show(self, colour[0]), show(self, colour[1]), show(self, colour[2]));
                line[pixel_x(self, t)] = mix(shown, HW_COMPOSE_BEYOND, span->inside);
            }
        }
    }
}

static void
paint_void(Composer *self, int first_t, int end_t)
{
    for (int y = 0; y < self->map->height_px; y++) {
        uint32_t colour = mix(HW_COMPOSE_VOID, HW_COMPOSE_BEYOND, self->rows[y].inside);
        uint32_t *line = self->pixels + (ptrdiff_t)y * self->stride;
        for (int t = first_t; t < end_t; t++)
            if (self->seam_at[t] < 0)
                line[pixel_x(self, t)] = colour;
    }
}

static void
paint_seams(Composer *self)
{
    for (guint i = 0; i < self->seams->len; i++) {
        const Seam *seam = &g_array_index(self->seams, Seam, i);
        float on_axis = MIN(seam->picture + seam->empty, 1.0f);
        for (int y = 0; y < self->map->height_px; y++) {
            uint32_t colour = HW_COMPOSE_VOID;
            if (seam->picture > 0.0f) {
                float mean[3];
                for (int c = 0; c < 3; c++)
                    mean[c] = MIN(seam->sums[3 * y + c] / seam->picture, 255.0f);
                colour = pack(show(self, mean[0]), show(self, mean[1]), show(self, mean[2]));
                if (seam->empty > 0.0f)
                    colour = mix(colour, HW_COMPOSE_VOID, seam->picture / (seam->picture + seam->empty));
            }
            /* Within rounding of the whole pixel is the whole pixel. */
            float share = on_axis > 0.9999f ? self->rows[y].inside : on_axis * self->rows[y].inside;
            self->pixels[(ptrdiff_t)y * self->stride + pixel_x(self, seam->t)] =
                mix(colour, HW_COMPOSE_BEYOND, share);
        }
    }
}

/* ---- The whole ---- */

/* The samples to paint a block with; NULL without an error where it is to be drawn as void. */
static HwRaster *
fetch(Composer *self, guint block, bool *reduced, GError **error)
{
    GError *failure = NULL;
    HwRaster *raster;
    *reduced = self->reduced;
    if (self->cached_only) {
        raster = self->reduced ? hw_strip_peek_reduced(self->strip, block)
                               : hw_strip_peek_raster(self->strip, block, HW_PLANE_STORED);
        if (raster != NULL)
            return raster;
        g_autofree char *damage = hw_strip_dup_found_damage(self->strip, block);
        if (damage != NULL)
            return NULL;
        self->holes = true;
        *reduced = true;
        return hw_strip_peek_reduced(self->strip, block);
    }
    raster = self->reduced
                 ? hw_strip_get_reduced(self->strip, block, self->cancellable, &failure)
                 : hw_strip_get_raster(self->strip, block, HW_PLANE_STORED, self->cancellable, &failure);
    if (g_error_matches(failure, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED))
        g_error_free(failure);
    else if (failure != NULL)
        g_propagate_error(error, failure);
    return raster;
}

static bool
set_no_memory(GError **error)
{
    g_set_error_literal(error, G_IO_ERROR, G_IO_ERROR_FAILED,
                        "The view does not fit into memory; close other programs and try again.");
    return false;
}

/* Shares of the pixels that this part does not fill alone. */
static bool
add_to_seams(Composer *self, const Part *part, bool picture, int first_t, int end_t, GError **error)
{
    for (int t = first_t; t < end_t; t++) {
        if (!is_shared(self, part, t))
            continue;
        Seam *seam = seam_for(self, t);
        if (seam == NULL)
            return set_no_memory(error);
        if (picture)
            seam->picture += share_of(self, part, t);
        else
            seam->empty += share_of(self, part, t);
    }
    return true;
}

static bool
paint_part(Composer *self, const Part *part, GError **error)
{
    int first_t;
    int end_t;
    pixels_of_part(self, part, &first_t, &end_t);
    if (first_t >= end_t)
        return true;
    bool reduced = false;
    GError *failure = NULL;
    g_autoptr(HwRaster) raster = part->picture ? fetch(self, part->block, &reduced, &failure) : NULL;
    if (failure != NULL) {
        g_propagate_error(error, failure);
        return false;
    }
    if (!add_to_seams(self, part, raster != NULL, first_t, end_t, error))
        return false;
    if (raster == NULL) {
        paint_void(self, first_t, end_t);
        return true;
    }
    g_auto(Painter) painter = { .raster = raster,
                                .column_reduction = reduced ? HW_REDUCED_COLUMNS : 1,
                                .row_reduction = reduced ? HW_REDUCED_ROWS : 1 };
    if (!painter_set_up(&painter, self, part, first_t, end_t))
        return set_no_memory(error);
    bool direct = !self->box_columns && !self->box_rows && raster->bits == 8 && raster->channels % 2 == 1;
    if (direct)
        paint_nearest(self, &painter);
    else
        paint_means(self, part, &painter);
    return true;
}

static void
fill_beyond(Composer *self)
{
    for (int y = 0; y < self->map->height_px; y++) {
        uint32_t *line = self->pixels + (ptrdiff_t)y * self->stride;
        for (int x = 0; x < self->map->width_px; x++)
            line[x] = HW_COMPOSE_BEYOND;
    }
}

static bool
compose(Composer *self, const HwAxis *axis, const HwTone *tone, GError **error)
{
    const HwViewMap *map = self->map;
    g_return_val_if_fail(map->width_px > 0 && map->height_px > 0 && self->stride >= map->width_px, false);
    g_return_val_if_fail(map->cells_per_px > 0.0 && map->rows_per_px > 0.0, false);
    self->box_columns = map->cells_per_px > 1.0;
    self->box_rows = map->rows_per_px > 1.0;
    self->reduced = map->cells_per_px >= REDUCED_CELLS_PER_PX && map->rows_per_px >= REDUCED_ROWS_PER_PX;
    set_tone(self, tone);
    g_autofree double *edges = self->edges = g_new(double, (size_t)map->width_px + 1);
    g_autofree RowSpan *rows = self->rows = g_new(RowSpan, (size_t)map->height_px);
    g_autofree int *seam_at = self->seam_at = g_new(int, (size_t)map->width_px);
    g_autoptr(GArray) seams = self->seams = g_array_new(FALSE, FALSE, sizeof(Seam));
    g_array_set_clear_func(seams, seam_clear);
    memset(seam_at, 0xff, sizeof *seam_at * (size_t)map->width_px);
    lay_out_edges(self);
    fill_beyond(self);

    g_autoptr(GArray) parts = find_parts(self, axis);
    for (guint i = 0; i < parts->len; i++) {
        if (g_cancellable_set_error_if_cancelled(self->cancellable, error))
            return false;
        if (!paint_part(self, &g_array_index(parts, Part, i), error))
            return false;
    }
    paint_seams(self);
    return true;
}

bool
hw_compose(HwStrip *strip, const HwAxis *axis, const HwViewMap *map, const HwTone *tone, uint32_t *pixels,
           int stride, GCancellable *cancellable, GError **error)
{
    Composer composer = {
        .strip = strip, .map = map, .cancellable = cancellable, .pixels = pixels, .stride = stride
    };
    return compose(&composer, axis, tone, error);
}

bool
hw_compose_cached(HwStrip *strip, const HwAxis *axis, const HwViewMap *map, const HwTone *tone,
                  uint32_t *pixels, int stride, bool *holes, GError **error)
{
    Composer composer = {
        .strip = strip, .map = map, .cached_only = true, .pixels = pixels, .stride = stride
    };
    bool ok = compose(&composer, axis, tone, error);
    *holes = composer.holes;
    return ok;
}
