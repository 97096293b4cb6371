/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/case/recording_fact.h"

#include "core/case/case_error.h"

#include <string.h>
#include <unistd.h>

/* *found is false, and no error, where the file is missing or cannot be read: damage is no reason to refuse a
 * recording. */
static bool
digest_file(const HwRecording *recording, const char *file, GCancellable *cancellable, bool *found,
            HwDigest *digest, GError **error)
{
    if (g_cancellable_set_error_if_cancelled(cancellable, error))
        return false;
    int fd = hw_recording_open_file(recording, file, NULL);
    *found = fd >= 0 && hw_digest_fd(fd, file, digest, NULL);
    if (fd >= 0)
        close(fd);
    return true;
}

/* Sets `key` to the file's digest; null where there is no such file. */
static bool
set_digest(json_t *object, const char *key, const HwRecording *recording, const char *file,
           GCancellable *cancellable, GError **error)
{
    HwDigest digest;
    bool found = false;
    if (file != NULL && !digest_file(recording, file, cancellable, &found, &digest, error))
        return false;
    json_object_set_new(object, key, found ? json_string(digest.hex) : json_null());
    return true;
}

static bool
set_blocks(json_t *fact, const HwRecording *recording, GCancellable *cancellable, GError **error)
{
    json_t *blocks = json_array();
    json_object_set_new(fact, "blocks", blocks);
    for (guint i = 0; i < hw_recording_get_n_blocks(recording); i++) {
        const HwBlock *block = hw_recording_get_block(recording, i);
        json_t *one = json_object();
        json_array_append_new(blocks, one);
        json_object_set_new(one, "file", json_string(block->file));
        if (!set_digest(one, "sha256", recording, block->file, cancellable, error) ||
            !set_digest(one, "times_sha256", recording, block->times_file, cancellable, error))
            return false;
    }
    return true;
}

json_t *
hw_recording_to_fact(const HwRecording *recording, GCancellable *cancellable, GError **error)
{
    const char *path = hw_recording_get_path(recording);
    if (!g_file_test(path, G_FILE_TEST_IS_DIR)) {
        g_set_error(error, HW_CASE_ERROR, HW_CASE_ERROR_ACT,
                    "%s is a bare image; a case needs a recording, so cut it into one first.", path);
        return NULL;
    }
    g_autofree char *absolute = g_canonicalize_filename(path, NULL);
    if (!g_utf8_validate(absolute, -1, NULL)) {
        g_autofree char *shown = g_filename_display_name(absolute);
        g_set_error(error, HW_CASE_ERROR, HW_CASE_ERROR_ACT,
                    "%s is no UTF-8 name, and a case keeps it as text; rename it.", shown);
        return NULL;
    }
    g_autoptr(json_t) fact = json_object();
    json_object_set_new(fact, "path", json_string(path));
    json_object_set_new(fact, "absolute", json_string(absolute));
    json_object_set_new(fact, "identity", json_string(hw_recording_get_identity(recording)->hex));
    json_object_set_new(fact, "camera", json_string(hw_recording_get_camera(recording)));
    if (!set_digest(fact, "manifest_sha256", recording, HW_RECORDING_MANIFEST, cancellable, error) ||
        !set_blocks(fact, recording, cancellable, error))
        return NULL;
    return g_steal_pointer(&fact);
}

/* The recording at a place if it is the one; NULL without an error where nothing is there. */
static HwRecording *
open_at(const char *place, const char *identity, const char *case_path, GError **error)
{
    if (!g_file_test(place, G_FILE_TEST_IS_DIR))
        return NULL;
    g_autoptr(HwRecording) recording = hw_recording_open(place, error);
    if (recording == NULL || hw_digest_equal_hex(hw_recording_get_identity(recording), identity))
        return g_steal_pointer(&recording);
    g_set_error(error, HW_CASE_ERROR, HW_CASE_ERROR_FORMAT,
                "%s was made on recording %.16s, and %s is %s; put the recording of the case there.",
                case_path, identity, place, hw_recording_get_short_identity(recording));
    return NULL;
}

