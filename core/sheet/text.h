/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Lines of text for the painters: one size, one family, cut with an ellipsis where they do not fit. */
#pragma once

#include <cairo.h>
#include <pango/pango.h>
#include <stdbool.h>

typedef struct {
    const char *family;
    double size_px; /* of the em */
    bool bold;
    bool tabular; /* figures of one width, where the font has others */
} HwType;

/* A context for sheets: no hinting of widths, so that text breaks the same at every resolution; grey edges.
 * One for each thread (new reference). */
PangoContext *hw_text_context_new(void);

/* One paragraph; max_px ≤ 0: as wide as it is, else ellipsised at the end. New reference. */
PangoLayout *hw_text_layout(PangoContext *context, const HwType *type, const char *text, double max_px);

/* As above, wrapped at words into at most max_lines lines, the last of them ellipsised. */
PangoLayout *hw_text_layout_wrapped(PangoContext *context, const HwType *type, const char *text,
                                    double width_px, int max_lines);

/* Logical size in user units. */
void hw_text_size(PangoLayout *layout, double *width, double *height);

/* Draws with the current source, top left corner at (x, y). */
void hw_text_draw(cairo_t *cr, PangoLayout *layout, double x, double y);
