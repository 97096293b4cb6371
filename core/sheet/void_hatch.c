/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/sheet/void_hatch.h"

#include "core/sheet/text.h"

#include <glib.h>
#include <math.h>

#define PITCH_PX 9.0
#define LEAST_PX 2.0
#define PAD_PX 5.0

typedef struct {
    double left, top, width, height;
} Box;

static void
draw_lines(cairo_t *cr, const Box *box, const HwInk *ink)
{
    double low, high, top, bottom;
    cairo_save(cr);
    cairo_rectangle(cr, box->left, box->top, box->width, box->height);
    cairo_clip(cr);
    hw_colour_set(cr, &ink->void_ground);
    cairo_paint(cr);
    cairo_clip_extents(cr, &low, &top, &high, &bottom);
    /* Lines hang on the view's origin, so that neighbouring tiles of one picture meet. */
    hw_colour_set(cr, &ink->void_line);
    cairo_set_line_width(cr, ink->hairline_px);
    for (double x = floor((low - box->height) / PITCH_PX) * PITCH_PX; x < high + PITCH_PX; x += PITCH_PX) {
        cairo_move_to(cr, x, box->top + box->height);
        cairo_line_to(cr, x + box->height, box->top);
    }
    cairo_stroke(cr);
    cairo_restore(cr);
}

/* Draws the text in the middle of the box on a plain ground, upright or turned, if all of it has room. */
static bool
draw_text(cairo_t *cr, PangoContext *context, const Box *box, const char *text, bool turned, const HwInk *ink)
{
    HwType type = { ink->font_family, ink->font_px, false, false };
    double along = (turned ? box->height : box->width) - 2 * PAD_PX;
    double across = (turned ? box->width : box->height) - 2;
    if (along <= 0 || across <= 0)
        return false;
    double room = MIN(along, 34 * ink->font_px);
    g_autoptr(PangoLayout) layout = hw_text_layout_wrapped(context, &type, text, room, 6);
    pango_layout_set_wrap(layout, PANGO_WRAP_WORD);
    pango_layout_set_alignment(layout, PANGO_ALIGN_CENTER);
    PangoRectangle extents;
    pango_layout_get_extents(layout, NULL, &extents);
    double width = (double)extents.width / PANGO_SCALE, height = (double)extents.height / PANGO_SCALE;
    if (pango_layout_is_ellipsized(layout) || width > room || height > across)
        return false;
    cairo_save(cr);
    cairo_translate(cr, box->left + box->width / 2, box->top + box->height / 2);
    if (turned)
        cairo_rotate(cr, -G_PI / 2);
    hw_colour_set(cr, &ink->void_ground);
    double pad = MIN(PAD_PX, (across - height) / 2);
    cairo_rectangle(cr, -width / 2 - PAD_PX, -height / 2 - pad, width + 2 * PAD_PX, height + 2 * pad);
    cairo_fill(cr);
    hw_colour_set(cr, &ink->void_text);
    hw_text_draw(cr, layout, -room / 2, -height / 2);
    cairo_restore(cr);
    return true;
}

/* The whole reason if it has room, else the words alone; upright before turned. */
static void
draw_reason(cairo_t *cr, PangoContext *context, const Box *box, const char *words, const char *reason,
            const HwInk *ink)
{
    g_autofree char *whole = g_strdup_printf("%s: %s", words, reason);
    const char *const texts[] = { whole, words };
    for (int i = 0; i < 2; i++)
        for (int turned = 0; turned < 2; turned++)
            if (draw_text(cr, context, box, texts[i], turned == 1, ink))
                return;
}

void
hw_void_hatch_draw(cairo_t *cr, PangoContext *context, const HwAxis *axis, const HwTimeBase *base,
                   const HwViewMap *map, int n_rows, const char *words, const HwInk *ink)
{
    double top = CLAMP(hw_view_map_y(map, 0), 0, map->height_px);
    double bottom = CLAMP(hw_view_map_y(map, n_rows), 0, map->height_px);
    guint n_spans = hw_axis_get_n_spans(axis);
    if (map->width_px <= 0 || bottom <= top || n_spans == 0)
        return;
    double clip_low, clip_top, clip_high, clip_bottom;
    cairo_clip_extents(cr, &clip_low, &clip_top, &clip_high, &clip_bottom);
    guint last = hw_axis_span_at(axis, hw_view_map_last_cell(map));
    for (guint i = hw_axis_span_at(axis, map->first_cell); i <= last && i < n_spans; i++) {
        const HwAxisSpan *span = hw_axis_get_span(axis, i);
        if (span->void_index < 0)
            continue;
        double a = hw_view_map_x(map, (double)span->first_cell);
        double b = hw_view_map_x(map, (double)(span->first_cell + span->n_cells));
        double left = MIN(a, b), right = MAX(a, b);
        if (right - left < LEAST_PX)
            right = left + LEAST_PX;
        left = MAX(left, 0);
        right = MIN(right, map->width_px);
        if (right <= left)
            continue;
        Box box = { left, top, right - left, bottom - top };
        if (right < clip_low || left > clip_high)
            continue;
        draw_lines(cr, &box, ink);
        const HwVoid *hole = hw_time_base_get_void(base, (guint)span->void_index);
        draw_reason(cr, context, &box, words != NULL ? words : "no picture", hole->reason, ink);
    }
}
