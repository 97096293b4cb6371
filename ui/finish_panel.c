/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "ui/finish_panel.h"

#include "ui/finish_row.h"
#include "ui/pair_words.h"

#include <glib/gi18n.h>

/* How long rows are shown at a stretch. */
#define SLICE_US 2000

struct _HwFinishPanel {
    GtkBox parent_instance;

    HwSession *session;
    bool is_showing; /* rows are being changed by us, not by the user */
    guint n_rows;    /* row widgets there are */
    guint next_row;  /* of the list, to be shown; those before are */
    guint insert_at; /* where rows are still to be put in, and how many */
    guint n_to_insert;
    bool follows;      /* the selected row is kept in sight */
    bool is_scrolling; /* by us */
    guint scrolling;   /* source that does so after a layout */
    guint filling;     /* source that shows the rest */
    char *noted;       /* all sentences shown */

    GtkLabel *summary;
    GtkScrolledWindow *list_window;
    GtkListBox *list;
    GtkLabel *empty; /* what stands in a list without rows */
    GtkLabel *pair;
    GtkWidget *notes_window;
    GtkBox *notes;
    GtkLabel *check;
    GtkLabel *check_whole;
};

enum { EDIT_NAME, TYPED, N_SIGNALS };

static guint signals[N_SIGNALS];

G_DEFINE_FINAL_TYPE(HwFinishPanel, hw_finish_panel, GTK_TYPE_BOX)

static void
set_text(GtkLabel *label, const char *text)
{
    if (g_strcmp0(gtk_label_get_text(label), text) != 0)
        gtk_label_set_text(label, text);
}

static HwFinishRowWidget *
row_at(HwFinishPanel *panel, guint index)
{
    return HW_FINISH_ROW_WIDGET(gtk_list_box_get_row_at_index(panel->list, (int)index));
}

/* Riders keep their row widgets where they can: what stands before and after the change stays, only the
 * middle is taken out and put in. Taking out is done here; putting in where the filling comes to it. */
static void
match_rows(HwFinishPanel *panel, const HwFinishList *list)
{
    guint n_new = list ? list->rows->len : 0;
    guint head = 0, tail = 0;

    while (head < n_new && head < panel->n_rows &&
           hw_finish_row_widget_is_of(row_at(panel, head), g_ptr_array_index(list->rows, head)))
        head++;
    while (tail + head < n_new && tail + head < panel->n_rows &&
           hw_finish_row_widget_is_of(row_at(panel, panel->n_rows - 1 - tail),
                                      g_ptr_array_index(list->rows, n_new - 1 - tail)))
        tail++;
    while (panel->n_rows > n_new && panel->n_rows > head + tail) {
        gtk_list_box_remove(panel->list, GTK_WIDGET(row_at(panel, head)));
        panel->n_rows--;
    }
    panel->next_row = 0;
    panel->insert_at = head;
    panel->n_to_insert = n_new > panel->n_rows ? n_new - panel->n_rows : 0;
}

static bool
has_category(const HwFinishRow *row)
{
    return row->in_start_list || *row->category;
}

/* The category a row stands in. Who is in none parts none: he belongs to the riders before him, the first to
 * those after. */
static const char *
find_heading(const HwFinishList *list, guint at)
{
    for (guint i = at + 1; i-- > 0;)
        if (has_category(g_ptr_array_index(list->rows, i)))
            return ((const HwFinishRow *)g_ptr_array_index(list->rows, i))->category;
    for (guint i = at + 1; i < list->rows->len; i++)
        if (has_category(g_ptr_array_index(list->rows, i)))
            return ((const HwFinishRow *)g_ptr_array_index(list->rows, i))->category;
    return "";
}

/* Shows rows until `until_us` (monotonic; G_MAXINT64: all). True when all are shown. */
static bool
fill_rows(HwFinishPanel *panel, gint64 until_us)
{
    const HwFinishList *list = hw_session_get_list(panel->session, NULL);
    guint n_rows = list ? list->rows->len : 0;

    panel->is_showing = true;
    while (panel->next_row < n_rows && g_get_monotonic_time() < until_us) {
        guint at = panel->next_row++;
        const HwFinishRow *row = g_ptr_array_index(list->rows, at);

        if (at >= panel->insert_at && panel->n_to_insert > 0) {
            gtk_list_box_insert(panel->list, hw_finish_row_widget_new(), (int)at);
            panel->n_rows++;
            panel->n_to_insert--;
        }
        hw_finish_row_widget_show(
            row_at(panel, at), list, row,
            hw_session_get_marker(panel->session, hw_session_find_marker(panel->session, row)),
            find_heading(list, at));
    }
    panel->is_showing = false;
    return panel->next_row >= n_rows;
}

