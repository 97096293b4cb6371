/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A picture of any width as PNG. Cairo's surfaces end at 32,767 pixels, so it is painted in tiles; PNG wants
 * whole rows, so the tiles are put together in an unnamed file and read back row by row. */
#include "core/base/number.h"
#include "core/sheet/picture_write.h"
#include "core/sheet/sheet_error.h"
#include "core/sheet/text.h"
#include "core/strip/compose.h"

#include <errno.h>
#include <fcntl.h>
#include <glib/gstdio.h>
#include <math.h>
#include <png.h>
#include <string.h>
#include <unistd.h>

#define TILE_PX 1024
#define MAX_WIDTH_PX 100000000.0
#define MAX_BYTES (INT64_C(1) << 37)
#define RAIL_PX 560.0
#define BYTES_PER_PX 3

typedef struct {
    const HwSubject *subject;
    const HwPlate *plate;
    int64_t width, height;
    int fd; /* of the unnamed file: rows of RGB */
    const HwWriting *writing;
} Painting;

static bool
io_failed(const char *doing, GError **error)
{
    int code = errno;
    g_set_error(error, HW_SHEET_ERROR, HW_SHEET_ERROR_DRAWING,
                "The pixels of the picture cannot be %s: %s; make room, or choose a shorter stretch.", doing,
                g_strerror(code));
    return false;
}

static int
open_unnamed(const char *path, GError **error)
{
    g_autofree char *folder = strcmp(path, "-") == 0 ? g_strdup(g_get_tmp_dir()) : g_path_get_dirname(path);
    int fd = open(folder, O_TMPFILE | O_RDWR | O_CLOEXEC, 0600);
    if (fd >= 0)
        return fd;
    /* Some file systems know no unnamed files: one that loses its name at once does as well. */
    g_autofree char *name = g_build_filename(folder, ".halfwheel-XXXXXX", NULL);
    fd = g_mkstemp_full(name, O_RDWR | O_CLOEXEC, 0600);
    if (fd < 0)
        io_failed("kept", error);
    else
        g_unlink(name);
    return fd;
}

static bool
write_at(int fd, const uint8_t *data, size_t size, int64_t offset, GError **error)
{
    while (size > 0) {
        ssize_t done = pwrite(fd, data, size, offset);
        if (done < 0 && errno == EINTR)
            continue;
        if (done <= 0)
            return io_failed("kept", error);
        data += done;
        size -= (size_t)done;
        offset += done;
    }
    return true;
}

static bool
read_at(int fd, uint8_t *data, size_t size, int64_t offset, GError **error)
{
    while (size > 0) {
        ssize_t done = pread(fd, data, size, offset);
        if (done < 0 && errno == EINTR)
            continue;
        if (done <= 0)
            return io_failed("read back", error);
        data += done;
        size -= (size_t)done;
        offset += done;
    }
    return true;
}

/* The part of a view that lies in the tile, composed into it. */
static bool
compose_view(const Painting *painting, const HwPlateView *view, int64_t left, int64_t top, int width,
             int height, uint32_t *pixels, int stride, GError **error)
{
    int64_t x0 = MAX((int64_t)view->x, left), x1 = MIN((int64_t)view->x + view->map.width_px, left + width);
    int64_t y0 = MAX((int64_t)view->y, top), y1 = MIN((int64_t)view->y + view->map.height_px, top + height);
    if (x0 >= x1 || y0 >= y1)
        return true;
    HwViewMap part = view->map;
    double earlier_px = (double)((view->map.later_left ? x1 : x0) - (int64_t)view->x);
    part.first_cell = hw_view_map_cell(&view->map, earlier_px);
    part.first_row = hw_view_map_row(&view->map, (double)(y0 - (int64_t)view->y));
    part.width_px = (int)(x1 - x0);
    part.height_px = (int)(y1 - y0);
    HwTone tone = HW_TONE_AS_STORED;
    return hw_compose(painting->subject->strip, painting->subject->axis, &part, &tone,
                      pixels + (y0 - top) * stride + (x0 - left), stride, painting->writing->cancellable,
                      error);
}

