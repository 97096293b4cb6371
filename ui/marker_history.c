/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "ui/marker_history.h"

/* Copies of 200 markers are some 50 kB each; enough undo for a long evening. */
#define MAX_STATES 500

typedef struct {
    HwMarkers *markers;
    int selection;
    const char *act; /* that led here; NULL for the first */
    guint merge;
    guint64 serial;
} State;

struct HwMarkerHistory {
    GPtrArray *states; /* State* */
    guint at;
    guint64 next_serial;
    guint64 saved_serial;
};

static void
state_free(gpointer data)
{
    State *state = data;

    hw_markers_free(state->markers);
    g_free(state);
}

static State *
state_new(HwMarkerHistory *history, HwMarkers *markers, int selection, const char *act, guint merge)
{
    State *state = g_new0(State, 1);

    state->markers = markers;
    state->selection = selection;
    state->act = act;
    state->merge = merge;
    state->serial = history->next_serial++;
    return state;
}

static State *
current(const HwMarkerHistory *history)
{
    return g_ptr_array_index(history->states, history->at);
}

HwMarkerHistory *
hw_marker_history_new(HwMarkers *markers)
{
    HwMarkerHistory *history = g_new0(HwMarkerHistory, 1);

    history->states = g_ptr_array_new_with_free_func(state_free);
    g_ptr_array_add(history->states, state_new(history, markers, -1, NULL, 0));
    history->saved_serial = current(history)->serial;
    return history;
}

void
hw_marker_history_free(HwMarkerHistory *history)
{
    if (!history)
        return;
    g_ptr_array_unref(history->states);
    g_free(history);
}

const HwMarkers *
hw_marker_history_get_markers(const HwMarkerHistory *history)
{
    return current(history)->markers;
}

int
hw_marker_history_get_selection(const HwMarkerHistory *history)
{
    return current(history)->selection;
}

void
hw_marker_history_push(HwMarkerHistory *history, HwMarkers *markers, int selection, const char *act,
                       guint merge)
{
    State *now = current(history);

    if (history->at + 1 < history->states->len)
        g_ptr_array_remove_range(history->states, history->at + 1, history->states->len - history->at - 1);
    if (merge > 0 && now->merge == merge && history->at > 0) {
        hw_markers_free(now->markers);
        now->markers = markers;
        now->selection = selection;
        now->serial = history->next_serial++;
        return;
    }
    g_ptr_array_add(history->states, state_new(history, markers, selection, act, merge));
    history->at++;
    if (history->states->len > MAX_STATES) {
        g_ptr_array_remove_index(history->states, 0);
        history->at--;
    }
}

const char *
hw_marker_history_get_undo_act(const HwMarkerHistory *history)
{
    return history->at > 0 ? current(history)->act : NULL;
}

const char *
hw_marker_history_get_redo_act(const HwMarkerHistory *history)
{
    if (history->at + 1 >= history->states->len)
        return NULL;
    return ((State *)g_ptr_array_index(history->states, history->at + 1))->act;
}

bool
hw_marker_history_undo(HwMarkerHistory *history)
{
    if (history->at == 0)
        return false;
    current(history)->merge = 0;
    history->at--;
    current(history)->merge = 0;
    return true;
}

bool
hw_marker_history_redo(HwMarkerHistory *history)
{
    if (history->at + 1 >= history->states->len)
        return false;
    history->at++;
    current(history)->merge = 0;
    return true;
}

guint64
hw_marker_history_get_serial(const HwMarkerHistory *history)
{
    return current(history)->serial;
}

void
hw_marker_history_mark_saved(HwMarkerHistory *history, guint64 serial)
{
    current(history)->merge = 0;
    history->saved_serial = serial;
    /* A file that is written names the recording with every marker, whatever state it is of. */
    for (guint i = 0; i < history->states->len; i++)
        ((State *)g_ptr_array_index(history->states, i))->markers->names_recording = true;
}

bool
hw_marker_history_is_modified(const HwMarkerHistory *history)
{
    return current(history)->serial != history->saved_serial;
}
