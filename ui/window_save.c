/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Saving markers, exporting list and picture: written in a worker, whole or not at all. */
#include "ui/window_private.h"

#include "core/base/digest.h"
#include "core/base/output.h"
#include "core/sheet/picture.h"

#include <glib/gi18n.h>
#include <string.h>

typedef struct {
    char *path;
    char *csv;
    char *expected; /* digest of the file as we know it; NULL: there should be none */
    bool force;     /* asked already */
    guint64 serial;
    HwDigest digest;
} Save;

static void
save_free(gpointer data)
{
    Save *save = data;

    g_free(save->path);
    g_free(save->csv);
    g_free(save->expected);
    g_free(save);
}

static void
save_thread(GTask *task, gpointer source, gpointer data, GCancellable *cancellable)
{
    Save *save = data;
    g_autofree char *now = hw_document_dup_file_digest(save->path);
    GError *error = NULL;

    (void)source;
    (void)cancellable;
    /* Never over a file that nobody has seen: another program or person may have written it. */
    if (!save->force && g_file_test(save->path, G_FILE_TEST_EXISTS) && g_strcmp0(now, save->expected) != 0) {
        g_task_return_new_error(task, G_IO_ERROR, G_IO_ERROR_EXISTS, "%s", save->path);
        return;
    }
    save->digest = hw_digest_bytes(save->csv, strlen(save->csv));
    if (hw_output_write_file(save->path, true, save->csv, strlen(save->csv), &error))
        g_task_return_boolean(task, TRUE);
    else
        g_task_return_error(task, error);
}

static void begin_save(HwWindow *window, bool force);

static void
overwrite_response_cb(HwWindow *window, const char *response)
{
    if (g_strcmp0(response, "overwrite") == 0)
        begin_save(window, true);
    else
        window->closes_after_save = false;
}

static void
ask_overwrite(HwWindow *window, const char *path)
{
    g_autofree char *name = g_path_get_basename(path);
    g_autofree char *body = g_strdup_printf(
        _("The file %s is there and is not what this window opened or saved. Replacing it loses "
          "the markers in it."),
        name);
    GtkWidget *dialog = adw_message_dialog_new(GTK_WINDOW(window), _("Replace other markers?"), body);

    adw_message_dialog_add_responses(ADW_MESSAGE_DIALOG(dialog), "cancel", _("Cancel"), "overwrite",
                                     _("Replace"), NULL);
    adw_message_dialog_set_response_appearance(ADW_MESSAGE_DIALOG(dialog), "overwrite",
                                               ADW_RESPONSE_DESTRUCTIVE);
    adw_message_dialog_set_default_response(ADW_MESSAGE_DIALOG(dialog), "cancel");
    adw_message_dialog_set_close_response(ADW_MESSAGE_DIALOG(dialog), "cancel");
    g_signal_connect_object(dialog, "response", G_CALLBACK(overwrite_response_cb), window, G_CONNECT_SWAPPED);
    gtk_window_present(GTK_WINDOW(dialog));
}

static void
saved_cb(GObject *source, GAsyncResult *result, gpointer data)
{
    HwWindow *window = HW_WINDOW(source);
    Save *save = g_task_get_task_data(G_TASK(result));
    g_autoptr(GError) error = NULL;
    g_autofree char *name = NULL;
    g_autofree char *text = NULL;

    (void)data;
    if (!window->session)
        return;
    if (!g_task_propagate_boolean(G_TASK(result), &error)) {
        if (g_error_matches(error, G_IO_ERROR, G_IO_ERROR_EXISTS)) {
            ask_overwrite(window, save->path);
            return;
        }
        window->closes_after_save = false;
        hw_window_show_message(window, error->message);
        return;
    }
    hw_session_mark_saved(window->session, save->serial, save->path, save->digest.hex);
    hw_window_hide_message(window);
    if (window->closes_after_save) {
        gtk_window_close(GTK_WINDOW(window));
        return;
    }
    name = g_path_get_basename(save->path);
    text = g_strdup_printf(_("Markers saved in %s"), name);
    hw_window_toast(window, text, false);
}

static void
begin_save(HwWindow *window, bool force)
{
    const HwDocument *document = hw_session_get_document(window->session);
    g_autoptr(GTask) task = NULL;
    Save *save;

    if (!document)
        return;
    save = g_new0(Save, 1);
    save->path = g_strdup(document->markers_path);
    save->expected = g_strdup(document->markers_on_disk);
    save->force = force;
    save->csv = hw_session_dup_markers_csv(window->session, &save->serial);
    task = g_task_new(window, NULL, saved_cb, NULL);
    g_task_set_task_data(task, save, save_free);
    g_task_run_in_thread(task, save_thread);
}

