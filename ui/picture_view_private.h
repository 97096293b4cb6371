/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What the files of the picture view share with one another and with nobody else. */
#pragma once

#include "core/sheet/pennant.h"
#include "ui/composer.h"
#include "ui/picture_view.h"

/* Heights above the picture, in logical pixels. */
#define HW_RAIL_PX 42
#define HW_RULER_PX 24
#define HW_PICTURE_Y (HW_RAIL_PX + HW_RULER_PX)

typedef enum { HW_DRAG_NONE, HW_DRAG_UNDECIDED, HW_DRAG_PAN, HW_DRAG_LINE, HW_DRAG_MARKER } HwDrag;

struct _HwPictureView {
    GtkWidget parent_instance;

    HwSession *session;
    HwComposer *composer;
    HwComposed *shown;         /* NULL until the first picture is there */
    HwPennantLayout *pennants; /* of what is shown; NULL until laid out */
    guint laying_out;          /* source that lays them out before the next frame */
    HwInk ink;
    char *description;
    double ghost_column; /* where a marker stood before it was brought to the line; NAN: nowhere */
    bool is_bare;        /* no overlays while a key is held */

    /* input */
    double pointer_x, pointer_y; /* NAN while the pointer is elsewhere */
    HwDrag drag;
    bool drag_moved;
    int drag_marker;
    guint drag_merge;
    double drag_x, drag_y; /* where it began, then where it was last */
    double drag_offset_px; /* from the pointer to what is dragged */
    double drag_line_cell; /* where the line stood when it began */
    guint32 last_click_time;
    double last_click_x, last_click_y;
    double pinch_scale;
};

/* The map of what is shown, in logical pixels; false while nothing is. */
bool hw_picture_view_get_map(HwPictureView *view, HwViewMap *map);
void hw_picture_view_add_input(HwPictureView *view);
void hw_picture_view_emit_text(HwPictureView *view, const char *signal, const char *text);
/* Where something else happened, the old place of a marker is shown no longer. */
void hw_picture_view_drop_ghost(HwPictureView *view);

/* Draws everything; reads only. */
void hw_picture_view_draw(HwPictureView *view, GtkSnapshot *snapshot);
void hw_picture_view_read_ink(HwPictureView *view);
/* Lays the pennants out for what is shown: now, or before the next frame. */
void hw_picture_view_lay_out(HwPictureView *view);
void hw_picture_view_queue_layout(HwPictureView *view);
