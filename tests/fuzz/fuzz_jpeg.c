/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Any bytes as a JPEG block: refused with a reason, or samples within their range. */
#include "core/strip/image_block.h"
#include "tests/fuzz/fuzz_raster.h"
#include "tests/fuzz/fuzz_target.h"

int
LLVMFuzzerTestOneInput(const uint8_t *data, size_t size)
{
    g_autoptr(GError) error = NULL, grey_error = NULL;
    g_autoptr(HwRaster) raster = hw_jpeg_block_decode(data, size, HW_PLANE_STORED, "block.jpg", &error);
    g_autoptr(HwRaster) grey = hw_jpeg_block_decode(data, size, HW_PLANE_GREY, "block.jpg", &grey_error);
    fuzz_check_raster(raster, error);
    fuzz_check_raster(grey, grey_error);
    return 0;
}
