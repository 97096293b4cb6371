/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "ui/finish_row.h"

#include <glib/gi18n.h>
#include <string.h>

struct _HwFinishRowWidget {
    GtkListBoxRow parent_instance;

    char *bib; /* with the category: whose row this is */
    char *category;
    char *heading; /* under which it stands */
    char *spoken;

    GtkLabel *place;
    GtkLabel *number;
    GtkLabel *name;
    GtkLabel *team;
    GtkLabel *state;
    GtkLabel *time;
    GtkLabel *gap;
};

G_DEFINE_FINAL_TYPE(HwFinishRowWidget, hw_finish_row_widget, GTK_TYPE_LIST_BOX_ROW)

static void
set_text(GtkLabel *label, const char *text)
{
    if (strcmp(gtk_label_get_text(label), text) != 0)
        gtk_label_set_text(label, text);
}

static void
hw_finish_row_widget_finalize(GObject *object)
{
    HwFinishRowWidget *widget = HW_FINISH_ROW_WIDGET(object);

    g_free(widget->bib);
    g_free(widget->category);
    g_free(widget->heading);
    g_free(widget->spoken);
    G_OBJECT_CLASS(hw_finish_row_widget_parent_class)->finalize(object);
}

static void
hw_finish_row_widget_class_init(HwFinishRowWidgetClass *class)
{
    G_OBJECT_CLASS(class)->finalize = hw_finish_row_widget_finalize;
}

static GtkLabel *
add_label(GtkWidget *box, float xalign, int width_chars, const char *const *classes)
{
    GtkWidget *label = gtk_label_new(NULL);

    gtk_label_set_xalign(GTK_LABEL(label), xalign);
    gtk_label_set_width_chars(GTK_LABEL(label), width_chars);
    gtk_widget_set_css_classes(label, (const char **)classes);
    gtk_box_append(GTK_BOX(box), label);
    return GTK_LABEL(label);
}

static GtkWidget *
add_column(GtkWidget *box, bool expands)
{
    GtkWidget *column = gtk_box_new(GTK_ORIENTATION_VERTICAL, 0);

    gtk_widget_set_valign(column, GTK_ALIGN_CENTER);
    gtk_widget_set_hexpand(column, expands);
    gtk_box_append(GTK_BOX(box), column);
    return column;
}

/* Built by hand, not from a template: a bunch brings 150 of them at once. */
static void
hw_finish_row_widget_init(HwFinishRowWidget *widget)
{
    static const char *const plain[] = { NULL };
    static const char *const figures[] = { "numeric", NULL };
    static const char *const bold_figures[] = { "numeric", "heading", NULL };
    static const char *const small[] = { "dim-label", "small", NULL };
    static const char *const small_figures[] = { "numeric", "dim-label", "small", NULL };
    static const char *const rough[] = { "rough-state", "small", NULL };
    GtkWidget *box = gtk_box_new(GTK_ORIENTATION_HORIZONTAL, 9);
    GtkWidget *who, *when;

    widget->bib = g_strdup("");
    widget->category = g_strdup("");
    widget->heading = g_strdup("");
    gtk_widget_add_css_class(GTK_WIDGET(widget), "finish-row");
    widget->place = add_label(box, 1.0F, 4, figures);
    widget->number = add_label(box, 1.0F, 4, bold_figures);
    who = add_column(box, true);
    widget->name = add_label(who, 0.0F, -1, plain);
    widget->team = add_label(who, 0.0F, -1, small);
    gtk_label_set_ellipsize(widget->name, PANGO_ELLIPSIZE_END);
    gtk_label_set_ellipsize(widget->team, PANGO_ELLIPSIZE_END);
    when = add_column(box, false);
    widget->time = add_label(when, 1.0F, -1, figures);
    widget->gap = add_label(when, 1.0F, -1, small_figures);
    widget->state = add_label(when, 1.0F, -1, rough);
    gtk_label_set_text(widget->state, _("to re-read"));
    gtk_list_box_row_set_child(GTK_LIST_BOX_ROW(widget), box);
}

GtkWidget *
hw_finish_row_widget_new(void)
{
    return g_object_new(HW_TYPE_FINISH_ROW_WIDGET, NULL);
}

/* What stands in the place's column: the place, or why there is none. */
static char *
dup_place(const HwFinishRow *row)
{
    if (row->rank > 0)
        return g_strdup_printf(row->tied ? "%d=" : "%d", row->rank);
    if (row->status == HW_STATUS_NOT_SEEN || row->status == HW_STATUS_UNKNOWN || row->status == HW_STATUS_OK)
        return g_strdup("–");
    return g_strdup(hw_status_get_word(row->status));
}

