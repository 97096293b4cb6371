/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/ruling/ruling_error.h"

G_DEFINE_QUARK(hw - ruling - error - quark, hw_ruling_error)
