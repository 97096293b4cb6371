/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The session's markers and the list derived from them. */
#include "ui/session_private.h"

#include "core/measure/gap.h"

#include <glib/gi18n.h>
#include <math.h>
#include <string.h>

/* Half of a 700C road wheel's diameter of 0.668 m. */
#define HALF_WHEEL_M 0.334

const HwMarkers *
hw_session_get_markers(HwSession *session)
{
    return session->history ? hw_marker_history_get_markers(session->history) : NULL;
}

guint
hw_session_get_n_markers(HwSession *session)
{
    const HwMarkers *markers = hw_session_get_markers(session);

    return markers ? markers->markers->len : 0;
}

const HwMarker *
hw_session_get_marker(HwSession *session, int index)
{
    if (index < 0 || index >= (int)hw_session_get_n_markers(session))
        return NULL;
    return g_ptr_array_index(hw_session_get_markers(session)->markers, (guint)index);
}

static bool
same_rider_twice(const HwMarker *a, const HwMarker *b)
{
    return !hw_marker_is_unnamed(a) && strcmp(a->bib, b->bib) == 0 && strcmp(a->category, b->category) == 0 &&
           strcmp(a->passage, b->passage) == 0 && a->edge == b->edge && a->direction == b->direction;
}

/* A bib used twice is a conflict between two markers and no reason to lose the list: until it is mended both
 * stand in it without a name. New markers, or NULL where there is no conflict. */
static HwMarkers *
set_conflicts_apart(HwSession *session, const HwMarkers *markers)
{
    GPtrArray *all = markers->markers;
    HwMarkers *apart = NULL;

    g_ptr_array_set_size(session->conflicts, 0);
    for (guint i = 0; i < all->len; i++) {
        const HwMarker *marker = g_ptr_array_index(all, i);
        guint n_same = 0;
        bool is_first = true;

        for (guint j = 0; j < all->len; j++) {
            if (!same_rider_twice(marker, g_ptr_array_index(all, j)))
                continue;
            n_same++;
            if (j < i)
                is_first = false;
        }
        if (n_same < 2)
            continue;
        if (!apart)
            apart = hw_markers_copy(markers);
        {
            HwMarker *copy = g_ptr_array_index(apart->markers, i);

            g_free(copy->bib);
            copy->bib = g_strdup_printf("?%s·%u", marker->bib, i + 1);
        }
        if (is_first)
            g_ptr_array_add(
                session->conflicts,
                g_strdup_printf(_("Number %s stands at %u markers: name one of them otherwise. Until "
                                  "then they count as unnamed."),
                                marker->bib, n_same));
    }
    return apart;
}

void
hw_session_derive(HwSession *session)
{
    HwDocument *document = session->document;
    const HwMarkers *markers = hw_session_get_markers(session);
    g_autoptr(HwMarkers) apart = NULL;
    g_autoptr(GError) error = NULL;
    HwFinishInput input = { 0 };

    g_clear_pointer(&session->list, hw_finish_list_free);
    g_clear_pointer(&session->list_sentence, g_free);
    if (!document)
        return;
    apart = set_conflicts_apart(session, markers);
    input.strip = document->strip;
    input.markers = apart ? apart : markers;
    input.start_list = document->start_list;
    input.race = document->race;
    input.rules = document->rules;
    input.calibration = document->calibration;
    input.passage = document->request->passage;
    input.n_unchecked_blocks = document->n_unchecked_blocks;
    if (hw_markers_check_places(input.markers, document->strip, &error))
        session->list = hw_finish_list_new(&input, &error);
    if (!session->list)
        session->list_sentence = g_strdup(error->message);
}

GPtrArray *
hw_session_dup_passages(HwSession *session)
{
    GPtrArray *names = g_ptr_array_new_with_free_func(g_free);

    for (int i = 0; i < (int)hw_session_get_n_markers(session); i++) {
        const char *name = hw_session_get_marker(session, i)->passage;

        if (*name && !g_ptr_array_find_with_equal_func(names, name, g_str_equal, NULL))
            g_ptr_array_add(names, g_strdup(name));
    }
    return names;
}

void
hw_session_set_passage(HwSession *session, const char *passage)
{
    HwDocument *document = session->document;

    if (!document || g_strcmp0(document->request->passage, passage) == 0)
        return;
    g_free(document->request->passage);
    document->request->passage = g_strdup(passage);
    hw_session_derive(session);
    hw_session_emit(session, HW_SESSION_LIST);
}

