/* SPDX-License-Identifier: GPL-3.0-or-later */
/* What any decoder must give: a reason that names the file, or samples within their range. */
#pragma once

#include "core/base/limits.h"
#include "core/strip/raster.h"

static inline void
fuzz_check_raster(const HwRaster *raster, const GError *error)
{
    g_assert_true((raster == NULL) == (error != NULL));
    if (raster == NULL) {
        g_assert_true(g_str_has_prefix(error->message, "block"));
        return;
    }
    g_assert_true(raster->width > 0 && raster->height > 0);
    g_assert_cmpint((int64_t)raster->width * raster->height, <=, HW_MAX_BLOCK_PIXELS);
    g_assert_true(raster->channels >= 1 && raster->channels <= 4);
    unsigned most = (1u << raster->bits) - 1;
    for (int channel = 0; channel < raster->channels; channel++) {
        g_assert_cmpuint(hw_raster_get(raster, raster->width - 1, raster->height - 1, channel), <=, most);
        g_assert_cmpuint(hw_raster_get(raster, 0, 0, channel), <=, most);
    }
}
