/* SPDX-License-Identifier: GPL-3.0-or-later */
/* A calibration as kept in a file (halfwheel_calibration 1): what a timing crew found out about one camera at
 * one nominal rate and exposure. It holds for any recording of that camera with these settings, and for no
 * other. */
#pragma once

#include "core/strip/recording.h"

#include <glib.h>
#include <stdbool.h>
#include <stdint.h>

typedef struct {
    char *camera;
    char *recording; /* identity it was made on */
    char *made;      /* RFC 3339 */
    char *by;
    int64_t nominal_rate_nhz; /* 10^-9 Hz */
    int64_t exposure_fs;      /* 10^-15 s; 0 where none was stated */
    double rate_hz;
    double u_rate_hz;
    bool has_plane; /* alignment was measured */
} HwCalibration;

/* Reads a calibration file (owned by the caller). */
HwCalibration *hw_calibration_read(const char *path, GError **error);
HwCalibration *hw_calibration_parse(const char *text, gsize size, const char *label, GError **error);
void hw_calibration_free(HwCalibration *calibration);

/* True where it holds for the recording; else HW_MEASURE_ERROR_OTHER_SETUP names what differs, and by how
 * much. */
bool hw_calibration_check(const HwCalibration *calibration, const HwRecording *recording, const char *path,
                          GError **error);

G_DEFINE_AUTOPTR_CLEANUP_FUNC(HwCalibration, hw_calibration_free)