static bool
paint_tile(const Painting *painting, int64_t left, int64_t top, cairo_surface_t *surface, GError **error)
{
    int width = (int)MIN(TILE_PX, painting->width - left), height = (int)MIN(TILE_PX, painting->height - top);
    cairo_t *cr = cairo_create(surface);
    cairo_translate(cr, (double)-left, (double)-top);
    hw_plate_draw_under(painting->plate, cr);
    cairo_surface_flush(surface);
    bool composed = true;
    for (int i = 0; composed && i < hw_plate_get_n_views(painting->plate); i++)
        composed = compose_view(painting, hw_plate_get_view(painting->plate, i), left, top, width, height,
                                (uint32_t *)(void *)cairo_image_surface_get_data(surface),
                                cairo_image_surface_get_stride(surface) / 4, error);
    cairo_surface_mark_dirty(surface);
    if (composed)
        hw_plate_draw_over(painting->plate, cr);
    cairo_status_t status = cairo_status(cr);
    cairo_destroy(cr);
    if (composed && status != CAIRO_STATUS_SUCCESS) {
        g_set_error(error, HW_SHEET_ERROR, HW_SHEET_ERROR_DRAWING, "The picture cannot be drawn: %s.",
                    cairo_status_to_string(status));
        return false;
    }
    return composed;
}

static bool
keep_tile(const Painting *painting, int64_t left, int64_t top, cairo_surface_t *surface, GError **error)
{
    int width = (int)MIN(TILE_PX, painting->width - left), height = (int)MIN(TILE_PX, painting->height - top);
    uint8_t rgb[TILE_PX * BYTES_PER_PX];
    cairo_surface_flush(surface);
    int stride = cairo_image_surface_get_stride(surface);
    for (int y = 0; y < height; y++) {
        const uint32_t *row = (const uint32_t *)(void *)(cairo_image_surface_get_data(surface) + y * stride);
        for (int x = 0; x < width; x++) {
            rgb[x * BYTES_PER_PX] = (uint8_t)(row[x] >> 16);
            rgb[x * BYTES_PER_PX + 1] = (uint8_t)(row[x] >> 8);
            rgb[x * BYTES_PER_PX + 2] = (uint8_t)row[x];
        }
        int64_t offset = ((top + y) * painting->width + left) * BYTES_PER_PX;
        if (!write_at(painting->fd, rgb, (size_t)width * BYTES_PER_PX, offset, error))
            return false;
    }
    return true;
}

static bool
paint(const Painting *painting, GError **error)
{
    cairo_surface_t *surface = cairo_image_surface_create(CAIRO_FORMAT_RGB24, TILE_PX, TILE_PX);
    bool painted = cairo_surface_status(surface) == CAIRO_STATUS_SUCCESS;
    if (!painted)
        g_set_error(error, HW_SHEET_ERROR, HW_SHEET_ERROR_DRAWING, "There is no memory to draw the picture.");
    /* Column by column of tiles, so that each block is decoded once. */
    for (int64_t left = 0; painted && left < painting->width; left += TILE_PX) {
        for (int64_t top = 0; painted && top < painting->height; top += TILE_PX)
            painted = paint_tile(painting, left, top, surface, error) &&
                      keep_tile(painting, left, top, surface, error);
        double done = (double)(left + TILE_PX) / (double)painting->width;
        painted = painted && hw_writing_step(painting->writing, 0.1 + 0.6 * MIN(done, 1), error);
    }
    cairo_surface_destroy(surface);
    return painted;
}

/* libpng's ways out of an error go through longjmp; what is to be told is kept here. */
typedef struct {
    const Painting *painting;
    HwOutput *output;
    png_structp png;
    png_infop info;
    uint8_t *row;
    GError *error;
} Encoder;

static void
encoder_write(png_structp png, png_bytep data, size_t size)
{
    Encoder *encoder = png_get_io_ptr(png);
    if (!hw_output_write(encoder->output, data, size, &encoder->error))
        png_error(png, "output");
}

static void
encoder_flush(png_structp png)
{
    (void)png;
}

static void
encoder_fail(png_structp png, png_const_charp message)
{
    Encoder *encoder = png_get_error_ptr(png);
    if (encoder->error == NULL)
        g_set_error(&encoder->error, HW_SHEET_ERROR, HW_SHEET_ERROR_DRAWING,
                    "The picture cannot be coded: %s.", message);
    png_longjmp(png, 1);
}

static void
encoder_warn(png_structp png, png_const_charp message)
{
    (void)png;
    (void)message;
}

