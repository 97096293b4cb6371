/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/sheet/plate.h"

#include "core/base/number.h"
#include "core/sheet/labels.h"
#include "core/sheet/pennant.h"
#include "core/sheet/ruler.h"
#include "core/sheet/table.h"
#include "core/sheet/text.h"
#include "core/sheet/void_hatch.h"

#include <math.h>

#define TEXT_MAX_WIDTH 1560.0
#define RIGHT_MAX_WIDTH 2200.0
#define RULER_PX 24.0
#define SCALE_PX 38.0
#define VIEW_GAP_PX 24.0
#define TITLE_PX 22.0
#define WARNING_PAD_PX 5.0
#define FOOT_LINE_GAP_PX 2.0

typedef struct {
    HwPlateView at;
    double rail_y;
    HwLabels *labels;
    HwPennantLayout *pennants;
    const char *title;
} View;

struct HwPlate {
    const HwSubject *subject;
    PangoContext *context;
    HwInk ink;
    HwPlateSpec spec;
    char *page;
    char *zoom;
    double width, height;
    double text_width; /* of lines that are read */
    double right_x;    /* where what stands to the right ends */
    double top_y;      /* below heading and warnings */
    View views[HW_MAX_VIEWS];
    double ruler_y;
    double scale_y;
    double table_y;
    double foot_y;
    HwTable *table;
    GPtrArray *head; /* PangoLayout*: heading, subheading, sentence, warnings */
    GPtrArray *foot; /* PangoLayout* */
};

static double
height_of(PangoLayout *layout)
{
    double height;
    hw_text_size(layout, NULL, &height);
    return height;
}

static PangoLayout *
shape(const HwPlate *plate, double size_px, bool bold, const char *text, double width, int lines)
{
    HwType type = { plate->ink.font_family, size_px, bold, true };
    if (lines == 1)
        return hw_text_layout(plate->context, &type, text, width);
    return hw_text_layout_wrapped(plate->context, &type, text, width, lines);
}

/* Texts above the picture; returns where they end. */
static double
shape_head(HwPlate *plate)
{
    const HwSubject *subject = plate->subject;
    double y = HW_PLATE_MARGIN;
    double beside_version = plate->text_width - 260;
    plate->head = g_ptr_array_new_with_free_func(g_object_unref);
    g_ptr_array_add(plate->head, shape(plate, 21, true, subject->heading, beside_version, 1));
    g_ptr_array_add(plate->head, shape(plate, 15, false, subject->subheading, beside_version, 1));
    g_ptr_array_add(plate->head, shape(plate, 14, true, subject->sentence, plate->text_width, 3));
    y += height_of(g_ptr_array_index(plate->head, 0)) + 2;
    if (*subject->subheading != '\0')
        y += height_of(g_ptr_array_index(plate->head, 1)) + 2;
    y = MAX(y, HW_PLATE_MARGIN + 34) + 6;
    if (*subject->sentence != '\0')
        y += height_of(g_ptr_array_index(plate->head, 2)) + 8;
    for (guint i = 0; i < subject->warnings->len; i++) {
        PangoLayout *warning =
            shape(plate, 13, true, g_ptr_array_index(subject->warnings, i), plate->text_width - 40, 3);
        g_ptr_array_add(plate->head, warning);
        y += height_of(warning) + 2 * WARNING_PAD_PX + 6;
    }
    return y;
}

/* Returns the foot's height. */
static double
shape_foot(HwPlate *plate)
{
    const GPtrArray *lines = plate->subject->foot;
    double height = 10;
    plate->foot = g_ptr_array_new_with_free_func(g_object_unref);
    for (guint i = 0; i < lines->len; i++) {
        bool caution = i + 1 == lines->len;
        /* The version and page stand to the right of the last line. */
        double width = plate->text_width - (caution ? 260 : 0);
        g_ptr_array_add(plate->foot, shape(plate, 11, caution, g_ptr_array_index(lines, i), width, 2));
        height += height_of(g_ptr_array_index(plate->foot, i)) + FOOT_LINE_GAP_PX;
    }
    return height;
}

