/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Any bytes as a PNG block: refused with a reason, or samples within their range. */
#include "core/strip/image_block.h"
#include "tests/fuzz/fuzz_raster.h"
#include "tests/fuzz/fuzz_target.h"

int
LLVMFuzzerTestOneInput(const uint8_t *data, size_t size)
{
    g_autoptr(GError) error = NULL;
    g_autoptr(HwRaster) raster = hw_png_block_decode(data, size, "block.png", &error);
    fuzz_check_raster(raster, error);
    return 0;
}
