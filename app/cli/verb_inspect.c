/* SPDX-License-Identifier: GPL-3.0-or-later */
/* inspect: what a recording holds, and whether all of it can be believed. */
#include "app/cli/options.h"
#include "app/cli/progress.h"
#include "core/base/duration.h"
#include "core/base/json.h"
#include "core/base/number.h"
#include "core/strip/strip.h"

#include <string.h>

/* Decoding goes past the cache, so it may be small. */
#define CACHE_BYTES ((size_t)16 << 20)

static const char about[] =
    "Reads a recording whole and tells its columns, duration, scan rate, voids (stretches without picture),\n"
    "digest and problems. Every block is decoded and held against its digest, unless --quick says not to.";

static const char more[] =
    "The digest is the SHA-256 of the lines that sha256sum prints for recording.json and every file it "
    "names,\n"
    "sorted by name, so it can be checked by hand. Where a file is missing, or there is no recording.json, "
    "it is\n"
    "not known (null).\n"
    "\n"
    "JSON keys: columns (damaged ones included), rows, duration_ns, rate_hz (nominal), voids (after_column,\n"
    "duration_ns, reason), digest, problems.\n"
    "\n"
    "Exit status:\n"
    "  0  the recording is whole\n"
    "  1  it was refused, or could not be read\n"
    "  2  the call was wrong\n"
    "  3  something in it is false: a damaged or missing block, a digest that does not match, dropped scans, "
    "a\n"
    "     step backwards in time; a pause between two blocks is told but is not false\n"
    "\n"
    "Example:\n"
    "  halfwheel-cli inspect samples/aldermoor-sprint --format json\n";

typedef struct {
    HwStrip *strip; /* refreshed: knows all damage */
    GPtrArray *problems;
    bool false_found;
    bool digest_known;
    HwDigest digest;
    guint notes;
} HwInspection;

static void
inspection_clear(HwInspection *inspection)
{
    g_clear_pointer(&inspection->strip, hw_strip_unref);
    g_clear_pointer(&inspection->problems, g_ptr_array_unref);
}

G_DEFINE_AUTO_CLEANUP_CLEAR_FUNC(HwInspection, inspection_clear)

static bool G_GNUC_PRINTF(2, 3) add_problem(HwInspection *inspection, const char *format, ...)
{
    va_list values;
    va_start(values, format);
    g_ptr_array_add(inspection->problems, g_strdup_vprintf(format, values));
    va_end(values);
    return true;
}

static bool
check_blocks(HwInspection *inspection, GCancellable *cancellable, GError **error)
{
    g_auto(HwTerminalProgress) progress = hw_terminal_progress("Decoding");
    guint n_blocks = hw_strip_get_n_blocks(inspection->strip);
    for (guint i = 0; i < n_blocks; i++) {
        hw_terminal_progress_report((double)i / n_blocks, &progress);
        g_autoptr(GError) fault = NULL;
        guint notes = 0;
        /* Damage is learnt from the refreshed strip; only a stop ends the check. */
        if (!hw_strip_check_block(inspection->strip, i, &notes, cancellable, &fault) &&
            g_error_matches(fault, G_IO_ERROR, G_IO_ERROR_CANCELLED)) {
            g_propagate_error(error, g_steal_pointer(&fault));
            return false;
        }
        inspection->notes |= notes;
    }
    HwStrip *refreshed = hw_strip_refreshed(inspection->strip, error);
    if (refreshed == NULL)
        return false;
    hw_strip_unref(inspection->strip);
    inspection->strip = refreshed;
    return true;
}

static bool
take_digest(HwInspection *inspection, HwRecording *recording, GCancellable *cancellable, GError **error)
{
    g_auto(HwTerminalProgress) progress = hw_terminal_progress("Adding up the digest");
    g_autoptr(GError) fault = NULL;
    if (hw_recording_digest(recording, hw_terminal_progress_report, &progress, cancellable,
                            &inspection->digest_known, &inspection->digest, &fault))
        return true;
    if (g_error_matches(fault, G_IO_ERROR, G_IO_ERROR_CANCELLED)) {
        g_propagate_error(error, g_steal_pointer(&fault));
        return false;
    }
    inspection->digest_known = false;
    inspection->false_found = true;
    return add_problem(inspection, "%s", fault->message);
}

/* True where a void lies inside a block, so that a camera that was scanning lost scans; between blocks it is
 * a pause, honestly stamped. */
static bool
is_inside_block(HwStrip *strip, const HwVoid *gap)
{
    if (gap->after_column <= 0 || gap->after_column >= hw_strip_get_n_columns(strip))
        return false;
    guint block;
    double place;
    return hw_strip_locate(strip, (double)gap->after_column, &block, &place) && place > 0.0;
}

