/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The manifest's reading: every rule that recording.json is held to. */
#include "core/base/base_error.h"
#include "core/base/input.h"
#include "core/base/json.h"
#include "core/base/number.h"
#include "core/base/safe_path.h"
#include "core/base/wide.h"
#include "core/strip/recording_private.h"
#include "core/strip/strip_error.h"

#include <errno.h>
#include <fcntl.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

#define MAX_EXPOSURE_US 1000000.0
#define MAX_SLIT_MM 1000.0

static const char *const side_words[] = { "left", "right", NULL };
static const HwSide sides[] = { HW_SIDE_LEFT, HW_SIDE_RIGHT };
static const char *const stamp_words[] = { "start", "middle", "end", NULL };
static const HwStampPlace stamp_places[] = { HW_STAMP_START, HW_STAMP_MIDDLE, HW_STAMP_END };

/* The reading of a list of blocks. */
typedef struct {
    HwRecording *recording;
    GHashTable *names; /* folded names met so far */
    bool any_stamp;
    int64_t latest_ns; /* the latest stamp known so far */
    int64_t columns;
} Reading;

G_GNUC_PRINTF(2, 3)
static bool
refuse(GError **error, const char *format, ...)
{
    /* Blocks are read once without an error wanted, and only a bad one a second time for its sentence. */
    if (error == NULL)
        return false;
    va_list arguments;
    va_start(arguments, format);
    *error = g_error_new_valist(HW_STRIP_ERROR, HW_STRIP_ERROR_MANIFEST, format, arguments);
    va_end(arguments);
    return false;
}

static bool
read_version(const json_t *root, const char *where, GError **error)
{
    int64_t version = 0;
    if (!hw_json_get_int64(root, "halfwheel_recording", HW_JSON_REQUIRED, INT64_MIN, INT64_MAX, where,
                           &version, error))
        return false;
    if (version > HW_RECORDING_VERSION)
        return refuse(
            error,
            "%s: “halfwheel_recording” is %" G_GINT64_FORMAT
            ", made by a newer program than this one, which reads version %d; open it with that one.",
            where, version, HW_RECORDING_VERSION);
    if (version < HW_RECORDING_VERSION)
        return refuse(error, "%s: “halfwheel_recording” is %" G_GINT64_FORMAT "; it must be %d.", where,
                      version, HW_RECORDING_VERSION);
    return true;
}

static bool
read_side(const json_t *root, const char *key, const char *where, HwSide *side, GError **error)
{
    int index = -1;
    if (!hw_json_get_word(root, key, HW_JSON_OPTIONAL, side_words, where, &index, error))
        return false;
    if (index >= 0)
        *side = sides[index];
    return true;
}

static bool
read_camera(const json_t *root, const char *where, const char **camera, GError **error)
{
    if (!hw_json_get_string(root, "camera", HW_JSON_OPTIONAL, where, camera, error))
        return false;
    bool clean = **camera != '\0';
    for (const char *p = *camera; *p != '\0'; p = g_utf8_next_char(p))
        clean = clean && !g_unichar_iscntrl(g_utf8_get_char(p));
    return clean ||
           refuse(error, "%s: “camera” is empty or holds a control character; name the camera.", where);
}

static bool
read_epoch(HwRecording *recording, const json_t *root, const char *where, GError **error)
{
    const char *text = NULL;
    if (!hw_json_get_string(root, "epoch", HW_JSON_REQUIRED, where, &text, error))
        return false;
    g_autoptr(GError) cause = NULL;
    if (!hw_instant_parse(text, &recording->epoch, &cause))
        return refuse(error, "%s: “epoch” %s.", where, cause->message);
    recording->epoch_text = g_strdup(text);
    return true;
}

static bool
read_rate(const json_t *object, const char *where, HwScan *scan, GError **error)
{
    double rate_hz = 0.0;
    if (!hw_json_get_double(object, "rate_hz", HW_JSON_REQUIRED, -G_MAXDOUBLE, G_MAXDOUBLE, where, &rate_hz,
                            error))
        return false;
    if (rate_hz <= 0.0 || rate_hz > HW_MAX_RATE_HZ) {
        g_autofree char *shown = hw_number_dup_double(rate_hz);
        return refuse(error, "%s: “rate_hz” is %s; it must lie above 0 and up to %d.", where, shown,
                      HW_MAX_RATE_HZ);
    }
    if (!hw_number_nine_decimals(rate_hz, &scan->rate_nhz) || scan->rate_nhz < 1)
        return refuse(error, "%s: “rate_hz” has more than 9 decimals; write it with at most 9.", where);
    scan->rate_hz = (double)scan->rate_nhz / 1e9;
    return true;
}

