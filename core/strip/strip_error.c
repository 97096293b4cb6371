/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/strip/strip_error.h"

G_DEFINE_QUARK(hw-strip-error-quark, hw_strip_error)
