/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/sheet/reading_line.h"

#include <math.h>

double
hw_hairline_x(const HwViewMap *map, double cell, const HwInk *ink)
{
    double x = hw_view_map_x(map, cell);
    if (ink->snap_px > 0) {
        /* Positions come out of divisions: what is a whole pixel but for rounding must not lose one. */
        double steps = x / ink->snap_px;
        double near = round(steps);
        if (fabs(steps - near) < 1e-6)
            steps = near;
        x = (map->later_left ? ceil(steps) : floor(steps)) * ink->snap_px;
    }
    return map->later_left ? x : x - ink->hairline_px;
}

void
hw_reading_line_draw(cairo_t *cr, const HwViewMap *map, double cell, double top_px, double bottom_px,
                     const HwInk *ink)
{
    double width = ink->hairline_px;
    double core_x = hw_hairline_x(map, cell, ink);
    double casing_x = map->later_left ? core_x + width : core_x - width;

    cairo_save(cr);
    cairo_rectangle(cr, 0, top_px, map->width_px, bottom_px - top_px);
    cairo_clip(cr);
    cairo_rectangle(cr, casing_x, top_px, width, bottom_px - top_px);
    hw_colour_set(cr, &ink->casing);
    cairo_fill(cr);
    cairo_rectangle(cr, core_x, top_px, width, bottom_px - top_px);
    hw_colour_set(cr, &ink->core);
    cairo_fill(cr);
    cairo_restore(cr);
}