static bool
read_exposure(const json_t *object, const char *where, HwScan *scan, GError **error)
{
    double exposure_us = -1.0;
    HwJsonNeed need = scan->stamp == HW_STAMP_MIDDLE ? HW_JSON_OPTIONAL : HW_JSON_REQUIRED;
    if (!hw_json_get_double(object, "exposure_us", need, 0.0, MAX_EXPOSURE_US, where, &exposure_us, error))
        return false;
    scan->exposure_known = exposure_us >= 0.0;
    if (scan->exposure_known && !hw_number_nine_decimals(exposure_us, &scan->exposure_fs))
        return refuse(error, "%s: “exposure_us” has more than 9 decimals; write it with at most 9.", where);
    return true;
}

static bool
read_scan(const json_t *root, const char *manifest, HwScan *scan, GError **error)
{
    json_t *object = NULL;
    if (!hw_json_get_object(root, "scan", HW_JSON_REQUIRED, manifest, &object, error))
        return false;
    g_autofree char *where = g_strconcat(manifest, ": scan", NULL);
    int stamp = 0;
    if (!hw_json_get_word(object, "stamp", HW_JSON_REQUIRED, stamp_words, where, &stamp, error))
        return false;
    scan->stamp = stamp_places[stamp];
    return read_rate(object, where, scan, error) && read_exposure(object, where, scan, error) &&
           hw_json_get_double(object, "slit_mm", HW_JSON_OPTIONAL, 1e-6, MAX_SLIT_MM, where, &scan->slit_mm,
                              error) &&
           hw_transfer_from_json(json_object_get(object, "transfer"), where, &scan->transfer, error);
}

/* A file that is missing is a void later; one that is no plain file below the folder refuses the whole. */
static bool
check_file(const HwRecording *recording, const char *name, const char *where, GError **error)
{
    struct stat about;
    g_autoptr(GError) cause = NULL;
    if (hw_safe_path_stat(recording->folder_fd, name, where, &about, &cause) ||
        !g_error_matches(cause, HW_BASE_ERROR, HW_BASE_ERROR_UNSAFE))
        return true;
    g_propagate_error(error, g_steal_pointer(&cause));
    return false;
}

/* *folded is the caller's: it goes into the table only when the whole block is good. */
static bool
check_name(const Reading *reading, const char *name, const char *where, char **folded, GError **error)
{
    if (!hw_safe_path_check(name, where, error))
        return false;
    *folded = hw_safe_path_dup_folded(name);
    if (g_hash_table_contains(reading->names, *folded))
        return refuse(
            error,
            "%s: the file name “%s” stands twice, or differs from another (%s among them) in case only; "
            "give each file its own name.",
            where, name, HW_RECORDING_MANIFEST);
    return check_file(reading->recording, name, where, error);
}

static bool
read_digest(const json_t *object, const char *key, const char *where, const char **hex, GError **error)
{
    if (!hw_json_get_string(object, key, HW_JSON_OPTIONAL, where, hex, error))
        return false;
    if (*hex != NULL && !hw_digest_is_hex(*hex))
        return refuse(error, "%s: “%s” is not 64 hexadecimal digits; write what sha256sum prints.", where,
                      key);
    return true;
}

static bool
read_stamps(const json_t *object, const char *where, HwBlock *block, GError **error)
{
    const json_t *last = json_object_get(object, "last_ns");
    bool has_last = last != NULL && !json_is_null(last);
    if (block->times_file != NULL) {
        const json_t *first = json_object_get(object, "first_ns");
        block->stamps = HW_STAMPS_TIMES;
        if (has_last || (first != NULL && !json_is_null(first)))
            return refuse(
                error, "%s: “times” stands instead of “first_ns” and “last_ns”; keep one of the two.", where);
        return true;
    }
    if (!hw_json_get_int64(object, "first_ns", HW_JSON_REQUIRED, -HW_MAX_JSON_INTEGER, HW_MAX_JSON_INTEGER,
                           where, &block->first_ns, error))
        return false;
    block->stamps = has_last ? HW_STAMPS_EVEN : HW_STAMPS_RATE;
    if (!has_last)
        return true;
    if (!hw_json_get_int64(object, "last_ns", HW_JSON_REQUIRED, -HW_MAX_JSON_INTEGER, HW_MAX_JSON_INTEGER,
                           where, &block->last_ns, error))
        return false;
    if (block->last_ns < block->first_ns)
        return refuse(error, "%s: the block ends before it starts; “last_ns” must be after “first_ns”.",
                      where);
    /* One column has one stamp; more need at least a ns from one to the next. */
    int64_t span_ns = block->last_ns - block->first_ns;
    if (block->columns == 1 ? span_ns != 0 : span_ns < block->columns - 1)
        return refuse(error,
                      "%s: %" G_GINT64_FORMAT " columns cannot stand from “first_ns” to “last_ns”; correct "
                      "them.",
                      where, block->columns);
    return true;
}

