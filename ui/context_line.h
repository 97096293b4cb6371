/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The line that is always in sight: event, passage, rule set (a menu), the way the riders face, what the list
 * is. */
#pragma once

#include "ui/session.h"

#include <gtk/gtk.h>

#define HW_TYPE_CONTEXT_LINE (hw_context_line_get_type())
G_DECLARE_FINAL_TYPE(HwContextLine, hw_context_line, HW, CONTEXT_LINE, GtkBox)

void hw_context_line_set_session(HwContextLine *line, HwSession *session);
