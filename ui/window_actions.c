/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The acts of the window, by name: for keys, menus and the session bus. */
#include "ui/window_private.h"

#include "core/base/duration.h"
#include "core/base/limits.h"
#include "ui/words.h"

#include <glib/gi18n.h>
#include <math.h>
#include <string.h>

typedef void (*Act)(HwWindow *window, const char *text);

static void
open_act(HwWindow *window, const char *text)
{
    (void)text;
    hw_window_choose_recording(window);
}

static void
open_path_act(HwWindow *window, const char *text)
{
    hw_window_open(window, hw_open_request_new(text));
}

static void
open_sample_act(HwWindow *window, const char *text)
{
    g_autofree char *path = NULL;
    HwOpenRequest *request;

    (void)text;
    if (!window->samples)
        return;
    path = g_build_filename(window->samples, "aldermoor-sprint", NULL);
    request = hw_open_request_new(path);
    request->rules = g_strdup("road-1s");
    hw_window_open(window, request);
}

static void
cancel_opening_act(HwWindow *window, const char *text)
{
    (void)text;
    hw_window_cancel_opening(window);
}

static void
back_act(HwWindow *window, const char *text)
{
    (void)text;
    hw_window_show_page(window, hw_session_get_document(window->session) ? "judge" : "start");
}

static void
hide_message_act(HwWindow *window, const char *text)
{
    (void)text;
    hw_window_hide_message(window);
}

static void
save_act(HwWindow *window, const char *text)
{
    (void)text;
    /* Markers that do not name their recording yet are worth writing: the file then does. */
    if (!hw_session_is_modified(window->session) &&
        (hw_session_get_n_markers(window->session) == 0 ||
         hw_session_get_markers(window->session)->names_recording)) {
        hw_window_toast(window, _("Nothing to save."), false);
        return;
    }
    hw_window_save_markers(window, false);
}

static void
choose_list_act(HwWindow *window, const char *text)
{
    (void)text;
    hw_window_choose_list_export(window);
}

static void
choose_picture_act(HwWindow *window, const char *text)
{
    (void)text;
    hw_window_choose_picture_export(window);
}

/* A field in which something is typed undoes its own text first. */
static bool
undo_in_field(HwWindow *window, const char *action)
{
    GtkWidget *focus = gtk_window_get_focus(GTK_WINDOW(window));

    if (!GTK_IS_TEXT(focus) || !*gtk_editable_get_text(GTK_EDITABLE(focus)))
        return false;
    return gtk_widget_activate_action(focus, action, NULL);
}

static void
undo_act(HwWindow *window, const char *text)
{
    (void)text;
    if (!undo_in_field(window, "text.undo"))
        hw_session_undo(window->session);
}

static void
redo_act(HwWindow *window, const char *text)
{
    (void)text;
    if (!undo_in_field(window, "text.redo"))
        hw_session_redo(window->session);
}

static void
place_act(HwWindow *window, const char *text)
{
    (void)text;
    hw_picture_view_place(window->picture);
}

static void
bring_act(HwWindow *window, const char *text)
{
    (void)text;
    hw_picture_view_bring_marker(window->picture);
}

static void
name_act(HwWindow *window, const char *text)
{
    hw_tray_submit(window->tray, text);
}

static void
delete_act(HwWindow *window, const char *text)
{
    int index = hw_session_get_selection(window->session);
    const HwMarker *marker = hw_session_get_marker(window->session, index);
    g_autofree char *name = NULL;
    g_autofree char *said = NULL;

    (void)text;
    if (!marker) {
        hw_tray_say(window->tray, _("Select a marker first: click its flag, or its row in the list."));
        return;
    }
    name = hw_words_dup_marker(marker);
    said = g_strdup_printf(_("Marker %s deleted"), name);
    hw_session_delete_marker(window->session, index);
    hw_window_toast(window, said, true);
}

static void
toggle_rear_act(HwWindow *window, const char *text)
{
    (void)text;
    hw_session_toggle_rear(window->session, hw_session_get_selection(window->session));
}

static void
select_bib_act(HwWindow *window, const char *text)
{
    int index = hw_session_find_bib(window->session, text);
    const HwMarker *marker = hw_session_get_marker(window->session, index);
    g_autofree char *said = NULL;

    if (!marker) {
        said = g_strdup_printf(_("No marker bears number %s."), text);
        hw_tray_say(window->tray, said);
        return;
    }
    hw_session_set_selection(window->session, index);
    if (!isnan(marker->row))
        hw_session_set_hand_row(window->session, marker->row);
    hw_session_set_reading_cell(window->session,
                                hw_axis_position(hw_session_get_axis(window->session), marker->column), true);
}

static void
zoom_in_act(HwWindow *window, const char *text)
{
    (void)text;
    hw_session_zoom_about_line(window->session, 2.0);
}

static void
zoom_out_act(HwWindow *window, const char *text)
{
    (void)text;
    hw_session_zoom_about_line(window->session, 0.5);
}

