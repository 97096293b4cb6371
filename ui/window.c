/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "ui/window.h"

#include "ui/window_private.h"

#include <glib/gi18n.h>

G_DEFINE_FINAL_TYPE(HwWindow, hw_window, ADW_TYPE_APPLICATION_WINDOW)

void
hw_window_show_message(HwWindow *window, const char *sentence)
{
    gtk_label_set_text(window->message_text, sentence);
    gtk_widget_set_visible(window->message, TRUE);
}

void
hw_window_hide_message(HwWindow *window)
{
    gtk_widget_set_visible(window->message, FALSE);
}

static void
undo_toast_dismissed_cb(HwWindow *window, AdwToast *toast)
{
    if (window->undo_toast == toast)
        g_clear_object(&window->undo_toast);
}

/* The button would undo something else than it says. */
static void
dismiss_undo_toast(HwWindow *window)
{
    g_autoptr(AdwToast) toast = g_steal_pointer(&window->undo_toast);

    if (toast)
        adw_toast_dismiss(toast);
}

void
hw_window_toast(HwWindow *window, const char *text, bool undo)
{
    AdwToast *toast = adw_toast_new(text);

    adw_toast_set_timeout(toast, undo ? 8 : 4);
    if (undo) {
        adw_toast_set_button_label(toast, _("Undo"));
        adw_toast_set_action_name(toast, "win.undo");
        dismiss_undo_toast(window);
        window->undo_toast = g_object_ref(toast);
        g_signal_connect_object(toast, "dismissed", G_CALLBACK(undo_toast_dismissed_cb), window,
                                G_CONNECT_SWAPPED);
    }
    adw_toast_overlay_add_toast(window->toasts, toast);
}

void
hw_window_show_page(HwWindow *window, const char *name)
{
    GtkWidget *page = gtk_stack_get_child_by_name(window->stack, name);

    /* A page of a stack that is not shown is still there for assistive technology: it must be hidden. */
    gtk_widget_set_visible(page, TRUE);
    gtk_stack_set_visible_child(window->stack, page);
    for (GtkWidget *child = gtk_widget_get_first_child(GTK_WIDGET(window->stack)); child;
         child = gtk_widget_get_next_sibling(child))
        if (child != page)
            gtk_widget_set_visible(child, FALSE);
}

static void
update_title(HwWindow *window)
{
    const HwDocument *document = hw_session_get_document(window->session);
    bool modified = hw_session_is_modified(window->session);
    g_autofree char *name = NULL;
    g_autofree char *title = NULL;

    if (!document) {
        adw_window_title_set_title(window->title, "Halfwheel");
        adw_window_title_set_subtitle(window->title, "");
        gtk_window_set_title(GTK_WINDOW(window), "Halfwheel");
        return;
    }
    name = g_path_get_basename(hw_recording_get_path(document->recording));
    title = g_strdup_printf("%s%s", modified ? "• " : "", name);
    adw_window_title_set_title(window->title, title);
    adw_window_title_set_subtitle(window->title, modified ? _("markers not saved") : "");
    gtk_window_set_title(GTK_WINDOW(window), title);
}

/* A recording that is not whole says so as long as it is open. */
static void
update_incomplete(HwWindow *window)
{
    HwStrip *strip = hw_session_get_strip(window->session);
    g_autoptr(GString) text = NULL;
    guint n_damaged = 0;

    if (!strip || hw_strip_is_whole(strip)) {
        gtk_widget_set_visible(window->incomplete, FALSE);
        return;
    }
    text = g_string_new(_("Incomplete recording."));
    for (guint i = 0; i < hw_strip_get_n_blocks(strip); i++) {
        const char *reason = hw_strip_get_damage(strip, i);

        if (!reason)
            continue;
        if (++n_damaged <= 2)
            g_string_append_printf(text, n_damaged == 1 ? " %s" : "; %s", reason);
    }
    if (n_damaged > 2)
        g_string_append_printf(text, _("; and %u more"), n_damaged - 2);
    if (n_damaged > 0)
        g_string_append(text, ".");
    else
        g_string_append(text, _(" The camera has not finished writing it."));
    if (n_damaged > 0)
        g_string_append(text,
                        _(" Gaps between riders that do not touch the missing stretches are not affected."));
    gtk_label_set_text(window->incomplete_text, text->str);
    gtk_widget_set_visible(window->incomplete, TRUE);
}

static void
document_changed_cb(HwWindow *window)
{
    dismiss_undo_toast(window);
    update_title(window);
    update_incomplete(window);
    hw_window_update_actions(window);
}

static void
markers_changed_cb(HwWindow *window)
{
    update_title(window);
    hw_window_update_actions(window);
}

static void
tray_done_cb(HwWindow *window)
{
    gtk_widget_grab_focus(GTK_WIDGET(window->picture));
}

static void
picture_typed_cb(HwWindow *window, const char *text)
{
    hw_tray_begin(window->tray, text);
}

static void
rename_cb(HwWindow *window)
{
    hw_tray_begin_rename(window->tray);
}

static void
picture_said_cb(HwWindow *window, const char *text)
{
    hw_tray_say(window->tray, text);
}