static void
place_view(HwPlate *plate, int index, double x)
{
    const HwSubject *subject = plate->subject;
    View *view = &plate->views[index];
    view->at.x = x;
    view->at.map =
        (HwViewMap){ .first_cell = plate->spec.first_cell[index],
                     .cells_per_px = 1 / plate->spec.px_per_cell,
                     .first_row = 0,
                     .rows_per_px = 1 / plate->spec.px_per_row,
                     .width_px = (int)ceil(plate->spec.n_cells[index] * plate->spec.px_per_cell - 1e-6),
                     .height_px = (int)ceil(subject->n_rows * plate->spec.px_per_row - 1e-6),
                     .later_left = subject->later_left };
    view->title = subject->views[index].title;
    view->labels =
        hw_labels_new(plate->context, &plate->ink, subject->entries, subject->axis, &view->at.map,
                      plate->spec.max_rail, subject->highlight[0] != NULL ? subject->highlight : NULL);
}

static HwPennantLayout *
lay_pennants(const HwPlate *plate, const View *view)
{
    const GPtrArray *entries = plate->subject->entries;
    g_autofree HwPennant *pennants = g_new0(HwPennant, MAX(entries->len, 1));
    for (guint i = 0; i < entries->len; i++) {
        const HwEntry *entry = g_ptr_array_index(entries, i);
        pennants[i] = (HwPennant){ entry->column, entry->row, entry->bib, entry->state, entry->rear, false };
    }
    HwPennantPlace place = { view->at.x, view->at.y, view->at.y, 0 };
    return hw_pennant_layout_new(plate->context, plate->subject->axis, &view->at.map, pennants,
                                 (int)entries->len, &place, &plate->ink);
}

/* Rails and pictures; returns where they end. */
static double
place_views(HwPlate *plate, double y)
{
    double rail = 0, x = HW_PLATE_MARGIN;
    bool titled = false;
    for (int i = 0; i < plate->spec.n_views; i++) {
        place_view(plate, i, x);
        x += plate->views[i].at.map.width_px + VIEW_GAP_PX;
        rail = MAX(rail, hw_labels_get_height(plate->views[i].labels));
        titled |= plate->views[i].title != NULL && *plate->views[i].title != '\0';
    }
    if (plate->spec.n_views == 0)
        return y;
    y += titled ? TITLE_PX : 0;
    plate->ruler_y = ceil(y + rail + (rail > 0 ? 4 : 0));
    double picture_y = plate->ruler_y + RULER_PX;
    for (int i = 0; i < plate->spec.n_views; i++) {
        View *view = &plate->views[i];
        view->at.y = picture_y;
        view->rail_y = plate->ruler_y - 4 - hw_labels_get_height(view->labels);
        view->pennants = lay_pennants(plate, view);
    }
    plate->scale_y = picture_y + plate->views[0].at.map.height_px + 6;
    return plate->scale_y + SCALE_PX;
}

static double
width_of_views(const HwPlateSpec *spec)
{
    double width = 0;
    for (int i = 0; i < spec->n_views; i++)
        width += ceil(spec->n_cells[i] * spec->px_per_cell - 1e-6) + (i > 0 ? VIEW_GAP_PX : 0);
    return width;
}

HwPlate *
hw_plate_new(const HwSubject *subject, PangoContext *context, const HwInk *ink, const HwPlateSpec *spec)
{
    HwPlate *plate = g_new0(HwPlate, 1);
    plate->subject = subject;
    plate->context = context;
    plate->ink = *ink;
    plate->spec = *spec;
    plate->page = g_strdup(spec->page);
    plate->zoom = g_strdup(spec->zoom);
    double inner = MAX(MAX(width_of_views(spec), spec->width - 2 * HW_PLATE_MARGIN), HW_TABLE_MIN_WIDTH);
    plate->width = inner + 2 * HW_PLATE_MARGIN;
    plate->text_width = MIN(inner, TEXT_MAX_WIDTH);
    plate->right_x = HW_PLATE_MARGIN + MIN(inner, RIGHT_MAX_WIDTH);
    plate->top_y = shape_head(plate);
    double y = place_views(plate, plate->top_y);
    double foot = shape_foot(plate);
    if (spec->with_table) {
        double caption = 26;
        double room = spec->height > 0 ? spec->height - y - caption - foot - HW_PLATE_MARGIN - 8 : INFINITY;
        if (room == INFINITY)
            room = 1e7;
        plate->table = hw_table_new(context, ink, subject->entries, spec->table_first, inner, room);
        plate->table_y = y + caption;
        if (hw_table_get_n_rows(plate->table) > 0)
            y = plate->table_y + hw_table_get_height(plate->table) + 10;
    }
    plate->foot_y = spec->height > 0 ? spec->height - HW_PLATE_MARGIN - foot : y + 4;
    plate->height = spec->height > 0 ? spec->height : ceil(plate->foot_y + foot + HW_PLATE_MARGIN - 8);
    return plate;
}

