/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The picture as A4 pages: text as text, lines as lines, every column of the evidence in the images. */
#include "core/sheet/picture_write.h"
#include "core/sheet/sheet_error.h"
#include "core/sheet/text.h"
#include "core/strip/compose.h"

#include <cairo-pdf.h>
#include <math.h>

#define PAGE_WIDTH_PT 841.89
#define PAGE_HEIGHT_PT 595.28
#define PT_PER_UNIT 0.7
#define MAX_PICTURE 330.0
#define LEAST_RAIL 110.0
#define TABLE_BELOW 4       /* rows that still go under the picture */
#define AROUND_PICTURE 80.0 /* ruler, scale and gaps */
#define OVERLAP 0.05
#define MAX_PAGES 5000

typedef struct {
    const HwSubject *subject;
    PangoContext *context;
    HwInk ink;
    HwOutput *output;
    const HwWriting *writing;
    GError *error; /* of the output, met inside Cairo */
    cairo_t *cr;
    double px_per_cell;
    double picture_room; /* height for rail, picture and table */
    int cells_per_page;
    int n_picture_pages;
    int n_pages;
    guint n_rows; /* of the table */
    guint rows_per_page;
    bool table_below; /* on the only picture page */
} Book;

static cairo_status_t
write_cb(void *closure, const unsigned char *data, unsigned int size)
{
    Book *book = closure;
    if (book->error != NULL || !hw_output_write(book->output, data, size, &book->error))
        return CAIRO_STATUS_WRITE_ERROR;
    return CAIRO_STATUS_SUCCESS;
}

static double
page_width(void)
{
    return PAGE_WIDTH_PT / PT_PER_UNIT;
}

static double
page_height(void)
{
    return PAGE_HEIGHT_PT / PT_PER_UNIT;
}

static HwPlateSpec
bare_spec(void)
{
    return (HwPlateSpec){ .width = page_width(), .px_per_cell = 1, .px_per_row = 1, .page = "", .zoom = "" };
}

static guint
count_table_rows(const HwSubject *subject)
{
    guint n = 0;
    for (guint i = 0; i < subject->entries->len; i++) {
        const HwEntry *entry = g_ptr_array_index(subject->entries, i);
        n += entry->cells[HW_CELL_BIB] != NULL;
    }
    return n;
}

static char *
dup_page(const Book *book, int page)
{
    return g_strdup_printf("page %d of %d", page + 1, book->n_pages);
}

static char *
dup_part(const Book *book, int page)
{
    if (book->subject->n_views > 1)
        return g_strdup("every column shown, both at one scale");
    if (book->n_picture_pages == 1)
        return g_strdup("every column shown");
    return g_strdup_printf("every column shown; part %d of %d, parts overlap", page + 1,
                           book->n_picture_pages);
}

static HwPlateSpec
picture_spec(const Book *book, int page, const char *number, const char *zoom)
{
    const HwSubject *subject = book->subject;
    HwPlateSpec spec = bare_spec();
    spec.height = page_height();
    spec.px_per_cell = spec.px_per_row = book->px_per_cell;
    spec.n_views = subject->n_views;
    spec.page = number;
    spec.zoom = zoom;
    spec.max_rail = book->picture_room - subject->n_rows * book->px_per_cell;
    spec.with_table = book->table_below;
    double step = MAX(1, book->cells_per_page - ceil(OVERLAP * book->cells_per_page));
    for (int i = 0; i < subject->n_views; i++) {
        const HwSubjectView *view = &subject->views[i];
        spec.n_cells[i] = MIN(view->n_cells, book->cells_per_page);
        double last_start = view->first_cell + view->n_cells - spec.n_cells[i];
        spec.first_cell[i] = MIN(view->first_cell + page * step, last_start);
    }
    return spec;
}

