/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/strip/recording.h"

#include "core/base/base_error.h"
#include "core/base/safe_path.h"
#include "core/strip/image_info.h"
#include "core/strip/recording_private.h"
#include "core/strip/strip_error.h"

#include <errno.h>
#include <fcntl.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

HwRecording *
hw_recording_ref(HwRecording *recording)
{
    g_atomic_int_inc(&recording->references);
    return recording;
}

void
hw_recording_unref(HwRecording *recording)
{
    if (recording == NULL || !g_atomic_int_dec_and_test(&recording->references))
        return;
    if (recording->folder_fd >= 0)
        close(recording->folder_fd);
    if (recording->root != NULL)
        json_decref(recording->root);
    g_array_unref(recording->blocks);
    g_free(recording->path);
    g_free(recording->stem);
    g_free(recording->image_file);
    g_free(recording->epoch_text);
    g_free(recording);
}

/* Without the slashes at its end; the root folder keeps its own. */
static char *
dup_trimmed(const char *path)
{
    size_t length = strlen(path);
    while (length > 1 && path[length - 1] == '/')
        length--;
    return g_strndup(path, length);
}

HwRecording *
hw_recording_new_blank(const char *path)
{
    HwRecording *recording = g_new0(HwRecording, 1);
    recording->references = 1;
    recording->folder_fd = -1;
    recording->path = dup_trimmed(path);
    recording->title = "";
    recording->camera = "A";
    recording->later = HW_SIDE_RIGHT;
    recording->complete = true;
    recording->blocks = g_array_new(FALSE, TRUE, sizeof(HwBlock));
    /* A name that ends in “.” or “..” says nothing of the folder's own name. */
    g_autofree char *last = g_path_get_basename(recording->path);
    bool relative = strcmp(last, ".") == 0 || strcmp(last, "..") == 0;
    g_autofree char *real = relative ? realpath(recording->path, NULL) : NULL;
    recording->stem = g_strdup(real != NULL ? real : recording->path);
    return recording;
}

void
hw_recording_set_identity(HwRecording *recording)
{
    const HwBlock *first = &g_array_index(recording->blocks, HwBlock, 0);
    g_autofree char *stamp = first->stamps == HW_STAMPS_TIMES
                                 ? g_strdup("")
                                 : g_strdup_printf("%" G_GINT64_FORMAT, first->first_ns);
    g_autofree char *text =
        g_strdup_printf("%s\n%s\n%s\n%s\n", recording->epoch_text, recording->camera, first->file, stamp);
    recording->identity = hw_digest_bytes(text, strlen(text));
    g_strlcpy(recording->short_identity, recording->identity.hex, sizeof recording->short_identity);
}

bool
hw_recording_path_is_image(const char *path)
{
    uint8_t head[16] = { 0 };
    int fd = open(path, O_RDONLY | O_CLOEXEC | O_NONBLOCK);
    if (fd < 0)
        return false;
    struct stat about;
    ssize_t got = fstat(fd, &about) == 0 && S_ISREG(about.st_mode) ? read(fd, head, sizeof head) : 0;
    close(fd);
    return got >= 8 && hw_image_kind(head, (size_t)got) != HW_IMAGE_OTHER;
}

HwRecording *
hw_recording_open_image(const char *path, const HwImageScan *scan, GError **error)
{
    if (!hw_recording_path_is_image(path)) {
        g_set_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_MANIFEST,
                    "%s is neither a PNG nor a JPEG that can be read; name such a picture.", path);
        return NULL;
    }
    if (scan->rate_nhz < 1 || scan->rate_nhz > HW_MAX_RATE_NHZ) {
        g_set_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_MANIFEST,
                    "%s: the scan rate must lie above 0 and up to %d Hz.", path, HW_MAX_RATE_HZ);
        return NULL;
    }
    if (scan->stamp != HW_STAMP_MIDDLE && !scan->exposure_known) {
        g_set_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_MANIFEST,
                    "%s: stamps of the start or end of the exposure need its length; give the exposure.",
                    path);
        return NULL;
    }
    g_autoptr(HwRecording) recording = hw_recording_new_blank(path);
    recording->image_file = g_path_get_basename(recording->path);
    recording->epoch = scan->epoch;
    recording->epoch_text =
        scan->epoch_text != NULL ? g_strdup(scan->epoch_text) : hw_instant_dup_text(&scan->epoch, 9);
    recording->travel = scan->travel;
    recording->later = scan->later == HW_SIDE_UNKNOWN ? HW_SIDE_RIGHT : scan->later;
    recording->scan = (HwScan){ .rate_nhz = scan->rate_nhz,
                                .rate_hz = (double)scan->rate_nhz / 1e9,
                                .exposure_fs = scan->exposure_known ? scan->exposure_fs : 0,
                                .exposure_known = scan->exposure_known,
                                .stamp = scan->stamp,
                                .transfer = scan->transfer };
    HwBlock block = { .file = recording->image_file, .stamps = HW_STAMPS_RATE };
    g_array_append_val(recording->blocks, block);
    hw_recording_set_identity(recording);
    return g_steal_pointer(&recording);
}