/* Where the block ends as far as the manifest tells: at worst at its own first stamp. */
static bool
known_end(const HwScan *scan, const HwBlock *block, int64_t *end_ns)
{
    *end_ns = block->stamps == HW_STAMPS_EVEN ? block->last_ns : block->first_ns;
    if (block->stamps != HW_STAMPS_RATE || block->columns == 0)
        return true;
    int64_t length_ns;
    return hw_muldiv_half_even(block->columns - 1, HW_NS_PER_S * HW_NS_PER_S, scan->rate_nhz, &length_ns) &&
           !__builtin_add_overflow(block->first_ns, length_ns, end_ns) && *end_ns <= HW_MAX_JSON_INTEGER;
}

static bool
check_order(Reading *reading, const HwBlock *block, const char *where, GError **error)
{
    if (block->stamps == HW_STAMPS_TIMES)
        return true;
    if (reading->any_stamp && block->first_ns <= reading->latest_ns)
        return refuse(error,
                      "%s: “first_ns” is %" G_GINT64_FORMAT
                      ", not after the former block's end at %" G_GINT64_FORMAT
                      "; put the blocks in order of time, without overlap.",
                      where, block->first_ns, reading->latest_ns);
    int64_t end_ns;
    if (!known_end(&reading->recording->scan, block, &end_ns))
        return refuse(
            error, "%s: the block's last column lies beyond 2^53 ns; correct its stamps or the rate.", where);
    reading->latest_ns = end_ns;
    reading->any_stamp = true;
    return true;
}

static bool
check_size(const Reading *reading, const HwBlock *block, const char *where, GError **error)
{
    int64_t rows = MAX(reading->recording->rows, 1);
    if (block->columns > HW_MAX_BLOCK_PIXELS / rows)
        return refuse(error,
                      "%s: %" G_GINT64_FORMAT " columns of %" G_GINT64_FORMAT
                      " rows are more than %d pixels; cut the block into smaller ones.",
                      where, block->columns, rows, (int)HW_MAX_BLOCK_PIXELS);
    if (reading->columns + block->columns > HW_MAX_COLUMNS)
        return refuse(error, "%s: the recording has more than 2^40 columns; divide it.", where);
    return true;
}

/* Changes nothing of the reading unless the block is good, so that a bad one can be read again for its
 * sentence. */
static bool
read_block(Reading *reading, const json_t *object, const char *where, GError **error)
{
    HwBlock block = { 0 };
    g_autofree char *folded = NULL;
    g_autofree char *folded_times = NULL;
    if (!json_is_object(object))
        return refuse(error, "%s must be an object.", where);
    if (!hw_json_get_string(object, "file", HW_JSON_REQUIRED, where, &block.file, error) ||
        !check_name(reading, block.file, where, &folded, error) ||
        !hw_json_get_int64(object, "columns", HW_JSON_OPTIONAL, 1, HW_MAX_BLOCK_PIXELS, where, &block.columns,
                           error) ||
        !check_size(reading, &block, where, error) ||
        !read_digest(object, "sha256", where, &block.sha256, error) ||
        !hw_json_get_string(object, "times", HW_JSON_OPTIONAL, where, &block.times_file, error) ||
        !read_digest(object, "times_sha256", where, &block.times_sha256, error))
        return false;
    if (block.times_file != NULL) {
        if (!check_name(reading, block.times_file, where, &folded_times, error))
            return false;
        if (strcmp(folded, folded_times) == 0)
            return refuse(error,
                          "%s: “times” names the block's own file “%s”; name the file with its stamps.",
                          where, block.times_file);
    }
    if (!read_stamps(object, where, &block, error) || !check_order(reading, &block, where, error))
        return false;
    g_hash_table_add(reading->names, g_steal_pointer(&folded));
    if (folded_times != NULL)
        g_hash_table_add(reading->names, g_steal_pointer(&folded_times));
    reading->columns += block.columns;
    g_array_append_val(reading->recording->blocks, block);
    return true;
}