const char *
hw_session_get_passage(HwSession *session)
{
    const HwDocument *document = session->document;

    if (document->request->passage)
        return document->request->passage;
    if (session->list && session->list->passage)
        return session->list->passage;
    return document->race && document->race->has_passage ? document->race->passage_name : "";
}

const HwFinishList *
hw_session_get_list(HwSession *session, const char **sentence)
{
    if (sentence)
        *sentence = session->list_sentence;
    return session->list;
}

const GPtrArray *
hw_session_get_conflicts(HwSession *session)
{
    return session->conflicts;
}

int
hw_session_find_row(HwSession *session, int marker)
{
    const HwMarker *wanted = hw_session_get_marker(session, marker);

    if (!wanted || !session->list)
        return -1;
    for (guint i = 0; i < session->list->rows->len; i++)
        if (hw_session_find_marker(session, g_ptr_array_index(session->list->rows, i)) == marker)
            return (int)i;
    return -1;
}

int
hw_session_find_marker(HwSession *session, const HwFinishRow *row)
{
    const HwMarkers *markers = hw_session_get_markers(session);

    if (!markers || !row->crossed)
        return -1;
    for (guint i = 0; i < markers->markers->len; i++) {
        const HwMarker *marker = g_ptr_array_index(markers->markers, i);

        /* The list carries a marker's column over as it is, so that equality is meant. */
        if (marker->column == row->column && marker->edge == row->edge &&
            (strcmp(marker->bib, row->bib) == 0 || hw_marker_is_unnamed(marker) || row->unnamed))
            return (int)i;
    }
    return -1;
}

void
hw_session_markers_changed(HwSession *session)
{
    bool modified = hw_marker_history_is_modified(session->history);

    hw_session_derive(session);
    hw_session_emit(session, HW_SESSION_MARKERS);
    hw_session_emit(session, HW_SESSION_LIST);
    if (modified != session->was_modified) {
        session->was_modified = modified;
        hw_session_notify(session, HW_SESSION_PROP_MODIFIED);
    }
}

/* Makes `markers` the state that holds, with `selection` selected. */
static void
push(HwSession *session, HwMarkers *markers, int selection, const char *act, guint merge)
{
    bool moved = selection != session->selection;

    hw_marker_history_push(session->history, markers, selection, act, merge);
    session->selection = selection;
    hw_session_markers_changed(session);
    if (moved)
        hw_session_notify(session, HW_SESSION_PROP_SELECTION);
}

/* What is known of a marker that stands at the reading line in a view of this scale. */
static void
set_state(HwSession *session, HwMarker *marker)
{
    double period_ns = hw_time_base_get_period_ns(hw_strip_get_time_base(session->document->strip));

    if (session->view.cells_per_px > 1.0) {
        marker->state = HW_MARKER_ROUGH;
        marker->u_lead_ns = hw_u_by_eye_ns(period_ns * session->view.cells_per_px);
    } else {
        marker->state = HW_MARKER_READ;
        marker->u_lead_ns = NAN;
    }
    marker->has_time = false;
    marker->time_ns = 0;
    marker->speed_mps = NAN;
    marker->u_speed_mps = NAN;
}

/* "?1", "?2", …: the first that no marker bears. */
static char *
dup_free_placeholder(const HwMarkers *markers)
{
    for (guint n = 1;; n++) {
        g_autofree char *name = g_strdup_printf("?%u", n);
        bool taken = false;

        for (guint i = 0; i < markers->markers->len && !taken; i++) {
            const HwMarker *marker = g_ptr_array_index(markers->markers, i);

            taken = strcmp(marker->bib, name) == 0;
        }
        if (!taken)
            return g_steal_pointer(&name);
    }
}

static bool
is_readable(HwSession *session, double cell, double *column)
{
    if (!session->document || !hw_axis_column(session->document->axis, cell, column))
        return false;
    return hw_time_base_run_at(hw_strip_get_time_base(session->document->strip), *column) >= 0;
}