void
hw_window_save_markers(HwWindow *window, bool close_after)
{
    window->closes_after_save = close_after;
    begin_save(window, false);
}

static void
close_response_cb(HwWindow *window, const char *response)
{
    if (g_strcmp0(response, "save") == 0) {
        hw_window_save_markers(window, true);
    } else if (g_strcmp0(response, "discard") == 0) {
        window->closes_anyway = true;
        gtk_window_close(GTK_WINDOW(window));
    }
}

gboolean
hw_window_close_request(GtkWindow *gtk_window)
{
    HwWindow *window = HW_WINDOW(gtk_window);
    const HwDocument *document = hw_session_get_document(window->session);
    g_autofree char *body = NULL;
    GtkWidget *dialog;

    if (window->closes_anyway || !hw_session_is_modified(window->session))
        return FALSE;
    body = g_strdup_printf(_("What was marked since the last save of %s is lost if it is not saved."),
                           document->markers_path);
    dialog = adw_message_dialog_new(gtk_window, _("Save the markers?"), body);
    adw_message_dialog_add_responses(ADW_MESSAGE_DIALOG(dialog), "cancel", _("Cancel"), "discard",
                                     _("Discard"), "save", _("Save"), NULL);
    adw_message_dialog_set_response_appearance(ADW_MESSAGE_DIALOG(dialog), "discard",
                                               ADW_RESPONSE_DESTRUCTIVE);
    adw_message_dialog_set_response_appearance(ADW_MESSAGE_DIALOG(dialog), "save", ADW_RESPONSE_SUGGESTED);
    adw_message_dialog_set_default_response(ADW_MESSAGE_DIALOG(dialog), "save");
    adw_message_dialog_set_close_response(ADW_MESSAGE_DIALOG(dialog), "cancel");
    g_signal_connect_object(dialog, "response", G_CALLBACK(close_response_cb), window, G_CONNECT_SWAPPED);
    gtk_window_present(GTK_WINDOW(dialog));
    return TRUE;
}

/* An export that runs: everything it needs, copied. */
typedef struct {
    char *path;
    HwOpenRequest *request;
    char *csv; /* markers, where they differ from the file */
} Export;

static void
export_free(gpointer data)
{
    Export *export = data;

    g_free(export->path);
    hw_open_request_free(export->request);
    g_free(export->csv);
    g_free(export);
}

static Export *
export_new(HwWindow *window, const char *path)
{
    const HwDocument *document = hw_session_get_document(window->session);
    Export *export = g_new0(Export, 1);
    guint64 serial;

    export->path = g_strdup(path);
    export->request = hw_open_request_copy(document->request);
    /* What is exported is what is on screen; where that is what is on the disk, the file itself is read. */
    if (hw_session_is_modified(window->session) || !document->markers_on_disk)
        export->csv = hw_session_dup_markers_csv(window->session, &serial);
    return export;
}

static void
list_thread(GTask *task, gpointer source, gpointer data, GCancellable *cancellable)
{
    Export *export = data;
    GError *error = NULL;
    g_autoptr(HwFinishList) list = NULL;
    g_autofree char *text = NULL;

    (void)source;
    list = hw_document_derive_anew(export->request, export->csv, cancellable, &error);
    if (!list) {
        g_task_return_error(task, error);
        return;
    }
    if (g_str_has_suffix(export->path, ".json"))
        text = hw_finish_list_dup_json(list);
    else if (g_str_has_suffix(export->path, ".csv"))
        text = hw_finish_list_dup_csv(list);
    else
        text = hw_finish_list_dup_text(list);
    if (hw_output_write_file(export->path, true, text, strlen(text), &error))
        g_task_return_boolean(task, TRUE);
    else
        g_task_return_error(task, error);
}

