/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/base/base_error.h"

GQuark
hw_base_error_quark(void)
{
    return g_quark_from_static_string("hw-base-error-quark");
}