int
hw_session_place_marker(HwSession *session, double cell, double row, const char *bib, const char *category)
{
    g_autofree char *placeholder = NULL;
    HwMarkers *markers;
    HwMarker *marker;
    double column;
    int index;

    if (!is_readable(session, cell, &column))
        return -1;
    markers = hw_markers_copy(hw_session_get_markers(session));
    if (!bib)
        bib = placeholder = dup_free_placeholder(markers);
    marker = hw_marker_new(bib, column, row);
    g_free(marker->passage);
    marker->passage = g_strdup(hw_session_get_passage(session));
    g_free(marker->category);
    marker->category = g_strdup(category ? category : "");
    g_free(marker->camera);
    marker->camera = g_strdup(hw_recording_get_camera(session->document->recording));
    set_state(session, marker);
    g_ptr_array_add(markers->markers, marker);
    index = (int)markers->markers->len - 1;
    push(session, markers, index, _("Place marker"), 0);
    return index;
}

/* The speed is the wheel's, not the click's: a marker that stays on its wheel keeps it. Held against where
 * the drag began, so that many small steps are one long one. */
static void
keep_speed(HwSession *session, const HwMarker *old, HwMarker *marker, guint merge)
{
    HwAxis *axis = session->document->axis;
    int64_t from_ns, to_ns;

    if (merge == 0 || merge != session->moved_merge) {
        session->moved_merge = merge;
        session->moved_column = old->column;
        session->moved_speed_mps = old->speed_mps;
        session->moved_u_speed_mps = old->u_speed_mps;
    }
    from_ns = hw_axis_instant(axis, hw_axis_position(axis, session->moved_column));
    to_ns = hw_axis_instant(axis, hw_axis_position(axis, marker->column));
    if (!(fabs((double)(to_ns - from_ns)) * 1e-9 * session->moved_speed_mps < HALF_WHEEL_M))
        return;
    marker->speed_mps = session->moved_speed_mps;
    marker->u_speed_mps = session->moved_u_speed_mps;
}

bool
hw_session_move_marker(HwSession *session, int index, double cell, double row, guint merge)
{
    const HwMarker *old = hw_session_get_marker(session, index);
    HwMarkers *markers;
    HwMarker *marker;
    double column;

    if (!old || !is_readable(session, cell, &column))
        return false;
    if (old->column == column && old->row == row)
        return true;
    markers = hw_markers_copy(hw_session_get_markers(session));
    marker = g_ptr_array_index(markers->markers, (guint)index);
    marker->column = column;
    if (!isnan(row))
        marker->row = row;
    set_state(session, marker);
    keep_speed(session, old, marker, merge);
    push(session, markers, index, _("Move marker"), merge);
    return true;
}

void
hw_session_rename_marker(HwSession *session, int index, const char *bib, const char *category)
{
    const HwMarker *old = hw_session_get_marker(session, index);
    g_autofree char *placeholder = NULL;
    HwMarkers *markers;
    HwMarker *marker;

    if (!old)
        return;
    if (!bib || !*bib || strcmp(bib, "?") == 0)
        bib = placeholder = dup_free_placeholder(hw_session_get_markers(session));
    if (strcmp(old->bib, bib) == 0 && strcmp(old->category, category ? category : "") == 0)
        return;
    markers = hw_markers_copy(hw_session_get_markers(session));
    marker = g_ptr_array_index(markers->markers, (guint)index);
    g_free(marker->bib);
    marker->bib = g_strdup(bib);
    g_free(marker->category);
    marker->category = g_strdup(category ? category : "");
    push(session, markers, index, _("Name marker"), 0);
}

void
hw_session_toggle_rear(HwSession *session, int index)
{
    HwMarkers *markers;
    HwMarker *marker;

    if (!hw_session_get_marker(session, index))
        return;
    markers = hw_markers_copy(hw_session_get_markers(session));
    marker = g_ptr_array_index(markers->markers, (guint)index);
    marker->edge = marker->edge == HW_EDGE_FRONT ? HW_EDGE_REAR : HW_EDGE_FRONT;
    push(session, markers, index, _("Mark rear tyre"), 0);
}

void
hw_session_delete_marker(HwSession *session, int index)
{
    HwMarkers *markers;

    if (!hw_session_get_marker(session, index))
        return;
    markers = hw_markers_copy(hw_session_get_markers(session));
    g_ptr_array_remove_index(markers->markers, (guint)index);
    push(session, markers, -1, _("Delete marker"), 0);
}

guint
hw_session_new_merge_key(HwSession *session)
{
    return ++session->last_merge;
}

