/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What the files of the session share with one another and with nobody else. */
#pragma once

#include "ui/session.h"

struct _HwSession {
    GObject parent_instance;

    HwDocument *document;
    HwMarkerHistory *history;
    HwFinishList *list;
    char *list_sentence;
    GPtrArray *conflicts; /* char* */
    guint last_merge;
    guint moved_merge;   /* the drag that goes on */
    double moved_column; /* where it began, and the speed the marker had there */
    double moved_speed_mps;
    double moved_u_speed_mps;
    bool was_modified;

    int selection;

    HwViewMap view;
    bool fits_time;
    bool fits_rows;
    bool mirrored;
    double reading_cell;
    double hand_row;
};

enum {
    HW_SESSION_DOCUMENT,
    HW_SESSION_STRIP,
    HW_SESSION_MARKERS,
    HW_SESSION_LIST,
    HW_SESSION_VIEW,
    HW_SESSION_N_SIGNALS
};

enum {
    HW_SESSION_PROP_READING_CELL = 1,
    HW_SESSION_PROP_HAND_ROW,
    HW_SESSION_PROP_SELECTION,
    HW_SESSION_PROP_MIRRORED,
    HW_SESSION_PROP_MODIFIED,
    HW_SESSION_N_PROPS
};

void hw_session_emit(HwSession *session, int signal);
void hw_session_notify(HwSession *session, int property);

/* Derives the list anew from what holds now. */
void hw_session_derive(HwSession *session);
/* Selection and lists after the markers changed. */
void hw_session_markers_changed(HwSession *session);
/* The view of a document just opened. */
void hw_session_reset_view(HwSession *session);