/* How much of the strip a page holds, and how many pages that makes. */
static bool
plan(Book *book, GError **error)
{
    const HwSubject *subject = book->subject;
    HwPlateSpec spec = bare_spec();
    g_autoptr(HwPlate) frame = hw_plate_new(subject, book->context, &book->ink, &spec);
    double inner = page_width() - 2 * HW_PLATE_MARGIN;
    book->picture_room = page_height() - hw_plate_get_height(frame) - AROUND_PICTURE;
    book->n_rows = count_table_rows(subject);
    bool short_table = book->n_rows > 0 && book->n_rows <= TABLE_BELOW;
    if (short_table)
        book->picture_room -= 60 + 19.0 * book->n_rows;
    double picture = CLAMP(book->picture_room - LEAST_RAIL, 60, MAX_PICTURE);
    book->px_per_cell = MIN(picture / subject->n_rows, 1.25);
    double widest = 0;
    for (int i = 0; i < subject->n_views; i++)
        widest = MAX(widest, subject->views[i].n_cells);
    book->n_picture_pages = 1;
    if (subject->n_views > 1) {
        double each = (inner - 24 * (subject->n_views - 1)) / subject->n_views;
        book->px_per_cell = MIN(book->px_per_cell, (each - 1) / widest);
        book->cells_per_page = (int)widest;
    } else {
        book->cells_per_page = MAX(1, (int)(inner / book->px_per_cell));
        double step = MAX(1, book->cells_per_page - ceil(OVERLAP * book->cells_per_page));
        double more = ceil((widest - book->cells_per_page) / step);
        if (more > MAX_PAGES) {
            g_set_error(error, HW_SHEET_ERROR, HW_SHEET_ERROR_PLACE,
                        "The picture would take more than %d pages; choose a shorter stretch.", MAX_PAGES);
            return false;
        }
        book->n_picture_pages += MAX(0, (int)more);
    }
    book->table_below = book->n_picture_pages == 1 && short_table;
    if (book->table_below) {
        /* Only whole: what has no room goes to a page of its own. */
        HwPlateSpec whole = picture_spec(book, 0, "", "");
        g_autoptr(HwPlate) trial = hw_plate_new(subject, book->context, &book->ink, &whole);
        book->table_below = hw_plate_get_n_table_rows(trial) == book->n_rows;
    }
    book->n_pages = book->n_picture_pages;
    if (book->n_rows > 0 && !book->table_below) {
        spec.height = page_height();
        spec.with_table = true;
        g_autoptr(HwPlate) table = hw_plate_new(subject, book->context, &book->ink, &spec);
        book->rows_per_page = MAX(1, hw_plate_get_n_table_rows(table));
        book->n_pages += (int)((book->n_rows + book->rows_per_page - 1) / book->rows_per_page);
    }
    return true;
}

/* The columns of a view, one pixel each, put where the plate wants them. */
static bool
paint_view(Book *book, const HwPlateView *view, double n_cells, GError **error)
{
    const HwSubject *subject = book->subject;
    HwViewMap cells = { .first_cell = view->map.first_cell,
                        .cells_per_px = 1,
                        .first_row = 0,
                        .rows_per_px = 1,
                        .width_px = (int)n_cells,
                        .height_px = subject->n_rows,
                        .later_left = view->map.later_left };
    HwTone tone = HW_TONE_AS_STORED;
    cairo_surface_t *image = cairo_image_surface_create(CAIRO_FORMAT_RGB24, cells.width_px, cells.height_px);
    bool composed = cairo_surface_status(image) == CAIRO_STATUS_SUCCESS;
    if (!composed)
        g_set_error(error, HW_SHEET_ERROR, HW_SHEET_ERROR_DRAWING,
                    "A page of %d columns and %d rows cannot be drawn: %s.", cells.width_px, cells.height_px,
                    cairo_status_to_string(cairo_surface_status(image)));
    composed =
        composed && hw_compose(subject->strip, subject->axis, &cells, &tone,
                               (uint32_t *)(void *)cairo_image_surface_get_data(image),
                               cairo_image_surface_get_stride(image) / 4, book->writing->cancellable, error);
    if (composed) {
        cairo_surface_mark_dirty(image);
        cairo_save(book->cr);
        /* Later to the left: the earlier edge is the right one, and the map's pixels are counted from the
         * left. */
        double spare = view->map.later_left ? view->map.width_px - n_cells * book->px_per_cell : 0;
        cairo_translate(book->cr, view->x + spare, view->y);
        cairo_scale(book->cr, book->px_per_cell, book->px_per_cell);
        cairo_set_source_surface(book->cr, image, 0, 0);
        cairo_pattern_set_filter(cairo_get_source(book->cr), CAIRO_FILTER_NEAREST);
        cairo_rectangle(book->cr, 0, 0, cells.width_px, cells.height_px);
        cairo_fill(book->cr);
        cairo_restore(book->cr);
    }
    cairo_surface_destroy(image);
    return composed;
}