static void
after_history_step(HwSession *session)
{
    int selection = hw_marker_history_get_selection(session->history);
    bool moved = selection != session->selection;

    session->selection = selection;
    hw_session_markers_changed(session);
    if (moved)
        hw_session_notify(session, HW_SESSION_PROP_SELECTION);
}

bool
hw_session_undo(HwSession *session)
{
    if (!session->history || !hw_marker_history_undo(session->history))
        return false;
    after_history_step(session);
    return true;
}

bool
hw_session_redo(HwSession *session)
{
    if (!session->history || !hw_marker_history_redo(session->history))
        return false;
    after_history_step(session);
    return true;
}

const char *
hw_session_get_undo_act(HwSession *session)
{
    return session->history ? hw_marker_history_get_undo_act(session->history) : NULL;
}

const char *
hw_session_get_redo_act(HwSession *session)
{
    return session->history ? hw_marker_history_get_redo_act(session->history) : NULL;
}

bool
hw_session_is_modified(HwSession *session)
{
    return session->history && hw_marker_history_is_modified(session->history);
}

char *
hw_session_dup_markers_csv(HwSession *session, guint64 *serial)
{
    if (!session->document)
        return NULL;
    *serial = hw_marker_history_get_serial(session->history);
    return hw_markers_dup_csv(hw_session_get_markers(session), session->document->strip);
}

void
hw_session_mark_saved(HwSession *session, guint64 serial, const char *path, const char *hex)
{
    HwDocument *document = session->document;
    bool modified, named;

    if (!document)
        return;
    named = hw_session_get_markers(session)->names_recording;
    if (path != document->markers_path) {
        g_free(document->markers_path);
        document->markers_path = g_strdup(path);
    }
    g_free(document->request->markers);
    document->request->markers = g_strdup(path);
    g_free(document->markers_on_disk);
    document->markers_on_disk = g_strdup(hex);
    hw_marker_history_mark_saved(session->history, serial);
    if (!named) {
        hw_session_derive(session);
        hw_session_emit(session, HW_SESSION_LIST);
    }
    modified = hw_marker_history_is_modified(session->history);
    if (modified != session->was_modified) {
        session->was_modified = modified;
        hw_session_notify(session, HW_SESSION_PROP_MODIFIED);
    }
}

int
hw_session_next_marker(HwSession *session, int direction, bool unnamed_only)
{
    HwAxis *axis = hw_session_get_axis(session);
    double best = INFINITY;
    int found = -1;

    for (int i = 0; i < (int)hw_session_get_n_markers(session); i++) {
        const HwMarker *marker = hw_session_get_marker(session, i);
        double ahead;

        if (unnamed_only && !hw_marker_is_unnamed(marker))
            continue;
        ahead = (hw_axis_position(axis, marker->column) - session->reading_cell) * direction;
        /* Two in one place: the later in the file follows. */
        if (i == session->selection || ahead < 0.0 ||
            (ahead == 0.0 && i * direction < session->selection * direction))
            continue;
        if (ahead < best) {
            best = ahead;
            found = i;
        }
    }
    return found;
}

static bool
is_judged(HwSession *session, const HwMarker *marker, HwEdge edge)
{
    return marker->edge == edge && strcmp(marker->passage, hw_session_get_passage(session)) == 0;
}

int
hw_session_find_bib(HwSession *session, const char *bib)
{
    int found = -1;

    for (int i = 0; i < (int)hw_session_get_n_markers(session); i++) {
        const HwMarker *marker = hw_session_get_marker(session, i);

        if (strcmp(marker->bib, bib) != 0)
            continue;
        if (is_judged(session, marker, HW_EDGE_FRONT))
            return i;
        if (found < 0)
            found = i;
    }
    return found;
}

int
hw_session_find_rider(HwSession *session, const char *bib, const char *category, int index)
{
    const HwMarker *but = hw_session_get_marker(session, index);
    HwEdge edge = but ? but->edge : HW_EDGE_FRONT;

    for (int i = 0; i < (int)hw_session_get_n_markers(session); i++) {
        const HwMarker *marker = hw_session_get_marker(session, i);

        if (i != index && is_judged(session, marker, edge) && strcmp(marker->bib, bib) == 0 &&
            (!category || !*marker->category || strcmp(marker->category, category) == 0))
            return i;
    }
    return -1;
}
