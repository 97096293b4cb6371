/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "ui/session.h"

#include "ui/session_private.h"

G_DEFINE_FINAL_TYPE(HwSession, hw_session, G_TYPE_OBJECT)

static guint signals[HW_SESSION_N_SIGNALS];
static GParamSpec *props[HW_SESSION_N_PROPS];

void
hw_session_emit(HwSession *session, int signal)
{
    g_signal_emit(session, signals[signal], 0);
}

void
hw_session_notify(HwSession *session, int property)
{
    g_object_notify_by_pspec(G_OBJECT(session), props[property]);
}

static void
hw_session_get_property(GObject *object, guint id, GValue *value, GParamSpec *pspec)
{
    HwSession *session = HW_SESSION(object);

    switch (id) {
    case HW_SESSION_PROP_READING_CELL:
        g_value_set_double(value, session->reading_cell);
        break;
    case HW_SESSION_PROP_HAND_ROW:
        g_value_set_double(value, session->hand_row);
        break;
    case HW_SESSION_PROP_SELECTION:
        g_value_set_int(value, session->selection);
        break;
    case HW_SESSION_PROP_MIRRORED:
        g_value_set_boolean(value, session->mirrored);
        break;
    case HW_SESSION_PROP_MODIFIED:
        g_value_set_boolean(value, hw_session_is_modified(session));
        break;
    default:
        G_OBJECT_WARN_INVALID_PROPERTY_ID(object, id, pspec);
    }
}

static void
hw_session_set_property(GObject *object, guint id, const GValue *value, GParamSpec *pspec)
{
    HwSession *session = HW_SESSION(object);

    switch (id) {
    case HW_SESSION_PROP_READING_CELL:
        hw_session_set_reading_cell(session, g_value_get_double(value), false);
        break;
    case HW_SESSION_PROP_HAND_ROW:
        hw_session_set_hand_row(session, g_value_get_double(value));
        break;
    case HW_SESSION_PROP_SELECTION:
        hw_session_set_selection(session, g_value_get_int(value));
        break;
    case HW_SESSION_PROP_MIRRORED:
        hw_session_set_mirrored(session, g_value_get_boolean(value));
        break;
    default:
        G_OBJECT_WARN_INVALID_PROPERTY_ID(object, id, pspec);
    }
}

static void
hw_session_finalize(GObject *object)
{
    HwSession *session = HW_SESSION(object);

    g_clear_pointer(&session->document, hw_document_free);
    g_clear_pointer(&session->history, hw_marker_history_free);
    g_clear_pointer(&session->list, hw_finish_list_free);
    g_free(session->list_sentence);
    g_ptr_array_unref(session->conflicts);
    G_OBJECT_CLASS(hw_session_parent_class)->finalize(object);
}

static void
hw_session_class_init(HwSessionClass *class)
{
    static const char *const names[HW_SESSION_N_SIGNALS] = { "document-changed", "strip-changed",
                                                             "markers-changed", "list-changed",
                                                             "view-changed" };
    GObjectClass *object_class = G_OBJECT_CLASS(class);
    GParamFlags writable = G_PARAM_READWRITE | G_PARAM_STATIC_STRINGS | G_PARAM_EXPLICIT_NOTIFY;

    object_class->get_property = hw_session_get_property;
    object_class->set_property = hw_session_set_property;
    object_class->finalize = hw_session_finalize;
    for (int i = 0; i < HW_SESSION_N_SIGNALS; i++)
        signals[i] =
            g_signal_new(names[i], HW_TYPE_SESSION, G_SIGNAL_RUN_LAST, 0, NULL, NULL, NULL, G_TYPE_NONE, 0);
    props[HW_SESSION_PROP_READING_CELL] =
        g_param_spec_double("reading-cell", NULL, NULL, -G_MAXDOUBLE, G_MAXDOUBLE, 0.0, writable);
    props[HW_SESSION_PROP_HAND_ROW] =
        g_param_spec_double("hand-row", NULL, NULL, -G_MAXDOUBLE, G_MAXDOUBLE, 0.0, writable);
    props[HW_SESSION_PROP_SELECTION] = g_param_spec_int("selection", NULL, NULL, -1, G_MAXINT, -1, writable);
    props[HW_SESSION_PROP_MIRRORED] = g_param_spec_boolean("mirrored", NULL, NULL, FALSE, writable);
    props[HW_SESSION_PROP_MODIFIED] = g_param_spec_boolean(
        "modified", NULL, NULL, FALSE, G_PARAM_READABLE | G_PARAM_STATIC_STRINGS | G_PARAM_EXPLICIT_NOTIFY);
    g_object_class_install_properties(object_class, HW_SESSION_N_PROPS, props);
}

