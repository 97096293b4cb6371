/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "ui/tray.h"

#include "ui/naming.h"
#include "ui/words.h"

#include <glib/gi18n.h>

/* How near the line a marker is under it, in logical pixels. */
#define REACH_PX 6.0
/* Characters beyond which a sentence is set smaller. */
#define LONG_SENTENCE 60

struct _HwTray {
    GtkBox parent_instance;

    HwSession *session;
    HwNaming *asked; /* the doubt that a second Enter confirms */
    char *said;
    bool renames; /* F2: what is typed is meant for the marker at the line */

    GtkLabel *time;
    GtkLabel *place;
    GtkEntry *entry;
    GtkLabel *rider;
    GtkLabel *sentence;
};

enum { DONE, N_SIGNALS };

static guint signals[N_SIGNALS];

G_DEFINE_FINAL_TYPE(HwTray, hw_tray, GTK_TYPE_BOX)

static double
reach_px(HwTray *tray)
{
    return REACH_PX * gtk_widget_get_scale_factor(GTK_WIDGET(tray));
}

static void
set_text(GtkLabel *label, const char *text)
{
    if (g_strcmp0(gtk_label_get_text(label), text) != 0)
        gtk_label_set_text(label, text);
}

/* A long sentence takes a smaller size rather than more of the picture's height. */
static void
set_sentence(HwTray *tray, const char *text)
{
    set_text(tray->sentence, text);
    if (g_utf8_strlen(text, -1) > LONG_SENTENCE)
        gtk_widget_add_css_class(GTK_WIDGET(tray->sentence), "small");
    else
        gtk_widget_remove_css_class(GTK_WIDGET(tray->sentence), "small");
}

static void
set_rider(HwTray *tray, const char *text)
{
    set_text(tray->rider, text);
    gtk_widget_set_visible(GTK_WIDGET(tray->rider), *text != '\0');
}

static bool
is_typing(HwTray *tray)
{
    return *gtk_editable_get_text(GTK_EDITABLE(tray->entry)) != '\0';
}

static void
set_sentence_class(HwTray *tray, const char *class)
{
    static const char *const classes[] = { "warning", "error", NULL };

    for (int i = 0; classes[i]; i++)
        if (g_strcmp0(classes[i], class) != 0)
            gtk_widget_remove_css_class(GTK_WIDGET(tray->sentence), classes[i]);
    if (class)
        gtk_widget_add_css_class(GTK_WIDGET(tray->sentence), class);
}

/* The rider whose marker stands at the line, or NULL; *marker and *n_within as found. */
static const HwRider *
find_rider(HwTray *tray, const HwMarker **marker, int *n_within)
{
    const HwDocument *document = hw_session_get_document(tray->session);
    bool ambiguous;

    *n_within = 0;
    *marker = document ? hw_session_get_marker(tray->session,
                                               hw_naming_find_marker(tray->session, reach_px(tray), n_within))
                       : NULL;
    if (!*marker || !document->start_list)
        return NULL;
    return hw_start_list_find(document->start_list, (*marker)->bib,
                              *(*marker)->category ? (*marker)->category : NULL, &ambiguous);
}

static void
show_line(HwTray *tray)
{
    double cell = hw_session_get_reading_cell(tray->session);
    const HwMarker *marker;
    const HwRider *rider;
    int n_within;
    g_autofree char *time = NULL;
    g_autofree char *elapsed = NULL;
    g_autofree char *column = NULL;
    g_autofree char *place = NULL;

    if (!hw_session_get_document(tray->session)) {
        set_text(tray->time, "");
        set_text(tray->place, "");
        return;
    }
    /* Where categories start apart, the elapsed time is that of the rider at the line. */
    rider = find_rider(tray, &marker, &n_within);
    time = hw_words_dup_time_of_day(tray->session, cell);
    elapsed = hw_words_dup_elapsed(tray->session, cell, rider ? rider->category : NULL);
    column = hw_words_dup_column(tray->session, cell);
    if (elapsed)
        place = g_strdup_printf(_("elapsed %s · %s"), elapsed, column);
    else
        place = g_strdup_printf(_("%s · no start known"), column);
    set_text(tray->time, time);
    set_text(tray->place, place);
}

