/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/measure/measure_error.h"

GQuark
hw_measure_error_quark(void)
{
    return g_quark_from_static_string("hw-measure-error-quark");
}