/* Brings the selected row into sight, and no farther. Rows just put in have no place yet, so this is done
 * again as often as the list is laid out, until somebody scrolls. */
static void
scroll_to_selected(HwFinishPanel *panel)
{
    GtkAdjustment *adjustment = gtk_list_box_get_adjustment(panel->list);
    GtkListBoxRow *row = gtk_list_box_get_selected_row(panel->list);
    graphene_rect_t bounds;

    if (!panel->follows || !adjustment || !row ||
        !gtk_widget_compute_bounds(GTK_WIDGET(row), GTK_WIDGET(panel->list), &bounds))
        return;
    panel->is_scrolling = true;
    gtk_adjustment_clamp_page(adjustment, (double)bounds.origin.y,
                              (double)(bounds.origin.y + bounds.size.height));
    panel->is_scrolling = false;
}

static gboolean
scroll_cb(gpointer data)
{
    HwFinishPanel *panel = data;

    panel->scrolling = 0;
    scroll_to_selected(panel);
    return G_SOURCE_REMOVE;
}

/* The list was laid out: what is set during that is lost, so it waits until after. */
static void
laid_out_cb(HwFinishPanel *panel)
{
    if (panel->follows && !panel->scrolling)
        panel->scrolling = g_idle_add(scroll_cb, panel);
}

static void
scrolled_cb(HwFinishPanel *panel)
{
    if (!panel->is_scrolling)
        panel->follows = false;
}

static void
show_selection(HwFinishPanel *panel)
{
    int row = hw_session_find_row(panel->session, hw_session_get_selection(panel->session));
    const HwFinishList *list = hw_session_get_list(panel->session, NULL);
    g_autofree char *pair = NULL;

    if (row >= 0 && (guint)row >= panel->next_row)
        return; /* until the filling has come to it */
    panel->is_showing = true;
    if (row < 0) {
        gtk_list_box_unselect_all(panel->list);
    } else {
        gtk_list_box_select_row(panel->list, GTK_LIST_BOX_ROW(row_at(panel, (guint)row)));
        panel->follows = true;
        scroll_to_selected(panel);
        pair = hw_pair_words_dup(hw_pair_words_find_ahead(list, (guint)row),
                                 g_ptr_array_index(list->rows, (guint)row));
    }
    panel->is_showing = false;
    set_text(panel->pair, pair ? pair : "");
    gtk_widget_set_visible(GTK_WIDGET(panel->pair), pair != NULL);
}

static void
add_note(HwFinishPanel *panel, const char *sentence, const char *class)
{
    GtkWidget *label = gtk_label_new(sentence);

    gtk_label_set_xalign(GTK_LABEL(label), 0.0F);
    gtk_label_set_wrap(GTK_LABEL(label), TRUE);
    gtk_label_set_wrap_mode(GTK_LABEL(label), PANGO_WRAP_WORD_CHAR);
    gtk_label_set_selectable(GTK_LABEL(label), FALSE);
    gtk_widget_add_css_class(label, "small");
    if (class)
        gtk_widget_add_css_class(label, class);
    gtk_box_append(panel->notes, label);
}

static void
show_notes(HwFinishPanel *panel, const HwFinishList *list, const char *sentence)
{
    const GPtrArray *conflicts = hw_session_get_conflicts(panel->session);
    g_autoptr(GString) all = g_string_new(sentence);
    GtkWidget *child;

    for (guint i = 0; i < conflicts->len; i++)
        g_string_append_printf(all, "\n%s", (const char *)g_ptr_array_index(conflicts, i));
    for (guint i = 0; list && i < list->problems->len; i++)
        g_string_append_printf(all, "\n%s", (const char *)g_ptr_array_index(list->problems, i));
    if (g_strcmp0(all->str, panel->noted) == 0)
        return;
    g_free(panel->noted);
    panel->noted = g_strdup(all->str);
    while ((child = gtk_widget_get_first_child(GTK_WIDGET(panel->notes))))
        gtk_box_remove(panel->notes, child);
    if (sentence)
        add_note(panel, sentence, "error");
    for (guint i = 0; i < conflicts->len; i++)
        add_note(panel, g_ptr_array_index(conflicts, i), "error");
    for (guint i = 0; list && i < list->problems->len; i++)
        add_note(panel, g_ptr_array_index(list->problems, i), NULL);
    gtk_widget_set_visible(panel->notes_window, *all->str != '\0');
}

