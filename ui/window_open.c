/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Opening a recording: chosen, dropped or given, read in a worker, shown when it is whole. */
#include "ui/window_private.h"

#include <glib/gi18n.h>

/* A wait shorter than this shows nothing. */
#define WAIT_MS 500

static void
open_thread(GTask *task, gpointer source, gpointer data, GCancellable *cancellable)
{
    GError *error = NULL;
    HwDocument *document = hw_document_open(data, cancellable, &error);

    (void)source;
    if (document)
        g_task_return_pointer(task, document, (GDestroyNotify)hw_document_free);
    else
        g_task_return_error(task, error);
}

static gboolean
show_wait_cb(gpointer data)
{
    HwWindow *window = data;

    window->opening_delay = 0;
    hw_window_show_page(window, "busy");
    return G_SOURCE_REMOVE;
}

static void
show_page(HwWindow *window)
{
    hw_window_show_page(window, hw_session_get_document(window->session) ? "judge" : "start");
    hw_window_update_actions(window);
}

static void
end_opening(HwWindow *window)
{
    g_clear_handle_id(&window->opening_delay, g_source_remove);
    g_clear_object(&window->opening);
}

static void
show_failure(HwWindow *window, const char *sentence)
{
    g_autofree char *escaped = g_markup_escape_text(sentence, -1);

    if (hw_session_get_document(window->session)) {
        show_page(window);
        hw_window_show_message(window, sentence);
        return;
    }
    adw_status_page_set_description(window->failed, escaped);
    hw_window_show_page(window, "failed");
    hw_window_update_actions(window);
}

static void
opened_cb(GObject *source, GAsyncResult *result, gpointer data)
{
    HwWindow *window = HW_WINDOW(source);
    GTask *task = G_TASK(result);
    g_autoptr(GError) error = NULL;
    HwDocument *document = g_task_propagate_pointer(task, &error);

    (void)data;
    /* Another one was begun meanwhile, or the window is gone. */
    if (g_task_get_cancellable(task) != window->opening) {
        hw_document_free(document);
        return;
    }
    end_opening(window);
    if (!document) {
        show_failure(window, error->message);
        return;
    }
    hw_window_hide_message(window);
    hw_session_set_document(window->session, document);
    show_page(window);
    gtk_widget_grab_focus(GTK_WIDGET(window->picture));
}

void
hw_window_cancel_opening(HwWindow *window)
{
    if (!window->opening)
        return;
    g_cancellable_cancel(window->opening);
    end_opening(window);
    if (window->session)
        show_page(window);
}

static void
begin(HwWindow *window, HwOpenRequest *request)
{
    g_autoptr(GTask) task = NULL;

    hw_window_cancel_opening(window);
    window->opening = g_cancellable_new();
    window->opening_delay = g_timeout_add(WAIT_MS, show_wait_cb, window);
    task = g_task_new(window, window->opening, opened_cb, NULL);
    g_task_set_return_on_cancel(task, FALSE);
    g_task_set_task_data(task, request, (GDestroyNotify)hw_open_request_free);
    g_task_run_in_thread(task, open_thread);
}

typedef struct {
    HwWindow *window;
    HwOpenRequest *request;
} Pending;

static void
discard_response_cb(Pending *pending, const char *response)
{
    if (g_strcmp0(response, "discard") == 0)
        begin(pending->window, g_steal_pointer(&pending->request));
}

static void
pending_free(gpointer data, GClosure *closure)
{
    Pending *pending = data;

    (void)closure;
    hw_open_request_free(pending->request);
    g_free(pending);
}

void
hw_window_open(HwWindow *window, HwOpenRequest *request)
{
    GtkWidget *dialog;
    Pending *pending;

    if (!hw_session_is_modified(window->session)) {
        begin(window, request);
        return;
    }
    dialog =
        adw_message_dialog_new(GTK_WINDOW(window), _("Markers are not saved"),
                               _("Opening another recording drops what was marked since the last save."));
    adw_message_dialog_add_responses(ADW_MESSAGE_DIALOG(dialog), "cancel", _("Cancel"), "discard",
                                     _("Drop and open"), NULL);
    adw_message_dialog_set_response_appearance(ADW_MESSAGE_DIALOG(dialog), "discard",
                                               ADW_RESPONSE_DESTRUCTIVE);
    adw_message_dialog_set_default_response(ADW_MESSAGE_DIALOG(dialog), "cancel");
    adw_message_dialog_set_close_response(ADW_MESSAGE_DIALOG(dialog), "cancel");
    pending = g_new0(Pending, 1);
    pending->window = window;
    pending->request = request;
    g_signal_connect_data(dialog, "response", G_CALLBACK(discard_response_cb), pending, pending_free,
                          G_CONNECT_SWAPPED);
    gtk_window_present(GTK_WINDOW(dialog));
}

static void
open_file(HwWindow *window, GFile *file)
{
    g_autofree char *path = g_file_get_path(file);

    if (!path) {
        hw_window_show_message(window,
                               _("This is not a folder of this computer: copy the recording here first."));
        return;
    }
    hw_window_open(window, hw_open_request_new(path));
}

static void
chosen_cb(HwWindow *window, int response, GtkFileChooserNative *chooser)
{
    g_autoptr(GFile) file = NULL;

    if (response == GTK_RESPONSE_ACCEPT)
        file = gtk_file_chooser_get_file(GTK_FILE_CHOOSER(chooser));
    if (file)
        open_file(window, file);
    g_object_unref(chooser);
}

void
hw_window_choose_recording(HwWindow *window)
{
    GtkFileChooserNative *chooser =
        gtk_file_chooser_native_new(_("Open a recording: choose its folder"), GTK_WINDOW(window),
                                    GTK_FILE_CHOOSER_ACTION_SELECT_FOLDER, _("Open"), _("Cancel"));

    gtk_native_dialog_set_modal(GTK_NATIVE_DIALOG(chooser), TRUE);
    g_signal_connect_swapped(chooser, "response", G_CALLBACK(chosen_cb), window);
    gtk_native_dialog_show(GTK_NATIVE_DIALOG(chooser));
}

static gboolean
drop_cb(GtkDropTarget *target, const GValue *value, double x, double y, gpointer data)
{
    GSList *files = g_value_get_boxed(value);

    (void)target;
    (void)x;
    (void)y;
    if (!files)
        return FALSE;
    open_file(HW_WINDOW(data), files->data);
    return TRUE;
}

void
hw_window_setup_drop(HwWindow *window)
{
    GtkDropTarget *target = gtk_drop_target_new(GDK_TYPE_FILE_LIST, GDK_ACTION_COPY);

    g_signal_connect(target, "drop", G_CALLBACK(drop_cb), window);
    gtk_widget_add_controller(GTK_WIDGET(window), GTK_EVENT_CONTROLLER(target));
}
