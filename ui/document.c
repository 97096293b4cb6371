/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "ui/document.h"

#include "core/base/digest.h"
#include "core/base/input.h"
#include "core/base/limits.h"

#include <string.h>

/* Bytes of decoded blocks that one window keeps. */
#define CACHE_BYTES ((size_t)256 << 20)

HwOpenRequest *
hw_open_request_new(const char *recording)
{
    HwOpenRequest *request = g_new0(HwOpenRequest, 1);

    request->recording = g_strdup(recording);
    return request;
}

HwOpenRequest *
hw_open_request_copy(const HwOpenRequest *request)
{
    HwOpenRequest *copy = g_new0(HwOpenRequest, 1);

    *copy = *request;
    copy->recording = g_strdup(request->recording);
    copy->markers = g_strdup(request->markers);
    copy->start_list = g_strdup(request->start_list);
    copy->race = g_strdup(request->race);
    copy->rules = g_strdup(request->rules);
    copy->passage = g_strdup(request->passage);
    copy->scan.epoch_text = g_strdup(request->scan.epoch_text);
    return copy;
}

void
hw_open_request_free(HwOpenRequest *request)
{
    if (!request)
        return;
    g_free(request->recording);
    g_free(request->markers);
    g_free(request->start_list);
    g_free(request->race);
    g_free(request->rules);
    g_free(request->passage);
    g_free(request->scan.epoch_text);
    g_free(request);
}

char *
hw_document_dup_file_digest(const char *path)
{
    g_autofree char *data = NULL;
    size_t size = 0;
    HwDigest digest;

    data = hw_input_read(path, HW_MAX_TABLE_BYTES, &size, NULL);
    if (!data)
        return NULL;
    digest = hw_digest_bytes(data, size);
    return g_strdup(digest.hex);
}

static HwRecording *
open_recording(const HwOpenRequest *request, GError **error)
{
    if (request->has_scan && hw_recording_path_is_image(request->recording))
        return hw_recording_open_image(request->recording, &request->scan, error);
    return hw_recording_open(request->recording, error);
}

/* Fills in what stands beside the recording and was not named. */
static void
find_beside(HwOpenRequest *request, const HwRecording *recording)
{
    if (!request->markers)
        request->markers = hw_recording_dup_beside(recording, ".markers.csv");
    if (!request->start_list)
        request->start_list = hw_recording_dup_beside(recording, ".startlist.csv");
    if (!request->race)
        request->race = hw_recording_dup_beside(recording, ".race.json");
}

static bool
read_calibration(HwDocument *document, GError **error)
{
    g_autofree char *path = hw_recording_dup_beside(document->recording, ".calibration.json");

    if (!path)
        return true;
    document->calibration = hw_calibration_read(path, error);
    return document->calibration &&
           hw_calibration_check(document->calibration, document->recording, path, error);
}

/* Recording, strip and the files beside it, but for the markers. */
static bool
read_parts(HwDocument *document, GError **error)
{
    g_autoptr(HwBlockCache) cache = hw_block_cache_new(CACHE_BYTES);
    HwOpenRequest *request = document->request;

    document->recording = open_recording(request, error);
    if (!document->recording)
        return false;
    find_beside(request, document->recording);
    document->strip = hw_strip_new(document->recording, cache, error);
    if (!document->strip)
        return false;
    if (request->start_list) {
        document->start_list = hw_start_list_read(request->start_list, NULL, error);
        if (!document->start_list)
            return false;
    }
    if (request->race) {
        document->race = hw_race_read(request->race, error);
        if (!document->race)
            return false;
    }
    if (request->rules) {
        document->rules = hw_rules_read(request->rules, error);
        if (!document->rules)
            return false;
    }
    return read_calibration(document, error);
}

/* Reads the file once, so that the digest kept is that of what was read. */
static bool
read_markers(HwDocument *document, GError **error)
{
    const char *path = document->request->markers;
    g_autofree char *data = NULL;
    size_t size = 0;
    HwDigest digest;

    if (!path) {
        document->markers = hw_markers_new();
        document->markers_path =
            g_strconcat(hw_recording_get_path(document->recording), ".markers.csv", NULL);
        return true;
    }
    data = hw_input_read(path, HW_MAX_TABLE_BYTES, &size, error);
    if (!data)
        return false;
    document->markers = hw_markers_parse(data, size, path, document->recording, error);
    if (!document->markers)
        return false;
    digest = hw_digest_bytes(data, size);
    document->markers_on_disk = g_strdup(digest.hex);
    document->markers_path = g_strdup(path);
    return true;
}

HwDocument *
hw_document_open(const HwOpenRequest *request, GCancellable *cancellable, GError **error)
{
    g_autoptr(HwDocument) document = g_new0(HwDocument, 1);
    HwStrip *checked;

    document->request = hw_open_request_copy(request);
    if (!read_parts(document, error) || !read_markers(document, error))
        return NULL;
    if (!hw_markers_check_places(document->markers, document->strip, error))
        return NULL;
    checked = hw_markers_check_blocks(document->markers, document->strip, &document->n_unchecked_blocks,
                                      cancellable, error);
    if (!checked)
        return NULL;
    hw_strip_unref(document->strip);
    document->strip = checked;
    if (!hw_markers_check_places(document->markers, document->strip, error))
        return NULL;
    document->axis = hw_axis_new(hw_strip_get_time_base(document->strip));
    return g_steal_pointer(&document);
}

HwFinishList *
hw_document_derive_anew(const HwOpenRequest *request, const char *markers_csv, GCancellable *cancellable,
                        GError **error)
{
    g_autoptr(HwDocument) document = g_new0(HwDocument, 1);
    HwFinishInput input = { 0 };
    HwFinishList *list;

    document->request = hw_open_request_copy(request);
    if (!read_parts(document, error))
        return NULL;
    if (markers_csv) {
        document->markers = hw_markers_parse(markers_csv, strlen(markers_csv), "markers as they stand",
                                             document->recording, error);
        if (!document->markers)
            return NULL;
    } else if (!read_markers(document, error)) {
        return NULL;
    }
    input.strip = document->strip;
    input.markers = document->markers;
    input.start_list = document->start_list;
    input.race = document->race;
    input.rules = document->rules;
    input.calibration = document->calibration;
    input.passage = document->request->passage;
    list = hw_finish_list_derive(&input, cancellable, error);
    document->strip = input.strip;
    return list;
}

void
hw_document_free(HwDocument *document)
{
    if (!document)
        return;
    g_clear_pointer(&document->request, hw_open_request_free);
    g_clear_pointer(&document->axis, hw_axis_unref);
    g_clear_pointer(&document->strip, hw_strip_unref);
    g_clear_pointer(&document->recording, hw_recording_unref);
    g_clear_pointer(&document->markers, hw_markers_free);
    g_clear_pointer(&document->start_list, hw_start_list_free);
    g_clear_pointer(&document->race, hw_race_free);
    g_clear_pointer(&document->rules, hw_rules_free);
    g_clear_pointer(&document->calibration, hw_calibration_free);
    g_free(document->markers_path);
    g_free(document->markers_on_disk);
    g_free(document);
}