/* A list of 150 is shown in slices, so that no key waits for it. */
static gboolean
fill_cb(gpointer data)
{
    HwFinishPanel *panel = data;

    if (!fill_rows(panel, g_get_monotonic_time() + SLICE_US))
        return G_SOURCE_CONTINUE;
    panel->filling = 0;
    show_selection(panel);
    return G_SOURCE_REMOVE;
}

static void
finish_filling(HwFinishPanel *panel)
{
    g_clear_handle_id(&panel->filling, g_source_remove);
    fill_rows(panel, G_MAXINT64);
}

static void
list_changed_cb(HwFinishPanel *panel)
{
    const char *sentence = NULL;
    const HwFinishList *list = hw_session_get_list(panel->session, &sentence);
    g_autofree char *check = list ? hw_pair_words_dup_check(list) : NULL;
    g_autofree char *whole = list ? hw_pair_words_dup_check_whole(list) : NULL;

    panel->is_showing = true;
    match_rows(panel, list);
    panel->is_showing = false;
    g_clear_handle_id(&panel->filling, g_source_remove);
    if (!fill_rows(panel, g_get_monotonic_time() + SLICE_US))
        panel->filling = g_idle_add(fill_cb, panel);
    show_notes(panel, list, sentence);
    set_text(panel->empty, sentence
                               ? _("The list cannot be made: see below why.")
                               : _("Nobody is marked yet. Put the reading line on a front tyre, type the "
                                   "number, press Enter."));
    gtk_widget_set_visible(GTK_WIDGET(panel->empty), !list || list->rows->len == 0);
    set_text(panel->check, check ? check : "");
    set_text(panel->check_whole, whole ? whole : "");
    gtk_widget_set_visible(GTK_WIDGET(panel->check_whole), whole && *whole);
    set_text(panel->summary, list && list->unrounded ? _("Measured order, not rounded") : _("Finish list"));
    show_selection(panel);
}

static void
row_selected_cb(HwFinishPanel *panel, GtkListBoxRow *row)
{
    const HwFinishList *list;
    int index, marker;

    if (panel->is_showing || !row || !panel->session)
        return;
    finish_filling(panel);
    list = hw_session_get_list(panel->session, NULL);
    if (!list)
        return;
    index = gtk_list_box_row_get_index(row);
    marker = hw_session_find_marker(panel->session, g_ptr_array_index(list->rows, (guint)index));
    if (marker >= 0) {
        const HwMarker *found = hw_session_get_marker(panel->session, marker);

        hw_session_set_selection(panel->session, marker);
        hw_session_set_hand_row(panel->session, found->row);
        hw_session_set_reading_cell(
            panel->session, hw_axis_position(hw_session_get_axis(panel->session), found->column), true);
    }
}

/* The line goes back to the marker where it was moved since: what is typed is meant for that one. */
static void
edit_name(HwFinishPanel *panel)
{
    const HwMarker *marker = hw_session_get_marker(panel->session, hw_session_get_selection(panel->session));

    if (!marker)
        return;
    hw_session_set_reading_cell(panel->session,
                                hw_axis_position(hw_session_get_axis(panel->session), marker->column), true);
    g_signal_emit(panel, signals[EDIT_NAME], 0);
}

static void
row_activated_cb(HwFinishPanel *panel, GtkListBoxRow *row)
{
    (void)row;
    edit_name(panel);
}

/* The keys of the picture that make sense on a row. */
static gboolean
list_key_cb(HwFinishPanel *panel, guint key, guint code, GdkModifierType state)
{
    gunichar character = gdk_keyval_to_unicode(key);
    char text[7] = { 0 };

    (void)code;
    if (state & (GDK_CONTROL_MASK | GDK_ALT_MASK | GDK_SUPER_MASK))
        return GDK_EVENT_PROPAGATE;
    if (key == GDK_KEY_Delete || key == GDK_KEY_KP_Delete) {
        gtk_widget_activate_action(GTK_WIDGET(panel), "win.delete-marker", NULL);
        return GDK_EVENT_STOP;
    }
    if (key == GDK_KEY_F2) {
        edit_name(panel);
        return GDK_EVENT_STOP;
    }
    if (!(character >= '0' && character <= '9') && character != '?')
        return GDK_EVENT_PROPAGATE;
    g_unichar_to_utf8(character, text);
    g_signal_emit(panel, signals[TYPED], 0, text);
    return GDK_EVENT_STOP;
}

