/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The error domain of recordings and strips. Every message is one whole sentence: the file, the place in it,
 * the mend. */
#pragma once

#include <glib.h>

typedef enum {
    HW_STRIP_ERROR_MANIFEST, /* recording.json is not what it must be: the recording is refused whole */
    HW_STRIP_ERROR_DAMAGED,  /* one block cannot be read: a void, and the message is its reason */
    HW_STRIP_ERROR_EMPTY,    /* no block of the recording can be read */
    HW_STRIP_ERROR_PLACE     /* a column or instant that the strip does not have */
} HwStripError;

#define HW_STRIP_ERROR (hw_strip_error_quark())
GQuark hw_strip_error_quark(void);
