/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/base/base_error.h"

G_DEFINE_QUARK(hw - base - error - quark, hw_base_error)