static void
goto_activate_cb(HwWindow *window)
{
    const char *text = gtk_editable_get_text(GTK_EDITABLE(window->goto_entry));

    gtk_widget_activate_action(GTK_WIDGET(window), "win.goto-time", "s", text);
}

static void
hw_window_dispose(GObject *object)
{
    HwWindow *window = HW_WINDOW(object);

    hw_window_cancel_opening(window);
    if (window->session)
        g_signal_handlers_disconnect_by_data(window->session, window);
    g_clear_handle_id(&window->opening_delay, g_source_remove);
    g_clear_object(&window->session);
    g_clear_object(&window->undo_toast);
    g_clear_pointer(&window->samples, g_free);
    gtk_widget_dispose_template(GTK_WIDGET(object), HW_TYPE_WINDOW);
    G_OBJECT_CLASS(hw_window_parent_class)->dispose(object);
}

static void
hw_window_class_init(HwWindowClass *class)
{
    GtkWidgetClass *widget_class = GTK_WIDGET_CLASS(class);

    g_type_ensure(HW_TYPE_CONTEXT_LINE);
    g_type_ensure(HW_TYPE_PICTURE_VIEW);
    g_type_ensure(HW_TYPE_TRAY);
    g_type_ensure(HW_TYPE_FINISH_PANEL);
    G_OBJECT_CLASS(class)->dispose = hw_window_dispose;
    GTK_WINDOW_CLASS(class)->close_request = hw_window_close_request;
    gtk_widget_class_set_template_from_resource(widget_class, "/org/halfwheel/Halfwheel/window.ui");
    gtk_widget_class_bind_template_child(widget_class, HwWindow, title);
    gtk_widget_class_bind_template_child(widget_class, HwWindow, toasts);
    gtk_widget_class_bind_template_child(widget_class, HwWindow, stack);
    gtk_widget_class_bind_template_child(widget_class, HwWindow, failed);
    gtk_widget_class_bind_template_child(widget_class, HwWindow, sample_button);
    gtk_widget_class_bind_template_child(widget_class, HwWindow, back_button);
    gtk_widget_class_bind_template_child(widget_class, HwWindow, message);
    gtk_widget_class_bind_template_child(widget_class, HwWindow, message_text);
    gtk_widget_class_bind_template_child(widget_class, HwWindow, incomplete);
    gtk_widget_class_bind_template_child(widget_class, HwWindow, incomplete_text);
    gtk_widget_class_bind_template_child(widget_class, HwWindow, context);
    gtk_widget_class_bind_template_child(widget_class, HwWindow, picture);
    gtk_widget_class_bind_template_child(widget_class, HwWindow, tray);
    gtk_widget_class_bind_template_child(widget_class, HwWindow, panel);
    gtk_widget_class_bind_template_child(widget_class, HwWindow, goto_button);
    gtk_widget_class_bind_template_child(widget_class, HwWindow, goto_entry);
    gtk_widget_class_bind_template_callback(widget_class, tray_done_cb);
    gtk_widget_class_bind_template_callback(widget_class, picture_typed_cb);
    gtk_widget_class_bind_template_callback(widget_class, picture_said_cb);
    gtk_widget_class_bind_template_callback(widget_class, rename_cb);
    gtk_widget_class_bind_template_callback(widget_class, goto_activate_cb);
}

static void
hw_window_init(HwWindow *window)
{
    window->session = hw_session_new();
    gtk_widget_init_template(GTK_WIDGET(window));
    hw_context_line_set_session(window->context, window->session);
    hw_picture_view_set_session(window->picture, window->session);
    hw_tray_set_session(window->tray, window->session);
    hw_finish_panel_set_session(window->panel, window->session);
    g_signal_connect_object(window->session, "document-changed", G_CALLBACK(document_changed_cb), window,
                            G_CONNECT_SWAPPED);
    g_signal_connect_object(window->session, "strip-changed", G_CALLBACK(update_incomplete), window,
                            G_CONNECT_SWAPPED);
    g_signal_connect_object(window->session, "markers-changed", G_CALLBACK(markers_changed_cb), window,
                            G_CONNECT_SWAPPED);
    g_signal_connect_object(window->session, "markers-changed", G_CALLBACK(dismiss_undo_toast), window,
                            G_CONNECT_SWAPPED);
    g_signal_connect_object(window->session, "notify::modified", G_CALLBACK(markers_changed_cb), window,
                            G_CONNECT_SWAPPED);
    g_signal_connect_object(window->session, "notify::selection", G_CALLBACK(hw_window_update_actions),
                            window, G_CONNECT_SWAPPED);
    hw_window_show_page(window, "start");
    hw_window_add_actions(window);
    hw_window_setup_drop(window);
    hw_window_update_actions(window);
}

HwWindow *
hw_window_new(GtkApplication *application, const char *samples)
{
    HwWindow *window = g_object_new(HW_TYPE_WINDOW, "application", application, NULL);

    window->samples = g_strdup(samples);
    gtk_widget_set_visible(window->sample_button, samples != NULL);
    hw_window_update_actions(window);
    return window;
}

bool
hw_window_is_empty(HwWindow *window)
{
    return !hw_session_get_document(window->session) && !window->opening;
}
