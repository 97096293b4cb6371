/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The session: the one object with signals. It holds what is open, the markers as they are edited, the finish
 * list derived from them after each change, what is selected, what part is in view and where the reading line
 * stands. Widgets bind to it; setters tell only of change. Main thread only.
 *
 * Positions on the axis are in cells (core/strip/axis.h); the view is in the device's own pixels.
 *
 * Signals: "document-changed" (something else is open, or nothing), "strip-changed" (damage was learnt),
 * "markers-changed", "list-changed", "view-changed".
 * Properties: "reading-cell" (double), "hand-row" (double), "selection" (int, −1 none), "mirrored",
 * "modified". */
#pragma once

#include "core/strip/view_map.h"
#include "ui/document.h"
#include "ui/marker_history.h"

#include <glib-object.h>
#include <stdbool.h>
#include <stdint.h>

#define HW_TYPE_SESSION (hw_session_get_type())
G_DECLARE_FINAL_TYPE(HwSession, hw_session, HW, SESSION, GObject)

HwSession *hw_session_new(void);

/* Takes the document (NULL: closes). */
void hw_session_set_document(HwSession *session, HwDocument *document);

/* All borrowed; NULL while nothing is open, and where the document has none. */
const HwDocument *hw_session_get_document(HwSession *session);
HwStrip *hw_session_get_strip(HwSession *session);
HwAxis *hw_session_get_axis(HwSession *session);
const HwMarkers *hw_session_get_markers(HwSession *session);
const HwMarker *hw_session_get_marker(HwSession *session, int index);
guint hw_session_get_n_markers(HwSession *session);
const HwRules *hw_session_get_rules(HwSession *session);

/* A strip of the same recording that knows more of its damage. Takes a reference. */
void hw_session_set_strip(HwSession *session, HwStrip *strip);
/* Every block was decoded: none is unchecked any more. */
void hw_session_set_all_checked(HwSession *session);

/* Takes the rules (NULL: none), read from `id_or_path`. */
void hw_session_set_rules(HwSession *session, HwRules *rules, const char *id_or_path);

/* The names of the passages that markers belong to, in the order of the markers (char*, owned by the caller).
 */
GPtrArray *hw_session_dup_passages(HwSession *session);
/* The passage that is judged; NULL: the race's, or the only one. */
void hw_session_set_passage(HwSession *session, const char *passage);
/* The one the list is of; "" where none is named. Borrowed. */
const char *hw_session_get_passage(HwSession *session);

/* The list, derived; NULL with a sentence in *sentence (borrowed) where it cannot be. */
const HwFinishList *hw_session_get_list(HwSession *session, const char **sentence);
/* Sentences of the session itself, beside the list's own problems (a bib used twice). Borrowed, char*. */
const GPtrArray *hw_session_get_conflicts(HwSession *session);
/* Place in the list of a marker's row, or −1; and the marker of a row, or −1. */
int hw_session_find_row(HwSession *session, int marker);
int hw_session_find_marker(HwSession *session, const HwFinishRow *row);

/* Acts on markers. Each is one step of undo, unless it continues the one before. `category` (NULL: none) is
 * needed only where a bib is worn in two. `cell` must lie on a readable column: else −1 or false, and nothing
 * changes. */
int hw_session_place_marker(HwSession *session, double cell, double row, const char *bib,
                            const char *category);
bool hw_session_move_marker(HwSession *session, int index, double cell, double row, guint merge);
void hw_session_rename_marker(HwSession *session, int index, const char *bib, const char *category);
/* A marker of a front tyre becomes one of a rear tyre, and back. */
void hw_session_toggle_rear(HwSession *session, int index);
void hw_session_delete_marker(HwSession *session, int index);
/* A merge key of its own for one drag. */
guint hw_session_new_merge_key(HwSession *session);
bool hw_session_undo(HwSession *session);
bool hw_session_redo(HwSession *session);
const char *hw_session_get_undo_act(HwSession *session);
const char *hw_session_get_redo_act(HwSession *session);
bool hw_session_is_modified(HwSession *session);
/* The markers as the CSV that saving writes, and the number of the state it was made of. NULL where nothing
 * is open. Owned by the caller. */
char *hw_session_dup_markers_csv(HwSession *session, guint64 *serial);
/* The state of that number is on the disk at `path`, where its digest is `hex`. */
void hw_session_mark_saved(HwSession *session, guint64 serial, const char *path, const char *hex);

/* Next (direction 1) or previous (−1) marker in time from the reading line; −1 where there is none. */
int hw_session_next_marker(HwSession *session, int direction, bool unnamed_only);
/* The front marker of a bib in the passage that is judged, else any of that bib, or −1. */
int hw_session_find_bib(HwSession *session, const char *bib);
/* The marker of a rider in the passage that is judged, of the same edge as `index` (−1: front) but not that
 * one; or −1. A rider may have one of each. */
int hw_session_find_rider(HwSession *session, const char *bib, const char *category, int index);

int hw_session_get_selection(HwSession *session);
void hw_session_set_selection(HwSession *session, int index);

/* The view. The picture's size in device pixels comes from the widget; until then nothing is in view. */
const HwViewMap *hw_session_get_view(HwSession *session);
void hw_session_set_viewport(HwSession *session, int width_px, int height_px);
/* Zoom in time by a factor (above 1: in), the cell at x_px staying there. */
void hw_session_zoom(HwSession *session, double x_px, double factor);
/* About the reading line where it is in view, else about the middle. */
void hw_session_zoom_about_line(HwSession *session, double factor);
/* One column a device pixel, about the reading line or the middle. */
void hw_session_zoom_one_to_one(HwSession *session);
void hw_session_zoom_fit(HwSession *session);
/* Zoom in height, the row at y_px staying there. */
void hw_session_zoom_rows(HwSession *session, double y_px, double factor);
/* By pixels, as dragged on screen. */
void hw_session_pan_px(HwSession *session, double dx_px, double dy_px);
/* By views, later above zero. */
void hw_session_pan_views(HwSession *session, double views);
/* Brings a cell into view, to the middle where it was out of it. */
void hw_session_reveal(HwSession *session, double cell);
bool hw_session_is_in_view(HwSession *session, double cell);

bool hw_session_get_mirrored(HwSession *session);
void hw_session_set_mirrored(HwSession *session, bool mirrored);

/* The reading line. */
double hw_session_get_reading_cell(HwSession *session);
void hw_session_set_reading_cell(HwSession *session, double cell, bool reveal);
/* By columns as moved on screen: right above zero. */
void hw_session_nudge_line(HwSession *session, double columns_on_screen);
double hw_session_get_hand_row(HwSession *session);
void hw_session_set_hand_row(HwSession *session, double row);
