/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/sheet/ruler.h"

#include "core/base/duration.h"
#include "core/base/limits.h"
#include "core/sheet/text.h"

#include <math.h>

#define LABEL_GAP_PX 14.0
#define MINOR_GAP_PX 4.0
#define EDGE_PX 3.0
#define RANGE_PX 1200.0 /* more than two labelled steps are wide */

int64_t
hw_ruler_step_ns(double ns_per_px, double min_px)
{
    static const int64_t long_s[] = { 1, 2, 5, 10, 15, 30, 60, 120, 300, 600, 900, 1800, 3600 };
    double need_ns = ns_per_px * min_px;
    for (int64_t unit = 1; unit < HW_NS_PER_S; unit *= 10)
        for (int64_t times = 1; times <= 5; times = times == 2 ? 5 : times * 2)
            if ((double)(unit * times) >= need_ns)
                return unit * times;
    for (gsize i = 0; i < G_N_ELEMENTS(long_s); i++)
        if ((double)(long_s[i] * HW_NS_PER_S) >= need_ns)
            return long_s[i] * HW_NS_PER_S;
    int64_t step = HW_NS_PER_HOUR;
    while ((double)step < need_ns && step < INT64_MAX / 4)
        step *= 2;
    return step;
}

char *
hw_ruler_dup_label(const HwRulerClock *clock, int64_t ns, int64_t step_ns)
{
    int decimals = hw_duration_decimals(step_ns);
    if (clock->elapsed)
        return hw_duration_dup_text(ns - clock->zero_ns, decimals);
    HwInstant instant = hw_instant_plus(&clock->epoch, ns);
    return hw_instant_dup_time_of_day(&instant, decimals);
}

/* What to add to an instant so that round times are multiples of a step. */
static int64_t
clock_phase_ns(const HwRulerClock *clock)
{
    if (clock->elapsed)
        return -clock->zero_ns;
    g_autofree char *text = hw_instant_dup_time_of_day(&clock->epoch, 9);
    int64_t ns;
    return hw_duration_parse_time_of_day(text, &ns) ? ns : clock->epoch.ns;
}

/* Position of an instant in a stretch of the axis along which time grows. */
static double
position_in(const HwAxis *axis, double from_cell, double to_cell, int64_t from_ns, int64_t to_ns, int64_t ns)
{
    if (to_ns <= from_ns)
        return from_cell;
    double guess = from_cell + (to_cell - from_cell) * ((double)(ns - from_ns) / (double)(to_ns - from_ns));
    int64_t cell_ns = MAX((int64_t)((double)(to_ns - from_ns) / (to_cell - from_cell)), 1);
    int64_t off_ns = hw_axis_instant(axis, guess) - ns;
    if (ABS(off_ns) * 64 <= cell_ns)
        return guess;
    double low = from_cell, high = to_cell;
    for (int i = 0; i < 60 && high - low > 1e-4; i++) {
        guess = (low + high) / 2;
        if (hw_axis_instant(axis, guess) < ns)
            low = guess;
        else
            high = guess;
    }
    return (low + high) / 2;
}

typedef struct {
    cairo_t *cr;
    PangoContext *context;
    const HwAxis *axis;
    const HwViewMap *map;
    const HwRulerClock *clock;
    const HwInk *ink;
    HwType type;
    double height_px;
    int64_t phase_ns;
    int64_t step_ns;
    int64_t minor_ns;
    double free_from_px; /* between these labels may stand */
    double free_to_px;
    double label_low_px; /* of the label drawn last; labels come from one side to the other */
    double label_high_px;
    double from_cell; /* what has to be gone through for that: a little more than is painted */
    double to_cell;
    double clip_low_px; /* what is being painted: nothing else needs drawing */
    double clip_high_px;
} Ruler;

static int64_t
first_multiple(int64_t from_ns, int64_t phase_ns, int64_t step_ns)
{
    int64_t rest = (from_ns + phase_ns) % step_ns;
    return rest == 0 ? from_ns : from_ns + (rest < 0 ? -rest : step_ns - rest);
}

static void
draw_tick(Ruler *ruler, double x, double length_px)
{
    double width = ruler->ink->hairline_px;
    double left =
        ruler->ink->snap_px > 0 ? floor(x / ruler->ink->snap_px) * ruler->ink->snap_px : x - width / 2;
    cairo_rectangle(ruler->cr, left, ruler->height_px - length_px, width, length_px);
    cairo_fill(ruler->cr);
}