static void
zoom_fit_act(HwWindow *window, const char *text)
{
    (void)text;
    hw_session_zoom_fit(window->session);
}

static void
zoom_1_1_act(HwWindow *window, const char *text)
{
    (void)text;
    hw_session_zoom_one_to_one(window->session);
}

static void
ask_time_act(HwWindow *window, const char *text)
{
    g_autofree char *time = NULL;

    (void)text;
    if (!hw_session_get_document(window->session))
        return;
    time = hw_words_dup_time_of_day(window->session, hw_session_get_reading_cell(window->session));
    gtk_editable_set_text(GTK_EDITABLE(window->goto_entry), time);
    gtk_menu_button_popup(window->goto_button);
    gtk_widget_grab_focus(GTK_WIDGET(window->goto_entry));
    gtk_editable_select_region(GTK_EDITABLE(window->goto_entry), 0, -1);
}

/* A time of day near the recording, or a whole RFC 3339 instant, as ns since the epoch. */
static bool
parse_time(const HwDocument *document, const char *text, int64_t *ns)
{
    const HwInstant *epoch = hw_recording_get_epoch(document->recording);
    HwInstant instant, limit;
    int64_t time_of_day, last_ns;

    if (hw_instant_parse(text, &instant, NULL))
        return hw_instant_difference(&instant, epoch, ns);
    if (!hw_duration_parse_time_of_day(text, &time_of_day))
        return false;
    /* The latest such time of day before half a day after the end of the recording. */
    last_ns = hw_axis_instant(document->axis, (double)hw_axis_get_n_cells(document->axis));
    limit = hw_instant_plus(epoch, last_ns + HW_NS_PER_DAY / 2);
    instant = hw_instant_latest_time_of_day(&limit, time_of_day);
    return hw_instant_difference(&instant, epoch, ns);
}

static void
goto_time_act(HwWindow *window, const char *text)
{
    const HwDocument *document = hw_session_get_document(window->session);
    g_autofree char *typed = g_strstrip(g_strdup(text));
    int64_t ns, first_ns, last_ns;

    if (!document)
        return;
    if (!parse_time(document, typed, &ns)) {
        hw_tray_say(window->tray, _("This is no time of day: write it as 16:02:14.377."));
        return;
    }
    gtk_menu_button_popdown(window->goto_button);
    first_ns = hw_axis_instant(document->axis, 0.0);
    last_ns = hw_axis_instant(document->axis, (double)hw_axis_get_n_cells(document->axis));
    hw_session_set_reading_cell(window->session, hw_axis_position_of_instant(document->axis, ns), true);
    gtk_widget_grab_focus(GTK_WIDGET(window->picture));
    if (ns < first_ns || ns > last_ns)
        hw_tray_say(window->tray, _("That time is not in this recording: the line stands at its end."));
}

static void
export_list_act(HwWindow *window, const char *text)
{
    hw_window_export_list(window, text);
}

static void
export_picture_act(HwWindow *window, const char *text)
{
    hw_window_export_picture(window, text);
}

static void
close_act(HwWindow *window, const char *text)
{
    (void)text;
    gtk_window_close(GTK_WINDOW(window));
}

typedef enum { ALWAYS, OPEN, SELECTED, UNDO, REDO, SAMPLES, OPENING } Need;

static const struct {
    const char *name;
    bool takes_text;
    Need need;
    Act act;
} acts[] = {
    { "open", false, ALWAYS, open_act },
    { "open-path", true, ALWAYS, open_path_act },
    { "open-sample", false, SAMPLES, open_sample_act },
    { "cancel-opening", false, OPENING, cancel_opening_act },
    { "back", false, ALWAYS, back_act },
    { "hide-message", false, ALWAYS, hide_message_act },
    { "save-markers", false, OPEN, save_act },
    { "choose-list-export", false, OPEN, choose_list_act },
    { "choose-picture-export", false, OPEN, choose_picture_act },
    { "export-list", true, OPEN, export_list_act },
    { "export-picture", true, OPEN, export_picture_act },
    { "undo", false, UNDO, undo_act },
    { "redo", false, REDO, redo_act },
    { "place-marker", false, OPEN, place_act },
    { "bring-marker", false, SELECTED, bring_act },
    { "name-marker", true, OPEN, name_act },
    { "delete-marker", false, SELECTED, delete_act },
    { "toggle-rear", false, SELECTED, toggle_rear_act },
    { "select-bib", true, OPEN, select_bib_act },
    { "zoom-in", false, OPEN, zoom_in_act },
    { "zoom-out", false, OPEN, zoom_out_act },
    { "zoom-fit", false, OPEN, zoom_fit_act },
    { "zoom-1-1", false, OPEN, zoom_1_1_act },
    { "ask-time", false, OPEN, ask_time_act },
    { "goto-time", true, OPEN, goto_time_act },
    { "close", false, ALWAYS, close_act },
};

