/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Keys and gestures of the picture view. Bare keys live here only, so that none is stolen from a field in
 * which something is typed. */
#include "ui/picture_view_private.h"

#include <glib/gi18n.h>
#include <math.h>

/* How near the line a press takes hold of it, logical pixels. */
#define LINE_REACH_PX 4.0
#define WHEEL_FACTOR 1.25
#define KEY_FACTOR 2.0

static int
scale_of(HwPictureView *view)
{
    return gtk_widget_get_scale_factor(GTK_WIDGET(view));
}

static double
middle_px(HwPictureView *view)
{
    return hw_session_get_view(view->session)->width_px / 2.0;
}

/* Where a gesture keeps the picture still, in device pixels. */
static double
pointer_px(HwPictureView *view)
{
    return isnan(view->pointer_x) ? middle_px(view) : view->pointer_x * scale_of(view);
}

static double
pointer_row_px(HwPictureView *view)
{
    if (isnan(view->pointer_y))
        return hw_session_get_view(view->session)->height_px / 2.0;
    return MAX(view->pointer_y - HW_PICTURE_Y, 0.0) * scale_of(view);
}

static bool
is_open(HwPictureView *view)
{
    return view->session && hw_session_get_document(view->session);
}

static void
go_to_end(HwPictureView *view, bool last)
{
    double n_cells = (double)hw_axis_get_n_cells(hw_session_get_axis(view->session));
    double to = last ? n_cells : 0.0;
    double first = INFINITY;

    /* The first crossing is where judging begins. */
    for (int i = 0; !last && i < (int)hw_session_get_n_markers(view->session); i++)
        first = MIN(first, hw_session_get_marker(view->session, i)->column);
    if (!isinf(first))
        to = hw_axis_position(hw_session_get_axis(view->session), first);
    hw_session_set_reading_cell(view->session, to, true);
}

/* The row under the hand, up and down, as the line goes left and right. */
static void
nudge_row(HwPictureView *view, double rows)
{
    hw_session_set_hand_row(view->session, hw_session_get_hand_row(view->session) + rows);
}

static double
step_of(GdkModifierType state)
{
    if (state & GDK_SHIFT_MASK)
        return 10.0;
    return state & GDK_CONTROL_MASK ? 0.1 : 1.0;
}

static void
cancel_drag(HwPictureView *view)
{
    if (view->drag == HW_DRAG_MARKER && view->drag_moved)
        hw_session_undo(view->session);
    if (view->drag == HW_DRAG_LINE)
        hw_session_set_reading_cell(view->session, view->drag_line_cell, false);
    view->drag = HW_DRAG_NONE;
}

static gboolean
escape(HwPictureView *view)
{
    if (view->drag != HW_DRAG_NONE) {
        cancel_drag(view);
        return GDK_EVENT_STOP;
    }
    if (!isnan(view->ghost_column)) {
        hw_picture_view_drop_ghost(view);
        return GDK_EVENT_STOP;
    }
    if (hw_session_get_selection(view->session) >= 0) {
        hw_session_set_selection(view->session, -1);
        return GDK_EVENT_STOP;
    }
    return GDK_EVENT_PROPAGATE;
}

/* Keys that move something; they take Shift and Ctrl as steps. */
static bool
move_key(HwPictureView *view, guint key, GdkModifierType state)
{
    switch (key) {
    case GDK_KEY_Left:
    case GDK_KEY_KP_Left:
        hw_session_nudge_line(view->session, -step_of(state));
        return true;
    case GDK_KEY_Right:
    case GDK_KEY_KP_Right:
        hw_session_nudge_line(view->session, step_of(state));
        return true;
    case GDK_KEY_Up:
    case GDK_KEY_KP_Up:
        nudge_row(view, -step_of(state));
        return true;
    case GDK_KEY_Down:
    case GDK_KEY_KP_Down:
        nudge_row(view, step_of(state));
        return true;
    case GDK_KEY_Page_Up:
    case GDK_KEY_KP_Page_Up:
        hw_session_pan_views(view->session, -0.9);
        return true;
    case GDK_KEY_Page_Down:
    case GDK_KEY_KP_Page_Down:
        hw_session_pan_views(view->session, 0.9);
        return true;
    case GDK_KEY_Home:
    case GDK_KEY_KP_Home:
        go_to_end(view, false);
        return true;
    case GDK_KEY_End:
    case GDK_KEY_KP_End:
        go_to_end(view, true);
        return true;
    default:
        return false;
    }
}