static void
draw_label(Ruler *ruler, double x, int64_t ns)
{
    g_autofree char *text = hw_ruler_dup_label(ruler->clock, ns, ruler->step_ns);
    g_autoptr(PangoLayout) layout = hw_text_layout(ruler->context, &ruler->type, text, 0);
    double width, height;
    hw_text_size(layout, &width, &height);
    double left = x - width / 2, right = x + width / 2;
    bool touches = left < ruler->label_high_px + EDGE_PX && right > ruler->label_low_px - EDGE_PX;
    /* Kept whether drawn or not: each label depends on its neighbour alone, so that tiles of one picture
     * agree. */
    ruler->label_low_px = left;
    ruler->label_high_px = right;
    if (touches || left < ruler->free_from_px || right > ruler->free_to_px)
        return;
    if (right < ruler->clip_low_px || left > ruler->clip_high_px)
        return;
    hw_colour_set(ruler->cr, &ruler->ink->text);
    hw_text_draw(ruler->cr, layout, left, MAX(0, ruler->height_px - 6 - height));
}

/* Ticks of one stretch along which time runs evenly enough. */
static void
draw_stretch(Ruler *ruler, double from_cell, double to_cell, int64_t from_ns, int64_t to_ns)
{
    int64_t step = ruler->minor_ns > 0 ? ruler->minor_ns : ruler->step_ns;
    double view_from = MAX(from_cell, ruler->from_cell);
    double view_to = MIN(to_cell, ruler->to_cell);
    if (view_to <= view_from)
        return;
    int64_t seen_from =
        view_from > from_cell ? MAX(from_ns, hw_axis_instant(ruler->axis, view_from)) : from_ns;
    int64_t seen_to = view_to < to_cell ? MIN(to_ns, hw_axis_instant(ruler->axis, view_to)) : to_ns;
    for (int64_t ns = first_multiple(seen_from, ruler->phase_ns, step); ns < seen_to; ns += step) {
        double cell = position_in(ruler->axis, from_cell, to_cell, from_ns, to_ns, ns);
        double x = hw_view_map_x(ruler->map, cell);
        bool major = (ns + ruler->phase_ns) % ruler->step_ns == 0;
        if (x >= ruler->clip_low_px - 2 && x <= ruler->clip_high_px + 2) {
            hw_colour_set(ruler->cr, major ? &ruler->ink->text : &ruler->ink->rule);
            draw_tick(ruler, x, major ? 6 : 3);
        }
        if (major)
            draw_label(ruler, x, ns);
    }
}

static void
draw_stretches(Ruler *ruler)
{
    const HwAxis *axis = ruler->axis;
    double n_cells = (double)hw_axis_get_n_cells(axis);
    double first = ruler->from_cell, last = ruler->to_cell;
    if (first < 0)
        draw_stretch(ruler, first, MIN(0, last), hw_axis_instant(axis, first),
                     hw_axis_instant(axis, MIN(0, last)));
    guint to = hw_axis_span_at(axis, last);
    for (guint i = hw_axis_span_at(axis, first); i <= to && i < hw_axis_get_n_spans(axis); i++) {
        const HwAxisSpan *span = hw_axis_get_span(axis, i);
        draw_stretch(ruler, (double)span->first_cell, (double)(span->first_cell + span->n_cells),
                     span->start_ns, span->end_ns);
    }
    if (last > n_cells)
        draw_stretch(ruler, MAX(n_cells, first), last, hw_axis_instant(axis, MAX(n_cells, first)),
                     hw_axis_instant(axis, last));
}

/* FRONT and its arrow at the earlier end; labels keep clear of it. */
static void
draw_front(Ruler *ruler, const char *word)
{
    HwType type = ruler->type;
    type.bold = true;
    g_autoptr(PangoLayout) layout = hw_text_layout(ruler->context, &type, word, 0);
    double width, height;
    hw_text_size(layout, &width, &height);
    double arrow = 10, gap = 5, room = EDGE_PX + arrow + gap + width + 8;
    double middle = ruler->height_px / 2;
    bool earlier_right = ruler->map->later_left;
    double tip = earlier_right ? ruler->map->width_px - EDGE_PX : EDGE_PX;
    double base = earlier_right ? tip - arrow : tip + arrow;
    hw_colour_set(ruler->cr, &ruler->ink->text);
    cairo_move_to(ruler->cr, tip, middle);
    cairo_line_to(ruler->cr, base, middle - 5);
    cairo_line_to(ruler->cr, base, middle + 5);
    cairo_close_path(ruler->cr);
    cairo_fill(ruler->cr);
    hw_text_draw(ruler->cr, layout, earlier_right ? base - gap - width : base + gap, middle - height / 2);
    if (earlier_right)
        ruler->free_to_px -= room;
    else
        ruler->free_from_px += room;
}