static char *
dup_name(const HwFinishList *list, const HwFinishRow *row)
{
    if (row->unnamed)
        return g_strdup(_("not yet named"));
    if (*row->name)
        return g_strdup(row->name);
    return g_strdup(row->in_start_list || !list->has_start_list ? "" : _("not in the start list"));
}

static char *
dup_team(const HwFinishRow *row)
{
    if (row->status == HW_STATUS_NOT_SEEN)
        return *row->team ? g_strdup_printf(_("%s · still missing"), row->team)
                          : g_strdup(_("still missing"));
    return g_strdup(row->team);
}

static char *
dup_number(const HwFinishRow *row)
{
    const char *mark = row->unnamed ? strstr(row->bib, "·") : NULL;

    return mark ? g_strndup(row->bib, (gsize)(mark - row->bib)) : g_strdup(row->bib);
}

static void
add_part(GString *text, const char *part)
{
    if (*part)
        g_string_append_printf(text, ", %s", part);
}

/* The row as one sentence. It holds everything that is shown. */
static char *
dup_spoken(const char *place, const char *number, const char *name, const char *team, const char *time,
           const char *gap, bool rough)
{
    g_autofree char *bib = g_strdup_printf(_("number %s"), number);
    GString *text = g_string_new(place);

    add_part(text, bib);
    add_part(text, name);
    add_part(text, team);
    add_part(text, time);
    add_part(text, gap);
    add_part(text, rough ? _("to re-read") : "");
    return g_string_free(text, FALSE);
}

void
hw_finish_row_widget_show(HwFinishRowWidget *widget, const HwFinishList *list, const HwFinishRow *row,
                          const HwMarker *marker, const char *heading)
{
    g_autofree char *place = dup_place(row);
    g_autofree char *number = dup_number(row);
    g_autofree char *name = dup_name(list, row);
    g_autofree char *team = dup_team(row);
    g_autofree char *time = hw_finish_row_dup_time(list, row);
    g_autofree char *gap = hw_finish_row_dup_gap(list, row);
    bool rough = marker && marker->state == HW_MARKER_ROUGH;
    g_autofree char *spoken = NULL;

    /* Where the time says all, the gap would only repeat it. */
    if (strcmp(gap, time) == 0 || (row->has_official_gap && row->official_gap_ns == 0 && !row->same_time)) {
        g_free(gap);
        gap = g_strdup("");
    }
    if (strcmp(widget->bib, row->bib) != 0) {
        g_free(widget->bib);
        widget->bib = g_strdup(row->bib);
    }
    if (strcmp(widget->category, row->category) != 0) {
        g_free(widget->category);
        widget->category = g_strdup(row->category);
    }
    if (strcmp(widget->heading, heading) != 0) {
        g_free(widget->heading);
        widget->heading = g_strdup(heading);
        gtk_list_box_row_changed(GTK_LIST_BOX_ROW(widget));
    }
    spoken = dup_spoken(place, number, name, team, time, gap, rough);
    if (g_strcmp0(spoken, widget->spoken) == 0)
        return;
    g_free(widget->spoken);
    widget->spoken = g_steal_pointer(&spoken);
    set_text(widget->place, place);
    set_text(widget->number, number);
    set_text(widget->name, name);
    set_text(widget->team, team);
    set_text(widget->time, time);
    set_text(widget->gap, gap);
    if (row->unnamed || !*row->name)
        gtk_widget_add_css_class(GTK_WIDGET(widget->name), "dim-label");
    else
        gtk_widget_remove_css_class(GTK_WIDGET(widget->name), "dim-label");
    gtk_widget_set_visible(GTK_WIDGET(widget->state), rough);
    gtk_widget_set_visible(GTK_WIDGET(widget->team), *team != '\0');
    gtk_widget_set_visible(GTK_WIDGET(widget->time), *time != '\0');
    gtk_widget_set_visible(GTK_WIDGET(widget->gap), *gap != '\0');
    gtk_widget_set_tooltip_text(GTK_WIDGET(widget->name), *row->name ? row->name : NULL);
    gtk_accessible_update_property(GTK_ACCESSIBLE(widget), GTK_ACCESSIBLE_PROPERTY_LABEL, widget->spoken, -1);
}

bool
hw_finish_row_widget_is_of(HwFinishRowWidget *widget, const HwFinishRow *row)
{
    return strcmp(widget->bib, row->bib) == 0 && strcmp(widget->category, row->category) == 0;
}

const char *
hw_finish_row_widget_get_heading(HwFinishRowWidget *widget)
{
    return widget->heading;
}
