/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The tray under the picture: the time at the reading line, and the number being typed with the rider it
 * names and what Enter will do. Signal "done": the number was committed or given up, the picture may have the
 * keys again. */
#pragma once

#include "ui/session.h"

#include <gtk/gtk.h>

#define HW_TYPE_TRAY (hw_tray_get_type())
G_DECLARE_FINAL_TYPE(HwTray, hw_tray, HW, TRAY, GtkBox)

void hw_tray_set_session(HwTray *tray, HwSession *session);

/* Begins a number with these characters, as typed on the picture. */
void hw_tray_begin(HwTray *tray, const char *text);

/* Begins with the name that the marker under the line bears, to be changed. */
void hw_tray_begin_rename(HwTray *tray);

/* As though the text had been typed and Enter pressed: commits, or asks and commits the second time. */
void hw_tray_submit(HwTray *tray, const char *text);

/* Shows one sentence until the line or the markers change. */
void hw_tray_say(HwTray *tray, const char *sentence);
