/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Hairlines across the picture: the reading line, and where a hairline stands. A hairline for a column
 * position covers only what lies on its earlier side, so that it never covers the tyre that begins there. */
#pragma once

#include "core/sheet/palette.h"
#include "core/strip/view_map.h"

/* Left edge, on the map's x scale, of a hairline ink->hairline_px wide for an axis position: its later edge
 * is at the position, or up to one snap_px to the earlier side of it. */
double hw_hairline_x(const HwViewMap *map, double cell, const HwInk *ink);

/* Two tones from top_px to bottom_px: a light core next to the position and a dark casing on the earlier side
 * of that. Origin: the map's pixel (0, 0). Nothing is drawn outside the map's width. */
void hw_reading_line_draw(cairo_t *cr, const HwViewMap *map, double cell, double top_px, double bottom_px,
                          const HwInk *ink);