static bool
show_plate(Book *book, const HwPlateSpec *spec, GError **error)
{
    g_autoptr(HwPlate) plate = hw_plate_new(book->subject, book->context, &book->ink, spec);
    bool painted = true;
    cairo_save(book->cr);
    cairo_scale(book->cr, PT_PER_UNIT, PT_PER_UNIT);
    hw_plate_draw_under(plate, book->cr);
    for (int i = 0; painted && i < spec->n_views; i++)
        painted = paint_view(book, hw_plate_get_view(plate, i), spec->n_cells[i], error);
    if (painted)
        hw_plate_draw_over(plate, book->cr);
    cairo_restore(book->cr);
    cairo_show_page(book->cr);
    return painted;
}

static bool
show_picture_page(Book *book, int page, GError **error)
{
    g_autofree char *number = dup_page(book, page);
    g_autofree char *zoom = dup_part(book, page);
    HwPlateSpec spec = picture_spec(book, page, number, zoom);
    return show_plate(book, &spec, error);
}

static bool
show_table_page(Book *book, int page, GError **error)
{
    HwPlateSpec spec = bare_spec();
    g_autofree char *number = dup_page(book, page);
    spec.height = page_height();
    spec.page = number;
    spec.with_table = true;
    spec.table_first = (guint)(page - book->n_picture_pages) * book->rows_per_page;
    return show_plate(book, &spec, error);
}

/* Dates of the document are the recording's: the clock of whoever makes it has no part in it. */
static void
describe(cairo_surface_t *surface, const HwSubject *subject)
{
    const HwInstant *epoch = hw_recording_get_epoch(hw_strip_get_recording(subject->strip));
    g_autofree char *date = hw_instant_dup_text(epoch, 0);
    cairo_pdf_surface_set_metadata(surface, CAIRO_PDF_METADATA_TITLE, subject->heading);
    cairo_pdf_surface_set_metadata(surface, CAIRO_PDF_METADATA_CREATOR, "Halfwheel " HALFWHEEL_VERSION);
    cairo_pdf_surface_set_metadata(surface, CAIRO_PDF_METADATA_CREATE_DATE, date);
    cairo_pdf_surface_set_metadata(surface, CAIRO_PDF_METADATA_MOD_DATE, date);
}

/* All pages; what went wrong in Cairo or the output is left in the book and the context. */
static bool
show_pages(Book *book, GError **error)
{
    for (int page = 0; page < book->n_pages; page++) {
        if (!hw_writing_step(book->writing, 0.1 + 0.9 * page / book->n_pages, error))
            return false;
        if (page < book->n_picture_pages ? !show_picture_page(book, page, error)
                                         : !show_table_page(book, page, error))
            return false;
        if (book->error != NULL)
            return false;
    }
    return true;
}

bool
hw_picture_write_pdf(const HwSubject *subject, HwOutput *output, const HwWriting *writing, GError **error)
{
    Book book = { .subject = subject, .ink = hw_ink_paper(), .output = output, .writing = writing };
    book.context = hw_text_context_new();
    book.ink.snap_px = 0;
    book.ink.hairline_px = 0.8;
    cairo_surface_t *surface =
        cairo_pdf_surface_create_for_stream(write_cb, &book, PAGE_WIDTH_PT, PAGE_HEIGHT_PT);
    describe(surface, subject);
    book.cr = cairo_create(surface);
    g_autoptr(GError) failure = NULL;
    bool written = plan(&book, &failure) && show_pages(&book, &failure);
    cairo_surface_finish(surface);
    cairo_status_t status = cairo_status(book.cr);
    if (status == CAIRO_STATUS_SUCCESS)
        status = cairo_surface_status(surface);
    cairo_destroy(book.cr);
    cairo_surface_destroy(surface);
    g_object_unref(book.context);
    /* A full disk comes first: what Cairo says of it afterwards names no cause. */
    if (book.error != NULL && failure == NULL)
        failure = g_steal_pointer(&book.error);
    g_clear_error(&book.error);
    if (failure == NULL && (!written || status != CAIRO_STATUS_SUCCESS))
        g_set_error(&failure, HW_SHEET_ERROR, HW_SHEET_ERROR_DRAWING, "The pages cannot be drawn: %s.",
                    cairo_status_to_string(status));
    if (failure != NULL) {
        g_propagate_error(error, g_steal_pointer(&failure));
        return false;
    }
    return true;
}
