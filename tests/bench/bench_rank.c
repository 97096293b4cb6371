/* SPDX-License-Identifier: GPL-3.0-or-later */
/* How many blocks are decoded to rank 200 markers that stand in 20 of 200 blocks. */
#include "core/ruling/markers.h"
#include "tests/bench/fixture.h"

#include <stdio.h>
#include <string.h>

enum { BLOCKS = 200, MARKERS = 200, UNDER = 20 };

int
main(void)
{
    g_autoptr(GError) error = NULL;
    g_autoptr(Fixture) fixture = fixture_new(FIXTURE_JPEG, BLOCKS, true);
    g_autoptr(HwRecording) recording = hw_recording_open(fixture->folder, &error);
    g_autoptr(HwBlockCache) cache = hw_block_cache_new((size_t)64 << 20);
    g_autoptr(HwStrip) strip = recording != NULL ? hw_strip_new(recording, cache, &error) : NULL;
    if (strip == NULL)
        g_error("%s", error->message);

    g_autoptr(GString) csv = g_string_new("bib,column,row,edge\n");
    for (int i = 0; i < MARKERS; i++) {
        int block = i % UNDER * (BLOCKS / UNDER);
        g_string_append_printf(csv, "%d,%d.25,200,front\n", i + 1, block * FIXTURE_COLUMNS + 5 * i);
    }
    g_autoptr(HwMarkers) markers = hw_markers_parse(csv->str, csv->len, "markers.csv", recording, &error);
    guint unchecked = 0;
    g_autoptr(HwStrip) checked =
        markers != NULL ? hw_markers_check_blocks(markers, strip, &unchecked, NULL, &error) : NULL;
    if (checked == NULL)
        g_error("%s", error->message);
    guint decoded = hw_strip_get_n_decoded(checked);
    printf("Ranking %d markers decodes %u of %d blocks (%u stand unchecked); aim at most %d, %s\n", MARKERS,
           decoded, BLOCKS, unchecked, UNDER,
           decoded <= UNDER && unchecked == BLOCKS - UNDER ? "kept" : "MISSED");
    return 0;
}