static bool
find_blocks(const json_t *root, const char *manifest, json_t **list, GError **error)
{
    if (json_object_get(root, "frames") != NULL)
        return refuse(
            error,
            "%s: “frames” is not read by this version, only “blocks”; make blocks of the frames first.",
            manifest);
    if (!hw_json_get_array(root, "blocks", HW_JSON_REQUIRED, manifest, list, error))
        return false;
    if (json_array_size(*list) == 0)
        return refuse(error, "%s: “blocks” is empty; name at least one block.", manifest);
    if (json_array_size(*list) > HW_MAX_BLOCKS)
        return refuse(error, "%s: “blocks” has more than %d entries; divide the recording.", manifest,
                      HW_MAX_BLOCKS);
    return true;
}

static bool
read_blocks(HwRecording *recording, const json_t *root, const char *manifest, GError **error)
{
    json_t *list = NULL;
    if (!find_blocks(root, manifest, &list, error))
        return false;
    g_autoptr(GHashTable) names = g_hash_table_new_full(g_str_hash, g_str_equal, g_free, NULL);
    g_hash_table_add(names, hw_safe_path_dup_folded(HW_RECORDING_MANIFEST));
    Reading reading = { .recording = recording, .names = names };
    for (size_t i = 0; i < json_array_size(list); i++) {
        const json_t *object = json_array_get(list, i);
        if (read_block(&reading, object, "", NULL))
            continue;
        g_autofree char *where = g_strdup_printf("%s: blocks[%" G_GSIZE_FORMAT "]", manifest, i);
        if (!read_block(&reading, object, where, error))
            return false;
    }
    return true;
}

static bool
read_manifest(HwRecording *recording, const char *manifest, GError **error)
{
    const json_t *root = recording->root;
    json_t *scene = NULL;
    if (!json_is_object(root))
        return refuse(error, "%s must hold one object; write the manifest again.", manifest);
    if (!read_version(root, manifest, error) ||
        !hw_json_get_string(root, "title", HW_JSON_OPTIONAL, manifest, &recording->title, error) ||
        !read_camera(root, manifest, &recording->camera, error) ||
        !read_epoch(recording, root, manifest, error) ||
        !read_side(root, "travel", manifest, &recording->travel, error) ||
        !read_side(root, "later", manifest, &recording->later, error) ||
        !hw_json_get_int64(root, "rows", HW_JSON_OPTIONAL, 1, HW_MAX_BLOCK_PIXELS, manifest, &recording->rows,
                           error) ||
        !hw_json_get_bool(root, "complete", manifest, &recording->complete, error) ||
        !hw_json_get_object(root, "scene", HW_JSON_OPTIONAL, manifest, &scene, error) ||
        !read_scan(root, manifest, &recording->scan, error) || !read_blocks(recording, root, manifest, error))
        return false;
    recording->scene = scene;
    hw_recording_set_identity(recording);
    return true;
}

/* The folder of a path that names it or its manifest. */
static char *
dup_folder(const char *path)
{
    g_autofree char *last = g_path_get_basename(path);
    if (strcmp(last, HW_RECORDING_MANIFEST) == 0 && !g_file_test(path, G_FILE_TEST_IS_DIR))
        return g_path_get_dirname(path);
    return g_strdup(path);
}

static json_t *
load_manifest(const HwRecording *recording, const char *manifest, GError **error)
{
    g_autoptr(GError) cause = NULL;
    int fd = hw_safe_path_open(recording->folder_fd, HW_RECORDING_MANIFEST, recording->path, &cause);
    if (fd < 0 && g_error_matches(cause, HW_BASE_ERROR, HW_BASE_ERROR_NOT_FOUND)) {
        refuse(error, "%s holds no %s; name the folder of a recording.", recording->path,
               HW_RECORDING_MANIFEST);
        return NULL;
    }
    if (fd < 0) {
        g_propagate_error(error, g_steal_pointer(&cause));
        return NULL;
    }
    size_t size = 0;
    g_autofree char *text = hw_input_read_fd(fd, manifest, HW_MAX_MANIFEST_BYTES, &size, error);
    close(fd);
    return text != NULL ? hw_json_parse(text, size, manifest, error) : NULL;
}

HwRecording *
hw_recording_open(const char *path, GError **error)
{
    g_autofree char *folder = dup_folder(path);
    g_autoptr(HwRecording) recording = hw_recording_new_blank(folder);
    recording->folder_fd = open(folder, O_PATH | O_DIRECTORY | O_CLOEXEC);
    if (recording->folder_fd < 0) {
        int code = errno;
        refuse(error, "%s cannot be opened as a recording's folder: %s; check the name.", path,
               g_strerror(code));
        return NULL;
    }
    g_autofree char *manifest = g_build_filename(recording->path, HW_RECORDING_MANIFEST, NULL);
    recording->root = load_manifest(recording, manifest, error);
    if (recording->root == NULL || !read_manifest(recording, manifest, error))
        return NULL;
    return g_steal_pointer(&recording);
}