static bool
act_key(HwPictureView *view, guint key)
{
    GtkWidget *widget = GTK_WIDGET(view);

    switch (key) {
    case GDK_KEY_plus:
    case GDK_KEY_equal:
    case GDK_KEY_KP_Add:
        hw_session_zoom_about_line(view->session, KEY_FACTOR);
        return true;
    case GDK_KEY_minus:
    case GDK_KEY_KP_Subtract:
        hw_session_zoom_about_line(view->session, 1.0 / KEY_FACTOR);
        return true;
    case GDK_KEY_Insert:
    case GDK_KEY_KP_Insert:
    case GDK_KEY_space:
        hw_picture_view_place(view);
        return true;
    case GDK_KEY_m:
    case GDK_KEY_M:
        hw_picture_view_bring_marker(view);
        return true;
    case GDK_KEY_r:
    case GDK_KEY_R:
        gtk_widget_activate_action(widget, "win.toggle-rear", NULL);
        return true;
    case GDK_KEY_Delete:
    case GDK_KEY_KP_Delete:
        gtk_widget_activate_action(widget, "win.delete-marker", NULL);
        return true;
    case GDK_KEY_F2:
    case GDK_KEY_Return:
    case GDK_KEY_KP_Enter:
        g_signal_emit_by_name(view, "rename");
        return true;
    case GDK_KEY_g:
    case GDK_KEY_G:
        gtk_widget_activate_action(widget, "win.ask-time", NULL);
        return true;
    case GDK_KEY_b:
    case GDK_KEY_B:
        if (!view->is_bare) {
            view->is_bare = true;
            gtk_widget_queue_draw(widget);
        }
        return true;
    default:
        return false;
    }
}

static bool
typed_key(HwPictureView *view, guint key)
{
    gunichar character = gdk_keyval_to_unicode(key);
    char text[7] = { 0 };

    if (!(character >= '0' && character <= '9') && character != '?')
        return false;
    g_unichar_to_utf8(character, text);
    hw_picture_view_emit_text(view, "typed", text);
    return true;
}

static gboolean
key_pressed_cb(GtkEventControllerKey *controller, guint key, guint code, GdkModifierType state, gpointer data)
{
    HwPictureView *view = data;

    (void)controller;
    (void)code;
    if (!is_open(view) || (state & (GDK_ALT_MASK | GDK_SUPER_MASK)))
        return GDK_EVENT_PROPAGATE;
    if (key == GDK_KEY_Escape)
        return escape(view);
    if ((key == GDK_KEY_Tab || key == GDK_KEY_ISO_Left_Tab) && !(state & GDK_CONTROL_MASK))
        return hw_picture_view_go_unnamed(view,
                                          state & GDK_SHIFT_MASK || key == GDK_KEY_ISO_Left_Tab ? -1 : 1);
    if (move_key(view, key, state)) {
        return GDK_EVENT_STOP;
    }
    if (state & GDK_CONTROL_MASK)
        return GDK_EVENT_PROPAGATE;
    return act_key(view, key) || typed_key(view, key);
}

static void
key_released_cb(GtkEventControllerKey *controller, guint key, guint code, GdkModifierType state,
                gpointer data)
{
    HwPictureView *view = data;

    (void)controller;
    (void)code;
    (void)state;
    if ((key == GDK_KEY_b || key == GDK_KEY_B) && view->is_bare) {
        view->is_bare = false;
        gtk_widget_queue_draw(GTK_WIDGET(view));
    }
}

