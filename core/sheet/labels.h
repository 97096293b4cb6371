/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The rail of a sheet: labels on stems with bib and place, and where there is room the gaps; in as many rows
 * as it takes, so that none overlap. */
#pragma once

#include "core/sheet/palette.h"
#include "core/strip/axis.h"
#include "core/strip/view_map.h"

#include <glib.h>
#include <pango/pango.h>

typedef struct HwLabels HwLabels;

/* Labels of the entries (HwEntry, borrowed for the labels' life) that are in the view, at most max_height
 * high. Gaps are left out where they do not fit; "+3" stands for labels that still do not. `highlight`: two
 * bibs that never go into a "+3", or NULL. */
HwLabels *hw_labels_new(PangoContext *context, const HwInk *ink, const GPtrArray *entries, const HwAxis *axis,
                        const HwViewMap *map, double max_height, const char *const *highlight);
void hw_labels_free(HwLabels *labels);

double hw_labels_get_height(const HwLabels *labels);

/* Labels for which there was no room: they are in the list only. */
int hw_labels_get_n_hidden(const HwLabels *labels);

/* The rail's top left corner at the origin; stems go down to stem_bottom. Only what meets the clip is drawn.
 */
void hw_labels_draw(const HwLabels *labels, cairo_t *cr, double stem_bottom);

/* Rectangle of the i-th label or "+3", from 0; false beyond the last. */
bool hw_labels_get_box(const HwLabels *labels, guint i, double *x, double *y, double *width, double *height);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwLabels, hw_labels_free)
