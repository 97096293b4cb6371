/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "ui/context_line.h"

#include "core/base/duration.h"
#include "ui/words.h"

#include <glib/gi18n.h>
#include <string.h>

struct _HwContextLine {
    GtkBox parent_instance;

    HwSession *session;

    GtkLabel *event;
    GtkLabel *passage;
    GtkMenuButton *passages; /* in its place where there are several */
    char *listed;            /* names in the menu */
    GtkMenuButton *rules;
    GtkLabel *rules_label; /* its own child, which a narrow window may shorten */
    GtkLabel *travel;
    GtkLabel *release;
};

G_DEFINE_FINAL_TYPE(HwContextLine, hw_context_line, GTK_TYPE_BOX)

static void
show_event(HwContextLine *line, const HwDocument *document)
{
    const char *title = hw_recording_get_title(document->recording);
    const char *event = document->race && *document->race->event ? document->race->event : title;
    g_autofree char *name = g_path_get_basename(hw_recording_get_path(document->recording));

    gtk_label_set_text(line->event, *event ? event : name);
}

/* The menu of passages, where markers belong to several. */
static void
show_passages(HwContextLine *line, const char *text)
{
    g_autoptr(GPtrArray) names = hw_session_dup_passages(line->session);
    g_autoptr(GMenu) menu = NULL;
    g_autoptr(GString) listed = g_string_new(NULL);

    gtk_widget_set_visible(GTK_WIDGET(line->passages), names->len > 1);
    gtk_widget_set_visible(GTK_WIDGET(line->passage), names->len <= 1);
    for (guint i = 0; i < names->len; i++)
        g_string_append_printf(listed, "%s\n", (const char *)g_ptr_array_index(names, i));
    if (g_strcmp0(gtk_menu_button_get_label(line->passages), text) != 0)
        gtk_menu_button_set_label(line->passages, text);
    if (g_strcmp0(listed->str, line->listed) == 0)
        return;
    g_free(line->listed);
    line->listed = g_strdup(listed->str);
    menu = g_menu_new();
    for (guint i = 0; i < names->len; i++) {
        const char *name = g_ptr_array_index(names, i);
        g_autoptr(GMenuItem) item = g_menu_item_new(name, NULL);

        g_menu_item_set_action_and_target(item, "win.passage", "s", name);
        g_menu_append_item(menu, item);
    }
    gtk_menu_button_set_menu_model(line->passages, G_MENU_MODEL(menu));
}

static void
show_passage(HwContextLine *line, const HwDocument *document)
{
    const char *name = hw_session_get_passage(line->session);
    const HwRace *race = document->race;
    const char *text = name;

    if (!*text)
        text =
            race && race->has_passage ? hw_words_passage_kind(race->passage_kind) : _("Passage not stated");
    if (g_strcmp0(gtk_label_get_text(line->passage), text) != 0)
        gtk_label_set_text(line->passage, text);
    show_passages(line, text);
}

static char *
dup_rules_label(const HwRules *rules)
{
    g_autofree char *gap = NULL;
    g_autofree char *seconds = NULL;

    if (!rules)
        return g_strdup(_("No rule set: measured order"));
    if (!rules->has_groups)
        return g_strdup(rules->title);
    gap = hw_duration_dup_gap(rules->group_gap_ns, hw_duration_decimals(rules->group_gap_ns));
    seconds = g_strdup_printf("%s s", gap + 1);
    /* The gap is always in sight; most titles name it. */
    if (strstr(rules->title, seconds))
        return g_strdup(rules->title);
    return g_strdup_printf(_("%s, group gap %s"), rules->title, seconds);
}

static void
show_rules(HwContextLine *line)
{
    const HwRules *rules = hw_session_get_rules(line->session);
    g_autofree char *label = dup_rules_label(rules);
    g_autofree char *tip = NULL;

    if (g_strcmp0(label, gtk_label_get_text(line->rules_label)) == 0)
        return;
    tip = rules ? hw_rules_dup_text(rules) : g_strdup(_("Choose the rule set in force"));
    gtk_label_set_text(line->rules_label, label);
    gtk_widget_set_tooltip_text(GTK_WIDGET(line->rules), tip);
}