HwRecording *
hw_recording_open_fact(const json_t *fact, const char *case_path, GError **error)
{
    const char *absolute = NULL, *identity = NULL;
    if (!hw_json_get_string(fact, "absolute", HW_JSON_REQUIRED, case_path, &absolute, error) ||
        !hw_json_get_string(fact, "identity", HW_JSON_REQUIRED, case_path, &identity, error))
        return NULL;
    g_autofree char *folder = g_path_get_dirname(case_path);
    g_autofree char *name = g_path_get_basename(absolute);
    g_autofree char *beside = g_build_filename(folder, name, NULL);
    g_autoptr(GError) first = NULL;
    g_autoptr(GError) second = NULL;
    HwRecording *recording = open_at(absolute, identity, case_path, &first);
    if (recording == NULL)
        recording = open_at(beside, identity, case_path, &second);
    if (recording != NULL)
        return recording;
    if (first != NULL)
        g_propagate_error(error, g_steal_pointer(&first));
    else if (second != NULL)
        g_propagate_error(error, g_steal_pointer(&second));
    else
        g_set_error(error, HW_CASE_ERROR, HW_CASE_ERROR_FORMAT,
                    "%s: its recording is neither at %s nor beside the case; put it at one of the two.",
                    case_path, absolute);
    return NULL;
}

static void
changed_file_clear(gpointer data)
{
    HwChangedFile *changed = data;
    g_free(changed->file);
    g_free(changed->what);
}

/* What became of a file since its digest was taken ("" nothing); false with an error. A file that
 * could be read neither then nor now is as it was. */
static bool
compare_file(const HwRecording *recording, const char *file, const char *then, GCancellable *cancellable,
             const char **what, GError **error)
{
    HwDigest now;
    bool found = false;
    if (!digest_file(recording, file, cancellable, &found, &now, error))
        return false;
    if (found && then != NULL)
        *what = hw_digest_equal_hex(&now, then) ? "" : "was changed";
    else
        *what = found          ? "could not be read then and can be now"
                : then != NULL ? "is missing or cannot be read"
                               : "";
    return true;
}

static void
add_change(GArray *changes, const char *file, const char *what)
{
    if (*what != '\0') {
        HwChangedFile changed = { g_strdup(file), g_strdup(what) };
        g_array_append_val(changes, changed);
    }
}

static bool
compare_block(const HwRecording *recording, const HwBlock *block, const json_t *then, const char *where,
              GCancellable *cancellable, GArray *changes, GError **error)
{
    const char *sha256 = NULL, *times_sha256 = NULL, *what = "";
    if (!hw_json_get_string(then, "sha256", HW_JSON_OPTIONAL, where, &sha256, error) ||
        !hw_json_get_string(then, "times_sha256", HW_JSON_OPTIONAL, where, &times_sha256, error) ||
        !compare_file(recording, block->file, sha256, cancellable, &what, error))
        return false;
    add_change(changes, block->file, what);
    if (*what != '\0' || block->times_file == NULL)
        return true;
    if (!compare_file(recording, block->times_file, times_sha256, cancellable, &what, error))
        return false;
    g_autofree char *of_times =
        *what != '\0' ? g_strdup_printf("has other times: %s %s", block->times_file, what) : g_strdup("");
    add_change(changes, block->file, of_times);
    return true;
}

static const json_t *
find_block(const json_t *blocks, const char *file)
{
    for (size_t i = 0; i < json_array_size(blocks); i++) {
        const json_t *block = json_array_get(blocks, i);
        const char *name = json_string_value(json_object_get(block, "file"));
        if (name != NULL && strcmp(name, file) == 0)
            return block;
    }
    return NULL;
}

GArray *
hw_recording_find_changes(const HwRecording *recording, const json_t *fact, const char *where,
                          GCancellable *cancellable, GError **error)
{
    const char *manifest = NULL, *what = "";
    json_t *blocks = NULL;
    if (!hw_json_get_string(fact, "manifest_sha256", HW_JSON_REQUIRED, where, &manifest, error) ||
        !hw_json_get_array(fact, "blocks", HW_JSON_REQUIRED, where, &blocks, error))
        return NULL;
    g_autoptr(GArray) changes = g_array_new(FALSE, TRUE, sizeof(HwChangedFile));
    g_array_set_clear_func(changes, changed_file_clear);
    if (!compare_file(recording, HW_RECORDING_MANIFEST, manifest, cancellable, &what, error))
        return NULL;
    add_change(changes, HW_RECORDING_MANIFEST, what);
    for (guint i = 0; i < hw_recording_get_n_blocks(recording); i++) {
        const HwBlock *block = hw_recording_get_block(recording, i);
        const json_t *then = find_block(blocks, block->file);
        if (then != NULL && !compare_block(recording, block, then, where, cancellable, changes, error))
            return NULL;
    }
    return g_steal_pointer(&changes);
}
