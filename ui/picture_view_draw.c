/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Drawing of the picture view: reads what is shown and paints it; sets nothing. */
#include "ui/picture_view_private.h"

#include "core/sheet/reading_line.h"
#include "core/sheet/ruler.h"
#include "core/sheet/void_hatch.h"
#include "ui/words.h"

#include <glib/gi18n.h>
#include <math.h>

static HwColour
from_rgba(const GdkRGBA *rgba, double alpha)
{
    return (HwColour){ (double)rgba->red, (double)rgba->green, (double)rgba->blue,
                       (double)rgba->alpha * alpha };
}

static HwColour
mixed(const HwColour *a, const HwColour *b, double share)
{
    return (HwColour){ a->red + (b->red - a->red) * share, a->green + (b->green - a->green) * share,
                       a->blue + (b->blue - a->blue) * share, 1.0 };
}

/* Rail and ruler follow the desktop's style; the picture and what stands on it do not. */
void
hw_picture_view_read_ink(HwPictureView *view)
{
    GtkStyleContext *context = gtk_widget_get_style_context(GTK_WIDGET(view));
    HwInk ink = hw_ink_paper();
    GdkRGBA paper, text, accent;

    gtk_style_context_get_color(context, &text);
    if (!gtk_style_context_lookup_color(context, "view_bg_color", &paper))
        paper = (GdkRGBA){ 1.0F, 1.0F, 1.0F, 1.0F };
    if (!gtk_style_context_lookup_color(context, "accent_color", &accent))
        accent = text;
    ink.paper = from_rgba(&paper, 1.0);
    ink.text = from_rgba(&text, 1.0);
    ink.text = mixed(&ink.paper, &ink.text, ink.text.alpha);
    ink.dim_text = mixed(&ink.paper, &ink.text, 0.7);
    ink.rule = mixed(&ink.paper, &ink.text, 0.5);
    ink.selected = from_rgba(&accent, 1.0);
    ink.snap_px = 1.0 / gtk_widget_get_scale_factor(GTK_WIDGET(view));
    view->ink = ink;
}

static HwPennantState
state_of(const HwMarker *marker)
{
    return marker->state == HW_MARKER_ROUGH ? HW_PENNANT_ROUGH : HW_PENNANT_READ;
}

void
hw_picture_view_lay_out(HwPictureView *view)
{
    HwPennantPlace place = { 0.0, HW_PICTURE_Y, 2.0, HW_RAIL_PX - 2.0 };
    guint n_markers;
    g_autofree HwPennant *pennants = NULL;
    HwViewMap map;

    g_clear_handle_id(&view->laying_out, g_source_remove);
    g_clear_pointer(&view->pennants, hw_pennant_layout_free);
    if (!view->session || !hw_picture_view_get_map(view, &map))
        return;
    n_markers = hw_session_get_n_markers(view->session);
    pennants = g_new0(HwPennant, n_markers + 1);
    for (guint i = 0; i < n_markers; i++) {
        const HwMarker *marker = hw_session_get_marker(view->session, (int)i);

        pennants[i].column = marker->column;
        pennants[i].row = isnan(marker->row) ? hw_strip_get_n_rows(view->shown->strip) / 2.0 : marker->row;
        pennants[i].bib = marker->bib;
        pennants[i].state = state_of(marker);
        pennants[i].rear = marker->edge == HW_EDGE_REAR;
        pennants[i].selected = (int)i == hw_session_get_selection(view->session);
    }
    view->pennants = hw_pennant_layout_new(gtk_widget_get_pango_context(GTK_WIDGET(view)), view->shown->axis,
                                           &map, pennants, (int)n_markers, &place, &view->ink);
}

static gboolean
lay_out_cb(gpointer data)
{
    HwPictureView *view = data;

    view->laying_out = 0;
    hw_picture_view_lay_out(view);
    gtk_widget_queue_draw(GTK_WIDGET(view));
    return G_SOURCE_REMOVE;
}

void
hw_picture_view_queue_layout(HwPictureView *view)
{
    if (!view->laying_out)
        view->laying_out = g_idle_add_full(GDK_PRIORITY_REDRAW - 1, lay_out_cb, view, NULL);
}

static bool
ruler_clock(HwPictureView *view, HwRulerClock *clock)
{
    const HwDocument *document = hw_session_get_document(view->session);

    if (!document)
        return false;
    *clock = (HwRulerClock){ .epoch = *hw_recording_get_epoch(document->recording) };
    return true;
}

static void
draw_head(HwPictureView *view, GtkSnapshot *snapshot, const HwViewMap *map, int width)
{
    GtkWidget *widget = GTK_WIDGET(view);
    cairo_t *cr = gtk_snapshot_append_cairo(snapshot, &GRAPHENE_RECT_INIT(0, 0, (float)width, HW_PICTURE_Y));
    HwRulerClock clock;
    double line_x;

    hw_colour_set(cr, &view->ink.paper);
    cairo_paint(cr);
    cairo_save(cr);
    cairo_translate(cr, 0, HW_RAIL_PX);
    if (ruler_clock(view, &clock))
        hw_ruler_draw(cr, gtk_widget_get_pango_context(widget), view->shown->axis, map, &clock, _("FRONT"),
                      HW_RULER_PX, &view->ink);
    cairo_restore(cr);
    if (view->pennants && !view->is_bare)
        hw_pennant_layout_draw_rail(view->pennants, cr);
    /* A pointer at the foot of the ruler: where the line stands, even over a bare picture. */
    line_x = hw_view_map_x(map, hw_session_get_reading_cell(view->session));
    if (line_x >= 0.0 && line_x <= width) {
        cairo_move_to(cr, line_x - 5.0, HW_PICTURE_Y - 5.0);
        cairo_line_to(cr, line_x + 5.0, HW_PICTURE_Y - 5.0);
        cairo_line_to(cr, line_x, HW_PICTURE_Y);
        cairo_close_path(cr);
        hw_colour_set(cr, &view->ink.text);
        cairo_fill(cr);
    }
    cairo_destroy(cr);
}