static void
show_travel(HwContextLine *line, const HwDocument *document)
{
    bool mirrored = hw_session_get_mirrored(line->session);
    HwSide travel = hw_recording_get_travel(document->recording);
    /* Riders face the side on which earlier columns stand. */
    bool faces_left = !hw_session_get_view(line->session)->later_left;
    const char *text = faces_left ? _("◄ riders face left") : _("riders face right ►");

    if (mirrored)
        text = faces_left ? _("◄ mirrored view") : _("mirrored view ►");
    else if (travel == HW_SIDE_UNKNOWN)
        text = _("◄ travel not stated: can you read a bib?");
    gtk_label_set_text(line->travel, text);
}

static void
session_cb(HwContextLine *line)
{
    const HwDocument *document = hw_session_get_document(line->session);

    if (!document)
        return;
    show_event(line, document);
    show_passage(line, document);
    show_rules(line);
    show_travel(line, document);
}

static GMenuModel *
make_rules_menu(void)
{
    GMenu *menu = g_menu_new();
    g_autoptr(GMenu) shipped = g_menu_new();
    g_autoptr(GMenu) none = g_menu_new();
    const char *const *ids = hw_rules_get_ids();

    for (int i = 0; ids[i]; i++) {
        g_autoptr(HwRules) rules = hw_rules_read(ids[i], NULL);
        g_autoptr(GMenuItem) item = NULL;

        if (!rules)
            continue;
        item = g_menu_item_new(rules->title, NULL);
        g_menu_item_set_action_and_target(item, "win.rules", "s", ids[i]);
        g_menu_append_item(shipped, item);
    }
    g_menu_append(none, _("No rule set: measured order"), "win.rules('')");
    g_menu_append_section(menu, NULL, G_MENU_MODEL(shipped));
    g_menu_append_section(menu, NULL, G_MENU_MODEL(none));
    return G_MENU_MODEL(menu);
}

static void
hw_context_line_dispose(GObject *object)
{
    HwContextLine *line = HW_CONTEXT_LINE(object);

    if (line->session)
        g_signal_handlers_disconnect_by_data(line->session, line);
    g_clear_object(&line->session);
    g_clear_pointer(&line->listed, g_free);
    gtk_widget_dispose_template(GTK_WIDGET(object), HW_TYPE_CONTEXT_LINE);
    G_OBJECT_CLASS(hw_context_line_parent_class)->dispose(object);
}

static void
hw_context_line_class_init(HwContextLineClass *class)
{
    GtkWidgetClass *widget_class = GTK_WIDGET_CLASS(class);

    G_OBJECT_CLASS(class)->dispose = hw_context_line_dispose;
    gtk_widget_class_set_template_from_resource(widget_class, "/org/halfwheel/Halfwheel/context_line.ui");
    gtk_widget_class_bind_template_child(widget_class, HwContextLine, event);
    gtk_widget_class_bind_template_child(widget_class, HwContextLine, passage);
    gtk_widget_class_bind_template_child(widget_class, HwContextLine, passages);
    gtk_widget_class_bind_template_child(widget_class, HwContextLine, rules);
    gtk_widget_class_bind_template_child(widget_class, HwContextLine, rules_label);
    gtk_widget_class_bind_template_child(widget_class, HwContextLine, travel);
    gtk_widget_class_bind_template_child(widget_class, HwContextLine, release);
}

static void
hw_context_line_init(HwContextLine *line)
{
    g_autoptr(GMenuModel) menu = NULL;

    gtk_widget_init_template(GTK_WIDGET(line));
    menu = make_rules_menu();
    gtk_menu_button_set_menu_model(line->rules, menu);
}

void
hw_context_line_set_session(HwContextLine *line, HwSession *session)
{
    line->session = g_object_ref(session);
    g_signal_connect_object(session, "document-changed", G_CALLBACK(session_cb), line, G_CONNECT_SWAPPED);
    g_signal_connect_object(session, "list-changed", G_CALLBACK(session_cb), line, G_CONNECT_SWAPPED);
    g_signal_connect_object(session, "notify::mirrored", G_CALLBACK(session_cb), line, G_CONNECT_SWAPPED);
}
