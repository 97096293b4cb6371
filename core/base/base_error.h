/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The error domain of the lowest floor. Every message is one whole sentence: the file, the place in it, the
 * mend. */
#pragma once

#include <glib.h>

typedef enum {
    HW_BASE_ERROR_SYNTAX,   /* text that does not follow its grammar */
    HW_BASE_ERROR_RANGE,    /* a well-formed value outside its limits */
    HW_BASE_ERROR_UNSAFE,   /* a name or file that could lead outside the recording */
    HW_BASE_ERROR_EXISTS,   /* an output that is there already */
    HW_BASE_ERROR_IO,       /* the system refused; the message carries its reason */
    HW_BASE_ERROR_NOT_FOUND /* a file that is not there */
} HwBaseError;

#define HW_BASE_ERROR (hw_base_error_quark())
GQuark hw_base_error_quark(void);
