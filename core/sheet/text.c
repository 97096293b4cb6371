/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/sheet/text.h"

#include <math.h>
#include <pango/pangocairo.h>

PangoContext *
hw_text_context_new(void)
{
    PangoContext *context = pango_font_map_create_context(pango_cairo_font_map_get_default());
    cairo_font_options_t *options = cairo_font_options_create();
    cairo_font_options_set_antialias(options, CAIRO_ANTIALIAS_GRAY);
    cairo_font_options_set_hint_style(options, CAIRO_HINT_STYLE_NONE);
    cairo_font_options_set_hint_metrics(options, CAIRO_HINT_METRICS_OFF);
    pango_cairo_context_set_font_options(context, options);
    cairo_font_options_destroy(options);
    pango_cairo_context_set_resolution(context, 72.0);
    return context;
}

static PangoLayout *
layout_new(PangoContext *context, const HwType *type, const char *text)
{
    PangoLayout *layout = pango_layout_new(context);
    PangoFontDescription *font = pango_font_description_new();
    pango_font_description_set_family(font, type->family);
    pango_font_description_set_absolute_size(font, type->size_px * PANGO_SCALE);
    pango_font_description_set_weight(font, type->bold ? PANGO_WEIGHT_BOLD : PANGO_WEIGHT_NORMAL);
    pango_layout_set_font_description(layout, font);
    pango_font_description_free(font);
    if (type->tabular) {
        PangoAttrList *attributes = pango_attr_list_new();
        pango_attr_list_insert(attributes, pango_attr_font_features_new("tnum=1"));
        pango_layout_set_attributes(layout, attributes);
        pango_attr_list_unref(attributes);
    }
    pango_layout_set_text(layout, text, -1);
    return layout;
}

PangoLayout *
hw_text_layout(PangoContext *context, const HwType *type, const char *text, double max_px)
{
    PangoLayout *layout = layout_new(context, type, text);
    pango_layout_set_single_paragraph_mode(layout, TRUE);
    if (max_px > 0) {
        int natural;
        pango_layout_get_size(layout, &natural, NULL);
        /* A width only where it is needed: with one, right-to-left text would move to the far end. */
        if (natural > max_px * PANGO_SCALE) {
            pango_layout_set_width(layout, (int)floor(max_px * PANGO_SCALE));
            pango_layout_set_ellipsize(layout, PANGO_ELLIPSIZE_END);
        }
    }
    return layout;
}

PangoLayout *
hw_text_layout_wrapped(PangoContext *context, const HwType *type, const char *text, double width_px,
                       int max_lines)
{
    PangoLayout *layout = layout_new(context, type, text);
    pango_layout_set_width(layout, (int)floor(width_px * PANGO_SCALE));
    pango_layout_set_wrap(layout, PANGO_WRAP_WORD_CHAR);
    pango_layout_set_height(layout, -max_lines);
    pango_layout_set_ellipsize(layout, PANGO_ELLIPSIZE_END);
    return layout;
}

void
hw_text_size(PangoLayout *layout, double *width, double *height)
{
    int w, h;
    pango_layout_get_size(layout, &w, &h);
    if (width != NULL)
        *width = (double)w / PANGO_SCALE;
    if (height != NULL)
        *height = (double)h / PANGO_SCALE;
}

void
hw_text_draw(cairo_t *cr, PangoLayout *layout, double x, double y)
{
    cairo_move_to(cr, x, y);
    pango_cairo_show_layout(cr, layout);
}