static void
act_cb(GSimpleAction *action, GVariant *parameter, gpointer data)
{
    const char *name = g_action_get_name(G_ACTION(action));

    for (guint i = 0; i < G_N_ELEMENTS(acts); i++)
        if (strcmp(acts[i].name, name) == 0)
            acts[i].act(HW_WINDOW(data), parameter ? g_variant_get_string(parameter, NULL) : NULL);
}

/* The rule set by its id, "" for none. */
static void
rules_cb(GSimpleAction *action, GVariant *value, gpointer data)
{
    HwWindow *window = data;
    const char *id = g_variant_get_string(value, NULL);
    g_autoptr(GError) error = NULL;
    HwRules *rules = NULL;

    if (*id) {
        rules = hw_rules_read(id, &error);
        if (!rules) {
            hw_window_show_message(window, error->message);
            return;
        }
    }
    hw_session_set_rules(window->session, rules, id);
    g_simple_action_set_state(action, value);
}

static void
passage_cb(GSimpleAction *action, GVariant *value, gpointer data)
{
    const char *name = g_variant_get_string(value, NULL);

    hw_session_set_passage(HW_WINDOW(data)->session, *name ? name : NULL);
    g_simple_action_set_state(action, value);
}

static void
mirrored_cb(GSimpleAction *action, GVariant *value, gpointer data)
{
    hw_session_set_mirrored(HW_WINDOW(data)->session, g_variant_get_boolean(value));
    g_simple_action_set_state(action, value);
}

static void
panels_cb(GSimpleAction *action, GVariant *value, gpointer data)
{
    HwWindow *window = data;
    bool shown = g_variant_get_boolean(value);

    gtk_widget_set_visible(GTK_WIDGET(window->panel), shown);
    gtk_widget_set_visible(GTK_WIDGET(window->tray), shown);
    g_simple_action_set_state(action, value);
}

void
hw_window_add_actions(HwWindow *window)
{
    const GActionEntry stateful[] = {
        { .name = "rules", .parameter_type = "s", .state = "''", .change_state = rules_cb },
        { .name = "passage", .parameter_type = "s", .state = "''", .change_state = passage_cb },
        { .name = "mirrored", .state = "false", .change_state = mirrored_cb },
        { .name = "panels", .state = "true", .change_state = panels_cb },
    };

    for (guint i = 0; i < G_N_ELEMENTS(acts); i++) {
        g_autoptr(GSimpleAction) action =
            g_simple_action_new(acts[i].name, acts[i].takes_text ? G_VARIANT_TYPE_STRING : NULL);

        g_signal_connect(action, "activate", G_CALLBACK(act_cb), window);
        g_action_map_add_action(G_ACTION_MAP(window), G_ACTION(action));
    }
    g_action_map_add_action_entries(G_ACTION_MAP(window), stateful, G_N_ELEMENTS(stateful), window);
}

static bool
is_met(HwWindow *window, Need need)
{
    switch (need) {
    case OPEN:
        return hw_session_get_document(window->session) != NULL;
    case SELECTED:
        return hw_session_get_selection(window->session) >= 0;
    case UNDO:
        return hw_session_get_undo_act(window->session) != NULL;
    case REDO:
        return hw_session_get_redo_act(window->session) != NULL;
    case SAMPLES:
        return window->samples != NULL;
    case OPENING:
        return window->opening != NULL;
    case ALWAYS:
    default:
        return true;
    }
}

void
hw_window_update_actions(HwWindow *window)
{
    const HwDocument *document = hw_session_get_document(window->session);
    const char *rules = document && document->request->rules ? document->request->rules : "";
    GAction *action;

    for (guint i = 0; i < G_N_ELEMENTS(acts); i++) {
        action = g_action_map_lookup_action(G_ACTION_MAP(window), acts[i].name);
        g_simple_action_set_enabled(G_SIMPLE_ACTION(action), is_met(window, acts[i].need));
    }
    action = g_action_map_lookup_action(G_ACTION_MAP(window), "rules");
    g_simple_action_set_state(G_SIMPLE_ACTION(action), g_variant_new_string(rules));
    g_simple_action_set_enabled(G_SIMPLE_ACTION(action), document != NULL);
    action = g_action_map_lookup_action(G_ACTION_MAP(window), "passage");
    g_simple_action_set_state(G_SIMPLE_ACTION(action),
                              g_variant_new_string(document ? hw_session_get_passage(window->session) : ""));
    g_simple_action_set_enabled(G_SIMPLE_ACTION(action), document != NULL);
    action = g_action_map_lookup_action(G_ACTION_MAP(window), "mirrored");
    g_simple_action_set_state(G_SIMPLE_ACTION(action),
                              g_variant_new_boolean(hw_session_get_mirrored(window->session)));
    g_simple_action_set_enabled(G_SIMPLE_ACTION(action), document != NULL);
    gtk_widget_set_sensitive(GTK_WIDGET(window->goto_button), document != NULL);
}