static void
hw_session_init(HwSession *session)
{
    session->selection = -1;
    session->conflicts = g_ptr_array_new_with_free_func(g_free);
    session->view.cells_per_px = 1.0;
    session->view.rows_per_px = 1.0;
}

HwSession *
hw_session_new(void)
{
    return g_object_new(HW_TYPE_SESSION, NULL);
}

void
hw_session_set_document(HwSession *session, HwDocument *document)
{
    g_clear_pointer(&session->document, hw_document_free);
    g_clear_pointer(&session->history, hw_marker_history_free);
    session->document = document;
    session->selection = -1;
    session->was_modified = false;
    if (document)
        session->history = hw_marker_history_new(g_steal_pointer(&document->markers));
    hw_session_reset_view(session);
    hw_session_derive(session);
    hw_session_emit(session, HW_SESSION_DOCUMENT);
    hw_session_emit(session, HW_SESSION_MARKERS);
    hw_session_emit(session, HW_SESSION_LIST);
    hw_session_emit(session, HW_SESSION_VIEW);
    hw_session_notify(session, HW_SESSION_PROP_SELECTION);
    hw_session_notify(session, HW_SESSION_PROP_READING_CELL);
    hw_session_notify(session, HW_SESSION_PROP_MODIFIED);
}

const HwDocument *
hw_session_get_document(HwSession *session)
{
    return session->document;
}

HwStrip *
hw_session_get_strip(HwSession *session)
{
    return session->document ? session->document->strip : NULL;
}

HwAxis *
hw_session_get_axis(HwSession *session)
{
    return session->document ? session->document->axis : NULL;
}

const HwRules *
hw_session_get_rules(HwSession *session)
{
    return session->document ? session->document->rules : NULL;
}

void
hw_session_set_strip(HwSession *session, HwStrip *strip)
{
    HwDocument *document = session->document;
    double column = 0.0;
    double first_column = 0.0;
    bool line_on_column, view_on_column;

    if (!document || document->strip == strip)
        return;
    /* Voids may have grown: line and view stay with their columns. */
    line_on_column = hw_axis_column(document->axis, session->reading_cell, &column);
    view_on_column = hw_axis_column(document->axis, session->view.first_cell, &first_column);
    hw_strip_unref(document->strip);
    document->strip = hw_strip_ref(strip);
    hw_axis_unref(document->axis);
    document->axis = hw_axis_new(hw_strip_get_time_base(strip));
    if (line_on_column)
        session->reading_cell = hw_axis_position(document->axis, column);
    if (session->fits_time)
        hw_session_zoom_fit(session);
    else if (view_on_column)
        session->view.first_cell = hw_axis_position(document->axis, first_column);
    hw_session_derive(session);
    hw_session_emit(session, HW_SESSION_STRIP);
    hw_session_emit(session, HW_SESSION_LIST);
    hw_session_emit(session, HW_SESSION_VIEW);
    hw_session_notify(session, HW_SESSION_PROP_READING_CELL);
}

void
hw_session_set_all_checked(HwSession *session)
{
    if (!session->document || session->document->n_unchecked_blocks == 0)
        return;
    session->document->n_unchecked_blocks = 0;
    hw_session_derive(session);
    hw_session_emit(session, HW_SESSION_LIST);
}

void
hw_session_set_rules(HwSession *session, HwRules *rules, const char *id_or_path)
{
    HwDocument *document = session->document;

    if (!document) {
        hw_rules_free(rules);
        return;
    }
    g_clear_pointer(&document->rules, hw_rules_free);
    document->rules = rules;
    g_free(document->request->rules);
    document->request->rules = rules ? g_strdup(id_or_path) : NULL;
    hw_session_derive(session);
    hw_session_emit(session, HW_SESSION_LIST);
}

int
hw_session_get_selection(HwSession *session)
{
    return session->selection;
}

void
hw_session_set_selection(HwSession *session, int index)
{
    if (index < -1 || index >= (int)hw_session_get_n_markers(session))
        index = -1;
    if (index == session->selection)
        return;
    session->selection = index;
    hw_session_notify(session, HW_SESSION_PROP_SELECTION);
}
