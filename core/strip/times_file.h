/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A `times` file: a CSV with the header `ns` and one stamp a column. */
#pragma once

#include "core/strip/recording.h"

#include <glib.h>
#include <stdint.h>

/* The stamps of a block's times file, its digest checked where the manifest has one. NULL with
 * HW_STRIP_ERROR_DAMAGED whose message is the void's reason. Owned by the caller. */
int64_t *hw_times_file_read(const HwRecording *recording, const HwBlock *block, int64_t *n_stamps,
                            GError **error);
