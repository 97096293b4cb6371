/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The window: a start page, and the page at which one finish is judged. It owns the session; everything it
 * does is a "win." action, so that keys, menus and the session bus reach the same acts. */
#pragma once

#include "ui/document.h"

#include <adwaita.h>

#define HW_TYPE_WINDOW (hw_window_get_type())
G_DECLARE_FINAL_TYPE(HwWindow, hw_window, HW, WINDOW, AdwApplicationWindow)

/* `samples`: the folder of the sample recordings, or NULL where there is none. */
HwWindow *hw_window_new(GtkApplication *application, const char *samples);

/* Begins to open (takes the request). What is open stays until the new one is read whole. */
void hw_window_open(HwWindow *window, HwOpenRequest *request);

/* Nothing is open in it and nothing is being opened. */
bool hw_window_is_empty(HwWindow *window);
