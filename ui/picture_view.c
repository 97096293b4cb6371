/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "ui/picture_view.h"

#include "ui/picture_view_private.h"
#include "ui/words.h"

#include <adwaita.h>
#include <glib/gi18n.h>
#include <math.h>

enum { TYPED, RENAME, SAID, N_SIGNALS };

static guint signals[N_SIGNALS];

G_DEFINE_FINAL_TYPE(HwPictureView, hw_picture_view, GTK_TYPE_WIDGET)

void
hw_picture_view_emit_text(HwPictureView *view, const char *signal, const char *text)
{
    g_signal_emit_by_name(view, signal, text);
}

bool
hw_picture_view_get_map(HwPictureView *view, HwViewMap *map)
{
    int scale = gtk_widget_get_scale_factor(GTK_WIDGET(view));

    if (!view->shown)
        return false;
    *map = view->shown->map;
    map->cells_per_px *= scale;
    map->rows_per_px *= scale;
    map->width_px /= scale;
    map->height_px /= scale;
    return true;
}

static void
request_picture(HwPictureView *view)
{
    HwStrip *strip = hw_session_get_strip(view->session);

    if (strip)
        hw_composer_request(view->composer, strip, hw_session_get_axis(view->session),
                            hw_session_get_view(view->session));
}

static bool
shows_all(HwSession *session, const HwViewMap *map)
{
    return map->first_cell <= 0.0 &&
           hw_view_map_last_cell(map) >= (double)hw_axis_get_n_cells(hw_session_get_axis(session));
}

static void
composed_cb(HwComposed *composed, gpointer data)
{
    HwPictureView *view = data;

    if (composed->failure) {
        hw_picture_view_emit_text(view, "said", composed->failure);
        hw_composed_free(composed);
        return;
    }
    g_clear_pointer(&view->shown, hw_composed_free);
    view->shown = composed;
    hw_picture_view_lay_out(view);
    gtk_widget_queue_draw(GTK_WIDGET(view));
    if (composed->refreshed)
        hw_session_set_strip(view->session, composed->refreshed);
    else if (composed->is_whole && shows_all(view->session, &composed->map))
        hw_session_set_all_checked(view->session);
}

static void
update_description(HwPictureView *view)
{
    g_autofree char *text = hw_words_dup_picture(view->session);

    if (g_strcmp0(text, view->description) == 0)
        return;
    g_free(view->description);
    view->description = g_steal_pointer(&text);
    gtk_accessible_update_property(GTK_ACCESSIBLE(view), GTK_ACCESSIBLE_PROPERTY_DESCRIPTION,
                                   view->description, -1);
}

void
hw_picture_view_drop_ghost(HwPictureView *view)
{
    if (isnan(view->ghost_column))
        return;
    view->ghost_column = NAN;
    gtk_widget_queue_draw(GTK_WIDGET(view));
}

static void
document_changed_cb(HwPictureView *view)
{
    hw_composer_cancel(view->composer);
    g_clear_pointer(&view->shown, hw_composed_free);
    g_clear_pointer(&view->pennants, hw_pennant_layout_free);
    view->ghost_column = NAN;
    request_picture(view);
    update_description(view);
    gtk_widget_queue_draw(GTK_WIDGET(view));
}

static void
markers_changed_cb(HwPictureView *view)
{
    hw_picture_view_queue_layout(view);
    update_description(view);
}

static void
line_moved_cb(HwPictureView *view)
{
    update_description(view);
    gtk_widget_queue_draw(GTK_WIDGET(view));
}

static void
style_changed_cb(HwPictureView *view)
{
    hw_picture_view_read_ink(view);
    hw_picture_view_queue_layout(view);
}

static void
hw_picture_view_snapshot(GtkWidget *widget, GtkSnapshot *snapshot)
{
    hw_picture_view_draw(HW_PICTURE_VIEW(widget), snapshot);
}

static void
hw_picture_view_size_allocate(GtkWidget *widget, int width, int height, int baseline)
{
    HwPictureView *view = HW_PICTURE_VIEW(widget);
    int scale = gtk_widget_get_scale_factor(widget);

    (void)baseline;
    if (view->session)
        hw_session_set_viewport(view->session, width * scale, MAX(height - HW_PICTURE_Y, 1) * scale);
}

static void
hw_picture_view_measure(GtkWidget *widget, GtkOrientation orientation, int for_size, int *minimum,
                        int *natural, int *minimum_baseline, int *natural_baseline)
{
    (void)widget;
    (void)for_size;
    (void)minimum_baseline;
    (void)natural_baseline;
    *minimum = orientation == GTK_ORIENTATION_HORIZONTAL ? 320 : HW_PICTURE_Y + 160;
    *natural = orientation == GTK_ORIENTATION_HORIZONTAL ? 900 : HW_PICTURE_Y + 480;
}

static void
hw_picture_view_css_changed(GtkWidget *widget, GtkCssStyleChange *change)
{
    GTK_WIDGET_CLASS(hw_picture_view_parent_class)->css_changed(widget, change);
    style_changed_cb(HW_PICTURE_VIEW(widget));
}

static void
hw_picture_view_dispose(GObject *object)
{
    HwPictureView *view = HW_PICTURE_VIEW(object);

    if (view->session)
        g_signal_handlers_disconnect_by_data(view->session, view);
    g_clear_handle_id(&view->laying_out, g_source_remove);
    g_clear_pointer(&view->composer, hw_composer_free);
    g_clear_pointer(&view->shown, hw_composed_free);
    g_clear_pointer(&view->pennants, hw_pennant_layout_free);
    g_clear_object(&view->session);
    g_clear_pointer(&view->description, g_free);
    G_OBJECT_CLASS(hw_picture_view_parent_class)->dispose(object);
}