/* Labelled step by the widest label of a step that is wide enough for it; marks between where there is room.
 */
static void
choose_steps(Ruler *ruler)
{
    double middle = ruler->map->first_cell + ruler->map->cells_per_px * ruler->map->width_px / 2;
    const HwAxisSpan *span = hw_axis_get_span(ruler->axis, hw_axis_span_at(ruler->axis, middle));
    double ns_per_cell = (double)(span->end_ns - span->start_ns) / (double)MAX(span->n_cells, 1);
    double ns_per_px = MAX(ns_per_cell, 1e-3) * ruler->map->cells_per_px;
    int64_t middle_ns = hw_axis_instant(ruler->axis, middle);
    ruler->step_ns = hw_ruler_step_ns(ns_per_px, 40);
    for (int i = 0; i < 3; i++) {
        g_autofree char *text = hw_ruler_dup_label(ruler->clock, middle_ns, ruler->step_ns);
        g_autoptr(PangoLayout) layout = hw_text_layout(ruler->context, &ruler->type, text, 0);
        double width;
        hw_text_size(layout, &width, NULL);
        ruler->step_ns = hw_ruler_step_ns(ns_per_px, MAX(40, width + LABEL_GAP_PX));
    }
    ruler->minor_ns = 0;
    for (int parts = 10; parts >= 2 && ruler->minor_ns == 0; parts = parts == 10 ? 5 : parts == 5 ? 2 : 0)
        if (ruler->step_ns % parts == 0 && (double)(ruler->step_ns / parts) / ns_per_px >= MINOR_GAP_PX)
            ruler->minor_ns = ruler->step_ns / parts;
}

/* The part of the view whose ticks and labels can show in the clip, and a label's neighbours. */
static void
choose_range(Ruler *ruler)
{
    const HwViewMap *map = ruler->map;
    double low = ruler->clip_low_px - RANGE_PX, high = ruler->clip_high_px + RANGE_PX;
    double a = hw_view_map_cell(map, map->later_left ? high : low);
    double b = hw_view_map_cell(map, map->later_left ? low : high);
    ruler->from_cell = MAX(a, map->first_cell);
    ruler->to_cell = MIN(b, hw_view_map_last_cell(map));
}

void
hw_ruler_draw(cairo_t *cr, PangoContext *context, const HwAxis *axis, const HwViewMap *map,
              const HwRulerClock *clock, const char *front, double height_px, const HwInk *ink)
{
    Ruler ruler = { .cr = cr,
                    .context = context,
                    .axis = axis,
                    .map = map,
                    .clock = clock,
                    .ink = ink,
                    .type = { ink->font_family, ink->font_px, false, true },
                    .height_px = height_px,
                    .free_from_px = EDGE_PX,
                    .free_to_px = map->width_px - EDGE_PX,
                    .label_low_px = -INFINITY,
                    .label_high_px = -INFINITY };
    if (map->width_px <= 0 || hw_axis_get_n_spans(axis) == 0)
        return;
    cairo_save(cr);
    cairo_rectangle(cr, 0, 0, map->width_px, height_px);
    cairo_clip(cr);
    hw_colour_set(cr, &ink->paper);
    cairo_paint(cr);
    double top, bottom;
    cairo_clip_extents(cr, &ruler.clip_low_px, &top, &ruler.clip_high_px, &bottom);
    ruler.phase_ns = clock_phase_ns(clock);
    draw_front(&ruler, front != NULL ? front : "FRONT");
    choose_steps(&ruler);
    choose_range(&ruler);
    draw_stretches(&ruler);
    hw_colour_set(cr, &ink->rule);
    cairo_rectangle(cr, 0, height_px - ink->hairline_px, map->width_px, ink->hairline_px);
    cairo_fill(cr);
    cairo_restore(cr);
}