static void
draw_ghost(HwPictureView *view, cairo_t *cr, const HwViewMap *map)
{
    static const double dashes[] = { 4.0, 4.0 };
    double x;

    if (isnan(view->ghost_column))
        return;
    x = hw_hairline_x(map, hw_axis_position(view->shown->axis, view->ghost_column), &view->ink) + 0.5;
    cairo_set_line_width(cr, 1.0);
    cairo_move_to(cr, x, 0);
    cairo_line_to(cr, x, map->height_px);
    hw_colour_set(cr, &view->ink.casing);
    cairo_stroke_preserve(cr);
    cairo_set_dash(cr, dashes, 2, 0.0);
    hw_colour_set(cr, &view->ink.core);
    cairo_stroke(cr);
    cairo_set_dash(cr, NULL, 0, 0.0);
}

/* The row under the hand, as a short tick across the line. */
static void
draw_hand(HwPictureView *view, cairo_t *cr, const HwViewMap *map, double line_x)
{
    double y = floor(hw_view_map_y(map, hw_session_get_hand_row(view->session)));

    cairo_rectangle(cr, line_x - 7.0, y - 1.0, 14.0, 3.0);
    hw_colour_set(cr, &view->ink.casing);
    cairo_fill(cr);
    cairo_rectangle(cr, line_x - 6.0, y, 12.0, 1.0);
    hw_colour_set(cr, &view->ink.core);
    cairo_fill(cr);
}

static void
draw_overlays(HwPictureView *view, GtkSnapshot *snapshot, const HwViewMap *map)
{
    cairo_t *cr = gtk_snapshot_append_cairo(
        snapshot, &GRAPHENE_RECT_INIT(0, HW_PICTURE_Y, (float)map->width_px, (float)map->height_px));
    double cell = hw_session_get_reading_cell(view->session);
    double line_x = hw_view_map_x(map, cell);

    cairo_save(cr);
    cairo_translate(cr, 0, HW_PICTURE_Y);
    hw_void_hatch_draw(cr, gtk_widget_get_pango_context(GTK_WIDGET(view)), view->shown->axis,
                       hw_strip_get_time_base(view->shown->strip), map,
                       hw_strip_get_n_rows(view->shown->strip), _("no picture"), &view->ink);
    if (!view->is_bare)
        draw_ghost(view, cr, map);
    cairo_restore(cr);
    if (view->pennants && !view->is_bare)
        hw_pennant_layout_draw_picture(view->pennants, cr);
    cairo_translate(cr, 0, HW_PICTURE_Y);
    if (!view->is_bare && line_x >= -1.0 && line_x <= map->width_px + 1.0) {
        hw_reading_line_draw(cr, map, cell, 0, map->height_px, &view->ink);
        draw_hand(view, cr, map, line_x);
    }
    cairo_destroy(cr);
}

static void
draw_plate(HwPictureView *view, GtkSnapshot *snapshot, const char *text, double right, double bottom)
{
    g_autoptr(PangoLayout) layout = gtk_widget_create_pango_layout(GTK_WIDGET(view), text);
    GdkRGBA ground = { 0.08F, 0.08F, 0.08F, 0.85F };
    GdkRGBA white = { 1.0F, 1.0F, 1.0F, 1.0F };
    int width, height;
    float x, y;

    pango_layout_get_pixel_size(layout, &width, &height);
    x = (float)floor(right - width - 12.0);
    y = (float)floor(bottom - height - 6.0);
    gtk_snapshot_append_color(snapshot, &ground,
                              &GRAPHENE_RECT_INIT(x, y, (float)width + 12.0F, (float)height + 6.0F));
    gtk_snapshot_save(snapshot);
    gtk_snapshot_translate(snapshot, &GRAPHENE_POINT_INIT(x + 6.0F, y + 3.0F));
    gtk_snapshot_append_layout(snapshot, layout, &white);
    gtk_snapshot_restore(snapshot);
}

void
hw_picture_view_draw(HwPictureView *view, GtkSnapshot *snapshot)
{
    int width = gtk_widget_get_width(GTK_WIDGET(view));
    int height = gtk_widget_get_height(GTK_WIDGET(view));
    GdkRGBA ground = { 0.29F, 0.29F, 0.29F, 1.0F };
    g_autofree char *scale = NULL;
    HwViewMap map;

    gtk_snapshot_append_color(snapshot, &ground, &GRAPHENE_RECT_INIT(0, 0, (float)width, (float)height));
    if (!hw_picture_view_get_map(view, &map) || !hw_session_get_document(view->session))
        return;
    gtk_snapshot_append_texture(
        snapshot, view->shown->texture,
        &GRAPHENE_RECT_INIT(0, HW_PICTURE_Y, (float)map.width_px, (float)map.height_px));
    draw_overlays(view, snapshot, &map);
    draw_head(view, snapshot, &map, width);
    if (view->is_bare)
        return;
    scale = hw_words_dup_scale(view->shown->map.cells_per_px);
    draw_plate(view, snapshot, scale, width - 8.0, height - 8.0);
    if (!view->shown->is_whole)
        draw_plate(view, snapshot, _("the picture is being read…"), width - 8.0, height - 40.0);
    if (hw_session_get_mirrored(view->session))
        draw_plate(view, snapshot, _("mirrored view: riders face the wrong way"), width - 8.0,
                   HW_PICTURE_Y + 34.0);
}
