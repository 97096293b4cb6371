/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The markers as they are edited, with undo and redo. A state is a whole small copy; an act that continues
 * the one before (a drag, repeated nudges of one marker) replaces its state instead of adding one. Knows
 * which state was saved. Main thread only. */
#pragma once

#include "core/ruling/markers.h"

#include <glib.h>
#include <stdbool.h>

typedef struct HwMarkerHistory HwMarkerHistory;

/* Takes the markers as the first and saved state. */
HwMarkerHistory *hw_marker_history_new(HwMarkers *markers);
void hw_marker_history_free(HwMarkerHistory *history);

/* The state that holds now; borrowed until the next change. */
const HwMarkers *hw_marker_history_get_markers(const HwMarkerHistory *history);
/* The marker that was selected when this state was made; −1: none. */
int hw_marker_history_get_selection(const HwMarkerHistory *history);

/* Takes `markers` as the next state and drops what could be redone. `act` names it in the imperative ("Delete
 * marker"), static. States with the same `merge` key above 0 that follow one another become one; a key is cut
 * by undo, redo and saving. */
void hw_marker_history_push(HwMarkerHistory *history, HwMarkers *markers, int selection, const char *act,
                            guint merge);

/* What undoing or redoing would undo or redo, or NULL where there is nothing; static. */
const char *hw_marker_history_get_undo_act(const HwMarkerHistory *history);
const char *hw_marker_history_get_redo_act(const HwMarkerHistory *history);
bool hw_marker_history_undo(HwMarkerHistory *history);
bool hw_marker_history_redo(HwMarkerHistory *history);

/* Number of the state that holds now, never used twice. */
guint64 hw_marker_history_get_serial(const HwMarkerHistory *history);
/* The state of that number is the one on the disk, and all markers are known to be of this recording. */
void hw_marker_history_mark_saved(HwMarkerHistory *history, guint64 serial);
bool hw_marker_history_is_modified(const HwMarkerHistory *history);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwMarkerHistory, hw_marker_history_free)
