/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The error domain of measuring. Every message is one whole sentence: the file, the place in it, the mend. */
#pragma once

#include <glib.h>

typedef enum {
    HW_MEASURE_ERROR_CALIBRATION, /* a calibration file that is not one */
    HW_MEASURE_ERROR_OTHER_SETUP  /* a calibration of another camera, rate or exposure */
} HwMeasureError;

#define HW_MEASURE_ERROR (hw_measure_error_quark())
GQuark hw_measure_error_quark(void);
