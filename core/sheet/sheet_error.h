/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The error domain of sheets and pictures. Every message is one whole sentence: the file, the place in it,
 * the mend. */
#pragma once

#include <glib.h>

typedef enum {
    HW_SHEET_ERROR_PLACE,  /* a rider or stretch that is not on the picture */
    HW_SHEET_ERROR_FORMAT, /* a kind of file that is not written */
    HW_SHEET_ERROR_DRAWING /* Cairo, libpng or the memory failed */
} HwSheetError;

#define HW_SHEET_ERROR (hw_sheet_error_quark())
GQuark hw_sheet_error_quark(void);
