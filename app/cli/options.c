/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "app/cli/options.h"

#include "core/base/base_error.h"
#include "core/base/limits.h"
#include "core/base/number.h"
#include "core/base/output.h"

#include <stdlib.h>
#include <string.h>

static const char *const stamp_words[] = { "start", "middle", "end", NULL };
static const char *const side_words[] = { "left", "right", NULL };

void
hw_scan_options_clear(HwScanOptions *options)
{
    g_clear_pointer(&options->rate, g_free);
    g_clear_pointer(&options->epoch, g_free);
    g_clear_pointer(&options->exposure_us, g_free);
    g_clear_pointer(&options->stamp, g_free);
    g_clear_pointer(&options->later, g_free);
    g_clear_pointer(&options->travel, g_free);
    g_clear_pointer(&options->transfer, g_free);
}

const char *
hw_scan_options_get_first(const HwScanOptions *options)
{
    const struct {
        const char *value;
        const char *option;
    } all[] = {
        { options->rate, "--rate" },
        { options->epoch, "--epoch" },
        { options->exposure_us, "--exposure-us" },
        { options->stamp, "--stamp" },
        { options->later, "--later" },
        { options->travel, "--travel" },
        { options->transfer, "--transfer" },
    };
    for (guint i = 0; i < G_N_ELEMENTS(all); i++) {
        if (all[i].value != NULL)
            return all[i].option;
    }
    return NULL;
}

static bool call_error(GError **error, const char *format, ...) G_GNUC_PRINTF(2, 3);

static bool
call_error(GError **error, const char *format, ...)
{
    va_list values;
    va_start(values, format);
    g_autoptr(GError) made = g_error_new_valist(HW_CLI_ERROR, HW_CLI_ERROR_CALL, format, values);
    va_end(values);
    g_propagate_error(error, g_steal_pointer(&made));
    return false;
}

/* A decimal above zero in units of 10^-9. */
static bool
read_decimal(const char *option, const char *text, int64_t max, const char *range, int64_t *value,
             GError **error)
{
    int64_t scaled;
    if (hw_number_parse_decimal(text, 9, &scaled) && scaled > 0 && scaled <= max) {
        *value = scaled;
        return true;
    }
    g_autofree char *shown = hw_cli_dup_line(text);
    return call_error(error, "%s “%s” is not a decimal number %s with at most 9 places; correct it.", option,
                      shown, range);
}

static bool
read_side(const char *option, const char *text, HwSide *side, GError **error)
{
    int place;
    if (text == NULL)
        return true;
    if (!hw_cli_word(option, text, side_words, &place, error))
        return false;
    *side = place == 0 ? HW_SIDE_LEFT : HW_SIDE_RIGHT;
    return true;
}

static bool
read_stamp(const HwScanOptions *options, HwImageScan *scan, GError **error)
{
    int place = HW_STAMP_MIDDLE;
    if (options->stamp != NULL && !hw_cli_word("--stamp", options->stamp, stamp_words, &place, error))
        return false;
    scan->stamp = (HwStampPlace)place;
    if (options->exposure_us != NULL) {
        if (!read_decimal("--exposure-us", options->exposure_us, 1000000 * HW_NS_PER_S,
                          "above 0 and at most 1000000", &scan->exposure_fs, error))
            return false;
        scan->exposure_known = true;
    }
    if (scan->stamp != HW_STAMP_MIDDLE && !scan->exposure_known)
        return call_error(error,
                          "--stamp %s needs --exposure-us, or the middle of the exposure is not known.",
                          options->stamp);
    return true;
}

bool
hw_scan_options_read(const HwScanOptions *options, const char *image, HwImageScan *scan, GError **error)
{
    if (options->rate == NULL || options->epoch == NULL) {
        g_autofree char *shown = hw_cli_dup_line(image);
        return call_error(error, "%s is a bare image: say its scan rate and instant with --rate and --epoch.",
                          shown);
    }
    HwImageScan read = { .later = HW_SIDE_RIGHT, .travel = HW_SIDE_UNKNOWN };
    if (!read_decimal("--rate", options->rate, HW_MAX_RATE_HZ * HW_NS_PER_S, "above 0 and at most 1000000",
                      &read.rate_nhz, error))
        return false;
    g_autoptr(GError) fault = NULL;
    if (!g_utf8_validate(options->epoch, -1, NULL) ||
        !hw_instant_parse(options->epoch, &read.epoch, &fault)) {
        return call_error(error, "--epoch: %s.", fault != NULL ? fault->message : "the text is not UTF-8");
    }
    read.epoch_text = options->epoch;
    if (!read_stamp(options, &read, error) || !read_side("--later", options->later, &read.later, error) ||
        !read_side("--travel", options->travel, &read.travel, error))
        return false;
    if (options->transfer != NULL && !hw_transfer_parse(options->transfer, &read.transfer, &fault))
        return call_error(error, "--transfer: %s", fault->message);
    *scan = read;
    return true;
}

HwRecording *
hw_cli_open_recording(const char *path, const HwScanOptions *options, GError **error)
{
    if (hw_recording_path_is_image(path)) {
        HwImageScan scan;
        return hw_scan_options_read(options, path, &scan, error) ? hw_recording_open_image(path, &scan, error)
                                                                 : NULL;
    }
    const char *given = hw_scan_options_get_first(options);
    if (given != NULL) {
        g_autofree char *shown = hw_cli_dup_line(path);
        call_error(error, "%s goes with a bare image only, and %s is none; leave it out.", given, shown);
        return NULL;
    }
    return hw_recording_open(path, error);
}

bool
hw_cli_lies_in(const char *path, const char *folder)
{
    char *inner = realpath(path, NULL);
    char *outer = realpath(folder, NULL);
    size_t length = outer != NULL ? strlen(outer) : 0;
    bool lies = inner != NULL && outer != NULL && strncmp(inner, outer, length) == 0 &&
                (inner[length] == '\0' || inner[length] == '/' || outer[length - 1] == '/');
    free(inner);
    free(outer);
    return lies;
}

bool
hw_cli_check_output(const char *output, const HwRecording *recording, GError **error)
{
    if (output == NULL || strcmp(output, "-") == 0)
        return true;
    const char *evidence = hw_recording_get_path(recording);
    g_autofree char *parent = g_path_get_dirname(output);
    if (!hw_cli_lies_in(output, evidence) && !hw_cli_lies_in(parent, evidence))
        return true;
    g_set_error(error, HW_BASE_ERROR, HW_BASE_ERROR_UNSAFE,
                "%s lies inside the recording %s, which is never changed; name a place beside it.", output,
                evidence);
    return false;
}

void
hw_result_options_clear(HwResultOptions *options)
{
    g_clear_pointer(&options->format, g_free);
    g_clear_pointer(&options->output, g_free);
}

bool
hw_result_options_get_format(const HwResultOptions *options, bool with_csv, HwFormat *format, GError **error)
{
    static const char *const with[] = { "text", "json", "csv", NULL };
    static const char *const without[] = { "text", "json", NULL };
    int place = HW_FORMAT_TEXT;
    if (options->format != NULL &&
        !hw_cli_word("--format", options->format, with_csv ? with : without, &place, error))
        return false;
    *format = (HwFormat)place;
    return true;
}

bool
hw_result_options_write(const HwResultOptions *options, const char *text, GError **error)
{
    const char *path = options->output != NULL ? options->output : "-";
    return hw_output_write_file(path, options->force, text, strlen(text), error);
}
