/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "app/cli/finish_files.h"

#include "core/base/number.h"

#include <math.h>

#define CACHE_BYTES ((size_t)64 << 20)

void
hw_finish_options_clear(HwFinishOptions *options)
{
    g_clear_pointer(&options->markers, g_free);
    g_clear_pointer(&options->start_list, g_free);
    g_clear_pointer(&options->map, g_free);
    g_clear_pointer(&options->race, g_free);
    g_clear_pointer(&options->rules, g_free);
    g_clear_pointer(&options->start, g_free);
    g_clear_pointer(&options->calibration, g_free);
    g_clear_pointer(&options->passage, g_free);
}

void
hw_finish_files_clear(HwFinishFiles *files)
{
    g_clear_pointer(&files->list, hw_finish_list_free);
    g_clear_pointer(&files->calibration, hw_calibration_free);
    g_clear_pointer(&files->rules, hw_rules_free);
    g_clear_pointer(&files->race, hw_race_free);
    g_clear_pointer(&files->start_list, hw_start_list_free);
    g_clear_pointer(&files->markers, hw_markers_free);
    g_clear_pointer(&files->strip, hw_strip_unref);
    g_clear_pointer(&files->recording, hw_recording_unref);
    if (files->read != NULL)
        g_string_free(g_steal_pointer(&files->read), TRUE);
}

static void G_GNUC_PRINTF(3, 4) tell(HwFinishFiles *files, const char *label, const char *format, ...)
{
    va_list values;
    va_start(values, format);
    g_autofree char *value = g_strdup_vprintf(format, values);
    va_end(values);
    g_autofree char *line = hw_cli_dup_line(value);
    g_string_append_printf(files->read, "%-12s %s\n", label, line);
}

/* The file named, else the one beside the recording, else NULL; *how says which, for people. */
static char *
dup_path(const HwRecording *recording, const char *named, const char *suffix, const char **how)
{
    *how = named != NULL ? "" : " (found beside the recording)";
    return named != NULL ? g_strdup(named) : hw_recording_dup_beside(recording, suffix);
}

static bool
read_markers(HwFinishFiles *files, const HwFinishOptions *options, bool needed, GError **error)
{
    const char *how;
    g_autofree char *path = dup_path(files->recording, options->markers, ".markers.csv", &how);
    if (path == NULL) {
        if (!needed)
            return true;
        g_set_error(error, HW_CLI_ERROR, HW_CLI_ERROR_CALL,
                    "There are no markers: name their file with --markers, or put it beside the recording as "
                    "%s.markers.csv.",
                    hw_recording_get_path(files->recording));
        return false;
    }
    files->markers = hw_markers_read(path, files->recording, error);
    if (files->markers == NULL)
        return false;
    tell(files, "Markers", "%s%s: %u", path, how, files->markers->markers->len);
    return true;
}

static bool
read_start_list(HwFinishFiles *files, const HwFinishOptions *options, GError **error)
{
    const char *how;
    g_autofree char *path = dup_path(files->recording, options->start_list, ".startlist.csv", &how);
    if (path == NULL && options->map != NULL) {
        g_set_error_literal(error, HW_CLI_ERROR, HW_CLI_ERROR_CALL,
                            "--map goes with a start list, and there is none; name it with --startlist.");
        return false;
    }
    if (path == NULL)
        return true;
    files->start_list = hw_start_list_read(path, options->map, error);
    if (files->start_list == NULL)
        return false;
    tell(files, "Start list", "%s%s: %u riders; %s", path, how, files->start_list->riders->len,
         files->start_list->understood);
    return true;
}

static bool
read_race(HwFinishFiles *files, const HwFinishOptions *options, GError **error)
{
    const char *how;
    g_autofree char *path = dup_path(files->recording, options->race, ".race.json", &how);
    if (path == NULL)
        return true;
    files->race = hw_race_read(path, error);
    if (files->race == NULL)
        return false;
    tell(files, "Race", "%s%s", path, how);
    return true;
}

static bool
read_calibration(HwFinishFiles *files, const HwFinishOptions *options, GError **error)
{
    const char *how;
    g_autofree char *path = dup_path(files->recording, options->calibration, ".calibration.json", &how);
    if (path == NULL)
        return true;
    HwCalibration *calibration = files->calibration = hw_calibration_read(path, error);
    if (calibration == NULL || !hw_calibration_check(calibration, files->recording, path, error))
        return false;
    /* Each with the digits its uncertainty leaves meaning to. */
    int decimals =
        calibration->u_rate_hz > 0.0 ? CLAMP(1 - (int)floor(log10(calibration->u_rate_hz)), 0, 9) : 9;
    g_autofree char *rate = hw_number_dup_fixed(calibration->rate_hz, decimals);
    g_autofree char *spread = hw_number_dup_fixed(2.0 * calibration->u_rate_hz, decimals);
    g_autofree char *made =
        *calibration->made != '\0' ? g_strconcat(", made ", calibration->made, NULL) : g_strdup("");
    g_autofree char *by =
        *calibration->by != '\0' ? g_strconcat(" by ", calibration->by, NULL) : g_strdup("");
    tell(files, "Calibration", "%s%s: scan rate %s ± %s Hz (k = 2)%s%s", path, how, rate, spread, made, by);
    return true;
}

static bool
read_rules(HwFinishFiles *files, const HwFinishOptions *options, GError **error)
{
    if (options->rules == NULL)
        return true;
    files->rules = hw_rules_read(options->rules, error);
    return files->rules != NULL;
}

static bool
read_start(HwFinishFiles *files, const HwFinishOptions *options, GError **error)
{
    if (options->start == NULL)
        return true;
    g_autoptr(GError) fault = NULL;
    if (hw_cli_text("--start", options->start, error) &&
        hw_instant_parse(options->start, &files->start, &fault)) {
        tell(files, "Start", "%s", options->start);
        return true;
    }
    if (fault != NULL) {
        g_set_error(error, HW_CLI_ERROR, HW_CLI_ERROR_CALL, "--start: %s.", fault->message);
    }
    return false;
}

static bool
derive(HwFinishFiles *files, const HwFinishOptions *options, GCancellable *cancellable, GError **error)
{
    HwFinishInput input = {
        .strip = files->strip,
        .markers = files->markers,
        .start_list = files->start_list,
        .race = files->race,
        .rules = files->rules,
        .gun = options->start != NULL ? &files->start : NULL,
        .calibration = files->calibration,
        .passage = options->passage,
    };
    files->list = hw_finish_list_derive(&input, cancellable, error);
    files->strip = input.strip;
    return files->list != NULL;
}

bool
hw_finish_files_read(HwRecording *recording, const HwFinishOptions *options, bool markers_needed,
                     GCancellable *cancellable, HwFinishFiles *files, GError **error)
{
    files->recording = hw_recording_ref(recording);
    files->read = g_string_new(NULL);
    tell(files, "Recording", "%s", hw_recording_get_path(recording));
    if (!hw_cli_text("--passage", options->passage, error) || !hw_cli_text("--map", options->map, error))
        return false;
    if (!read_start(files, options, error) || !read_rules(files, options, error) ||
        !read_markers(files, options, markers_needed, error) || !read_start_list(files, options, error) ||
        !read_race(files, options, error) || !read_calibration(files, options, error))
        return false;
    g_autoptr(HwBlockCache) cache = hw_block_cache_new(CACHE_BYTES);
    files->strip = hw_strip_new(recording, cache, error);
    if (files->strip == NULL)
        return false;
    return files->markers == NULL || derive(files, options, cancellable, error);
}