/* Who stands at the line while nothing is typed. */
static void
show_marker(HwTray *tray)
{
    const HwMarker *marker;
    int n_within;
    const HwRider *rider = find_rider(tray, &marker, &n_within);
    g_autofree char *name = NULL;
    g_autofree char *who = NULL;

    if (marker) {
        g_autofree char *known = rider ? hw_words_dup_rider(rider) : g_strdup("");

        name = hw_words_dup_marker(marker);
        who = g_strdup_printf("%s%s%s%s", name, marker->edge == HW_EDGE_REAR ? _(" · rear tyre") : "",
                              *known ? "  " : "", known);
    }
    set_rider(tray, who ? who : "");
    set_sentence_class(tray, NULL);
    if (tray->said)
        set_sentence(tray, tray->said);
    else if (n_within > 1)
        set_sentence(tray, _("More than one marker stands here: zoom in to part them."));
    else if (marker && marker->state == HW_MARKER_ROUGH)
        set_sentence(tray, _("To re-read: zoom in to 1 : 1 or closer, set the line, press M."));
    else
        set_sentence(tray, _("Type a number, then Enter."));
}

static void
update(HwTray *tray)
{
    const char *typed = gtk_editable_get_text(GTK_EDITABLE(tray->entry));
    g_autoptr(HwNaming) naming = NULL;

    show_line(tray);
    if (!hw_session_get_document(tray->session) || (!*typed && !tray->asked)) {
        g_clear_pointer(&tray->asked, hw_naming_free);
        show_marker(tray);
        return;
    }
    naming = hw_naming_make(tray->session, typed, reach_px(tray), tray->renames);
    if (tray->asked && !hw_naming_equal(naming, tray->asked))
        g_clear_pointer(&tray->asked, hw_naming_free);
    if (!*typed && !tray->asked) {
        show_marker(tray);
        return;
    }
    set_rider(tray, naming->rider);
    if (tray->asked) {
        g_autofree char *again = g_strdup_printf(_("%s Enter once more, or Esc."), naming->sentence);

        set_sentence(tray, again);
    } else {
        set_sentence(tray, naming->sentence);
    }
    set_sentence_class(tray, naming->state == HW_NAMING_READY ? NULL
                             : naming->state == HW_NAMING_ASK ? "warning"
                                                              : "error");
}

static void
forget_said(HwTray *tray)
{
    g_clear_pointer(&tray->said, g_free);
}

static void
session_cb(HwTray *tray)
{
    forget_said(tray);
    tray->renames = false;
    update(tray);
}

static void
finish(HwTray *tray)
{
    tray->renames = false;
    gtk_editable_set_text(GTK_EDITABLE(tray->entry), "");
    g_signal_emit(tray, signals[DONE], 0);
}

static void
entry_activate_cb(HwTray *tray)
{
    const char *typed = gtk_editable_get_text(GTK_EDITABLE(tray->entry));
    g_autoptr(HwNaming) naming = NULL;

    if (!hw_session_get_document(tray->session))
        return;
    naming = hw_naming_make(tray->session, typed, reach_px(tray), tray->renames);
    if (naming->state == HW_NAMING_REFUSED) {
        hw_tray_say(tray, naming->sentence);
        set_sentence_class(tray, "error");
        return;
    }
    if (naming->state == HW_NAMING_ASK && !(tray->asked && hw_naming_equal(naming, tray->asked))) {
        g_clear_pointer(&tray->asked, hw_naming_free);
        tray->asked = g_steal_pointer(&naming);
        update(tray);
        return;
    }
    g_clear_pointer(&tray->asked, hw_naming_free);
    if (hw_naming_commit(tray->session, naming))
        finish(tray);
}

static void
entry_changed_cb(HwTray *tray)
{
    forget_said(tray);
    if (tray->session)
        update(tray);
}

