/* SPDX-License-Identifier: GPL-3.0-or-later */
/* One rider's row of the finish list on screen: place, number, name and team, time and gap, and whether the
 * marker is to be read again. It shows what it is given and derives nothing. */
#pragma once

#include "core/ruling/finish_list.h"

#include <gtk/gtk.h>

#define HW_TYPE_FINISH_ROW_WIDGET (hw_finish_row_widget_get_type())
G_DECLARE_FINAL_TYPE(HwFinishRowWidget, hw_finish_row_widget, HW, FINISH_ROW_WIDGET, GtkListBoxRow)

GtkWidget *hw_finish_row_widget_new(void);

/* `marker` may be NULL; `heading`: the category it stands in. Labels change only where their text does. */
void hw_finish_row_widget_show(HwFinishRowWidget *widget, const HwFinishList *list, const HwFinishRow *row,
                               const HwMarker *marker, const char *heading);

/* The same rider as the row shows now. */
bool hw_finish_row_widget_is_of(HwFinishRowWidget *widget, const HwFinishRow *row);

/* The category it stands in, which may be that of the riders around it; borrowed. */
const char *hw_finish_row_widget_get_heading(HwFinishRowWidget *widget);
