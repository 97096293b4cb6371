/* SPDX-License-Identifier: GPL-3.0-or-later */
/* The error domain of cases. Every message is one whole sentence: the file, the place in it, the mend. */
#pragma once

#include <glib.h>

typedef enum {
    HW_CASE_ERROR_FORMAT,    /* no case of ours, of a newer program, or cut */
    HW_CASE_ERROR_FALSE,     /* its journal or tables contradict themselves */
    HW_CASE_ERROR_READ_ONLY, /* somebody else writes it, or it lies where nothing can be written */
    HW_CASE_ERROR_ACT,       /* an act that cannot be made */
    HW_CASE_ERROR_IO         /* the disk refused; nothing of the act was kept */
} HwCaseError;

#define HW_CASE_ERROR (hw_case_error_quark())
GQuark hw_case_error_quark(void);