static void
focus_left_cb(HwPictureView *view)
{
    if (!view->is_bare)
        return;
    view->is_bare = false;
    gtk_widget_queue_draw(GTK_WIDGET(view));
}

static void
pointer_moved_cb(HwPictureView *view, double x, double y)
{
    view->pointer_x = x;
    view->pointer_y = y;
}

static void
pointer_left_cb(HwPictureView *view)
{
    view->pointer_x = view->pointer_y = NAN;
}

static gboolean
scroll_cb(GtkEventControllerScroll *scroll, double dx, double dy, gpointer data)
{
    GtkEventController *controller = GTK_EVENT_CONTROLLER(scroll);
    HwPictureView *view = data;
    GdkModifierType state = gtk_event_controller_get_current_event_state(controller);
    GdkDevice *device = gtk_event_controller_get_current_event_device(controller);
    bool is_touchpad = device && gdk_device_get_source(device) == GDK_SOURCE_TOUCHPAD;
    double step = is_touchpad ? 12.0 * scale_of(view) : 96.0 * scale_of(view);
    double turn = fabs(dy) >= fabs(dx) ? dy : dx;

    if (!is_open(view) || view->drag == HW_DRAG_MARKER)
        return GDK_EVENT_PROPAGATE;
    if (state & GDK_ALT_MASK)
        hw_session_zoom_rows(view->session, pointer_row_px(view), pow(WHEEL_FACTOR, -turn));
    else if (state & GDK_CONTROL_MASK)
        hw_session_zoom(view->session, pointer_px(view), pow(WHEEL_FACTOR, -turn));
    else if (state & GDK_SHIFT_MASK)
        hw_session_pan_px(view->session, -turn * step, 0.0);
    else if (is_touchpad)
        hw_session_pan_px(view->session, -dx * step, -dy * step);
    else if (dx != 0.0 && dy == 0.0)
        hw_session_pan_px(view->session, -dx * step, 0.0);
    else
        hw_session_zoom(view->session, pointer_px(view), pow(WHEEL_FACTOR, -dy));
    return GDK_EVENT_STOP;
}

static void
pinch_begin_cb(HwPictureView *view)
{
    view->pinch_scale = 1.0;
}

static void
pinch_cb(GtkGestureZoom *gesture, double scale, gpointer data)
{
    HwPictureView *view = data;
    double x, y;

    if (!is_open(view) || scale <= 0.0)
        return;
    if (!gtk_gesture_get_bounding_box_center(GTK_GESTURE(gesture), &x, &y))
        x = middle_px(view) / scale_of(view);
    hw_session_zoom(view->session, x * scale_of(view), scale / view->pinch_scale);
    view->pinch_scale = scale;
}

/* The marker whose flag or bib is at a point, or −1. A cluster gives its earliest. */
static int
marker_at(HwPictureView *view, double x, double y)
{
    HwPennantHit hit;

    if (view->laying_out)
        hw_picture_view_lay_out(view);
    if (!view->pennants)
        return -1;
    hit = hw_pennant_layout_hit(view->pennants, x, y, y < HW_PICTURE_Y ? 4.0 : 1.0);
    /* A stem is no handle: there the line must be free to stand as near as one likes. */
    if (hit.part == HW_PENNANT_NOTHING || (hit.part == HW_PENNANT_STEM && y >= HW_PICTURE_Y))
        return -1;
    return hit.index;
}