/* Categories are parted by their names. */
static void
header_cb(GtkListBoxRow *row, GtkListBoxRow *before, gpointer data)
{
    const char *category = hw_finish_row_widget_get_heading(HW_FINISH_ROW_WIDGET(row));
    const char *former = before ? hw_finish_row_widget_get_heading(HW_FINISH_ROW_WIDGET(before)) : "";
    GtkWidget *header = gtk_list_box_row_get_header(row);

    (void)data;
    if (!*category || g_strcmp0(category, former) == 0) {
        gtk_list_box_row_set_header(row, NULL);
        return;
    }
    if (header && g_strcmp0(gtk_label_get_text(GTK_LABEL(header)), category) == 0)
        return;
    header = gtk_label_new(category);
    gtk_label_set_xalign(GTK_LABEL(header), 0.0F);
    gtk_widget_add_css_class(header, "heading");
    gtk_widget_add_css_class(header, "panel-line");
    gtk_list_box_row_set_header(row, header);
}

static void
hw_finish_panel_dispose(GObject *object)
{
    HwFinishPanel *panel = HW_FINISH_PANEL(object);

    if (panel->session)
        g_signal_handlers_disconnect_by_data(panel->session, panel);
    g_clear_handle_id(&panel->filling, g_source_remove);
    g_clear_handle_id(&panel->scrolling, g_source_remove);
    g_clear_pointer(&panel->noted, g_free);
    g_clear_object(&panel->session);
    gtk_widget_dispose_template(GTK_WIDGET(object), HW_TYPE_FINISH_PANEL);
    G_OBJECT_CLASS(hw_finish_panel_parent_class)->dispose(object);
}

static void
hw_finish_panel_class_init(HwFinishPanelClass *class)
{
    GtkWidgetClass *widget_class = GTK_WIDGET_CLASS(class);

    G_OBJECT_CLASS(class)->dispose = hw_finish_panel_dispose;
    signals[EDIT_NAME] = g_signal_new("edit-name", HW_TYPE_FINISH_PANEL, G_SIGNAL_RUN_LAST, 0, NULL, NULL,
                                      NULL, G_TYPE_NONE, 0);
    signals[TYPED] = g_signal_new("typed", HW_TYPE_FINISH_PANEL, G_SIGNAL_RUN_LAST, 0, NULL, NULL, NULL,
                                  G_TYPE_NONE, 1, G_TYPE_STRING);
    gtk_widget_class_set_template_from_resource(widget_class, "/org/halfwheel/Halfwheel/finish_panel.ui");
    gtk_widget_class_bind_template_child(widget_class, HwFinishPanel, summary);
    gtk_widget_class_bind_template_child(widget_class, HwFinishPanel, list_window);
    gtk_widget_class_bind_template_child(widget_class, HwFinishPanel, list);
    gtk_widget_class_bind_template_child(widget_class, HwFinishPanel, empty);
    gtk_widget_class_bind_template_child(widget_class, HwFinishPanel, pair);
    gtk_widget_class_bind_template_child(widget_class, HwFinishPanel, notes_window);
    gtk_widget_class_bind_template_child(widget_class, HwFinishPanel, notes);
    gtk_widget_class_bind_template_child(widget_class, HwFinishPanel, check);
    gtk_widget_class_bind_template_child(widget_class, HwFinishPanel, check_whole);
    gtk_widget_class_bind_template_callback(widget_class, row_selected_cb);
    gtk_widget_class_bind_template_callback(widget_class, row_activated_cb);
    gtk_widget_class_bind_template_callback(widget_class, list_key_cb);
}

static void
hw_finish_panel_init(HwFinishPanel *panel)
{
    GtkAdjustment *adjustment;

    gtk_widget_init_template(GTK_WIDGET(panel));
    gtk_list_box_set_header_func(panel->list, header_cb, NULL, NULL);
    adjustment = gtk_scrolled_window_get_vadjustment(panel->list_window);
    g_signal_connect_object(adjustment, "changed", G_CALLBACK(laid_out_cb), panel, G_CONNECT_SWAPPED);
    g_signal_connect_object(adjustment, "value-changed", G_CALLBACK(scrolled_cb), panel, G_CONNECT_SWAPPED);
}

void
hw_finish_panel_set_session(HwFinishPanel *panel, HwSession *session)
{
    panel->session = g_object_ref(session);
    g_signal_connect_object(session, "list-changed", G_CALLBACK(list_changed_cb), panel, G_CONNECT_SWAPPED);
    g_signal_connect_object(session, "notify::selection", G_CALLBACK(show_selection), panel,
                            G_CONNECT_SWAPPED);
    list_changed_cb(panel);
}