static void
encode_rows(Encoder *encoder)
{
    const Painting *painting = encoder->painting;
    size_t bytes = (size_t)painting->width * BYTES_PER_PX;
    /* libpng's own limit is a million columns, to protect readers; this is ours to write. */
    png_set_user_limits(encoder->png, 0x7fffffff, 0x7fffffff);
    png_set_write_fn(encoder->png, encoder, encoder_write, encoder_flush);
    png_set_compression_level(encoder->png, 4);
    png_set_filter(encoder->png, PNG_FILTER_TYPE_BASE, PNG_FILTER_UP);
    png_set_IHDR(encoder->png, encoder->info, (png_uint_32)painting->width, (png_uint_32)painting->height, 8,
                 PNG_COLOR_TYPE_RGB, PNG_INTERLACE_NONE, PNG_COMPRESSION_TYPE_DEFAULT,
                 PNG_FILTER_TYPE_DEFAULT);
    png_write_info(encoder->png, encoder->info);
    for (int64_t y = 0; y < painting->height; y++) {
        if (y % 32 == 0 &&
            !hw_writing_step(painting->writing, 0.7 + 0.3 * (double)y / (double)painting->height,
                             &encoder->error))
            png_error(encoder->png, "cancelled");
        if (!read_at(painting->fd, encoder->row, bytes, y * (int64_t)bytes, &encoder->error))
            png_error(encoder->png, "read");
        png_write_row(encoder->png, encoder->row);
    }
    png_write_end(encoder->png, NULL);
}

static bool
encode(const Painting *painting, HwOutput *output, GError **error)
{
    Encoder encoder = { .painting = painting, .output = output };
    encoder.row = g_try_malloc((size_t)painting->width * BYTES_PER_PX);
    encoder.png = png_create_write_struct(PNG_LIBPNG_VER_STRING, &encoder, encoder_fail, encoder_warn);
    if (encoder.png != NULL)
        encoder.info = png_create_info_struct(encoder.png);
    if (encoder.row == NULL || encoder.info == NULL)
        g_set_error(&encoder.error, HW_SHEET_ERROR, HW_SHEET_ERROR_DRAWING,
                    "There is no memory to code the picture.");
    else if (setjmp(png_jmpbuf(encoder.png)) == 0)
        encode_rows(&encoder);
    png_destroy_write_struct(&encoder.png, &encoder.info);
    g_free(encoder.row);
    if (encoder.error != NULL) {
        g_propagate_error(error, encoder.error);
        return false;
    }
    return true;
}

static char *
dup_zoom(double px_per_column)
{
    if (px_per_column == 1)
        return g_strdup("shown 1 : 1");
    g_autofree char *times =
        hw_number_dup_double(round(100 * (px_per_column > 1 ? px_per_column : 1 / px_per_column)) / 100);
    return px_per_column > 1 ? g_strdup_printf("enlarged × %s", times)
                             : g_strdup_printf("reduced 1 : %s", times);
}

static bool
refuse_size(GError **error)
{
    g_set_error(error, HW_SHEET_ERROR, HW_SHEET_ERROR_PLACE,
                "The picture would be too large to write; choose a shorter stretch or a smaller scale.");
    return false;
}

static bool
write_with(PangoContext *context, const HwSubject *subject, HwOutput *output, const char *path,
           const HwWriting *writing, GError **error)
{
    double scale = CLAMP(subject->picture.px_per_column, 1.0 / 64, 16.0);
    g_autofree char *zoom = dup_zoom(scale);
    HwPlateSpec spec = { .px_per_cell = scale,
                         .px_per_row = scale,
                         .max_rail = RAIL_PX,
                         .n_views = subject->n_views,
                         .with_table = true,
                         .page = "",
                         .zoom = zoom };
    double total = 0;
    for (int i = 0; i < subject->n_views; i++) {
        spec.first_cell[i] = subject->views[i].first_cell;
        spec.n_cells[i] = subject->views[i].n_cells;
        total += subject->views[i].n_cells * scale;
    }
    if (total > MAX_WIDTH_PX)
        return refuse_size(error);
    HwInk ink = hw_ink_paper();
    g_autoptr(HwPlate) plate = hw_plate_new(subject, context, &ink, &spec);
    Painting painting = { .subject = subject,
                          .plate = plate,
                          .width = (int64_t)ceil(hw_plate_get_width(plate)),
                          .height = (int64_t)ceil(hw_plate_get_height(plate)),
                          .writing = writing };
    if (painting.width * painting.height > MAX_BYTES / BYTES_PER_PX || painting.height > G_MAXINT32)
        return refuse_size(error);
    painting.fd = open_unnamed(path, error);
    if (painting.fd < 0)
        return false;
    bool written = paint(&painting, error) && encode(&painting, output, error);
    close(painting.fd);
    return written;
}

bool
hw_picture_write_png(const HwSubject *subject, HwOutput *output, const char *path, const HwWriting *writing,
                     GError **error)
{
    PangoContext *context = hw_text_context_new();
    bool written = write_with(context, subject, output, path, writing, error);
    g_object_unref(context);
    return written;
}
