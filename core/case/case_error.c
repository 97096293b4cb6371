/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/case/case_error.h"

GQuark
hw_case_error_quark(void)
{
    return g_quark_from_static_string("hw-case-error-quark");
}
