/* SPDX-License-Identifier: GPL-3.0-or-later */
/* One PNG block being written row by row: some columns of an image source, its samples as they are. */
#pragma once

#include "app/cli/image_source.h"
#include "core/base/digest.h"

typedef struct HwPngSlice HwPngSlice;

/* Columns first … first + n − 1 of the source into a new file. Nothing is at `path` before the finish. */
HwPngSlice *hw_png_slice_new(const char *path, HwImageSource *source, int64_t first, int64_t n,
                             GError **error);
void hw_png_slice_free(HwPngSlice *slice);

/* A whole row of the source, of which the slice takes its part. */
bool hw_png_slice_write_row(HwPngSlice *slice, const uint8_t *row, GError **error);

/* Ends the file; *digest is that of its bytes. */
bool hw_png_slice_finish(HwPngSlice *slice, HwDigest *digest, GError **error);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwPngSlice, hw_png_slice_free)
