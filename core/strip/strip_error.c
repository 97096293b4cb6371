/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/strip/strip_error.h"

GQuark
hw_strip_error_quark(void)
{
    return g_quark_from_static_string("hw-strip-error-quark");
}