static void
judge_time_base(HwInspection *inspection)
{
    const HwTimeBase *base = hw_strip_get_time_base(inspection->strip);
    for (guint i = 0; i < hw_time_base_get_n_voids(base); i++) {
        if (is_inside_block(inspection->strip, hw_time_base_get_void(base, i)))
            inspection->false_found = true;
    }
    if (hw_time_base_get_n_drops(base) > 0)
        inspection->false_found = true;
    for (guint i = 1; i < hw_time_base_get_n_runs(base); i++) {
        if (hw_time_base_get_run(base, i)->clock != hw_time_base_get_run(base, i - 1)->clock)
            inspection->false_found = true;
    }
    for (guint i = 0; i < hw_time_base_get_n_problems(base); i++)
        add_problem(inspection, "%s", hw_time_base_get_problem(base, i));
}

/* A damaged block that the time base has no void for (the last, with nothing to count its columns by) is told
 * here. */
static void
judge_blocks(HwInspection *inspection)
{
    for (guint i = 0; i < hw_strip_get_n_blocks(inspection->strip); i++) {
        const char *damage = hw_strip_get_damage(inspection->strip, i);
        if (damage == NULL)
            continue;
        inspection->false_found = true;
        bool told = false;
        for (guint k = 0; k < inspection->problems->len && !told; k++)
            told = strstr(g_ptr_array_index(inspection->problems, k), damage) != NULL;
        if (!told)
            add_problem(inspection, "%s%s", damage, g_str_has_suffix(damage, ".") ? "" : ".");
    }
}

static void
add_notes(HwInspection *inspection)
{
    static const struct {
        HwRasterNote note;
        const char *what;
    } all[] = {
        { HW_RASTER_NOTE_GAMA, "gamma (gAMA)" },
        { HW_RASTER_NOTE_ICC, "a colour profile (iCCP)" },
        { HW_RASTER_NOTE_CHRM, "primaries (cHRM)" },
        { HW_RASTER_NOTE_ORIENTATION, "an orientation (Exif)" },
    };
    for (guint i = 0; i < G_N_ELEMENTS(all); i++) {
        if (inspection->notes & all[i].note)
            add_problem(inspection, "Blocks state %s; it is ignored, samples are taken as stored.",
                        all[i].what);
    }
}

static bool
inspect(HwInspection *inspection, HwRecording *recording, bool quick, GCancellable *cancellable,
        GError **error)
{
    g_autoptr(HwBlockCache) cache = hw_block_cache_new(CACHE_BYTES);
    inspection->problems = g_ptr_array_new_with_free_func(g_free);
    inspection->strip = hw_strip_new(recording, cache, error);
    if (inspection->strip == NULL)
        return false;
    if (!quick && !check_blocks(inspection, cancellable, error))
        return false;
    if (!take_digest(inspection, recording, cancellable, error))
        return false;
    judge_time_base(inspection);
    judge_blocks(inspection);
    if (!hw_recording_is_complete(recording))
        add_problem(inspection,
                    "The recording says it is still being written; inspect it again when it is done.");
    add_notes(inspection);
    if (quick)
        add_problem(inspection,
                    "Blocks were neither decoded nor held against their digests (--quick), so damage "
                    "in them is not known.");
    return true;
}

/* jansson takes nothing but UTF-8; reasons may quote what a file held. */
static json_t *
json_text(const char *text)
{
    g_autofree char *valid = g_utf8_make_valid(text, -1);
    return json_string(valid);
}

static char *
dup_json(const HwInspection *inspection, HwRecording *recording)
{
    const HwTimeBase *base = hw_strip_get_time_base(inspection->strip);
    g_autoptr(json_t) root = json_object();
    json_object_set_new(root, "halfwheel", json_string("inspect/1"));
    json_object_set_new(root, "columns", json_integer(hw_strip_get_n_columns(inspection->strip)));
    json_object_set_new(root, "rows", json_integer(hw_strip_get_n_rows(inspection->strip)));
    json_object_set_new(root, "duration_ns", json_integer(hw_time_base_get_duration_ns(base)));
    json_object_set_new(root, "rate_hz", json_real(hw_recording_get_scan(recording)->rate_hz));
    json_t *voids = json_array();
    for (guint i = 0; i < hw_time_base_get_n_voids(base); i++) {
        const HwVoid *gap = hw_time_base_get_void(base, i);
        json_t *entry = json_object();
        json_object_set_new(entry, "after_column", json_integer(gap->after_column));
        json_object_set_new(entry, "duration_ns", json_integer(gap->duration_ns));
        json_object_set_new(entry, "reason", json_text(gap->reason));
        json_array_append_new(voids, entry);
    }
    json_object_set_new(root, "voids", voids);
    json_object_set_new(root, "digest",
                        inspection->digest_known ? json_string(inspection->digest.hex) : json_null());
    json_t *problems = json_array();
    for (guint i = 0; i < inspection->problems->len; i++)
        json_array_append_new(problems, json_text(g_ptr_array_index(inspection->problems, i)));
    json_object_set_new(root, "problems", problems);
    return hw_json_dup_text(root);
}

