/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The error domain of lists and rules. Every message is one whole sentence: the file, the place in it, the
 * mend. */
#pragma once

#include <glib.h>

typedef enum {
    HW_RULING_ERROR_START_LIST,
    HW_RULING_ERROR_MARKERS,
    HW_RULING_ERROR_RACE,
    HW_RULING_ERROR_RULES
} HwRulingError;

#define HW_RULING_ERROR (hw_ruling_error_quark())
GQuark hw_ruling_error_quark(void);
