/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Writing a manifest (version 1), for `cut`. Reading is hw_recording_open's. */
#pragma once

#include "core/strip/recording.h"

#include <glib.h>

/* What is written; the text of recording.json with a final newline. `exposure_fs` and the like as in HwScan;
 * blocks with their digests. Owned by the caller. */
char *hw_manifest_dup_text(const char *title, const char *epoch_text, const char *camera, HwSide travel,
                           HwSide later, const HwScan *scan, const HwBlock *blocks, guint n_blocks);
