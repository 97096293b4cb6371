/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Any bytes as a PNG block: refused with a reason, or samples within their range. */
#include "core/base/limits.h"
#include "core/strip/image_block.h"
#include "tests/fuzz/fuzz_target.h"

static void
check(const HwRaster *raster, const GError *error)
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

int
LLVMFuzzerTestOneInput(const uint8_t *data, size_t size)
{
    g_autoptr(GError) error = NULL;
    g_autoptr(HwRaster) raster = hw_png_block_decode(data, size, "block.png", &error);
    check(raster, error);
    return 0;
}