void
hw_plate_free(HwPlate *plate)
{
    if (plate == NULL)
        return;
    for (int i = 0; i < HW_MAX_VIEWS; i++) {
        hw_labels_free(plate->views[i].labels);
        hw_pennant_layout_free(plate->views[i].pennants);
    }
    hw_table_free(plate->table);
    g_ptr_array_unref(plate->head);
    g_ptr_array_unref(plate->foot);
    g_free(plate->page);
    g_free(plate->zoom);
    g_free(plate);
}

double
hw_plate_get_width(const HwPlate *plate)
{
    return plate->width;
}

double
hw_plate_get_height(const HwPlate *plate)
{
    return plate->height;
}

int
hw_plate_get_n_views(const HwPlate *plate)
{
    return plate->spec.n_views;
}

const HwPlateView *
hw_plate_get_view(const HwPlate *plate, int index)
{
    return &plate->views[index].at;
}

guint
hw_plate_get_n_table_rows(const HwPlate *plate)
{
    return plate->table != NULL ? hw_table_get_n_rows(plate->table) : 0;
}

/* "provisional", boxed, at the top right of the heading. */
static void
draw_version(const HwPlate *plate, cairo_t *cr)
{
    const char *version = plate->subject->picture.version;
    if (version == NULL || *version == '\0')
        return;
    g_autoptr(PangoLayout) layout = shape(plate, 15, true, version, 220, 1);
    double width, height;
    hw_text_size(layout, &width, &height);
    double x = plate->right_x - width - 20;
    cairo_rectangle(cr, x + 0.75, HW_PLATE_MARGIN + 0.75, width + 18.5, height + 8.5);
    hw_colour_set(cr, &plate->ink.text);
    cairo_set_line_width(cr, 1.5);
    cairo_stroke(cr);
    hw_text_draw(cr, layout, x + 10, HW_PLATE_MARGIN + 5);
}

static double
draw_warning(const HwPlate *plate, cairo_t *cr, PangoLayout *warning, double y)
{
    double height = height_of(warning) + 2 * WARNING_PAD_PX;
    cairo_rectangle(cr, HW_PLATE_MARGIN, y, plate->text_width, height);
    cairo_set_source_rgb(cr, 1.0, 0.94, 0.88);
    cairo_fill(cr);
    cairo_rectangle(cr, HW_PLATE_MARGIN, y, 26, height);
    hw_colour_set(cr, &plate->ink.state[HW_PENNANT_DISPUTED]);
    cairo_fill(cr);
    double middle = y + height / 2;
    cairo_set_source_rgb(cr, 1, 1, 1);
    cairo_rectangle(cr, HW_PLATE_MARGIN + 11.5, middle - 8, 3, 10);
    cairo_rectangle(cr, HW_PLATE_MARGIN + 11.5, middle + 4, 3, 3);
    cairo_fill(cr);
    hw_colour_set(cr, &plate->ink.text);
    hw_text_draw(cr, warning, HW_PLATE_MARGIN + 34, y + WARNING_PAD_PX);
    return y + height + 6;
}

