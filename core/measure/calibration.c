/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/measure/calibration.h"

#include "core/base/input.h"
#include "core/base/json.h"
#include "core/base/limits.h"
#include "core/base/number.h"
#include "core/measure/measure_error.h"

#include <math.h>
#include <string.h>

enum { CALIBRATION_VERSION = 1 };

void
hw_calibration_free(HwCalibration *calibration)
{
    if (calibration == NULL)
        return;
    g_free(calibration->camera);
    g_free(calibration->recording);
    g_free(calibration->made);
    g_free(calibration->by);
    g_free(calibration);
}

/* A positive decimal with at most nine places, in units of 10^-9. */
static bool
read_decimal(const json_t *root, const char *key, HwJsonNeed need, double max, const char *path,
             int64_t *scaled, GError **error)
{
    double value = NAN;
    if (!hw_json_get_double(root, key, need, 0.0, max, path, &value, error))
        return false;
    if (isnan(value))
        return true;
    if (!hw_number_nine_decimals(value, scaled)) {
        g_set_error(error, HW_MEASURE_ERROR, HW_MEASURE_ERROR_CALIBRATION,
                    "%s: “%s” has more than nine decimals; round it.", path, key);
        return false;
    }
    return true;
}

static bool
read_fields(const json_t *root, const char *path, HwCalibration *calibration, GError **error)
{
    const char *camera = NULL, *recording = "", *made = "", *by = "";
    json_t *plane = NULL;
    int64_t exposure_npu = 0;
    if (!hw_json_get_string(root, "camera", HW_JSON_REQUIRED, path, &camera, error) ||
        !hw_json_get_string(root, "recording", HW_JSON_OPTIONAL, path, &recording, error) ||
        !hw_json_get_string(root, "made", HW_JSON_OPTIONAL, path, &made, error) ||
        !hw_json_get_string(root, "by", HW_JSON_OPTIONAL, path, &by, error) ||
        !read_decimal(root, "nominal_rate_hz", HW_JSON_REQUIRED, HW_MAX_RATE_HZ, path,
                      &calibration->nominal_rate_nhz, error) ||
        !read_decimal(root, "exposure_us", HW_JSON_OPTIONAL, 1e6, path, &exposure_npu, error) ||
        !hw_json_get_double(root, "rate_hz", HW_JSON_REQUIRED, 1e-9, 2.0 * HW_MAX_RATE_HZ, path,
                            &calibration->rate_hz, error) ||
        !hw_json_get_double(root, "u_rate_hz", HW_JSON_REQUIRED, 0.0, HW_MAX_RATE_HZ, path,
                            &calibration->u_rate_hz, error) ||
        !hw_json_get_object(root, "plane", HW_JSON_OPTIONAL, path, &plane, error))
        return false;
    calibration->camera = g_strdup(camera);
    calibration->recording = g_strdup(recording);
    calibration->made = g_strdup(made);
    calibration->by = g_strdup(by);
    calibration->exposure_fs = exposure_npu; /* 10^-9 µs are 10^-15 s */
    calibration->has_plane = plane != NULL;
    return true;
}

HwCalibration *
hw_calibration_parse(const char *text, gsize size, const char *label, GError **error)
{
    g_autoptr(json_t) root = hw_json_parse(text, size, label, error);
    if (root == NULL)
        return NULL;
    int64_t version = 0;
    if (!json_is_object(root) || json_object_get(root, "halfwheel_calibration") == NULL) {
        g_set_error(error, HW_MEASURE_ERROR, HW_MEASURE_ERROR_CALIBRATION,
                    "%s is no calibration: “halfwheel_calibration” is missing; name the right file.", label);
        return NULL;
    }
    if (!hw_json_get_int64(root, "halfwheel_calibration", HW_JSON_REQUIRED, CALIBRATION_VERSION,
                           CALIBRATION_VERSION, label, &version, error))
        return NULL;
    g_autoptr(HwCalibration) calibration = g_new0(HwCalibration, 1);
    return read_fields(root, label, calibration, error) ? g_steal_pointer(&calibration) : NULL;
}

HwCalibration *
hw_calibration_read(const char *path, GError **error)
{
    size_t size;
    g_autofree char *text = hw_input_read(path, HW_MAX_MANIFEST_BYTES, &size, error);
    return text != NULL ? hw_calibration_parse(text, size, path, error) : NULL;
}

/* "an exposure of 400 µs, the recording has 200 µs"; both given in 10^-9 of the unit. */
static char *
dup_difference(const char *what, const char *unit, int64_t ours, int64_t theirs)
{
    g_autofree char *one = hw_number_dup_double((double)ours / 1e9);
    g_autofree char *other = hw_number_dup_double((double)theirs / 1e9);
    return g_strdup_printf("%s of %s %s, the recording has %s %s", what, one, unit, other, unit);
}

bool
hw_calibration_check(const HwCalibration *calibration, const HwRecording *recording, const char *path,
                     GError **error)
{
    const HwScan *scan = hw_recording_get_scan(recording);
    const char *camera = hw_recording_get_camera(recording);
    g_autofree char *difference = NULL;
    if (strcmp(calibration->camera, camera) != 0)
        difference = g_strdup_printf("camera %s, the recording is of camera %s", calibration->camera, camera);
    else if (calibration->nominal_rate_nhz != scan->rate_nhz)
        difference =
            dup_difference("a nominal scan rate", "Hz", calibration->nominal_rate_nhz, scan->rate_nhz);
    else if (calibration->exposure_fs != scan->exposure_fs)
        difference = dup_difference("an exposure", "µs", calibration->exposure_fs, scan->exposure_fs);
    if (difference == NULL)
        return true;
    g_set_error(error, HW_MEASURE_ERROR, HW_MEASURE_ERROR_OTHER_SETUP,
                "%s was made for %s; use the calibration of this set-up, or none.", path, difference);
    return false;
}