const char *
hw_recording_get_path(const HwRecording *recording)
{
    return recording->path;
}

char *
hw_recording_dup_beside(const HwRecording *recording, const char *suffix)
{
    g_autofree char *beside = g_strconcat(recording->stem, suffix, NULL);
    if (g_file_test(beside, G_FILE_TEST_EXISTS))
        return g_steal_pointer(&beside);
    /* A bare image may be named with or without its extension. */
    const char *slash = strrchr(recording->stem, '/');
    const char *point = strrchr(recording->stem, '.');
    if (recording->image_file == NULL || point == NULL || (slash != NULL && point < slash))
        return NULL;
    g_autofree char *stem = g_strndup(recording->stem, (gsize)(point - recording->stem));
    g_autofree char *shorter = g_strconcat(stem, suffix, NULL);
    return g_file_test(shorter, G_FILE_TEST_EXISTS) ? g_steal_pointer(&shorter) : NULL;
}

const char *
hw_recording_get_title(const HwRecording *recording)
{
    return recording->title;
}

const char *
hw_recording_get_camera(const HwRecording *recording)
{
    return recording->camera;
}

const HwInstant *
hw_recording_get_epoch(const HwRecording *recording)
{
    return &recording->epoch;
}

HwSide
hw_recording_get_travel(const HwRecording *recording)
{
    return recording->travel;
}

HwSide
hw_recording_get_later(const HwRecording *recording)
{
    return recording->later;
}

const HwScan *
hw_recording_get_scan(const HwRecording *recording)
{
    return &recording->scan;
}

int64_t
hw_recording_get_rows(const HwRecording *recording)
{
    return recording->rows;
}

bool
hw_recording_is_complete(const HwRecording *recording)
{
    return recording->complete;
}

const json_t *
hw_recording_get_scene(const HwRecording *recording)
{
    return recording->scene;
}

guint
hw_recording_get_n_blocks(const HwRecording *recording)
{
    return recording->blocks->len;
}

const HwBlock *
hw_recording_get_block(const HwRecording *recording, guint index)
{
    g_return_val_if_fail(index < recording->blocks->len, NULL);
    return &g_array_index(recording->blocks, HwBlock, index);
}

int
hw_recording_open_file(const HwRecording *recording, const char *file, GError **error)
{
    /* A bare image was named by its user and may stand behind a link; a manifest's file may not. */
    if (recording->image_file != NULL) {
        int image_fd = open(recording->path, O_RDONLY | O_CLOEXEC | O_NONBLOCK);
        struct stat about;
        if (image_fd >= 0 && fstat(image_fd, &about) == 0 && S_ISREG(about.st_mode))
            return image_fd;
        if (image_fd >= 0)
            close(image_fd);
        g_set_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED, "%s is missing or no regular file", file);
        return -1;
    }
    g_autoptr(GError) cause = NULL;
    int fd = hw_safe_path_open(recording->folder_fd, file, file, &cause);
    if (fd >= 0)
        return fd;
    const char *reason = "cannot be opened";
    if (g_error_matches(cause, HW_BASE_ERROR, HW_BASE_ERROR_NOT_FOUND))
        reason = "is missing";
    else if (g_error_matches(cause, HW_BASE_ERROR, HW_BASE_ERROR_UNSAFE))
        reason = "is a link or no regular file";
    g_set_error(error, HW_STRIP_ERROR, HW_STRIP_ERROR_DAMAGED, "%s %s", file, reason);
    return -1;
}

const HwDigest *
hw_recording_get_identity(const HwRecording *recording)
{
    return &recording->identity;
}

const char *
hw_recording_get_short_identity(const HwRecording *recording)
{
    return recording->short_identity;
}