static void
draw_head(const HwPlate *plate, cairo_t *cr)
{
    const HwSubject *subject = plate->subject;
    double y = HW_PLATE_MARGIN;
    hw_colour_set(cr, &plate->ink.text);
    hw_text_draw(cr, g_ptr_array_index(plate->head, 0), HW_PLATE_MARGIN, y);
    y += height_of(g_ptr_array_index(plate->head, 0)) + 2;
    if (*subject->subheading != '\0') {
        hw_text_draw(cr, g_ptr_array_index(plate->head, 1), HW_PLATE_MARGIN, y);
        y += height_of(g_ptr_array_index(plate->head, 1)) + 2;
    }
    draw_version(plate, cr);
    y = MAX(y, HW_PLATE_MARGIN + 34) + 6;
    if (*subject->sentence != '\0') {
        hw_colour_set(cr, &plate->ink.text);
        hw_text_draw(cr, g_ptr_array_index(plate->head, 2), HW_PLATE_MARGIN, y);
        y += height_of(g_ptr_array_index(plate->head, 2)) + 8;
    }
    for (guint i = 3; i < plate->head->len; i++)
        y = draw_warning(plate, cr, g_ptr_array_index(plate->head, i), y);
}

static void
draw_rulers(const HwPlate *plate, cairo_t *cr)
{
    const HwSubject *subject = plate->subject;
    HwRulerClock clock = { *hw_recording_get_epoch(hw_strip_get_recording(subject->strip)),
                           subject->picture.has_start, subject->picture.start_ns };
    for (int i = 0; i < plate->spec.n_views; i++) {
        const View *view = &plate->views[i];
        cairo_save(cr);
        cairo_translate(cr, view->at.x, plate->ruler_y);
        hw_ruler_draw(cr, plate->context, subject->axis, &view->at.map, &clock, NULL, RULER_PX, &plate->ink);
        cairo_restore(cr);
        if (view->title == NULL || *view->title == '\0')
            continue;
        g_autoptr(PangoLayout) title = shape(plate, 14, true, view->title, view->at.map.width_px, 1);
        hw_colour_set(cr, &plate->ink.text);
        hw_text_draw(cr, title, view->at.x, plate->top_y);
    }
}

/* A round time no wider than max_px. */
static int64_t
bar_ns(double ns_per_px, double max_px)
{
    int64_t best = 1;
    for (int64_t step = 1; step > 0 && (double)step <= ns_per_px * max_px;
         step = hw_ruler_step_ns(1, (double)step + 1))
        best = step;
    return best;
}

static double
draw_scale_bar(const HwPlate *plate, cairo_t *cr, double x, double y)
{
    double period_ns = hw_time_base_get_period_ns(hw_strip_get_time_base(plate->subject->strip));
    double ns_per_px = period_ns / plate->spec.px_per_cell;
    int64_t ns = bar_ns(ns_per_px, 160);
    double length = (double)ns / ns_per_px;
    hw_colour_set(cr, &plate->ink.text);
    cairo_rectangle(cr, x, y + 11, length, 2);
    cairo_rectangle(cr, x, y + 6, 1, 12);
    cairo_rectangle(cr, x + length - 1, y + 6, 1, 12);
    cairo_fill(cr);
    g_autofree char *amount = hw_number_dup_double((double)ns * 1e-6);
    g_autofree char *text = g_strdup_printf("%s\u00a0ms", amount);
    g_autoptr(PangoLayout) layout = shape(plate, 12, true, text, 0, 1);
    double width;
    hw_text_size(layout, &width, NULL);
    hw_text_draw(cr, layout, x + length + 8, y + 4);
    return x + length + 8 + width;
}

/* Which way they ride: towards FRONT. Where it was never stated, a warning above says so. */
static double
draw_travel(const HwPlate *plate, cairo_t *cr, double x, double y)
{
    bool to_right = plate->subject->later_left;
    double length = 70, middle = y + 12;
    double tip = to_right ? x + length : x, base = to_right ? tip - 14 : tip + 14;
    hw_colour_set(cr, &plate->ink.text);
    cairo_rectangle(cr, to_right ? x : base, middle - 1.5, length - 14, 3);
    cairo_fill(cr);
    cairo_move_to(cr, tip, middle);
    cairo_line_to(cr, base, middle - 7);
    cairo_line_to(cr, base, middle + 7);
    cairo_close_path(cr);
    cairo_fill(cr);
    bool known = plate->subject->picture.travel != HW_SIDE_UNKNOWN;
    g_autoptr(PangoLayout) layout =
        shape(plate, 12, true, known ? "direction of riding" : "direction of riding: not stated", 0, 1);
    double width;
    hw_text_size(layout, &width, NULL);
    hw_text_draw(cr, layout, x + length + 10, y + 4);
    return x + length + 10 + width;
}

