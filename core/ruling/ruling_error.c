/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/ruling/ruling_error.h"

GQuark
hw_ruling_error_quark(void)
{
    return g_quark_from_static_string("hw-ruling-error-quark");
}
