/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/strip/manifest.h"

#include "core/base/json.h"

static const char *const side_words[] = { NULL, "left", "right" };
static const char *const stamp_words[] = { "start", "middle", "end" };

static void
set_text(json_t *object, const char *key, const char *text)
{
    if (text != NULL && *text != '\0')
        json_object_set_new(object, key, json_string(text));
}

/* Whole numbers without a point. */
static json_t *
decimal_from_billionths(int64_t billionths)
{
    const int64_t unit = INT64_C(1000000000);
    return billionths % unit == 0 ? json_integer(billionths / unit) : json_real((double)billionths / 1e9);
}

static json_t *
scan_to_json(const HwScan *scan)
{
    json_t *object = json_object();
    json_object_set_new(object, "rate_hz", decimal_from_billionths(scan->rate_nhz));
    if (scan->exposure_known)
        json_object_set_new(object, "exposure_us", decimal_from_billionths(scan->exposure_fs));
    json_object_set_new(object, "stamp", json_string(stamp_words[scan->stamp]));
    json_t *transfer = hw_transfer_to_json(&scan->transfer);
    if (transfer != NULL)
        json_object_set_new(object, "transfer", transfer);
    if (scan->slit_mm > 0.0)
        json_object_set_new(object, "slit_mm", json_real(scan->slit_mm));
    return object;
}

static json_t *
block_to_json(const HwBlock *block)
{
    json_t *object = json_object();
    set_text(object, "file", block->file);
    if (block->columns > 0)
        json_object_set_new(object, "columns", json_integer(block->columns));
    if (block->stamps != HW_STAMPS_TIMES)
        json_object_set_new(object, "first_ns", json_integer(block->first_ns));
    if (block->stamps == HW_STAMPS_EVEN)
        json_object_set_new(object, "last_ns", json_integer(block->last_ns));
    set_text(object, "sha256", block->sha256);
    set_text(object, "times", block->times_file);
    set_text(object, "times_sha256", block->times_sha256);
    return object;
}

char *
hw_manifest_dup_text(const char *title, const char *epoch_text, const char *camera, HwSide travel,
                     HwSide later, const HwScan *scan, const HwBlock *blocks, guint n_blocks)
{
    g_autoptr(json_t) root = json_object();
    json_object_set_new(root, "halfwheel_recording", json_integer(HW_RECORDING_VERSION));
    set_text(root, "title", title);
    set_text(root, "epoch", epoch_text);
    set_text(root, "camera", camera);
    set_text(root, "travel", side_words[travel]);
    set_text(root, "later", side_words[later]);
    json_object_set_new(root, "scan", scan_to_json(scan));
    json_t *list = json_array();
    for (guint i = 0; i < n_blocks; i++)
        json_array_append_new(list, block_to_json(&blocks[i]));
    json_object_set_new(root, "blocks", list);
    return hw_json_dup_text(root);
}