static void
draw_scale(const HwPlate *plate, cairo_t *cr)
{
    double x = draw_travel(plate, cr, HW_PLATE_MARGIN, plate->scale_y);
    x = draw_scale_bar(plate, cr, x + 36, plate->scale_y);
    g_autofree char *text = g_strdup_printf("%s · %s", plate->subject->scale, plate->zoom);
    double room = HW_PLATE_MARGIN + plate->text_width - x - 28;
    g_autoptr(PangoLayout) layout = shape(plate, 12, false, text, MAX(room, 200), 2);
    hw_colour_set(cr, &plate->ink.text);
    hw_text_draw(cr, layout, x + 28, plate->scale_y + 4);
}

static void
draw_table(const HwPlate *plate, cairo_t *cr)
{
    if (plate->table == NULL || hw_table_get_n_rows(plate->table) == 0)
        return;
    g_autoptr(PangoLayout) caption = shape(plate, 12, false, plate->subject->caption, plate->text_width, 1);
    hw_colour_set(cr, &plate->ink.dim_text);
    hw_text_draw(cr, caption, HW_PLATE_MARGIN, plate->table_y - 24);
    cairo_save(cr);
    cairo_translate(cr, HW_PLATE_MARGIN, plate->table_y);
    hw_table_draw(plate->table, cr);
    cairo_restore(cr);
}

static void
draw_foot(const HwPlate *plate, cairo_t *cr)
{
    double y = plate->foot_y;
    hw_colour_set(cr, &plate->ink.rule);
    cairo_rectangle(cr, HW_PLATE_MARGIN, y, plate->width - 2 * HW_PLATE_MARGIN, 1);
    cairo_fill(cr);
    y += 6;
    hw_colour_set(cr, &plate->ink.text);
    for (guint i = 0; i < plate->foot->len; i++) {
        PangoLayout *line = g_ptr_array_index(plate->foot, i);
        hw_text_draw(cr, line, HW_PLATE_MARGIN, y);
        if (i + 1 < plate->foot->len)
            y += height_of(line) + FOOT_LINE_GAP_PX;
    }
    const char *version = plate->subject->picture.version;
    g_autofree char *text = g_strdup_printf(
        "%s%s%s", version != NULL ? version : "",
        version != NULL && *version != '\0' && *plate->page != '\0' ? " · " : "", plate->page);
    g_autoptr(PangoLayout) layout = shape(plate, 11, true, text, 240, 1);
    double width;
    hw_text_size(layout, &width, NULL);
    hw_text_draw(cr, layout, plate->right_x - width, y);
}

void
hw_plate_draw_under(const HwPlate *plate, cairo_t *cr)
{
    hw_colour_set(cr, &plate->ink.paper);
    cairo_paint(cr);
    draw_head(plate, cr);
    if (plate->spec.n_views > 0) {
        draw_rulers(plate, cr);
        draw_scale(plate, cr);
    }
    for (int i = 0; i < plate->spec.n_views; i++) {
        const View *view = &plate->views[i];
        cairo_rectangle(cr, view->at.x - 1, view->at.y - 1, view->at.map.width_px + 2,
                        view->at.map.height_px + 2);
        hw_colour_set(cr, &plate->ink.rule);
        cairo_fill(cr);
    }
    draw_table(plate, cr);
    draw_foot(plate, cr);
}

void
hw_plate_draw_over(const HwPlate *plate, cairo_t *cr)
{
    const HwSubject *subject = plate->subject;
    for (int i = 0; i < plate->spec.n_views; i++) {
        const View *view = &plate->views[i];
        cairo_save(cr);
        cairo_translate(cr, view->at.x, view->at.y);
        hw_void_hatch_draw(cr, plate->context, subject->axis, hw_strip_get_time_base(subject->strip),
                           &view->at.map, subject->n_rows, NULL, &plate->ink);
        cairo_restore(cr);
        hw_pennant_layout_draw_picture(view->pennants, cr);
        cairo_save(cr);
        cairo_translate(cr, view->at.x, view->rail_y);
        hw_labels_draw(view->labels, cr, view->at.y - view->rail_y);
        cairo_restore(cr);
    }
}
