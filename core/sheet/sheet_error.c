/* SPDX-License-Identifier: GPL-3.0-or-later */
#include "core/sheet/sheet_error.h"

/* clang-format off */
G_DEFINE_QUARK(hw-sheet-error-quark, hw_sheet_error)
/* clang-format on */
