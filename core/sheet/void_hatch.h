/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Stretches without a picture: hatched, with their reason written in where there is room. */
#pragma once

#include "core/sheet/palette.h"
#include "core/strip/axis.h"
#include "core/strip/time_base.h"
#include "core/strip/view_map.h"

#include <pango/pango.h>

/* Hatches every void in the view over the rows of the strip. A void narrower than two units is drawn two
 * wide, so that none ever disappears. `words` stands before each reason ("no picture"; NULL: that). Origin:
 * the map's pixel (0, 0). */
void hw_void_hatch_draw(cairo_t *cr, PangoContext *context, const HwAxis *axis, const HwTimeBase *base,
                        const HwViewMap *map, int n_rows, const char *words, const HwInk *ink);