static void
drag_begin_cb(GtkGestureDrag *gesture, double x, double y, gpointer data)
{
    HwPictureView *view = data;
    guint button = gtk_gesture_single_get_current_button(GTK_GESTURE_SINGLE(gesture));
    double line_x;
    HwViewMap map;

    gtk_widget_grab_focus(GTK_WIDGET(view));
    if (!is_open(view) || !hw_picture_view_get_map(view, &map)) {
        gtk_gesture_set_state(GTK_GESTURE(gesture), GTK_EVENT_SEQUENCE_DENIED);
        return;
    }
    view->drag = HW_DRAG_UNDECIDED;
    view->drag_moved = false;
    view->drag_x = x;
    view->drag_y = y;
    view->drag_line_cell = hw_session_get_reading_cell(view->session);
    view->drag_marker = button == GDK_BUTTON_PRIMARY ? marker_at(view, x, y) : -1;
    line_x = hw_view_map_x(&map, view->drag_line_cell);
    if (view->drag_marker >= 0)
        line_x = hw_view_map_x(
            &map, hw_axis_position(view->shown->axis,
                                   hw_session_get_marker(view->session, view->drag_marker)->column));
    view->drag_offset_px = line_x - x;
    if (button == GDK_BUTTON_MIDDLE)
        view->drag = HW_DRAG_PAN;
}

/* What the drag is of, once it has gone far enough to be one. */
static void
decide_drag(HwPictureView *view, GtkGestureDrag *gesture)
{
    if (view->drag_marker >= 0) {
        view->drag = HW_DRAG_MARKER;
        view->drag_merge = hw_session_new_merge_key(view->session);
        hw_session_set_selection(view->session, view->drag_marker);
    } else if (fabs(view->drag_offset_px) <= LINE_REACH_PX || view->drag_y < HW_PICTURE_Y) {
        view->drag = HW_DRAG_LINE;
    } else {
        view->drag = HW_DRAG_PAN;
    }
    hw_picture_view_drop_ghost(view);
    gtk_gesture_set_state(GTK_GESTURE(gesture), GTK_EVENT_SEQUENCE_CLAIMED);
}

static void
drag_to(HwPictureView *view, double x, double y)
{
    HwViewMap map;
    double cell;

    if (!hw_picture_view_get_map(view, &map))
        return;
    if (view->drag == HW_DRAG_PAN) {
        hw_session_pan_px(view->session, (x - view->drag_x) * scale_of(view),
                          (y - view->drag_y) * scale_of(view));
        view->drag_x = x;
        view->drag_y = y;
        return;
    }
    cell = hw_view_map_cell(&map, x + view->drag_offset_px);
    if (view->drag == HW_DRAG_LINE) {
        hw_session_set_reading_cell(view->session, cell, false);
    } else if (view->drag == HW_DRAG_MARKER) {
        view->drag_moved |=
            hw_session_move_marker(view->session, view->drag_marker, cell, NAN, view->drag_merge);
        hw_session_set_reading_cell(view->session, cell, false);
    }
}

static void
drag_update_cb(GtkGestureDrag *gesture, double dx, double dy, gpointer data)
{
    HwPictureView *view = data;
    double x, y;

    if (view->drag == HW_DRAG_NONE || !gtk_gesture_drag_get_start_point(gesture, &x, &y))
        return;
    if (view->drag == HW_DRAG_UNDECIDED) {
        if (!gtk_drag_check_threshold(GTK_WIDGET(view), (int)x, (int)y, (int)(x + dx), (int)(y + dy)))
            return;
        decide_drag(view, gesture);
    }
    drag_to(view, x + dx, y + dy);
}

static bool
is_double_click(HwPictureView *view, guint32 time, double x, double y)
{
    int within_ms, within_px;
    bool is_double;

    g_object_get(gtk_widget_get_settings(GTK_WIDGET(view)), "gtk-double-click-time", &within_ms,
                 "gtk-double-click-distance", &within_px, NULL);
    is_double = view->last_click_time != 0 && time - view->last_click_time <= (guint32)within_ms &&
                fabs(x - view->last_click_x) <= within_px && fabs(y - view->last_click_y) <= within_px;
    view->last_click_time = is_double ? 0 : time;
    view->last_click_x = x;
    view->last_click_y = y;
    return is_double;
}

static void
click_marker(HwPictureView *view)
{
    const HwMarker *marker = hw_session_get_marker(view->session, view->drag_marker);

    hw_session_set_selection(view->session, view->drag_marker);
    if (!isnan(marker->row))
        hw_session_set_hand_row(view->session, marker->row);
    hw_session_set_reading_cell(view->session,
                                hw_axis_position(hw_session_get_axis(view->session), marker->column), false);
}

