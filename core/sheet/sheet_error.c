/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/sheet/sheet_error.h"

GQuark
hw_sheet_error_quark(void)
{
    return g_quark_from_static_string("hw-sheet-error-quark");
}