static void G_GNUC_PRINTF(3, 4) append_line(GString *text, const char *label, const char *format, ...)
{
    g_string_append_printf(text, "%-10s ", label);
    va_list values;
    va_start(values, format);
    g_autofree char *value = g_strdup_vprintf(format, values);
    va_end(values);
    g_autofree char *line = hw_cli_dup_line(value);
    g_string_append_printf(text, "%s\n", line);
}

static void
append_head(GString *text, HwRecording *recording)
{
    static const char *const travels[] = { "not said", "left", "right" };
    const HwScan *scan = hw_recording_get_scan(recording);
    append_line(text, "Recording", "%s", hw_recording_get_path(recording));
    if (*hw_recording_get_title(recording) != '\0')
        append_line(text, "Title", "%s", hw_recording_get_title(recording));
    g_autofree char *epoch = hw_instant_dup_text(hw_recording_get_epoch(recording), 9);
    append_line(text, "Epoch", "%s", epoch);
    append_line(text, "Camera", "%s; travel %s", hw_recording_get_camera(recording),
                travels[hw_recording_get_travel(recording)]);
    g_autofree char *rate = hw_number_dup_double(scan->rate_hz);
    g_autofree char *exposure = hw_number_dup_double((double)scan->exposure_fs / 1e9);
    append_line(text, "Scan rate", "%s Hz (nominal); exposure %s%s", rate,
                scan->exposure_known ? exposure : "not said", scan->exposure_known ? " µs" : "");
}

static char *
dup_text(const HwInspection *inspection, HwRecording *recording)
{
    const HwTimeBase *base = hw_strip_get_time_base(inspection->strip);
    GString *text = g_string_new(NULL);
    append_head(text, recording);
    append_line(text, "Columns", "%" G_GINT64_FORMAT " in %u blocks; %d rows",
                hw_strip_get_n_columns(inspection->strip), hw_strip_get_n_blocks(inspection->strip),
                hw_strip_get_n_rows(inspection->strip));
    g_autofree char *duration = hw_duration_dup_text(hw_time_base_get_duration_ns(base), 9);
    append_line(text, "Duration", "%s", duration);
    append_line(text, "Digest", "%s", inspection->digest_known ? inspection->digest.hex : "not known");
    append_line(text, "Voids", "%u", hw_time_base_get_n_voids(base));
    for (guint i = 0; i < hw_time_base_get_n_voids(base); i++) {
        const HwVoid *gap = hw_time_base_get_void(base, i);
        g_autofree char *length = hw_duration_dup_text(gap->duration_ns, 9);
        append_line(text, "", "after column %" G_GINT64_FORMAT ", %s: %s", gap->after_column, length,
                    gap->reason);
    }
    append_line(text, "Problems", "%u", inspection->problems->len);
    for (guint i = 0; i < inspection->problems->len; i++)
        append_line(text, "", "%s", (const char *)g_ptr_array_index(inspection->problems, i));
    append_line(text, "Verdict", "%s",
                inspection->false_found ? "something in this recording is false; see the problems"
                                        : "nothing false was found");
    return g_string_free(text, FALSE);
}

static bool
run(HwCall *call, HwExit *status, GError **error)
{
    gboolean quick = FALSE;
    g_auto(HwScanOptions) scan = { 0 };
    g_auto(HwResultOptions) result = { 0 };
    const GOptionEntry entries[] = {
        { "quick", 0, 0, G_OPTION_ARG_NONE, &quick, "Decode no block", NULL },
        { "format", 0, 0, G_OPTION_ARG_FILENAME, &result.format, "text (unless said) or json", "FORMAT" },
        HW_OUTPUT_ENTRIES(result, "Write there instead of standard output"),
        { NULL },
    };
    const GOptionEntry image_entries[] = { HW_SCAN_ENTRIES(scan), { NULL } };
    const HwOptionTable tables[] = { { "Where RECORDING is a bare image:", image_entries },
                                     { "Options:", entries } };
    HwParse parsed =
        hw_cli_parse(call, &hw_verb_inspect, about, tables, G_N_ELEMENTS(tables), more, 1, 1, error);
    if (parsed != HW_PARSE_GO)
        return parsed == HW_PARSE_HELP;
    HwFormat format;
    if (!hw_result_options_get_format(&result, false, &format, error))
        return false;

    g_autoptr(HwRecording) recording = hw_cli_open_recording(call->argv[1], &scan, error);
    if (recording == NULL || !hw_cli_check_output(result.output, recording, error))
        return false;
    g_auto(HwInspection) inspection = { 0 };
    if (!inspect(&inspection, recording, quick, call->cancellable, error))
        return false;
    g_autofree char *text =
        format == HW_FORMAT_JSON ? dup_json(&inspection, recording) : dup_text(&inspection, recording);
    if (!hw_result_options_write(&result, text, error))
        return false;
    *status = inspection.false_found ? HW_EXIT_FALSE : HW_EXIT_DONE;
    return true;
}

const HwVerb hw_verb_inspect = {
    "inspect",
    "RECORDING",
    "Tell a recording's columns, duration, voids, digest and problems",
    run,
};
