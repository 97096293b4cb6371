/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The order on a sheet as a table, in as many columns side by side as the width holds. Long names end in an
 * ellipsis; nothing is clipped. */
#pragma once

#include "core/sheet/palette.h"

#include <glib.h>
#include <pango/pango.h>

#define HW_TABLE_MIN_WIDTH 1056.0

typedef struct HwTable HwTable;

/* Rows of the entries (HwEntry, borrowed) that have one, from the `first` of these on, as far as max_height
 * goes; width at least HW_TABLE_MIN_WIDTH. */
HwTable *hw_table_new(PangoContext *context, const HwInk *ink, const GPtrArray *entries, guint first,
                      double width, double max_height);
void hw_table_free(HwTable *table);

double hw_table_get_height(const HwTable *table); /* 0 where there is no row */
guint hw_table_get_n_rows(const HwTable *table);  /* that fit */

/* Top left corner at the origin. Only what meets the clip is drawn. */
void hw_table_draw(const HwTable *table, cairo_t *cr);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwTable, hw_table_free)