static void
click_picture(HwPictureView *view, double x, double y)
{
    HwViewMap map;

    if (!hw_picture_view_get_map(view, &map))
        return;
    hw_session_set_selection(view->session, -1);
    hw_session_set_reading_cell(view->session, hw_view_map_cell(&map, x), false);
    if (y >= HW_PICTURE_Y)
        hw_session_set_hand_row(view->session, hw_view_map_row(&map, y - HW_PICTURE_Y));
}

static void
drag_end_cb(GtkGestureDrag *gesture, double dx, double dy, gpointer data)
{
    HwPictureView *view = data;
    guint32 time = gtk_event_controller_get_current_event_time(GTK_EVENT_CONTROLLER(gesture));
    bool was_click = view->drag == HW_DRAG_UNDECIDED;
    double x, y;

    (void)dx;
    (void)dy;
    view->drag = HW_DRAG_NONE;
    if (!was_click || !gtk_gesture_drag_get_start_point(gesture, &x, &y))
        return;
    hw_picture_view_drop_ghost(view);
    if (view->drag_marker >= 0) {
        click_marker(view);
        if (is_double_click(view, time, x, y))
            g_signal_emit_by_name(view, "rename");
        return;
    }
    click_picture(view, x, y);
    if (is_double_click(view, time, x, y))
        hw_picture_view_place(view);
}

static void
drag_cancel_cb(HwPictureView *view)
{
    cancel_drag(view);
}

void
hw_picture_view_add_input(HwPictureView *view)
{
    GtkWidget *widget = GTK_WIDGET(view);
    GtkEventController *key = gtk_event_controller_key_new();
    GtkEventController *focus = gtk_event_controller_focus_new();
    GtkEventController *motion = gtk_event_controller_motion_new();
    GtkEventController *scroll = gtk_event_controller_scroll_new(GTK_EVENT_CONTROLLER_SCROLL_BOTH_AXES);
    GtkGesture *pinch = gtk_gesture_zoom_new();
    GtkGesture *drag = gtk_gesture_drag_new();

    g_signal_connect(key, "key-pressed", G_CALLBACK(key_pressed_cb), view);
    g_signal_connect(key, "key-released", G_CALLBACK(key_released_cb), view);
    g_signal_connect_swapped(focus, "leave", G_CALLBACK(focus_left_cb), view);
    g_signal_connect_swapped(motion, "enter", G_CALLBACK(pointer_moved_cb), view);
    g_signal_connect_swapped(motion, "motion", G_CALLBACK(pointer_moved_cb), view);
    g_signal_connect_swapped(motion, "leave", G_CALLBACK(pointer_left_cb), view);
    g_signal_connect(scroll, "scroll", G_CALLBACK(scroll_cb), view);
    g_signal_connect_swapped(pinch, "begin", G_CALLBACK(pinch_begin_cb), view);
    g_signal_connect(pinch, "scale-changed", G_CALLBACK(pinch_cb), view);
    gtk_gesture_single_set_button(GTK_GESTURE_SINGLE(drag), 0);
    g_signal_connect(drag, "drag-begin", G_CALLBACK(drag_begin_cb), view);
    g_signal_connect(drag, "drag-update", G_CALLBACK(drag_update_cb), view);
    g_signal_connect(drag, "drag-end", G_CALLBACK(drag_end_cb), view);
    g_signal_connect_swapped(drag, "cancel", G_CALLBACK(drag_cancel_cb), view);
    gtk_widget_add_controller(widget, key);
    gtk_widget_add_controller(widget, focus);
    gtk_widget_add_controller(widget, motion);
    gtk_widget_add_controller(widget, scroll);
    gtk_widget_add_controller(widget, GTK_EVENT_CONTROLLER(pinch));
    gtk_widget_add_controller(widget, GTK_EVENT_CONTROLLER(drag));
}
