/* SPDX-License-Identifier: GPL-3.0-or-later */
/* Any bytes as recording.json in a folder without its blocks: refused with a sentence, or a recording of
 * which a strip can be asked for. */
#include "core/strip/recording.h"
#include "core/strip/strip.h"
#include "tests/fuzz/fuzz_target.h"

#include <glib/gstdio.h>
#include <stdlib.h>

static char *folder;
static char *manifest;

static void
clean_up(void)
{
    g_unlink(manifest);
    g_rmdir(folder);
    g_clear_pointer(&manifest, g_free);
    g_clear_pointer(&folder, g_free);
}

int
LLVMFuzzerTestOneInput(const uint8_t *data, size_t size)
{
    if (folder == NULL) {
        folder = g_dir_make_tmp("halfwheel-XXXXXX", NULL);
        g_assert_nonnull(folder);
        manifest = g_build_filename(folder, HW_RECORDING_MANIFEST, NULL);
        atexit(clean_up);
    }
    g_assert_true(g_file_set_contents_full(manifest, (const char *)data, (gssize)size,
                                           G_FILE_SET_CONTENTS_NONE, 0600, NULL));
    g_autoptr(GError) error = NULL;
    g_autoptr(HwRecording) recording = hw_recording_open(folder, &error);
    g_assert_true((recording == NULL) == (error != NULL));
    if (recording == NULL)
        return 0;
    g_assert_cmpuint(hw_recording_get_n_blocks(recording), >, 0);
    g_assert_true(hw_digest_is_hex(hw_recording_get_identity(recording)->hex));
    g_autoptr(HwBlockCache) cache = hw_block_cache_new(1 << 20);
    g_autoptr(GError) strip_error = NULL;
    g_autoptr(HwStrip) strip = hw_strip_new(recording, cache, &strip_error);
    g_assert_true((strip == NULL) == (strip_error != NULL));
    return 0;
}
