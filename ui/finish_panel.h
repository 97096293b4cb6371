/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The panel beside the picture: the finish list, the selected pair in one sentence, what is to be noted, and
 * the rider check. Selecting a row selects its marker and brings the line there. Signals "edit-name": Enter
 * or F2 on a row, whose marker the line then stands at; "typed" (string): a figure, the first of a number. */
#pragma once

#include "ui/session.h"

#include <gtk/gtk.h>

#define HW_TYPE_FINISH_PANEL (hw_finish_panel_get_type())
G_DECLARE_FINAL_TYPE(HwFinishPanel, hw_finish_panel, HW, FINISH_PANEL, GtkBox)

void hw_finish_panel_set_session(HwFinishPanel *panel, HwSession *session);
