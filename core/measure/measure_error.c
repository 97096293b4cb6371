/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/measure/measure_error.h"

G_DEFINE_QUARK(hw - measure - error - quark, hw_measure_error)