static void
picture_thread(GTask *task, gpointer source, gpointer data, GCancellable *cancellable)
{
    Export *export = data;
    GError *error = NULL;
    g_autoptr(HwDocument) document = NULL;
    g_autoptr(HwMarkers) parsed = NULL;
    g_autoptr(HwFinishList) list = NULL;
    g_autofree char *rules = NULL;
    HwPictureFormat format;
    HwDigest digest;
    HwPicture picture;
    bool known = false;

    (void)source;
    if (!hw_picture_format_of(export->path, &format, &error) ||
        !(document = hw_document_open(export->request, cancellable, &error)) ||
        !(list = hw_document_derive_anew(export->request, export->csv, cancellable, &error)) ||
        (export->csv && !(parsed = hw_markers_parse(export->csv, strlen(export->csv), "markers as they stand",
                                                    document->recording, &error))) ||
        !hw_recording_digest(document->recording, NULL, NULL, cancellable, &known, &digest, &error)) {
        g_task_return_error(task, error);
        return;
    }
    rules = document->rules ? hw_rules_dup_line(document->rules) : g_strdup("");
    hw_picture_init(&picture, document->strip);
    picture.list = list;
    picture.markers = parsed ? parsed : document->markers;
    picture.excerpt = HW_EXCERPT_MARKERS;
    if (document->race && *document->race->event)
        picture.event = document->race->event;
    if (document->race && document->race->has_passage)
        picture.passage = document->race->passage_name;
    picture.rules = rules;
    picture.digest = known ? &digest : NULL;
    picture.calibration = document->calibration;
    if (hw_picture_write(&picture, export->path, format, true, NULL, NULL, cancellable, &error))
        g_task_return_boolean(task, TRUE);
    else
        g_task_return_error(task, error);
}

static void
exported_cb(GObject *source, GAsyncResult *result, gpointer data)
{
    HwWindow *window = HW_WINDOW(source);
    Export *export = g_task_get_task_data(G_TASK(result));
    g_autoptr(GError) error = NULL;
    g_autofree char *name = NULL;
    g_autofree char *text = NULL;

    (void)data;
    if (!window->session)
        return;
    if (!g_task_propagate_boolean(G_TASK(result), &error)) {
        hw_window_show_message(window, error->message);
        return;
    }
    name = g_path_get_basename(export->path);
    text = g_strdup_printf(_("Exported to %s"), name);
    hw_window_toast(window, text, false);
}

static void
begin_export(HwWindow *window, const char *path, GTaskThreadFunc thread)
{
    g_autoptr(GTask) task = NULL;

    if (!hw_session_get_document(window->session))
        return;
    task = g_task_new(window, NULL, exported_cb, NULL);
    g_task_set_task_data(task, export_new(window, path), export_free);
    g_task_run_in_thread(task, thread);
}

void
hw_window_export_list(HwWindow *window, const char *path)
{
    begin_export(window, path, list_thread);
}

void
hw_window_export_picture(HwWindow *window, const char *path)
{
    begin_export(window, path, picture_thread);
}

typedef struct {
    HwWindow *window;
    void (*act)(HwWindow *window, const char *path);
} Choice;

static void
export_chosen_cb(GtkFileChooserNative *chooser, int response, Choice *choice)
{
    g_autoptr(GFile) file = NULL;
    g_autofree char *path = NULL;

    if (response == GTK_RESPONSE_ACCEPT)
        file = gtk_file_chooser_get_file(GTK_FILE_CHOOSER(chooser));
    if (file)
        path = g_file_get_path(file);
    if (path)
        choice->act(choice->window, path);
    g_free(choice);
    g_object_unref(chooser);
}

static void
choose_export(HwWindow *window, const char *title, const char *suffix, void (*act)(HwWindow *, const char *))
{
    const HwDocument *document = hw_session_get_document(window->session);
    GtkFileChooserNative *chooser;
    g_autofree char *name = NULL;
    g_autofree char *proposal = NULL;
    Choice *choice;

    if (!document)
        return;
    choice = g_new0(Choice, 1);
    chooser = gtk_file_chooser_native_new(title, GTK_WINDOW(window), GTK_FILE_CHOOSER_ACTION_SAVE,
                                          _("Export"), _("Cancel"));
    name = g_path_get_basename(hw_recording_get_path(document->recording));
    proposal = g_strconcat(name, suffix, NULL);
    choice->window = window;
    choice->act = act;
    gtk_native_dialog_set_modal(GTK_NATIVE_DIALOG(chooser), TRUE);
    gtk_file_chooser_set_current_name(GTK_FILE_CHOOSER(chooser), proposal);
    g_signal_connect(chooser, "response", G_CALLBACK(export_chosen_cb), choice);
    gtk_native_dialog_show(GTK_NATIVE_DIALOG(chooser));
}

void
hw_window_choose_list_export(HwWindow *window)
{
    choose_export(window, _("Export the list: a name ending in .csv, .json or .txt"), ".list.csv",
                  hw_window_export_list);
}

void
hw_window_choose_picture_export(HwWindow *window)
{
    choose_export(window, _("Export the picture: a name ending in .png or .pdf"), ".picture.png",
                  hw_window_export_picture);
}
