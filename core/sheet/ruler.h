/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The time ruler: ticks at 1-2-5 steps of time with labels, unbroken across voids, and FRONT with an arrow
 * towards the earlier side (the way the riders face). Numbers are locale-free. */
#pragma once

#include "core/base/instant.h"
#include "core/sheet/palette.h"
#include "core/strip/axis.h"
#include "core/strip/view_map.h"

#include <pango/pango.h>
#include <stdbool.h>
#include <stdint.h>

/* What labels say. */
typedef struct {
    HwInstant epoch; /* of the recording */
    bool elapsed;    /* time since zero_ns; else time of day at the epoch's offset */
    int64_t zero_ns; /* since the epoch: the start */
} HwRulerClock;

/* The smallest step of time, 1, 2 or 5 times a power of ten of ns up to 500 ms, then 1, 2, 5, 10, 15, 30 s,
 * 1, 2, 5, 10, 15, 30 min, 1 h and doublings, that is at least min_px wide where a pixel is ns_per_px. */
int64_t hw_ruler_step_ns(double ns_per_px, double min_px);

/* A label as the ruler writes it, with as many decimals as `step_ns` needs. Owned by the caller. */
char *hw_ruler_dup_label(const HwRulerClock *clock, int64_t ns, int64_t step_ns);

/* Fills the map's width by height_px below the origin. Labels never touch each other nor FRONT; `front` is
 * that word in the reader's language (NULL: "FRONT"). */
void hw_ruler_draw(cairo_t *cr, PangoContext *context, const HwAxis *axis, const HwViewMap *map,
                   const HwRulerClock *clock, const char *front, double height_px, const HwInk *ink);