static gboolean
entry_key_cb(HwTray *tray, guint key)
{
    if (key != GDK_KEY_Escape)
        return GDK_EVENT_PROPAGATE;
    g_clear_pointer(&tray->asked, hw_naming_free);
    finish(tray);
    return GDK_EVENT_STOP;
}

static void
hw_tray_dispose(GObject *object)
{
    HwTray *tray = HW_TRAY(object);

    if (tray->session)
        g_signal_handlers_disconnect_by_data(tray->session, tray);
    g_clear_object(&tray->session);
    g_clear_pointer(&tray->asked, hw_naming_free);
    g_clear_pointer(&tray->said, g_free);
    gtk_widget_dispose_template(GTK_WIDGET(object), HW_TYPE_TRAY);
    G_OBJECT_CLASS(hw_tray_parent_class)->dispose(object);
}

static void
hw_tray_class_init(HwTrayClass *class)
{
    GtkWidgetClass *widget_class = GTK_WIDGET_CLASS(class);

    G_OBJECT_CLASS(class)->dispose = hw_tray_dispose;
    signals[DONE] =
        g_signal_new("done", HW_TYPE_TRAY, G_SIGNAL_RUN_LAST, 0, NULL, NULL, NULL, G_TYPE_NONE, 0);
    gtk_widget_class_set_template_from_resource(widget_class, "/org/halfwheel/Halfwheel/tray.ui");
    gtk_widget_class_bind_template_child(widget_class, HwTray, time);
    gtk_widget_class_bind_template_child(widget_class, HwTray, place);
    gtk_widget_class_bind_template_child(widget_class, HwTray, entry);
    gtk_widget_class_bind_template_child(widget_class, HwTray, rider);
    gtk_widget_class_bind_template_child(widget_class, HwTray, sentence);
    gtk_widget_class_bind_template_callback(widget_class, entry_activate_cb);
    gtk_widget_class_bind_template_callback(widget_class, entry_changed_cb);
    gtk_widget_class_bind_template_callback(widget_class, entry_key_cb);
}

static void
hw_tray_init(HwTray *tray)
{
    gtk_widget_init_template(GTK_WIDGET(tray));
}

void
hw_tray_set_session(HwTray *tray, HwSession *session)
{
    static const char *const names[] = { "document-changed", "strip-changed", "markers-changed",
                                         "notify::reading-cell", "notify::selection" };

    tray->session = g_object_ref(session);
    for (guint i = 0; i < G_N_ELEMENTS(names); i++)
        g_signal_connect_object(session, names[i], G_CALLBACK(session_cb), tray, G_CONNECT_SWAPPED);
    g_signal_connect_object(session, "view-changed", G_CALLBACK(update), tray, G_CONNECT_SWAPPED);
    update(tray);
}

void
hw_tray_begin(HwTray *tray, const char *text)
{
    tray->renames = false;
    gtk_widget_grab_focus(GTK_WIDGET(tray->entry));
    gtk_editable_set_text(GTK_EDITABLE(tray->entry), text);
    gtk_editable_set_position(GTK_EDITABLE(tray->entry), -1);
}

void
hw_tray_begin_rename(HwTray *tray)
{
    int n_within;
    const HwMarker *marker =
        hw_session_get_marker(tray->session, hw_naming_find_marker(tray->session, reach_px(tray), &n_within));

    hw_tray_begin(tray, marker && !hw_marker_is_unnamed(marker) ? marker->bib : "");
    tray->renames = true;
    update(tray);
    gtk_editable_select_region(GTK_EDITABLE(tray->entry), 0, -1);
}

void
hw_tray_submit(HwTray *tray, const char *text)
{
    if (!is_typing(tray) || g_strcmp0(gtk_editable_get_text(GTK_EDITABLE(tray->entry)), text) != 0)
        gtk_editable_set_text(GTK_EDITABLE(tray->entry), text);
    entry_activate_cb(tray);
}

void
hw_tray_say(HwTray *tray, const char *sentence)
{
    g_free(tray->said);
    tray->said = g_strdup(sentence);
    set_sentence(tray, sentence);
}
