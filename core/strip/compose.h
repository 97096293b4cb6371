/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A view of the strip as pixels, made on the CPU to the device's own pixels. Time and height each by its own
 * scale: enlarging repeats the cell that the pixel's middle is in; shrinking averages coded values, each cell
 * weighed by how much of it lies in the pixel, so that a rider one column wide stays visible (what differs by
 * d codes in one column changes its pixel by d / cells_per_px). Voids come out as a flat grey for the painter
 * to hatch; a pixel that holds some void is mixed with that grey. Samples of 16 or fewer than 8 bits are
 * scaled to 8, alpha stands over black. From 32 cells and 4 rows a pixel on, reduced blocks are
 * used: what is sharp may then stand up to 15 columns, less than half a pixel, off its place. Blocks
 * are decoded as needed, so call it off the main thread. */
#pragma once

#include "core/strip/axis.h"
#include "core/strip/strip.h"
#include "core/strip/view_map.h"

#include <gio/gio.h>
#include <glib.h>
#include <stdbool.h>
#include <stdint.h>

/* One tone for the whole view, applied after averaging; never written back. A code c, 0 … 1, becomes
 * (c^(1/gamma) − ½) × contrast + ½ + brightness, held to 0 … 1. */
typedef struct {
    double brightness; /* −1 … 1, 0 as stored */
    double contrast;   /* 0.1 … 10, 1 as stored */
    double gamma;      /* 0.1 … 10, 1 as stored */
} HwTone;

#define HW_TONE_AS_STORED ((HwTone){ 0.0, 1.0, 1.0 })

#define HW_COMPOSE_VOID 0xffb4b4b4u /* no picture */
#define HW_COMPOSE_BEYOND                                                                                    \
    0xff4a4a4au /* before the first or after the last column, above or below the picture */

/* Fills width_px × height_px pixels (0xffRRGGBB in native order, as Cairo's RGB24 and GTK's B8G8R8A8 on
 * little-endian); `stride` in pixels. A block that turns out damaged is drawn as void (learn of it with
 * hw_strip_refreshed). False only where cancelled or memory fails; the pixels are then undefined. */
bool hw_compose(HwStrip *strip, const HwAxis *axis, const HwViewMap *map, const HwTone *tone,
                uint32_t *pixels, int stride, GCancellable *cancellable, GError **error);

/* As above but only from what the cache holds, without waiting: *holes says whether something was missing
 * (drawn from reduced blocks where these are there, else as HW_COMPOSE_VOID). A block known or found to be
 * damaged is no hole. */
bool hw_compose_cached(HwStrip *strip, const HwAxis *axis, const HwViewMap *map, const HwTone *tone,
                       uint32_t *pixels, int stride, bool *holes, GError **error);
