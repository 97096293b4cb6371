/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The picture with its rail of bibs, time ruler, reading line and markers, and every key and gesture on it.
 * What is drawn always belongs to the picture that is shown: overlays move when the picture for the new view
 * is there. Signals: "typed" (a string: characters of a number begun on the picture), "rename" (change the
 * name of the marker at the line), "said" (a string: a passing remark). */
#pragma once

#include "ui/session.h"

#include <gtk/gtk.h>

#define HW_TYPE_PICTURE_VIEW (hw_picture_view_get_type())
G_DECLARE_FINAL_TYPE(HwPictureView, hw_picture_view, HW, PICTURE_VIEW, GtkWidget)

void hw_picture_view_set_session(HwPictureView *view, HwSession *session);

/* Places an unnamed marker at the line. */
void hw_picture_view_place(HwPictureView *view);
/* Brings the selected marker to the line and leaves its old place shown. */
void hw_picture_view_bring_marker(HwPictureView *view);
/* To the next (1) or previous (−1) marker without a name; false where there is none. */
bool hw_picture_view_go_unnamed(HwPictureView *view, int direction);
