/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Makes pictures of the strip off the main thread, one at a time, the newest request first: a request that
 * was overtaken is cancelled and its picture dropped. Main thread only; the answer comes on the main thread
 * too. */
#pragma once

#include "core/strip/compose.h"

#include <gdk/gdk.h>
#include <stdbool.h>

typedef struct HwComposer HwComposer;

typedef struct {
    GdkTexture *texture; /* one texel a device pixel */
    HwViewMap map;       /* what it shows */
    HwStrip *strip;      /* what it was made of */
    HwAxis *axis;
    HwStrip *refreshed; /* the strip with the damage that was found, where there is more; else NULL */
    bool is_whole;      /* false: made of what the cache held, more is coming */
    char *failure;      /* a sentence; then there is no texture */
} HwComposed;

void hw_composed_free(HwComposed *composed);

typedef void (*HwComposedFunc)(HwComposed *composed, gpointer user_data); /* takes it */

HwComposer *hw_composer_new(HwComposedFunc func, gpointer user_data);
/* Cancels what runs and waits for it to end; no answer comes afterwards. */
void hw_composer_free(HwComposer *composer);

void hw_composer_request(HwComposer *composer, HwStrip *strip, HwAxis *axis, const HwViewMap *map);
/* Drops what is being made. */
void hw_composer_cancel(HwComposer *composer);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwComposed, hw_composed_free)