static void
hw_picture_view_class_init(HwPictureViewClass *class)
{
    GtkWidgetClass *widget_class = GTK_WIDGET_CLASS(class);

    G_OBJECT_CLASS(class)->dispose = hw_picture_view_dispose;
    widget_class->snapshot = hw_picture_view_snapshot;
    widget_class->size_allocate = hw_picture_view_size_allocate;
    widget_class->measure = hw_picture_view_measure;
    widget_class->css_changed = hw_picture_view_css_changed;
    gtk_widget_class_set_css_name(widget_class, "picture-view");
    gtk_widget_class_set_accessible_role(widget_class, GTK_ACCESSIBLE_ROLE_IMG);
    signals[TYPED] = g_signal_new("typed", HW_TYPE_PICTURE_VIEW, G_SIGNAL_RUN_LAST, 0, NULL, NULL, NULL,
                                  G_TYPE_NONE, 1, G_TYPE_STRING);
    signals[RENAME] =
        g_signal_new("rename", HW_TYPE_PICTURE_VIEW, G_SIGNAL_RUN_LAST, 0, NULL, NULL, NULL, G_TYPE_NONE, 0);
    signals[SAID] = g_signal_new("said", HW_TYPE_PICTURE_VIEW, G_SIGNAL_RUN_LAST, 0, NULL, NULL, NULL,
                                 G_TYPE_NONE, 1, G_TYPE_STRING);
}

static void
hw_picture_view_init(HwPictureView *view)
{
    view->ghost_column = NAN;
    view->pointer_x = view->pointer_y = NAN;
    view->drag_marker = -1;
    view->composer = hw_composer_new(composed_cb, view);
    gtk_widget_set_focusable(GTK_WIDGET(view), TRUE);
    gtk_widget_set_overflow(GTK_WIDGET(view), GTK_OVERFLOW_HIDDEN);
    gtk_accessible_update_property(GTK_ACCESSIBLE(view), GTK_ACCESSIBLE_PROPERTY_LABEL, _("Picture"), -1);
    hw_picture_view_read_ink(view);
    hw_picture_view_add_input(view);
    g_signal_connect_object(view, "notify::scale-factor", G_CALLBACK(gtk_widget_queue_allocate), view,
                            G_CONNECT_SWAPPED);
    g_signal_connect_object(adw_style_manager_get_default(), "notify::dark", G_CALLBACK(style_changed_cb),
                            view, G_CONNECT_SWAPPED);
}

void
hw_picture_view_set_session(HwPictureView *view, HwSession *session)
{
    view->session = g_object_ref(session);
    g_signal_connect_object(session, "document-changed", G_CALLBACK(document_changed_cb), view,
                            G_CONNECT_SWAPPED);
    g_signal_connect_object(session, "view-changed", G_CALLBACK(request_picture), view, G_CONNECT_SWAPPED);
    g_signal_connect_object(session, "strip-changed", G_CALLBACK(request_picture), view, G_CONNECT_SWAPPED);
    g_signal_connect_object(session, "markers-changed", G_CALLBACK(markers_changed_cb), view,
                            G_CONNECT_SWAPPED);
    g_signal_connect_object(session, "notify::selection", G_CALLBACK(markers_changed_cb), view,
                            G_CONNECT_SWAPPED);
    g_signal_connect_object(session, "notify::reading-cell", G_CALLBACK(line_moved_cb), view,
                            G_CONNECT_SWAPPED);
    g_signal_connect_object(session, "notify::hand-row", G_CALLBACK(line_moved_cb), view, G_CONNECT_SWAPPED);
    document_changed_cb(view);
}

void
hw_picture_view_place(HwPictureView *view)
{
    double cell = hw_session_get_reading_cell(view->session);

    hw_picture_view_drop_ghost(view);
    if (!hw_session_is_in_view(view->session, cell)) {
        hw_picture_view_emit_text(view, "said", _("The reading line is out of view: bring it back first."));
        return;
    }
    if (hw_session_place_marker(view->session, cell, hw_session_get_hand_row(view->session), NULL, NULL) < 0)
        hw_picture_view_emit_text(view, "said",
                                  _("There is no picture at the line: no marker can stand here."));
}

void
hw_picture_view_bring_marker(HwPictureView *view)
{
    int index = hw_session_get_selection(view->session);
    const HwMarker *marker = hw_session_get_marker(view->session, index);
    double old_column;

    if (!marker) {
        hw_picture_view_emit_text(view, "said",
                                  _("Select a marker first: click its flag, or its row in the list."));
        return;
    }
    old_column = marker->column;
    if (hw_session_move_marker(view->session, index, hw_session_get_reading_cell(view->session), NAN, 0))
        view->ghost_column = old_column;
    else
        hw_picture_view_emit_text(view, "said",
                                  _("There is no picture at the line: no marker can stand here."));
}

bool
hw_picture_view_go_unnamed(HwPictureView *view, int direction)
{
    int index = hw_session_next_marker(view->session, direction, true);
    const HwMarker *marker = hw_session_get_marker(view->session, index);

    if (!marker)
        return false;
    hw_picture_view_drop_ghost(view);
    hw_session_set_selection(view->session, index);
    if (!isnan(marker->row))
        hw_session_set_hand_row(view->session, marker->row);
    hw_session_set_reading_cell(view->session,
                                hw_axis_position(hw_session_get_axis(view->session), marker->column), true);
    return true;
}
